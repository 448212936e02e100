"""What differs between two revisions of a motor, or what an import did to the catalog."""

from ..schema.gear import UNITS, Gear
from .documents import Document, amount
from .store import Catalog, CatalogError

_FIGURE = ("text", "value", "unit", "low", "high", "convention", "qualifier", "printed_unit")


def of_import(catalog: Catalog, number: int | None = None) -> list[Document]:
    """The changes that an import made (the last one if no number is given), a motor each; those
    that it left as they were are left out. A motor that was merged has ``into``, what it stands
    for since, beside ``change`` "merged"."""
    known = [found.id for found in catalog.imports()]
    if not known:
        raise CatalogError(f"Nothing has been imported into {catalog.path}.")
    if number is not None and number not in known:
        raise CatalogError(f"{catalog.path} has no import {number}; see motorfolio revisions.")
    number = known[-1] if number is None else number
    merged = catalog.merged_by(number)
    changes = []
    for before, after in catalog.changed_motors(number):
        change = between(before, after)
        into = merged.get((change["maker"] or "", change["part_number"]))
        if into is not None:
            stands_for = {"maker": into[0] or None, "part_number": into[1]}
            change = {**change, "change": "merged", "into": stands_for}
        if change["change"] != "unchanged":
            changes.append(change)
    return changes + [gears_between(a, b) for a, b in catalog.changed_gears(number)]


def between(before: Document | None, after: Document | None) -> Document:
    """One motor's change: "new", "removed", "changed" or "unchanged", with what differs.

    figures: key → before and after (null where not given); findings that came and went, by
    relation and suspect.
    """
    motor = after or before
    assert motor is not None
    change: Document = {"part_number": motor["part_number"], "maker": motor["maker"]}
    if before is None or after is None:
        return {**change, "change": "new" if before is None else "removed"}
    figures = {
        key: {"before": old, "after": new}
        for key in dict.fromkeys([*before["figures"], *after["figures"]])
        if _seen(old := before["figures"].get(key)) != _seen(new := after["figures"].get(key))
    }
    old_findings = {_name(finding): finding for finding in before["findings"]}
    new_findings = {_name(finding): finding for finding in after["findings"]}
    came = [f for name, f in new_findings.items() if name not in old_findings]
    went = [f for name, f in old_findings.items() if name not in new_findings]
    same = not figures and not came and not went and before["model"] == after["model"]
    return {
        **change,
        "change": "unchanged" if same else "changed",
        "figures": figures,
        "findings": {"came": came, "went": went},
    }


def gears_between(before: Gear | None, after: Gear | None) -> Document:
    """One gear's change, as ``between`` gives a motor's; ``kind`` is "gear"."""
    gear = after or before
    assert gear is not None
    change: Document = {"part_number": gear.part_number, "maker": gear.maker or None}
    change["kind"] = "gear"
    if before is None or after is None:
        return {**change, "change": "new" if before is None else "removed"}
    old, new = _gear_figures(before), _gear_figures(after)
    figures = {
        key: {"before": old.get(key), "after": new.get(key)}
        for key in {**old, **new}
        if old.get(key) != new.get(key)
    }
    return {**change, "change": "changed" if figures else "unchanged", "figures": figures}


def _gear_figures(gear: Gear) -> dict[str, Document]:
    units = {**UNITS, "price": gear.currency or UNITS["price"]}
    values = {key: getattr(gear, key) for key in units}
    return {key: amount(value, units[key]) for key, value in values.items() if value is not None}


def _seen(figure: Document | None) -> tuple | None:
    return None if figure is None else tuple(figure.get(part) for part in _FIGURE)


def _name(finding: Document) -> tuple:
    return finding["relation"], finding["suspect"], finding["cause"], finding["severity"]
