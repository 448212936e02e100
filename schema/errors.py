"""The one family of errors whose text is meant for the person at the terminal."""


class MotorfolioError(Exception):
    """What was asked can't be done; the text says where, what is wrong and what would do."""
