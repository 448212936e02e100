"""A block → a Table of motors and fields, for either layout."""

import re

from ...schema.figure.signs import plain
from ...schema.vocabulary import quantity
from .blocks import Block, is_data
from .cells import is_caption, is_ditto, is_figure, is_role, is_symbol, is_unit, missing, strength
from .heads import HeadCell, classify, context_of, head_field
from .label import names_part, parse_label
from .model import Field, Table
from .phrase import conventions_of, match_phrase, section_of, variant_of

_LABEL_AND_FIGURE = re.compile(r"([^\d:]{3,40}?)\s+([<>≤≥~]?\s?\d[\d.,]*\s?\S.*)$")
_MOST_HEAD_ROWS = 7


def _share(texts: list[str], test) -> float:
    filled = [t for t in texts if plain(t)]
    return sum(1 for t in filled if test(t)) / len(filled) if filled else 0.0


def _kind_of_line(texts: list[str]) -> str:
    """What a line of heading cells mostly holds: units, symbols or names."""
    units = _share(texts, lambda t: is_unit(t) or plain(t) in ("-", "–", "—", "1"))
    real = _share(texts, is_unit)
    if units >= 0.6 and real > 0.3 and _share(texts, lambda t: strength(t) >= 0.9) < 0.4:
        return "unit"
    if _share(texts, is_symbol) >= 0.6 and _share(texts, lambda t: strength(t) >= 0.9) < 0.4:
        return "symbol"
    return "name"


# --- one motor a row ----------------------------------------------------------------------------


def lay_out_rows(block: Block) -> Table:
    """The table of a block whose headings stand in rows."""
    head = block.line
    rows = block.rows
    start = head + 1
    while start < len(rows) and start - head < _MOST_HEAD_ROWS and not is_data(rows[start]):
        start += 1
    if start >= len(rows) or start - head >= _MOST_HEAD_ROWS:
        start = head + 1
        while start < len(rows) and _kind_of_line(rows[start]) in ("unit", "symbol"):
            start += 1
    top = head
    while top > 0 and _is_caption_row(rows[top - 1], block.width):
        top -= 1
    titles = [_text_of(row) for row in rows[:top]]
    kinds = []
    for r in range(top, start):
        kind = _kind_of_line([t for t in rows[r] if t]) if r != head else "name"
        kinds.append("caption" if r < head and kind == "name" else kind)
    head_rows = [
        _spread(rows[r], block, r) if kind == "caption" else rows[r]
        for r, kind in zip(range(top, start), kinds, strict=True)
    ]
    body, numbers, notes, end_sections = _body(block, start, head_rows)
    table = Table("rows", [], numbers, titles=titles, notes=notes, head=head_rows)
    table.columns = list(range(block.width))
    columns: list[list[str]] = [list(c) for c in zip(*body, strict=False)] if body else []
    for c in range(block.width):
        cells: list[HeadCell] = []
        row_of = block.row_numbers[min(head, len(block.row_numbers) - 1)]
        named_at = head - top
        own = any(rows[r][c] for r in range(top, head + 1))
        for r, kind in enumerate(kinds):
            text = head_rows[r][c] if c < len(head_rows[r]) else ""
            if r == named_at and not own and any(h[c] for h in head_rows[r + 1 :]):
                text = _left_of(head_rows[r], c)
            if text and not (cells and cells[-1][1] == text):
                cells.append(classify(text, kind))
        texts = columns[c] if c < len(columns) else []
        if not any(texts) and all(kind == "caption" for kind, _ in cells):
            continue
        field = head_field(cells, texts, row_of, block.column_numbers[c])
        field.source = c
        table.fields.append(field)
    _resection(table)
    if end_sections:
        table.remarks += end_sections
    return table


def _left_of(row: list[str], c: int) -> str:
    """The heading that a column without its own shares with its left neighbour (kg | lb)."""
    return next((row[k] for k in range(c - 1, -1, -1) if row[k]), "")


def _text_of(row: list[str]) -> str:
    texts: list[str] = []
    for t in row:
        if t and (not texts or texts[-1] != t):
            texts.append(t)
    return " ".join(texts)


def _is_caption_row(row: list[str], width: int) -> bool:
    """Whether a row above the headings holds captions over groups of them."""
    filled = [(i, t) for i, t in enumerate(row) if t]
    if not filled or any(is_figure(t) and not re.search(r"[^\W\d_]", t) for _, t in filled):
        return False
    distinct = {t for _, t in filled}
    if len(distinct) >= 2:
        return True
    return filled[0][0] > 0 and width > 2


