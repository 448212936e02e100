"""The page: one HTML file with its data, style, scripts and chart library in it.

Nothing is asked of any other file or host, and the page's policy forbids it: only the scripts and
styles that it holds, known by their digests, may run. Texts of datasheets stand as JSON in which
no sign can end the script element, and become text nodes only.
"""

from __future__ import annotations

import hashlib
import html
import json
import re
from base64 import b64encode
from importlib import resources
from importlib.metadata import version
from typing import TYPE_CHECKING, Any

import numpy as np

from ....schema.written import RULES
from ...search.fleet import Fleet, load_fleet
from .. import plain as p
from ..implied import implied_figures
from ..safety import SAFETY
from . import columns
from . import requirement as asked
from .cards import Strings, pack_card, rounded

if TYPE_CHECKING:
    from ...requirement.read import Requirement
    from ...search.run import Found
    from ...store import Catalog

SCRIPTS = ("written.js", "model.js", "judge.js", "charts.js", "card.js", "main.js")
CHUNK = 250
"""Cards that are parsed at a time, when one of them is opened."""
OTHERS = 100
"""So many candidates beyond a search's limit its page holds, and so many of the motors that are
neither candidates nor near misses, the nearest first."""


def catalog_page(catalog: Catalog, title: str) -> str:
    """The page of a whole catalog."""
    fleet = load_fleet(catalog)
    ids = fleet.ids.tolist()
    data = _motors(catalog, fleet, np.arange(len(ids)), beside=None)
    makers = len(set(data["names"]["maker"]) - {""})
    doubted = sum(map(bool, np.add(data["doubts"]["error"], data["doubts"]["warning"])))
    data |= {
        "kind": "catalog",
        "claim": f"{len(ids)} motors of {makers} maker{'s' * (makers != 1)}; "
        f"the figures of {doubted} contradict one another.",
        "demand": asked.NOTHING_ASKED,
        "judged": None,
    }
    return _html(title, data)


def search_page(catalog: Catalog, requirement: Requirement, title: str) -> str:
    """The page of a search: candidates, in order of rank beyond its limit too, near misses, and the
    nearest of the others."""
    from ...search.documents import requirement_document
    from ...search.near_misses import near_misses
    from ...search.run import search, show

    found = search(catalog, requirement)
    misses = near_misses(found, catalog)
    further = found.order[len(found.candidates) :][:OTHERS]
    ranked = [*found.candidates, *show(found, further, catalog)]
    shown = [*ranked, *(miss.shown for miss in misses)]
    taken = np.array([one.motor for one in shown], np.intp)
    rest = ~found.passed.rejected & ~found.passed.unknown
    rest[taken] = False
    others = np.flatnonzero(rest)
    largest = np.nan_to_num(found.judged.largest[others], nan=np.inf)
    shown += show(found, others[np.argsort(largest, kind="stable")][:OTHERS], catalog)
    order = np.array([one.motor for one in shown], np.intp)
    data = _motors(catalog, found.fleet, order, beside=columns.BESIDE_A_SEARCH)
    for one, card in zip(shown, data["cards"], strict=True):
        if one.gear is not None:
            card["gear"] = p.plain(one.gear.part_number)
    for number, miss in enumerate(misses, start=len(ranked)):
        data["cards"][number]["needs"] = miss.sentence
    rejected = sum(found.rejected.values())
    best = ""
    if found.candidates:
        first = p.plain(found.candidates[0].name.part_number)
        best = f"; by {requirement.order_by} {first} comes first"
    data |= {
        "kind": "search",
        "claim": f"{found.feasible} of {found.considered} motors do it, {rejected} do not, "
        f"{found.unknown} are not known{best}.{_left_out(found, len(shown))}",
        "demand": asked.demand_numbers(requirement, shown),
        "judged": asked.judged_numbers(found, shown, len(ranked)),
        "requirement": asked.in_words(requirement_document(requirement)),
    }
    return _html(title, data)


def _left_out(found: Found, shown: int) -> str:
    """Why the page holds fewer motors than the search looked at."""
    missing = found.considered - shown
    if not missing:
        return ""
    refused, unsure = int(found.passed.rejected.sum()), int(found.passed.unknown.sum())
    reasons = [
        f"{count} {why}"
        for count, why in (
            (refused, "that the limits on figures refuse"),
            (unsure, "whose figures for those limits are not known"),
            (missing - refused - unsure, "that are farthest from doing it"),
        )
        if count > 0
    ]
    return f" The page holds {shown} of them, without {' and '.join(reasons)}."


