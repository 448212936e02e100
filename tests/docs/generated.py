"""What the pages say that follows from the code: made anew by ``generate``, compared by a test.

The regions by name are in ``REGIONS``; ``file PATH`` shows a file.
"""

import re
import sqlite3
import tomllib
from collections.abc import Callable, Iterable
from importlib import resources
from typing import Any

import click
from click.testing import CliRunner

from motorfolio.catalog import __all__ as catalog_names
from motorfolio.catalog.cli import COMMANDS, group
from motorfolio.catalog.requirement.fields import LISTS, SECTIONS, Field
from motorfolio.catalog.store.layout import bring_up_to_date
from motorfolio.schema import __all__ as schema_names
from motorfolio.schema.entry import MODELS, json_schema
from motorfolio.schema.reconcile.causes import CAUSES
from motorfolio.schema.reconcile.relations import (
    BOUNDS,
    CONVENTION,
    FAMILY,
    GIVEN_TWICE,
    POLES,
    RELATIONS,
    THERMAL,
    WITHIN_SCATTER,
)
from motorfolio.schema.units.factors import evaluate
from motorfolio.schema.units.table import table
from motorfolio.schema.vocabulary import quantities

from . import notes
from .pages import ROOT

Lines = list[str]
FENCES = {"toml": "toml", "csv": "text", "tsv": "text", "sh": "sh", "py": "python"}


def generate(name: str) -> Lines:
    """The lines of a region; KeyError for a name that isn't known."""
    if name.startswith("file "):
        path = ROOT / name.removeprefix("file ")
        return [f"```{FENCES[path.suffix[1:]]}", *path.read_text("utf-8").splitlines(), "```"]
    return ["", *REGIONS[name](), ""]


def rows(heads: Iterable[str], body: Iterable[Iterable[object]]) -> Lines:
    """A Markdown table."""
    heads = list(heads)

    def line(cells: Iterable[object]) -> str:
        return "| " + " | ".join(str(c).replace("|", "\\|") for c in cells) + " |"

    return [line(heads), line("---" for _ in heads), *map(line, body)]


def code(words: Iterable[str]) -> str:
    """Words as code, apart."""
    return " ".join(f"`{word}`" for word in words)


def si(factor: float) -> str:
    """A factor to eight digits, as a person writes it."""
    return f"{factor:.8g}"


# ---- commands


def _help(words: list[str]) -> Lines:
    result = CliRunner().invoke(
        group, [*words, "--help"], prog_name="motorfolio", terminal_width=80
    )
    assert result.exit_code == 0, result.output
    lines = [line.rstrip() for line in result.output.rstrip().splitlines()]
    return ["```text", *lines, "```"]


def commands() -> Lines:
    out: Lines = []
    for name, (_, text) in COMMANDS.items():
        out += [f"## motorfolio {name}", "", text, "", *_help([name]), ""]
        command = group.get_command(click.Context(group), name)
        if isinstance(command, click.Group):
            for sub in command.commands:
                out += [f"### motorfolio {name} {sub}", "", *_help([name, sub]), ""]
    return out[:-1]


def command_list() -> Lines:
    return rows(
        ("command", "what it does"),
        ((f"[`{name}`](reference/commands.md#motorfolio-{name})", text)
         for name, (_, text) in COMMANDS.items()),
    )  # fmt: skip


# ---- findings


def explanations() -> dict[str, dict[str, str]]:
    """The plain explanations, by relation and by cause."""
    path = ROOT / "docs" / "reference" / "explanations.toml"
    return tomllib.loads(path.read_text(encoding="utf-8"))


def relation_names() -> dict[str, str]:
    """Every relation that a finding may name, with its formula where there is one."""
    formulas: dict[str, list[str]] = {}
    for relation in RELATIONS:
        formulas.setdefault(relation.name, []).append(relation.formula)
    names = {name: " or ".join(dict.fromkeys(found)) for name, found in formulas.items()}
    names |= {name: f"{a} < {b}".replace("_", " ") for name, a, b in BOUNDS}
    others = (POLES, GIVEN_TWICE, FAMILY.rstrip("-"), THERMAL, CONVENTION, WITHIN_SCATTER)
    return names | dict.fromkeys(others, "") | dict.fromkeys(notes.FURTHER_RELATIONS, "")


def relations() -> Lines:
    told = explanations()["relations"]
    return rows(
        ("relation", "formula", "what it says"),
        ((f"`{name}`", formula, told[name]) for name, formula in relation_names().items()),
    )


def causes() -> Lines:
    told = explanations()["causes"]
    return rows(("cause", "what happened"), ((f"`{name}`", told[name]) for name in CAUSES))


# ---- figures and words


