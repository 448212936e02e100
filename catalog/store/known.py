"""Which motor is meant: its id and its name."""

from typing import NamedTuple


class Known(NamedTuple):
    """A motor as `find` gives it."""

    id: int
    maker: str
    part_number: str

    @property
    def name(self) -> str:
        """MAKER/PART, or PART where no maker is known."""
        return f"{self.maker}/{self.part_number}" if self.maker else self.part_number
