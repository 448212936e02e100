"""The part numbers of a table's motors, and what lines about the table say of all of them."""

import re
from collections.abc import Sequence

from ....schema.figure.signs import plain
from ..headings.label import parse_label
from ..model import Table, Unread

_SENTENCE_END = re.compile(r"[;；。]|(?:(?<=[a-z]{4})|(?<=\)))\.\s+(?=\w)")
"""Where a name in a title line ends; "Co." and "Corp." end none."""


_RAISED_MARK = re.compile(r"\s*\^\(?\d{1,2}\)$")
"""A footnote's, behind a part number."""
_SERIES = re.compile(
    r"(?:^|\s)(?:(?:(?i:series|baureihe|serie|série)|シリーズ名?|系列)\s+)+([A-Z][A-Z\d-]+)$"
    r"|^([A-Z][A-Z\d-]+)\s+(?:(?i:series|baureihe|serie|série)|シリーズ|系列)$"
)
"""A line that names the series without a colon: the name is a code in capitals."""


def motor_names(
    table: Table,
    stem: str,
    ids: Sequence[str | None],
    places: Sequence[int],
    unread: list[Unread],
    remarks: list[str],
) -> list[str]:
    """The part numbers of the motors at ``places``; one without gets a name from the file's
    (``stem``), which is listed, or remarked where the table has one motor only."""
    if all(ids):
        return [_RAISED_MARK.sub("", plain(t) if not t.isascii() else t.strip()) for t in ids if t]
    if len(ids) == 1:
        title = _title_name(table)
        name = title or stem
        remarks.append(
            f'the sheet has no part number; "{name}" is taken from '
            + ("its title" if title else "the file's name")
        )
        return [name]
    out: list[str] = []
    where = "row" if table.layout == "rows" else "column"
    for k, text in enumerate(ids):
        if text:
            out.append(plain(text))
            continue
        name = f"{stem} {where} {places[k]}" if k < len(places) else f"{stem} {k + 1}"
        out.append(name)
        unread.append(
            Unread(name, "part number", table.sheet, table.page,
                   places[k] if where == "row" and k < len(places) else None,
                   places[k] if where == "column" and k < len(places) else None,
                   "", f'no part number; "{name}" stands for it', ("part_number",))
        )  # fmt: skip
    return out


def titled(table: Table, key: str) -> str | None:
    """What a line about the table says of all motors: "Maker: …", "Series: …"."""
    for title in (*table.titles, *table.notes):
        for line in title.split("\n"):
            heading, colon, text = plain(line).partition(":")
            if not colon or len(heading) > 40 or not text.strip():
                continue
            if any(key in p.keys for p in parse_label(heading).names):
                return _SENTENCE_END.split(text.strip())[0].strip()
    lines = (plain(t).strip() for title in table.titles for t in title.split("\n"))
    named = (_SERIES.search(line) for line in lines if key == "series")
    return next((found[1] or found[2] for found in named if found), None)


def _title_name(table: Table) -> str | None:
    """A part number in the titles: "Motor AX-12", "Type: AX-12"."""
    for title in table.titles:
        found = re.search(
            r"(?:part\s*(?:no|number)|model|type|typ|modell|bestell\S*|motor|型[号番式])\.?\s*[:#]\s*(\S.*)$",
            plain(title), re.IGNORECASE,
        )  # fmt: skip
        if found:
            return found[1].strip()
    for title in table.titles:
        found = _CODED.search(plain(title)) or _CODE_FIRST.fullmatch(plain(title))
        if found and not _AMOUNT.fullmatch(found["code"]):
            return found["code"]
    return None


_CODED = re.compile(
    r"(?i:motor|moteur|motore|motori|specifications?|data ?sheet|datenblatt|fiche technique|"
    r"scheda tecnica|hoja de datos|ficha técnica|规格书|仕様書|データシート)s?\s*[:–-]?\s+"
    r"(?P<code>(?=\S*\d)(?=\S*[A-Za-z])[\w./+-]{4,}|(?!AC|DC|IP|IC|NO|NR)[A-Z]{1,5} \d[\w./-]+)$"
)
"""A title that ends in a code: "Specification AX-12"."""
_CODE_FIRST = re.compile(
    r"(?P<code>(?=\S*\d)(?=\S*[A-Za-z])[\w./+-]{4,})\s+(?:[^\W\d]+[\s-]+){0,4}"
    r"(?:motor|motore|moteur|servomotor|[a-zü]*motor)",
    re.IGNORECASE,
)
"""One that begins with it: "AX-12 brushless motor"."""
_AMOUNT = re.compile(r"\d+(?:[.,]\d+)?[A-Za-z]{1,4}|IP\d\d", re.IGNORECASE)
"""24VDC, 42mm: no code."""