def _spread(row: list[str], block: Block, r: int) -> list[str]:
    """Captions over the blank cells to their right, unless merged cells say how far they go."""
    spanned = any(fr == r for fr, _ in block.filled)
    if spanned:
        return row
    spread: list[str] = []
    current = ""
    for c, text in enumerate(row):
        below = r + 1 < len(block.rows) and block.rows[r + 1][c]
        if text and not below and _names_quantity(text):
            current = ""
            spread.append(text)
            continue
        current = text or current
        spread.append(text or current)
    return spread


def _names_quantity(text: str) -> bool:
    """Whether a caption is rather the heading of its own column."""
    return strength(text) >= 0.9 and any(p.keys for p in parse_label(text).names)


def _resection(table: Table) -> None:
    """Captions that stand over the middle of their group: move the borders where that gives
    every section figures that it can have, and none twice."""
    captions = [f.captions[-1] if f.captions else "" for f in table.fields]
    order = [c for i, c in enumerate(captions) if c and (i == 0 or captions[i - 1] != c)]
    while order and not section_of(order[-1]):
        order.pop()  # "Constants" behind the sections makes no figure another one
    if not order or not all(section_of(c) for c in order):
        return
    keys = [{p.generic for p in f.label.names if p.generic} for f in table.fields]
    first = next(i for i, c in enumerate(captions) if c)
    before = first
    while before > 0 and keys[before - 1]:
        before -= 1
    last = len(keys) - 1
    while last > 0 and (not keys[last] or captions[last] not in order):
        last -= 1
    if _fit(captions, keys) >= 0 and before == first:
        return
    best = (_fit(captions, keys) - (first - before), captions)
    rivals: list[list[str]] = []
    spans = _partitions(before, last + 1, len(order), captions, order)
    for borders in spans:
        attempt = [c if i > last else "" for i, c in enumerate(captions)]
        for k, caption in enumerate(order):
            for i in range(borders[k], borders[k + 1]):
                attempt[i] = caption
        score = _fit(attempt, keys)
        if score > best[0]:
            best, rivals = (score, attempt), []
        elif score == best[0] and best[1] is not captions:
            rivals.append(attempt)
    # Where two ways are as good, a figure between two groups is of neither for sure.
    sure = [c if all(r[i] == c for r in rivals) else "" for i, c in enumerate(best[1])]
    for field, old, new in zip(table.fields, captions, sure, strict=True):
        if old != new:
            rest = field.captions[:-1] if old else field.captions
            field.captions = (*rest, new) if new else rest
            field.section, field.when, field.temperature, field.variant = context_of(
                list(field.captions)
            )
            field.heading = (
                field.heading.replace(plain(old), plain(new))
                if old
                else (f"{plain(new)} › {field.heading}")
            )


def _partitions(start: int, end: int, groups: int, captions: list[str], order: list[str]):
    """Borders of the groups, each of which holds the cell where its caption was printed."""
    anchors = [captions.index(caption) for caption in order]
    if groups > 6:
        return

    def extend(k: int, borders: list[int]):
        if k == groups:
            yield [*borders, end]
            return
        for border in range(anchors[k - 1] + 1, anchors[k] + 1):
            yield from extend(k + 1, [*borders, border])

    yield from extend(1, [start])


def _fit(captions: list[str], keys: list[set]) -> int:
    """Minus the number of generic figures that a section has twice or can't have."""
    seen: set[tuple[str, str]] = set()
    faults = 0
    impossible = {
        ("no_load", "torque"),
        ("no_load", "power"),
        ("no_load", "efficiency"),
        ("stall", "speed"),
        ("stall", "power"),
        ("stall", "efficiency"),
    }
    for caption, generics in zip(captions, keys, strict=True):
        section = section_of(caption) if caption else None
        for g in generics:
            if section is None or (caption, g) in seen or (section, g) in impossible:
                faults += 1
            seen.add((caption, g))
    return -faults


def is_short_figure(text: str) -> bool:
    """Whether a lone cell is a figure rather than a note that begins with a number."""
    return is_figure(text) and len(text) < 20 and not re.match(r"\S{1,4}\)", text)


def _body(block: Block, start: int, head_rows: list[list[str]]):
    """The motors' rows, their places, and the texts that stand between and below."""
    heads = {tuple(r) for r in head_rows} | {
        tuple(r) for r in block.rows[max(0, start - len(head_rows)) : start]
    }
    body: list[list[str]] = []
    numbers: list[int] = []
    notes: list[str] = []
    remarks: list[str] = []
    for r in range(start, len(block.rows)):
        row = block.rows[r]
        filled = len(row) - row.count("")
        if filled <= 2 or not row[0]:
            texts = {t for t in row if t}
            if not texts:
                continue
            if len(texts) == 1 and block.width > 1 and not is_short_figure(*texts):
                notes.append(_text_of(row))
                continue
        if tuple(row) in heads:
            remarks.append(f"row {block.row_numbers[r]}: the heading again, passed over")
            continue
        if len({t for t in row if t}) == 1 and filled > 2:
            notes.append(_text_of(row))
            continue
        body.append(row)
        numbers.append(block.row_numbers[r])
    return body, numbers, notes, remarks