def _language_files() -> dict[str, dict[str, Any]]:
    folder = resources.files("motorfolio.schema").joinpath("words")
    found = {}
    for file in sorted(folder.iterdir(), key=lambda f: f.name):
        if file.name.endswith(".toml"):
            text = file.read_text(encoding="utf-8")
            language = text.split(".", 1)[0].removeprefix("# ").split(" (")[0]
            found[language] = {"file": file.name, **tomllib.loads(text)}
    return found


def _range(low: float, high: float) -> str:
    return f"{low:g} … {high:g}" if high < float("inf") else ""


def figures() -> Lines:
    names = _language_files()["English"]["names"]
    return rows(
        ("key", "SI unit", "also printed in", "conventions", "plausible", "symbols", "also called"),
        (
            (
                f"`{key}`", "text" if q.text else q.unit,
                "" if q.text else ", ".join(unit for unit in q.accepts if unit != q.unit),
                ", ".join(sorted(q.carries)), "" if q.text else _range(*q.plausible),
                code(q.symbols[:4]), ", ".join(names.get(key, ())[:3]),
            )
            for key, q in quantities().items()
        ),
    )  # fmt: skip


def languages() -> Lines:
    return rows(
        ("language", "file", "names", "figures that have one"),
        ((language, f"`schema/words/{words['file']}`",
          sum(len(n) for n in words.get("names", {}).values()), len(words.get("names", {})))
         for language, words in _language_files().items()),
    )  # fmt: skip


def language_names() -> Lines:
    files = _language_files()
    keys = [key for key in quantities() if key in files["English"]["names"]]
    return rows(
        ("key", *files),
        ((f"`{key}`", *((words["names"].get(key) or ["–"])[0] for words in files.values()))
         for key in keys),
    )  # fmt: skip


# ---- units


def _unit_section(section: str) -> list[list[str]]:
    text = (
        resources.files("motorfolio.schema.units").joinpath("units.txt").read_text(encoding="utf-8")
    )
    body = text.split(f"\n[{section}]\n", 1)[1].split("\n\n[", 1)[0]
    lines = (line for line in body.splitlines() if line.strip() and not line.startswith("#"))
    return [[part.strip() for part in f"{line} ; ; ".split(" ;")] for line in lines]


def units() -> Lines:
    body = []
    for head, prefixes, spellings, *_ in _unit_section("units"):
        words = spellings.split()
        factor, dimension = evaluate(table().words[words[0]])
        name = head.split(" = ")[0].replace("_", " ").replace("meter", "metre")
        dimension = dimension.replace("^1 ", " ").removesuffix("^1")
        body.append((name, code(words[:8]), " ".join(prefixes), si(factor), dimension))
    return rows(("unit", "spellings", "prefixes", "factor to SI", "dimension"), body)


def unit_compounds() -> Lines:
    return rows(
        ("meaning", "written as one word", "prefixes"),
        ((meaning, code(words.split()), " ".join(prefixes))
         for meaning, prefixes, words, *_ in _unit_section("compounds")),
    )  # fmt: skip


def unit_texts() -> Lines:
    body = []
    for head, accepts, remark, *_ in _unit_section("texts"):
        spelling, meaning = head.rsplit(" = ", 1)
        if meaning != "1":
            body.append((f"`{spelling}`", accepts, meaning, remark.split("; ")[0]))
    return rows(("printed", "where the figure is in", "read as", "what is said"), body)


def unit_refused() -> Lines:
    return rows(
        ("printed", "where the figure is in", "may be"),
        ((code([head.split(" = ")[0]]), accepts, head.split(" = ")[1])
         for head, accepts, *_ in _unit_section("unsure")),
    )  # fmt: skip


# ---- requirement


def _values(field: Field) -> str:
    bounds = [
        *([f"above {field.over:g}"] if field.over is not None else []),
        *([f"{field.least:g} or more"] if field.least is not None else []),
        *([f"at most {field.most:g}"] if field.most is not None else []),
    ]
    kinds = {
        "quantity": f"text with a unit: {' or '.join(field.accepts)}",
        "current": "text with a unit: A, A rms, A peak",
        "share": "a pure number or per cent",
        "ratio": "a number, a list, or a range `3..20`",
        "choice": " or ".join(f"`{word}`" for word in field.accepts),
        "texts": "a list of texts",
        "flag": "true or false",
        "tolerance": "per cent, or `printed`",
        "count": "a whole number",
        "number": "a pure number",
    }
    return ", ".join([kinds[field.kind], *bounds])


def requirement() -> Lines:
    out: Lines = []
    for name, fields in {**SECTIONS, **{f"[{k}]": v for k, v in LISTS.items()}}.items():
        body = ((f"`{key}`", _values(f), f.doc) for key, f in fields.items())
        out += [f"### [{name}]", "", *rows(("key", "value", "what it is"), body), ""]
    return out[:-1]