def _motors(
    catalog: Catalog, fleet: Fleet, order: np.ndarray, beside: tuple[str, ...] | None
) -> dict[str, Any]:
    """Names, table columns, physics and cards of the motors at these places of the fleet."""
    from ...store import load

    ids = fleet.ids[order].tolist()
    strings = Strings()
    motors = dict(zip(ids, load.motors(catalog.connection, ids), strict=True))
    implied = implied_figures(catalog, motors)
    cards, search, doubts = [], [], {key: [] for key in ("error", "warning", "note")}
    names: dict[str, list[str]] = {"part": [], "maker": []}
    series, kinds = [], []
    for number, motor in motors.items():
        card = pack_card(motor, implied.get(number, ()), strings)
        cards.append(card)
        names["part"].append(card["name"])
        names["maker"].append(card["maker"])
        series.append(card["series"])
        kinds.append(motor["model"]["commutation"]["value"])
        search.append(" ".join((card["name"], card["maker"], card["series"], card["description"],
                                kinds[-1])))  # fmt: skip
        for severity, counts in doubts.items():
            counts.append(sum(f["severity"] == severity for f in motor["findings"]))
    wanted = [f for f in columns.FIGURES if beside is None or f[0] in beside]
    extra = catalog.columns([key for key, _, _ in wanted if key not in fleet.columns])
    place = {number: i for i, number in enumerate(extra["id"].astype(np.int64).tolist())}
    rows = np.array([place[number] for number in ids], np.intp)
    figures = {
        key: fleet.columns[key][order] if key in fleet.columns else extra[key][rows]
        for key, _, _ in wanted
    }
    table = [
        columns.number_column(
            key, label, unit, figures[key],
            np.concatenate([figures[other] for other, _, same in wanted if same == unit]),
        )
        for key, label, unit in wanted
    ]  # fmt: skip
    texts = [] if beside is not None else [
        columns.text_column("series", "Series", series),
        columns.text_column("kind", "Commutation", kinds),
    ]  # fmt: skip
    shown = [*texts, *(column for column in table if column is not None)]
    keys = [column["key"] for column in shown]
    machines = fleet.machines.take(order).columns()
    nominal = fleet.columns["nominal_voltage"][order]
    return {
        "count": len(ids),
        "chunk": CHUNK,
        "names": names,
        "search": search,
        "doubts": doubts,
        "columns": shown,
        "overview": {
            "size": "mass" if "mass" in keys else "motor_constant",
            "against": "motor_constant" if "mass" in keys else "rotor_inertia",
        },
        # a table that is judged anew needs every digit
        "machines": {
            name: _numbers(values, None if beside else 7) for name, values in machines.items()
        },
        "nominal_voltage": _numbers(nominal, 7),
        "cards": cards,
        "strings": strings.texts,
    }


def _numbers(values: np.ndarray, digits: int | None) -> list[float | None] | None:
    """As JSON has them; None for a column of gaps."""
    if np.isnan(values).all():
        return None
    if digits is None:
        return [None if np.isnan(v) else v for v in values.tolist()]
    return [rounded(v, digits) for v in values.tolist()]


# ---- putting it together


def _asset(name: str) -> str:
    folder = resources.files("motorfolio.catalog.report.page")
    return folder.joinpath(*name.split("/")).read_text(encoding="utf-8")


def as_json(document: Any) -> str:
    """JSON that can stand in a script element: no sign in it ends one or opens a comment."""
    text = json.dumps(document, ensure_ascii=False, allow_nan=False, separators=(",", ":"))
    for sign in "<>&\u2028\u2029":
        text = text.replace(sign, f"\\u{ord(sign):04x}")
    return text


def _digest(text: str) -> str:
    return f"'sha256-{b64encode(hashlib.sha256(text.encode()).digest()).decode()}'"


def _html(title: str, data: dict[str, Any]) -> str:
    title = p.plain(title)
    cards = data.pop("cards")
    blocks: dict[str, Any] = {"written": RULES, "data": data}
    for number, start in enumerate(range(0, len(cards), CHUNK)):
        blocks[f"cards-{number}"] = cards[start : start + CHUNK]
    held = "\n".join(
        f'<script type="application/json" id="{name}">{as_json(block)}</script>'
        for name, block in blocks.items()
    )
    scripts = [_asset("vendor/uPlot.iife.min.js"), *(_asset(f"assets/{s}") for s in SCRIPTS)]
    styles = {"chart_style": _asset("vendor/uPlot.min.css"), "style": _asset("assets/page.css")}
    policy = "; ".join(
        [
            "default-src 'none'",
            f"script-src {' '.join(map(_digest, scripts))}",
            f"style-src {' '.join(map(_digest, styles.values()))}",
            "img-src data:",
            "base-uri 'none'",
            "form-action 'none'",
        ]
    )
    values = styles | {
        "title": html.escape(title),
        "policy": html.escape(policy),
        "caution": html.escape(SAFETY),
        "version": html.escape(version("motorfolio")),
        "licence": html.escape(_asset("vendor/uPlot-LICENSE.txt")),
        "data": held,
        "scripts": "\n".join(f"<script>{script}</script>" for script in scripts),
    }
    # in one pass, so that no value is searched for places of others
    return re.sub(r"\{\{(\w+)\}\}", lambda found: values[found[1]], _asset("assets/page.html"))