# --- one motor a column -------------------------------------------------------------------------


def lay_out_columns(block: Block) -> Table:
    """The table of a block whose headings stand in a column."""
    label_column = block.line
    rows = block.rows
    roles = _roles(block, label_column)
    values = [c for c, role in enumerate(roles) if role == "value"]
    first = next((i for i, row in enumerate(rows) if _heads_quantity(row, label_column, values)), 0)
    values = [c for c in values if any(row[c] for row in rows[first:])]
    id_row, condition_row = _header_rows(rows, first, label_column, values)
    conditions = [rows[condition_row][c] for c in values] if condition_row is not None else None
    if id_row is not None and conditions is None:
        condition_row, conditions = _spread_conditions(rows, first, id_row, values)
    table = Table("columns", [], [block.column_numbers[c] for c in values])
    table.titles = [
        _text_of(row) for i, row in enumerate(rows[:first]) if i not in (id_row, condition_row)
    ]
    table.columns = values
    caption: list[str] = []
    captioned = -2
    for i, row in enumerate(rows):
        if i in (id_row, condition_row):
            if i == id_row:
                table.part_numbers = _ids(row, values, block, i)
            continue
        if i < first and not (row[label_column] and any(is_figure(row[c]) for c in values)):
            continue
        texts = [row[c] for c in values]
        label = row[label_column]
        pair = figure_behind(label) if len(values) == 1 and not any(texts) else None
        if pair is not None:
            label, texts = pair[0], [pair[1]]
            row = [*row[:label_column], label, *row[label_column + 1 :]]
        groups = [row[c] for c, role in enumerate(roles) if role == "group" and row[c]]
        spanning = len({t for t in row if t}) == 1 and sum(1 for t in row if t) > 1
        if (spanning or not any(texts)) and label:
            if _is_note(label, i, rows, label_column, values):
                table.notes.append(_text_of(row))
                continue
            units = [row[c] for c, role in enumerate(roles) if role == "unit" and row[c]]
            if strength(label) >= 0.9 and units and not spanning:
                continue  # a quantity with no figure for any motor
            keys = {k for p in parse_label(label).names for k in p.keys}
            measured = any(not quantity(k).text for k in keys)
            if measured and not spanning and not section_of(label) and not is_caption(label):
                continue
            caption, captioned = [label], i
            continue
        if not any(texts):
            if any(row):  # a text beside the labels
                table.notes.append(_text_of(row))
            continue
        cells: list[HeadCell] = [("caption", c) for c in [*caption, *groups]]
        for c, role in enumerate(roles):
            if role in ("unit", "symbol", "label") and row[c]:
                kind = {"unit": "unit", "symbol": "symbol", "label": "name"}[role]
                if kind == "symbol" and not is_symbol(row[c]) and strength(row[c]) > 0.8:
                    kind = "name"
                cells.append((kind, row[c]))
            elif role == "remark" and row[c]:
                cells.append(("caption", row[c]))
        cells.sort(key=lambda cell: cell[0] != "caption")
        if not label and not [k for k, _ in cells if k in ("name", "symbol")]:
            cells.append(("name", ""))
        field = head_field(
            cells,
            texts,
            block.row_numbers[i],
            block.column_numbers[label_column],
            joins=captioned == i - 1,
        )
        if caption and caption[0] not in field.captions:
            caption = []  # it was the first line of this very name
        field.source = i
        table.fields.append(field)
    if conditions is not None:
        _fold_conditions(table, conditions)
    return table


def figure_behind(text: str) -> tuple[str, str] | None:
    """The name of something measured and the figure behind it in one cell, or None: "Winding at
    125 °C" has none."""
    pair = _LABEL_AND_FIGURE.match(plain(text))
    if pair is None:
        return None
    phrase = match_phrase(pair[1])
    measured = phrase.score >= 0.95 and any(not quantity(k).text for k in phrase.keys)
    return (pair[1], pair[2]) if measured else None


def _roles(block: Block, label_column: int) -> list[str]:
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
        own = [t for i, t in enumerate(texts) if not is_figure(t) or is_unit(t)]
        beside = [row[c] for row in rows if row[c] and row[label_column] != row[c]] or texts
        if c < label_column:
            if _share(texts[1:] or texts, lambda t: t.strip(".)(").isdigit()) > 0.7:
                roles.append("number")
            elif _share(texts, is_symbol) >= 0.6:
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
        elif _share(beside, is_symbol) >= 0.6 and _share(beside, is_figure) < 0.2:
            roles.append("symbol")
        elif is_role(head, "remark"):
            roles.append("remark")
        else:
            roles.append("value")
        del own
    if "value" not in roles:
        roles = ["value" if r in ("unit", "symbol", "remark") else r for r in roles]
    return roles


