"""A recipe says everything about a generated table; the same recipe gives the same file."""

from __future__ import annotations

import json
from dataclasses import asdict, dataclass, replace
from random import Random

from .numbers import STYLES
from .quantities import ANCHORS, SHEETS
from .words import LANGUAGES

LAYOUTS = (
    "rows",
    "rows, unit row",
    "rows, symbol and unit rows",
    "rows, grouped",
    "rows, operating points",
    "rows, repeated heading",
    "rows, split blocks",
    "rows, two voltages",
    "rows, ditto",
    "rows, unit in cell",
    "rows, symbols",
    "rows, dual units",
    "rows, two unit systems",
    "rows, two sheets",
    "columns",
    "columns, captions",
    "columns, unit in label",
    "columns, unit in cell",
    "columns, symbols",
    "columns, dual units",
    "columns, shared cells",
    "columns, two temperatures",
    "key-value text",
    "flat list",
    "number formats",
)
FORMATS = ("csv", "tsv", "text", "html", "xlsx", "ods", "pdf", "json", "toml")
NOISES = (
    "nbsp",
    "thin blanks",
    "full width",
    "middle dots",
    "ohm signs",
    "micro signs",
    "minus signs",
    "zero width",
    "direction marks",
    "trailing blanks",
    "lost superscripts",
    "cr lines",
    "wrapped labels",
)
FEATURES = (
    "qualifiers",
    "missing",
    "note temperature",
    "note rms",
    "footnote label",
    "footnote cell",
    "distractor",
    "scientific",
    "scaled",
    "second language",
    "between",
    "title",
    "numbered",
    "hidden",
)
ENCODINGS = {
    "ja": ("utf-8", "utf-8-sig", "utf-16", "shift_jis"),
    "zh": ("utf-8", "utf-8-sig", "utf-16", "gb18030"),
    "": ("utf-8", "utf-8-sig", "utf-16", "cp1252", "latin-1"),
}


@dataclass(frozen=True)
class Recipe:
    """One generated table."""

    seed: int
    kind: str = "brushed"
    layout: str = "rows"
    format: str = "csv"
    language: str = "en"
    system: str = "metric"
    style: str = "point"
    encoding: str = "utf-8"
    label: str = "label [unit]"
    windings: int = 3
    keys: tuple[str, ...] = ()
    noise: tuple[str, ...] = ()
    features: tuple[str, ...] = ()

    def random(self, purpose: str) -> Random:
        """A stream of its own for every purpose, so that dropping one choice keeps the others."""
        return Random(f"{self.seed}/{purpose}")

    def has(self, feature: str) -> bool:
        return feature in self.features

    def without(self, **changes: object) -> Recipe:
        return replace(self, **changes)  # type: ignore[arg-type]

    def to_json(self) -> str:
        return json.dumps(asdict(self), ensure_ascii=False)

    @classmethod
    def from_json(cls, text: str) -> Recipe:
        entries = json.loads(text)
        for name in ("keys", "noise", "features"):
            entries[name] = tuple(entries.get(name, ()))
        return cls(**entries)


LABEL_STYLES = (
    "label [unit]",
    "label (unit)",
    "label, unit",
    "label / unit",
    "label in unit",
    "label symbol [unit]",
    "label, symbol [unit]",
    "label (symbol) [unit]",
    "label, symbol (unit)",
)


def formats_for(layout: str) -> tuple[str, ...]:
    """The file formats in which a layout can be printed."""
    if layout == "key-value text":
        return ("text",)
    if layout == "flat list":
        return ("json", "toml")
    if layout == "number formats":
        return ("xlsx", "ods")
    if layout == "columns, shared cells":
        return ("html", "xlsx", "ods", "csv")
    return ("csv", "csv", "tsv", "text", "html", "html", "xlsx", "ods", "pdf")


def draw_recipe(seed: int) -> Recipe:
    """A recipe at random, made of choices that fit together."""
    rng = Random(seed)
    kind = rng.choice(["brushed", "brushed", "block", "servo"])
    layout = rng.choice(LAYOUTS)
    if layout == "rows, operating points" and kind == "servo":
        kind = "block"
    if layout in ("rows, two voltages",):
        kind = "servo"
    file_format = rng.choice(formats_for(layout))
    language = rng.choice(["en", "en", *LANGUAGES])
    if file_format == "pdf" and language in ("ja", "zh"):
        language = "de"  # no free font with a text layer for these two stands among the tools
    style = rng.choice(list(STYLES))
    pool = [k for k in SHEETS[kind] if k not in ANCHORS[kind]]
    windings = rng.choice([1, 2, 3, 3, 4, 6] if layout.startswith("columns") else [2, 3, 4, 5, 7])
    if layout == "rows, repeated heading":
        windings = rng.choice([5, 6, 7])
    count = rng.randint(4, min(16, len(pool)))
    keys = (*ANCHORS[kind], *rng.sample(pool, count))
    if layout in ("rows, grouped", "rows, operating points"):
        keys = tuple(dict.fromkeys([*keys, "stall_torque", "no_load_current", "stall_current"]))
        if layout == "rows, grouped":
            keys = tuple(dict.fromkeys([*keys, "nominal_speed", "nominal_torque"]))
        if kind == "servo":
            keys = tuple(k for k in keys if k in SHEETS["servo"])
    if layout == "rows, two voltages":
        keys = tuple(dict.fromkeys([*keys, "nominal_speed", "nominal_torque", "nominal_current"]))
    encodings = ENCODINGS.get(language, ENCODINGS[""])
    textual = file_format in ("csv", "tsv", "text", "html")
    return Recipe(
        seed,
        kind,
        layout,
        file_format,
        language,
        rng.choice(["metric", "metric", "metric", "imperial", "gravitational", "mixed"]),
        style,
        rng.choice(encodings) if textual else "utf-8",
        rng.choice(LABEL_STYLES),
        windings,
        keys,
        tuple(n for n in NOISES if rng.random() < 0.12),
        tuple(f for f in FEATURES if rng.random() < 0.2),
    )
