"""The one family of errors whose text is meant for the person at the terminal."""

_LONGEST_QUOTE = 80
_LONGEST_SENTENCE = 300


class MotorfolioError(Exception):
    """What was asked can't be done; the text says where, what is wrong and what would do.

    The text is one line of at most 300 characters, whatever foreign text it quotes: line breaks
    and signs that don't print become blanks, and of too long a text the middle is left out.
    """

    def __init__(self, sentence: str) -> None:
        super().__init__(excerpt(sentence, _LONGEST_SENTENCE))


def excerpt(text: str, most: int = _LONGEST_QUOTE) -> str:
    """A foreign text as it is quoted: one printable line, the middle left out where too long."""
    head = most * 2 // 3
    if len(text) > 8 * most:  # signs that fall away are few
        text = f"{text[: 4 * most]} {text[-4 * most :]}"
    if not text.isprintable():
        text = "".join(c if c.isprintable() else " " for c in text)
    if "  " in text:
        text = " ".join(text.split())
    return (
        text
        if len(text) <= most
        else f"{text[:head].rstrip()} … {text[head + 3 - most :].lstrip()}"
    )
