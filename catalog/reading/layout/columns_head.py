"""What the columns of a block hold, and which of its rows name the motors and the conditions."""

import re

from ....schema.figure.signs import plain
from ..cells import is_figure, is_role, is_symbol, is_unit, missing, strength
from ..headings.ends import end_of
from ..headings.label import names_part, parse_label
from ..headings.phrase import conventions_of, variant_of
from .blocks import Block
from .lines import left_of, share


def roles_of_columns(block: Block, label_column: int) -> list[str]:
    """What each column of the block holds."""
    roles: list[str] = []
    rows = block.rows[:400]
    for c in range(block.width):
        texts = [row[c] for row in rows if row[c]]
        if c == label_column:
            roles.append("label")
            continue
        if not texts:
            roles.append("blank")
            continue
        head, body = texts[0], texts[1:]
        beside = [row[c] for row in rows if row[c] and row[label_column] != row[c]] or texts
        if c < label_column:
            if share(texts[1:] or texts, lambda t: t.strip(".)(").isdigit()) > 0.7:
                roles.append("number")
            elif share(texts, is_symbol) >= 0.6:
                roles.append("symbol")
            else:
                roles.append("group")
            continue
        if is_role(head, "unit") or _unit_share(beside) >= 0.6:
            roles.append("unit")
        elif is_role(head, "symbol") and not is_role(head, "value"):
            roles.append("symbol")
        elif is_role(head, "remark") and not any(is_figure(t) for t in body[:1]):
            roles.append("remark")
        elif share(beside, is_symbol) >= 0.6 and share(beside, is_figure) < 0.2:
            roles.append("symbol")
        elif is_role(head, "remark"):
            roles.append("remark")
        elif "value" not in roles and share(beside, _is_name) >= 0.6:
            roles.append("label")  # the names once more, in another language
        else:
            roles.append("value")
    if "value" not in roles:
        roles = ["value" if r in ("unit", "symbol", "remark") else r for r in roles]
    return roles


def _is_name(text: str) -> bool:
    return strength(text) >= 0.5 and not is_figure(text)


def _unit_share(texts: list[str]) -> float:
    filled = [t for t in texts if not missing(t)]
    if not filled:
        return 0.0
    figures = sum(1 for t in filled if is_figure(t) and not is_unit(t))
    return 0.0 if figures > 0.2 * len(filled) else share(filled, is_unit)


_SYSTEMS = re.compile(
    r"metric|SI|imperial|english|us|inch|metrisch|métrique|metrico", re.IGNORECASE
)


def one_motor_in_two_systems(block: Block, roles: list[str]) -> list[str]:
    """The roles, where the figures of one motor stand in two systems of units, each with a column
    of its units ("Metric, Unit, Imperial, Unit"): the second stands behind the first in brackets.
    """
    pairs = [c for c, role in enumerate(roles) if role in ("value", "unit")]
    if [roles[c] for c in pairs] != ["value", "unit"] * 2:
        return roles
    first, one, second, two = pairs
    heads = [row for row in block.rows if _SYSTEMS.fullmatch(plain(row[first]))]
    if not heads or not any(_SYSTEMS.fullmatch(plain(row[second])) for row in heads):
        return roles
    rows = []
    for row in block.rows:
        copy = list(row)
        if row in heads:
            copy[first] = ""
        elif row[second] and row[second] != row[first]:
            copy[first] = f"{row[first]} {row[one]} ({row[second]} {row[two]})"
            copy[one] = ""
        copy[second] = copy[two] = ""
        rows.append(copy)
    block.rows = rows
    return ["blank" if c in (second, two) else role for c, role in enumerate(roles)]


def heads_quantity(row: list[str], label_column: int, values: list[int]) -> bool:
    """Whether a row gives figures of a quantity, as opposed to names of the motors."""
    label = parse_label(row[label_column])
    if strength(row[label_column]) < 0.5:
        return False
    keys = {k for p in label.names for k in p.keys}
    if keys and keys <= {"part_number", "series", "maker", "description"}:
        return bool(keys & {"series", "maker", "description"}) and any(row[c] for c in values)
    return True


def header_rows(
    rows: list[list[str]], first: int, label_column: int, values: list[int]
) -> tuple[int | None, int | None]:
    """The row of part numbers and the row of conditions, above the first quantity or named."""
    named: list[int] = []
    plain_rows: list[int] = []
    conditions: list[int] = []
    for i in range(min(len(rows), 400)):
        row = rows[i]
        texts = [row[c] for c in values if row[c]]
        if not texts:
            continue
        across = {*texts} == {row[label_column]} and not re.search(r"\d", texts[0])
        if across or all(is_role(t, "value") for t in texts):
            continue  # a caption; "Part, Value, Unit"
        if any(re.search(r"\.{2,}|…", t) for t in texts):
            continue  # a range is no name
        if names_part(parse_label(row[label_column])):
            if named and all(_is_condition(t) for t in texts):
                conditions.append(i)  # below the names, whose label a merged cell repeats
                continue
            if i > first and named:
                continue
            named.append(i)
        elif i < first:
            spread = len(set(texts)) == 1 and row[label_column] == texts[0] and len(texts) > 1
            if spread or (len(texts) == 1 and len(values) > 2):
                continue
            if all(_is_condition(t) for t in texts):
                conditions.append(i)
            else:
                plain_rows.append(i)
    best = None
    if named:
        best = max(
            named, key=lambda i: (_distinct(rows[i], values), _id_rank(rows[i][label_column]), -i)
        )
    elif plain_rows:
        best = max(
            plain_rows, key=lambda i: (_distinct(rows[i], values), _coded(rows[i], values), i)
        )
    if best is None and _names_by_size(rows[first], label_column, values):
        return first, None
    if best is None and conditions:
        row = conditions[0]
        one = all(variant_of(plain(rows[row][c])) for c in values if rows[row][c])
        return (None, row) if one else (row, None)
    return best, conditions[0] if conditions else None


