"""Tables of one file that speak of the same motors → one table."""

from collections import Counter
from dataclasses import replace

from ....schema.figure.signs import plain
from ..headings.label import names_part
from ..model import Field, Table


def normal_id(text: str) -> str:
    """A part number in a form in which dashes and blanks of any kind are alike."""
    return plain(text).replace(" ", "").replace("-", "").replace("_", "").casefold()


def id_field(table: Table) -> Field | None:
    """The field that holds the part numbers, by its heading: the one whose texts differ most."""
    named = [f for f in table.fields if names_part(f.label)]
    named = [f for f in named if any(f.texts) and not f.units and not f.part]
    if not named and table.layout == "rows" and table.fields:
        first = table.fields[0]
        blank = not first.heading or not first.label.names
        distinct = len(set(first.texts)) == len(first.texts)
        if (
            blank
            and not first.units
            and distinct
            and any(any(c.isalpha() for c in t) for t in first.texts)
        ):
            named = [first]
    if not named:
        return None

    def worth(f: Field) -> tuple[float, int, int]:
        filled = [t for t in f.texts if t]
        return (round(len(set(filled)) / max(len(f.texts), 1), 2), _rank(f.heading), -f.source)

    return max(named, key=worth)


_NUMBERS = (
    "number",
    "no",
    "nr",
    "nummer",
    "part",
    "order",
    "code",
    "codice",
    "art",
    "référence",
    "ref",
    "番",
    "号",
    "sku",
)
_MODELS = ("model", "modell", "modèle", "type", "typ", "型", "motor")


def _rank(heading: str) -> int:
    low = plain(heading).casefold()
    if any(low.startswith(w) or f" {w}" in low or w in low for w in _NUMBERS[:6]):
        return 3
    if any(w in low for w in _NUMBERS):
        return 2
    return 1 if any(w in low for w in _MODELS) else 0


def ids_of(table: Table) -> list[str | None]:
    """The part numbers of a table, None where it has none."""
    if table.part_numbers:
        return table.part_numbers
    field = id_field(table)
    return [t or None for t in field.texts] if field else [None] * table.count


def goes_with(home: Table, table: Table, beside: bool) -> bool:
    """Whether a table without part numbers gives more figures of the one motor before it; of one
    that has no part number either if it stands ``beside`` it, with other headings."""
    return (
        home.count == table.count == 1
        and (any(ids_of(home)) or (beside and not _headings(home) & _headings(table)))
        and not any(ids_of(table))
        and any(f.label.strength >= 0.5 for f in table.fields)
    )


def _headings(table: Table) -> set[str]:
    return {plain(f.heading).casefold() for f in table.fields}


def take_in(home: Table, table: Table) -> None:
    """The fields of a further table of the same one motor."""
    for f in table.fields:
        home.fields.append(
            replace(f, layout=f.layout or table.layout, places=f.places or list(table.places))
        )
    home.notes += [*table.titles, *table.notes]


def have_motors_in_common(one: Table, other: Table) -> bool:
    """Whether two tables of one layout name the same motors, at least half of the smaller."""
    here, there = ({normal_id(i) for i in ids_of(t) if i} for t in (one, other))
    fewer = min(len(here), len(there))
    return fewer > 0 and one.layout == other.layout and len(here & there) >= 0.5 * fewer


def joined(tables: list[Table], remarks: list[str]) -> list[Table]:
    """Tables with motors in common made one; the others as they are."""
    out: list[Table] = []
    for table in tables:
        home = next((earlier for earlier in out if have_motors_in_common(earlier, table)), None)
        if home is None:
            out.append(table)
        else:
            _join(home, table, remarks)
    return out


def _join(home: Table, table: Table, remarks: list[str]) -> None:
    here, there = ids_of(home), ids_of(table)
    own_id = id_field(table)
    counts = Counter(normal_id(i) for i in there if i)
    for key, count in counts.items():
        if count > 1:
            remarks.append(
                f'"{key}" stands {count} times in the second part of the table; the first counts'
            )
    position: dict[str, int] = {}
    for k, text in enumerate(there):
        if text:
            position.setdefault(normal_id(text), k)
    known = {normal_id(i): k for k, i in enumerate(here) if i}
    extra = [k for k, text in enumerate(there) if text and normal_id(text) not in known]
    remarks += [f'"{there[k]}" stands only in the second part of the table' for k in extra]
    missing = [i for i in here if i and normal_id(i) not in position]
    remarks += [f'"{i}" stands only in the first part of the table' for i in missing]
    old = len(here)
    for f in home.fields:
        f.texts = [*f.texts, *("" for _ in extra)]
        if f.places is not None:
            f.places = [*f.places, *(table.places[k] for k in extra)]
    home_id = id_field(home)
    if home_id is not None and not home.part_numbers:
        for j, k in enumerate(extra):
            home_id.texts[old + j] = there[k] or ""
    if home.part_numbers:
        home.part_numbers = [*home.part_numbers, *(there[k] for k in extra)]
    home.places = [*home.places, *(table.places[k] for k in extra)]
    order = [position.get(normal_id(i)) if i else None for i in here] + list(extra)
    for f in table.fields:
        if f is own_id:
            continue
        texts = [f.texts[k] if k is not None else "" for k in order]
        base = f.places or table.places
        places = [base[k] if k is not None else home.places[j] for j, k in enumerate(order)]
        home.fields.append(replace(f, texts=texts, places=places))
    home.notes += table.notes
    home.titles += table.titles