def _unit_share(texts: list[str]) -> float:
    filled = [t for t in texts if not missing(t)]
    if not filled:
        return 0.0
    figures = sum(1 for t in filled if is_figure(t) and not is_unit(t))
    return 0.0 if figures > 0.2 * len(filled) else _share(filled, is_unit)


def _heads_quantity(row: list[str], label_column: int, values: list[int]) -> bool:
    """Whether a row gives figures of a quantity, as opposed to names of the motors."""
    label = parse_label(row[label_column])
    if strength(row[label_column]) < 0.5:
        return False
    keys = {k for p in label.names for k in p.keys}
    if keys and keys <= {"part_number", "series", "maker", "description"}:
        return bool(keys & {"series", "maker", "description"}) and any(row[c] for c in values)
    return True


def _header_rows(
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
        if names_part(parse_label(row[label_column])):
            if i > first and named:
                continue
            named.append(i)
        elif i < first:
            spread = len(set(texts)) == 1 and row[label_column] == texts[0] and len(texts) > 1
            if spread or (len(texts) == 1 and len(values) > 2):
                continue
            if all(_is_condition(t) for t in texts):
                conditions.append(i)
            elif not all(is_role(t, "value") for t in texts):
                plain_rows.append(i)
    best = None
    if named:
        best = max(
            named, key=lambda i: (_distinct(rows[i], values), _id_rank(rows[i][label_column]), -i)
        )
    elif plain_rows:
        best = max(plain_rows, key=lambda i: (_distinct(rows[i], values), i))
    if best is None and conditions:
        return conditions[0], None
    return best, conditions[0] if conditions else None


def _spread_conditions(
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
            spread.append(rows[i][c] or (spread[-1] if spread else _left_of(rows[i], c)))
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


def _ids(row: list[str], values: list[int], block: Block, i: int) -> list[str | None]:
    return [row[c] or None for c in values]


def _fold_conditions(table: Table, conditions: list[str]) -> None:
    """Several columns of one motor, each under its condition → one motor, conditions on fields."""
    ids: list[str | None] = []
    for text in table.part_numbers:
        ids.append(text if text else (ids[-1] if ids else None))
    groups: dict[str, list[int]] = {}
    for position, text in enumerate(ids):
        groups.setdefault(text or "", []).append(position)
    if all(len(g) == 1 for g in groups.values()):
        for field in table.fields:
            if len(set(conditions)) == 1:
                field.when = (*field.when, plain(conditions[0]))
        return
    depth = max(len(g) for g in groups.values())
    fields: list[Field] = []
    motors = list(groups)
    for field in table.fields:
        for k in range(depth):
            texts = [field.texts[groups[m][k]] if k < len(groups[m]) else "" for m in motors]
            if k and not any(texts):
                continue
            places = [table.places[groups[m][min(k, len(groups[m]) - 1)]] for m in motors]
            when = plain(conditions[groups[motors[0]][min(k, len(groups[motors[0]]) - 1)]])
            same = k and all(
                a == b
                for a, b in zip(texts, [field.texts[groups[m][0]] for m in motors], strict=True)
            )
            if same:
                continue
            copy = Field(
                field.heading, field.label, texts, field.row, field.column, field.units,
                field.captions, field.section, (*field.when, when), field.temperature,
                variant_of(when) or field.variant, field.line, field.source, places,
            )  # fmt: skip
            label = parse_label(when)
            if label.temperature is not None:
                copy.temperature = label.temperature
            fields.append(copy)
    table.places = [table.places[groups[m][0]] for m in motors]
    table.part_numbers = [m or None for m in motors]
    table.fields = fields


def _is_note(
    label: str, i: int, rows: list[list[str]], label_column: int, values: list[int]
) -> bool:
    """Whether a text without figures is a note: long, marked, or with nothing behind it."""
    clean = plain(label)
    below = any(any(r[c] for c in values) and r[label_column] for r in rows[i + 1 :])
    if not below:
        return True
    return bool(re.match(r"(?:[*†‡]|\^?\(?\d{1,2}\)|note|hinweis|注|※)", clean, re.IGNORECASE)) or (
        len(clean) > 70
    )


def inherit(texts: list[str], ditto_only: bool) -> list[str]:
    """Cells that say "as above" take the text above; blank ones too unless ``ditto_only``."""
    out: list[str] = []
    for text in texts:
        blank = not text and not ditto_only
        out.append(out[-1] if out and (blank or is_ditto(text)) else text)
    return out
