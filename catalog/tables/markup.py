"""HTML pages: data tables and definition lists, with raised and lowered signs kept."""

import re
from collections.abc import Iterator

from lxml import etree
from lxml import html as lxml_html

from .cells import MOST_CELLS, clean, even, subscript, superscript
from .grid import Grid, Span, TableError

_PASSED = {"script", "style", "template", "noscript", "head", "select", "button", "svg"}
_LINE = {"br", "p", "div", "li", "tr", "h1", "h2", "h3", "h4", "h5", "h6", "dt", "dd", "section"}
_AROUND = {"nav", "header", "footer", "aside", "form", "menu"}
_ROLES = {"presentation", "none", "navigation", "menu", "banner", "search"}
_UNSEEN = re.compile(r"display\s*:\s*none|visibility\s*:\s*hidden", re.IGNORECASE)
_BLANKS = re.compile(r"[ \t\r\n\f]+")
_CELLS = ("td", "th")
_MOST_COLUMNS = 16_384
_MOST_SPAN = 1000  # HTML Living Standard, 4.9.11: colspan is clipped to 1000
_XML_HEAD = re.compile(r"^\s*<\?xml[^>]*\?>")


def read_html(text: str, name: str) -> tuple[list[Grid], list[str]]:
    """(grids, what was passed over) of a page.

    A table inside another makes the outer one a layout and not a table; tables without a
    figure, in navigation or not shown are passed over with a reason. A page without any
    table is read as the text it shows.
    """
    root = _parsed(text, name)
    grids: list[Grid] = []
    skipped: list[str] = []
    titles: set[str] = set()
    for number, element in enumerate(_top_down(root, ("table", "dl")), 1):
        label = f"table {number}" if element.tag == "table" else f"list {number}"
        title = _unique(_title(element) or label, titles)
        if reason := _no_data(element):
            skipped.append(f"“{title}”: {reason}")
            continue
        grid = _table(element, name) if element.tag == "table" else _definitions(element)
        if not any(sign.isdigit() for row in grid.rows for cell in row for sign in cell):
            skipped.append(f"“{title}”: has no figures")
            continue
        grid.sheet = title
        grid.notes = _beside(element)
        titles.add(title)
        grids.append(grid)
    if not grids:
        from .text import read_text

        shown = "\n".join(line.strip() for line in _shown(root).split("\n"))
        grids = [grid for grid in read_text(shown) if grid.rows]
        if not any(len(grid.column_numbers) > 1 for grid in grids):
            raise TableError(f"{name}: the page has no table with figures")
        for grid in grids:
            grid.remarks.append("the page has no table: its text is read, line by line")
    return grids, skipped


def _parsed(text: str, name: str) -> etree._Element:
    parser = lxml_html.HTMLParser(no_network=True, remove_comments=True, remove_pis=True)
    try:
        return lxml_html.document_fromstring(_XML_HEAD.sub("", text), parser=parser)
    except (etree.ParserError, etree.XMLSyntaxError, ValueError):
        raise TableError(f"{name}: the page can't be read as HTML") from None


def _top_down(root: etree._Element, tags: tuple[str, ...]) -> Iterator[etree._Element]:
    yield from root.iter(*tags)


def _no_data(element: etree._Element) -> str | None:
    """Why a table or list is no data, or None."""
    if element.tag == "table" and next(element.iterdescendants("table"), None) is not None:
        return "holds other tables, so it is the layout of the page"
    if (element.get("role") or "").lower() in _ROLES:
        return "is marked as layout or navigation"
    for parent in (element, *element.iterancestors()):
        if _unseen(parent):
            return "is not shown"
        if parent.tag in _AROUND or (parent.get("role") or "").lower() in _ROLES - {"none"}:
            return "stands in the page's navigation"
    return None


def _unseen(element: etree._Element) -> bool:
    return element.get("hidden") is not None or bool(_UNSEEN.search(element.get("style") or ""))


def _title(element: etree._Element) -> str:
    """The caption of a table, else the heading before it."""
    for caption in element.iterchildren("caption"):
        return clean(_shown(caption)).replace("\n", " ")[:120]
    passed: set[object] = {element}
    for parent in (element, *element.iterancestors()):
        before = parent.getprevious()
        steps = 0
        while before is not None and steps < 6:
            if before.tag in {"table", "dl"}:
                return ""
            if before.tag in {"h1", "h2", "h3", "h4", "h5", "h6"}:
                return clean(_shown(before)).replace("\n", " ")[:120]
            before, steps = before.getprevious(), steps + 1
        passed.add(parent)
        if len(passed) > 4:
            break
    return ""