# ---- documents


def documents() -> Lines:
    out: Lines = []
    for name in MODELS:
        schema = json_schema(name)
        named = {name: schema, **schema.get("$defs", {})}
        for title, part in named.items():
            if name == "entry" and title == name:
                keys = [
                    (key, p) for key, p in part["properties"].items() if key in notes.ENTRY_KEYS
                ]
            else:
                keys = list(part.get("properties", {}).items())
            out += [f"### {name}" if title == name else f"#### {title} (in {name})", ""]
            out += [" ".join(part.get("description", "").split()).split(" >>>")[0], ""]
            body = ((f"`{key}`", _type(p), p.get("description", "")) for key, p in keys)
            out += [*rows(("key", "value", "note"), body), ""]
    return out[:-1]


def _type(schema: dict[str, Any]) -> str:
    if "$ref" in schema:
        return schema["$ref"].rsplit("/", 1)[-1]
    if "anyOf" in schema:
        return " or ".join(_type(part) for part in schema["anyOf"])
    if "enum" in schema or "const" in schema:
        return " or ".join(f'"{word}"' for word in schema.get("enum", [schema.get("const")]))
    if schema.get("type") == "array":
        return f"list of {_type(schema['items'])}" if "items" in schema else "list"
    if schema.get("type") == "object":
        inner = schema.get("additionalProperties")
        return f"key → {_type(inner)}" if isinstance(inner, dict) else "object"
    kind = schema.get("type", "any")
    return " or ".join(kind) if isinstance(kind, list) else kind


# ---- the catalog as a database


def _layout() -> sqlite3.Connection:
    connection = sqlite3.connect(":memory:")
    bring_up_to_date(connection)
    return connection


def layout_names(kind: str) -> list[str]:
    """The tables or views that someone sees in the file."""
    with _layout() as connection:
        return [row[0] for row in connection.execute(
            "SELECT name FROM sqlite_master WHERE type = ? AND name NOT LIKE 'sqlite_%' "
            "ORDER BY rowid", (kind,))]  # fmt: skip


def _columns(name: str) -> list[tuple[str, str]]:
    with _layout() as connection:
        return [(row[1], row[2]) for row in connection.execute(f'PRAGMA table_info("{name}")')]


def tables() -> Lines:
    body = []
    for name in layout_names("table"):
        columns = [column for column, _ in _columns(name)]
        per_figure = len(columns) > 30
        shown = "id, and a column for each figure key" if per_figure else code(columns)
        body.append((f"`{name}`", notes.TABLES[name], shown))
    return rows(("table", "a row is", "columns"), body)


def views() -> Lines:
    return rows(
        ("view", "a row is", "columns"),
        ((f"`{name}`", notes.VIEWS[name],
          "see below" if name == "motors" else code(c for c, _ in _columns(name)))
         for name in layout_names("view")),
    )  # fmt: skip


def motors_view() -> Lines:
    return [code(column for column, _ in _columns("motors"))]


# ---- the house


def dependencies() -> Lines:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
    groups = [
        ("the program", project["project"]["dependencies"]),
        *((f"extra `{name}`", found)
          for name, found in project["project"]["optional-dependencies"].items()),
        *((f"group `{name}`", found) for name, found in project["dependency-groups"].items()),
    ]  # fmt: skip
    body = []
    for what, found in groups:
        for requirement_ in found:
            name = re.split(r"[^\w-]", requirement_)[0]
            body.append((name, what, notes.DEPENDENCIES[name]))
    return rows(("package", "for", "why"), body)


def public_names() -> Lines:
    import motorfolio.catalog
    import motorfolio.schema

    body = []
    for package, names in ((motorfolio.catalog, catalog_names), (motorfolio.schema, schema_names)):
        for name in names:
            doc = (getattr(package, name).__doc__ or "").strip().split("\n\n")[0]
            first = re.split(r"(?<=[.;:])\s", " ".join(doc.split()))[0].rstrip(":;.")
            body.append((f"`{package.__name__}.{name}`", first))
    return rows(("name", "what it is"), body)


REGIONS: dict[str, Callable[[], Lines]] = {
    "commands": commands,
    "command list": command_list,
    "relations": relations,
    "causes": causes,
    "figures": figures,
    "languages": languages,
    "language names": language_names,
    "units": units,
    "units in one word": unit_compounds,
    "units read otherwise": unit_texts,
    "units refused": unit_refused,
    "requirement": requirement,
    "documents": documents,
    "tables": tables,
    "views": views,
    "motors view": motors_view,
    "dependencies": dependencies,
    "public names": public_names,
}