def _coded(row: list[str], values: list[int]) -> bool:
    """Whether names have letters, unlike figures."""
    return any(re.search(r"[^\W\d_]", row[c]) for c in values)


def _names_by_size(row: list[str], label_column: int, values: list[int]) -> bool:
    """Whether the only names that motors have are codes under "Frame size" or "Series"."""
    keys = {k for p in parse_label(row[label_column]).names for k in p.keys}
    texts = [row[c] for c in values]
    coded = all(re.search(r"\d", t) and re.search(r"[^\W\d_]", t) for t in texts)
    return keys == {"series"} and len(texts) > 1 and len(set(texts)) == len(texts) and coded


def usual_columns(
    rows: list[list[str]], first: int, values: list[int]
) -> tuple[int, int, list[int]] | None:
    """(row of motors, row of "min typ max", the columns of the usual figures) where several motors
    have such columns each; None elsewhere. The names are spread over their columns."""
    for i in range(1, first):
        ends = [end_of(rows[i][c]) for c in values]
        usual = [c for c, end in zip(values, ends, strict=True) if end == "usual"]
        if not all(ends) or len(usual) < 2 or len(set(ends)) < 2:
            continue
        names: list[str] = []
        for c in values:
            names.append(rows[i - 1][c] or (names[-1] if names else ""))
        spread = dict(zip(values, names, strict=True))
        if len({spread[c] for c in usual}) == len(usual) and all(names):
            for c in values:
                rows[i - 1][c] = spread[c]
            return i - 1, i, usual
    return None


def joined_ids(
    rows: list[list[str]], first: int, id_row: int, label_column: int, values: list[int]
) -> tuple[list[str], int] | None:
    """Part numbers joined from two rows (type and winding) where one alone does not tell the
    motors apart, and the other row; None where nothing of the kind stands there."""
    ids = [rows[id_row][c] for c in values]
    if len(set(ids)) == len(ids) or not all(ids):
        return None
    letters = all(len(t) <= 2 for t in ids)
    for i in range(max(first, id_row) + 1):
        keys = {k for p in parse_label(rows[i][label_column]).names for k in p.keys}
        over = (
            letters
            and i < id_row
            and not rows[i][label_column]
            and not any(map(is_figure, rows[i]))
        )
        if i == id_row or not (over or keys & {"part_number", "series"}):
            continue
        others: list[str] = []
        for c in values:
            others.append(rows[i][c] or (others[-1] if others else ""))
        pairs = zip(others, ids, strict=True) if i < id_row else zip(ids, others, strict=True)
        joined = [" ".join(filter(None, pair)) for pair in pairs]
        if len(set(joined)) == len(joined):
            return joined, i
    return None


def spread_conditions(
    rows: list[list[str]], first: int, id_row: int, values: list[int]
) -> tuple[int | None, list[str] | None]:
    """A row that tells apart columns with the same part number, its texts spread to the right."""
    ids = [rows[id_row][c] for c in values]
    if len(set(ids)) == len(ids):
        return None, None
    for i in range(first):
        if i == id_row or not any(rows[i][c] for c in values):
            continue
        spread: list[str] = []
        for c in values:
            spread.append(rows[i][c] or (spread[-1] if spread else left_of(rows[i], c)))
        if len(set(zip(ids, spread, strict=True))) == len(ids):
            return i, spread
    return None, None


def _id_rank(text: str) -> int:
    clean = plain(text).casefold()
    return int(
        bool(
            re.search(
                r"number|nummer|order|part|no\b|nr|code|codice|référence|référ|番|号|model|型",
                clean,
            )
        )
    )


def _distinct(row: list[str], values: list[int]) -> int:
    return len({row[c] for c in values if row[c]})


def _is_condition(text: str) -> bool:
    """Whether a cell under a part number says under which condition its column holds."""
    clean = plain(text)
    return bool(
        re.fullmatch(
            r"(?:at\s|bei\s|à\s|@\s*)?\d{1,3}(?:[.,]\d+)?\s*(?:K|V|V\s?AC|V\s?DC|VAC|VDC|°C)", clean
        )
        or re.fullmatch(r"S[1-9](?:[\s-]*\d+\s*%?)?(?:\s*ED)?", clean)
        or variant_of(clean)
        or conventions_of(clean, whole=True)
    )
