"""Readings of headings that a person tells: "quantity[:unit[:convention]]"."""

from collections.abc import Iterable, Mapping

from ...schema.batch import Heading
from ...schema.errors import MotorfolioError, excerpt
from ...schema.spelling import nearest
from ...schema.units.read import read_unit
from ...schema.vocabulary import quantities

CONVENTIONS = ("dc", "peak", "rms", "lines", "phase", "star", "delta")
SAID = "set by --set"
"""How a heading's reason begins when it was read as told."""


def check(overrides: Mapping[str, str]) -> None:
    """Raise MotorfolioError, naming what would do, for a reading that can't be."""
    for heading, reading in overrides.items():
        key, _, rest = reading.partition(":")
        unit, _, convention = rest.partition(":")
        where = f'--set "{heading}={reading}"'
        quantity = quantities().get(key.strip())
        if quantity is None:
            near = nearest(key.strip(), quantities(), most=3, least=50)
            hint = f"; did you mean {' or '.join(near)}?" if near else "."
            raise MotorfolioError(f'{where}: there is no quantity "{key.strip()}"{hint}')
        if unit.strip() and not quantity.text:
            try:
                read_unit(unit.strip(), quantity.accepts)
            except MotorfolioError as error:
                raise MotorfolioError(f"{where}: {error}.") from None
        for word in filter(None, map(str.strip, convention.split("+"))):
            if word not in CONVENTIONS:
                raise MotorfolioError(
                    f'{where}: "{word}" is no convention; there are {", ".join(CONVENTIONS)}.'
                )


def check_used(overrides: Mapping[str, str], headings: Iterable[Heading]) -> None:
    """Raise MotorfolioError, naming the nearest headings, for a reading whose heading stands in
    none of the files."""
    found = list(headings)
    used: dict[str, set[str]] = {}
    for h in found:
        if h.quantity and h.reason.startswith(SAID):
            used.setdefault(h.quantity, set()).add(h.text)
    for heading, reading in overrides.items():
        key = reading.partition(":")[0].strip()
        of_key = [other for other, r in overrides.items() if r.partition(":")[0].strip() == key]
        read = used.get(key, set())
        # of several readings as one quantity those are in doubt that have no like among the read
        if read and (len(read) >= len(of_key) or nearest(heading, read, 1, 80)):
            continue
        texts = [*dict.fromkeys(h.text for h in found)]
        near = nearest(heading, texts, 3, 40)
        hint = f"the nearest are {_quoted(near)}" if near else f"they have {_quoted(texts[:6])}"
        if not near and len(texts) > 6:
            hint += f" and {len(texts) - 6} more, which --dry-run lists"
        raise MotorfolioError(f'--set "{heading}={reading}": no file has such a heading; {hint}.')


def _quoted(texts: Iterable[str]) -> str:
    return ", ".join(f'"{excerpt(text, 40)}"' for text in texts)