def _beside(element: etree._Element) -> list[str]:
    """The paragraphs before and behind a table, up to the next table or heading."""
    texts: list[str] = []
    for follow in (False, True):
        item = element
        for _ in range(8):
            item = item.getnext() if follow else item.getprevious()
            if item is None or item.tag in {"table", "dl", "h1", "h2", "h3", "h4", "h5", "h6"}:
                break
            if item.tag in {"p", "ul", "ol", "small", "footer"} and not _unseen(item):
                text = clean(_shown(item))
                if 0 < len(text) < 2000:
                    texts.append(text)
    return texts


def _unique(title: str, taken: set[str]) -> str:
    name, count = title, 1
    while name in taken:
        count += 1
        name = f"{title} ({count})"
    return name


def _shown(element: etree._Element) -> str:
    """The text of an element as a browser shows it, without recursion (pages nest deep)."""
    out: list[str] = []
    depth = 0  # inside something that is not shown
    raised: list[tuple[str, int]] = []
    for event, item in etree.iterwalk(element, events=("start", "end")):
        tag = item.tag if isinstance(item.tag, str) else ""
        passed = tag in _PASSED or (item is not element and _unseen(item))
        if event == "start":
            if passed:
                depth += 1
            if not depth:
                if tag in _LINE and item is not element:
                    out.append("\n")
                if tag in ("sup", "sub"):
                    raised.append((tag, len(out)))
                out.append(_BLANKS.sub(" ", item.text or ""))
        else:
            if not depth:
                if tag in ("sup", "sub") and raised:
                    kind, start = raised.pop()
                    text = "".join(out[start:])
                    out[start:] = [superscript(text) if kind == "sup" else subscript(text)]
                if tag in _LINE and tag != "br" and item is not element:
                    out.append("\n")
            if passed:
                depth -= 1
            if not depth and item is not element:
                out.append(_BLANKS.sub(" ", item.tail or ""))
    text = re.sub(r" *\n[ \n]*", "\n", "".join(out))
    return re.sub(r" {2,}", " ", text).strip(" \n")


def _table(table: etree._Element, name: str) -> Grid:
    """A table as a grid: row and column spans expanded as the HTML standard lays them out."""
    rows: list[list[str]] = []
    numbers: list[int] = []
    spans: list[Span] = []
    hidden: list[int] = []
    held: dict[int, int] = {}  # column → rows still covered from above
    total = 0
    for number, line in enumerate(table.iter("tr"), 1):
        if _unseen(line) or any(_unseen(p) for p in line.iterancestors("tbody", "thead")):
            hidden.append(number)
            continue
        row: list[str] = []
        for cell in line.iterchildren(*_CELLS):
            if _unseen(cell):
                continue
            while held.get(len(row), 0):
                held[len(row)] -= 1
                row.append("")
            columns = max(1, min(_span(cell, "colspan"), _MOST_SPAN))
            down = min(_span(cell, "rowspan"), 65_534) or 65_534
            start = len(row)
            row.append(clean(_shown(cell)))
            row += [""] * (columns - 1)
            if len(row) > _MOST_COLUMNS:
                raise TableError(f"{name}: a table has more than {_MOST_COLUMNS} columns")
            if down > 1:
                for column in range(start, start + columns):
                    held[column] = down - 1
            if down > 1 or columns > 1:
                spans.append(Span(len(rows), start, down, columns))
        for column in [c for c, left in held.items() if left and c >= len(row)]:
            held[column] -= 1
        total += max(len(row), len(held))
        if total > MOST_CELLS:
            raise TableError(f"{name}: a table has more than {MOST_CELLS} cells; split it")
        rows.append(row)
        numbers.append(number)
    grid = even(rows, numbers, spans=spans)
    if hidden:
        from .cells import listing

        grid.remarks.append(f"hidden rows are skipped: {listing(hidden)}")
    return grid


def _span(cell: etree._Element, name: str) -> int:
    digits = re.match(r"\s*(\d{1,6})", cell.get(name) or "")
    return int(digits[1]) if digits else 1


def _definitions(element: etree._Element) -> Grid:
    """A definition list as rows of (term, definition); several definitions share a cell."""
    rows: list[list[str]] = []
    terms_open = False
    for item in element.iter("dt", "dd"):
        text = clean(_shown(item))
        if item.tag == "dt":
            rows.append([text, ""])
            terms_open = True
        elif rows:
            row = rows[-1]
            row[1] = text if terms_open else f"{row[1]}\n{text}"
            terms_open = False
    return even(rows)
