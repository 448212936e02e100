"""The pieces of a heading: brackets apart from the rest, a name from its symbol and unit."""

import re

from ....schema.units.read import is_unit_like, unit_of
from .lexicon import find_symbol, symbol_form

_OPENING, _CLOSING = "([{<【", ")]}>】"
_SYMBOL_EDGES = re.compile(r"\s*[,:=]\s*|\s+[–-]\s+|\s+")


def bracketed_apart(text: str) -> tuple[str, list[str]]:
    """The text outside brackets, and the contents of its outermost brackets."""
    outside: list[str] = []
    inside: list[str] = []
    depth, current = 0, ""
    for i, c in enumerate(text):
        if c in _OPENING and not (c == "<" and not re.search(r">", text[i:])):
            if depth:
                current += c
            else:
                glued = current and current[-1] in "/·√"
                if glued or re.match(r"\((?:rad|min|r|rev|U|N|m)?[\w·/^-]*\)\s*/", text[i:]):
                    depth, current = depth, current + c
                    continue
                outside.append(current)
                current = ""
            depth += 1
        elif c in _CLOSING and depth:
            depth -= 1
            if depth:
                current += c
            else:
                inside.append(current.strip())
                current = ""
        else:
            current += c
    if depth:
        outside.append(current)
    else:
        outside.append(current)
    joined = " ".join(part.strip(" ") for part in outside if part.strip(" ,;:\n"))
    return joined, [i for i in inside if i]


def may_be_unit(text: str) -> bool:
    """Whether a piece may be a unit, and is not just a number."""
    return (
        len(text) <= 40 and not re.fullmatch(r"[\d.,\s±]*(?:\d\s*%)?", text) and is_unit_like(text)
    )


def ways_to_divide(core: str) -> list[tuple[str, str, str]]:
    """(name, symbol, unit) in every way that the text could be divided."""
    found = [(core, "", "")]
    hit = find_symbol(core)
    if hit:
        found.append(("", core, ""))
        if hit.surety > 0.95:
            return found  # "I_N" is no I in newtons
    cuts = [
        m.span()
        for m in re.finditer(
            r"\s*[,/:]\s*|\s+(?:in|en)\s+|[\s_]+|(?<=[^\x00-\x7f])(?=[A-Za-z])", core
        )
    ]
    blank = re.search(r"\s", core)
    for start, end in cuts:
        if start == 0 or end >= len(core):
            continue
        if blank and core[start:end] == "_":
            continue  # "U_N V" is a symbol and its unit
        if core[start:end] == "/" and may_be_unit(_word_around(core, start)):
            continue  # within "rpm/mNm"
        head, tail = core[:start].strip(), core[end:].strip()
        if not head or not tail:
            continue
        units = [
            t
            for t in (tail, tail.replace("_", "/"), tail.replace("_", " "))
            if may_be_unit(t) and not re.search(r"\s(?:in|en)\s", tail)
        ]
        if units:
            found.append((head, "", units[0]))
            if find_symbol(head):
                found.append(("", head, units[0]))
            for name, symbol in _name_and_symbol(head):
                found.append((name, symbol, units[0]))
    found += [(name, symbol, "") for name, symbol in _name_and_symbol(core)]
    return found


def _word_around(text: str, at: int) -> str:
    """The word between blanks that this place is in."""
    return text[text.rfind(" ", 0, at) + 1 :].split(" ", 1)[0]


def _name_and_symbol(text: str) -> list[tuple[str, str]]:
    pieces = [p for p in _SYMBOL_EDGES.split(text) if p]
    if len(pieces) < 2:
        return []
    found = []
    last, first = pieces[-1], pieces[0]
    if find_symbol(last) and len(symbol_form(last)) <= 8:
        found.append((text[: text.rindex(last)].strip(" ,:=–-"), last))
    leading = find_symbol(first)
    if leading and leading.surety > 0.95:  # "No load" begins with no symbol
        found.append((text[text.index(first) + len(first) :].strip(" ,:=–-"), first))
    if len(pieces) > 2:
        two = text[text.rindex(pieces[-2]) :]
        if find_symbol(two) and len(symbol_form(two)) <= 6:
            found.append((text[: text.rindex(pieces[-2])].strip(" ,:=–-"), two))
    return [(n, s) for n, s in found if n]


_PAIR = re.compile(
    r"((?:[^()]|\([^()]*\))+?)\s*"
    r"(?:\(((?:[^()]|\([^()]*\))+)\)|\[(.+)\]|\{(.+)\}|\s/\s(.+)|\|\s*(.+)|\s-\s(.+))"
)


def unit_pair(text: str) -> tuple[str, ...]:
    """The two units of "N·m (oz-in)", "mm / in" or "kg | lb", the one of any other text."""
    pair = _PAIR.fullmatch(text)
    if pair:
        first, second = pair[1].strip(), next(g for g in pair.groups()[1:] if g).strip()
        one, two = unit_of(first), unit_of(second)
        bracketed = pair[2] or pair[3] or pair[4]
        if one is not None and two is not None and (bracketed or one.si == two.si):
            return (first, second)
    return (text,)
