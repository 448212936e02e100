"""Requirement files: TOML read, joined with options, and written back."""

from __future__ import annotations

import json
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from . import cycle_table
from .fields import LISTS, RequirementError, quoted, texts
from .read import Document, Requirement

#: What is shown of a search is no part of what the machine asks: an option may change it.
_VIEW = ("limit", "order_by")


def merged(file: Mapping[str, Any], options: Mapping[str, Any], folder: Path) -> Document:
    """A file's document with what options add; RequirementError where they contradict.

    A cycle's file in it is looked for in `folder`, and stands with its path in the result.
    """
    result: Document = dict(file)
    if isinstance(result.get("cycle"), str):
        result["cycle"] = str((folder / result["cycle"]).absolute())
    for section, added in options.items():
        there = result.get(section)
        if not there:
            result[section] = added
            continue
        if section in LISTS or not isinstance(added, Mapping) or not isinstance(there, Mapping):
            raise RequirementError(
                f"The requirement file and the options both say the {section}; leave one of them."
            )
        table = dict(there)
        for key, value in added.items():
            if key == "where":
                table[key] = [*texts(table.get(key, []), f"{section}.{key}"), *value]
            elif key in table and table[key] != value and key not in _VIEW:
                raise RequirementError(
                    f"The requirement file says {section}.{key} = {quoted(table[key])} and the "
                    f"options {quoted(value)}; leave one of them."
                )
            else:
                table[key] = value
        result[section] = table
    return result


def saved(requirement: Requirement) -> str:
    """The requirement as a TOML file that stands alone: a cycle's file is written out in rows."""
    document = dict(requirement.document)
    if isinstance(document.get("cycle"), str):
        linear = requirement.axis.travel is not None
        rows = cycle_table.from_file(Path(document["cycle"]), linear)
        units = [accepts[0] for accepts in cycle_table.axis_units(linear).values()]
        document["cycle"] = [
            [f"{value!r} {unit}" for value, unit in zip(row, units, strict=True)] for row in rows
        ]
    return to_toml(document)


def read_file(path: Path) -> Document:
    """The document of a TOML file; RequirementError in one sentence."""
    import tomllib

    try:
        with path.open("rb") as file:
            return tomllib.load(file)
    except FileNotFoundError:
        raise RequirementError(f"There is no requirement file {path}; name a TOML file.") from None
    except IsADirectoryError:
        raise RequirementError(f"The requirement {path} is a folder; name a TOML file.") from None
    except OSError as error:
        raise RequirementError(f"The requirement {path} can't be read: {error.strerror}.") from None
    except RecursionError:
        raise RequirementError(f"The requirement {path} is nested too deeply.") from None
    except ValueError as error:  # no TOML, no UTF-8, no path
        raise RequirementError(f"The requirement {path} is no TOML: {error}.") from None


def to_toml(document: Mapping[str, Any]) -> str:
    """The document as TOML; `read_file` gives it back."""

    def value(item: Any) -> str:
        if isinstance(item, list | tuple):
            return "[" + ", ".join(value(part) for part in item) + "]"
        # a JSON string, number, true or false is written the same in TOML
        return json.dumps(item, ensure_ascii=False)

    def keys(table: Mapping[str, Any]) -> list[str]:
        return [f"{key} = {value(item)}" for key, item in table.items()]

    plain = {k: v for k, v in document.items() if not _is_table(v) and not _is_tables(v)}
    blocks = ["\n".join(keys(plain))] if plain else []
    for name, item in document.items():
        if _is_table(item):
            blocks.append("\n".join([f"[{name}]", *keys(item)]))
        elif _is_tables(item):
            blocks += ["\n".join([f"[[{name}]]", *keys(table)]) for table in item]
    return "\n\n".join(blocks) + "\n"


def _is_table(item: Any) -> bool:
    return isinstance(item, Mapping)


def _is_tables(item: Any) -> bool:
    return isinstance(item, list) and bool(item) and all(_is_table(part) for part in item)
