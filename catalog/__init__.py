"""What one does with many motors: read, store, search, show.

In here belongs whatever knows files, tables, SQLite or a terminal; what a figure *is* belongs to
``motorfolio.schema``, which never imports from here. Importing this package loads nothing: the
public names are fetched when they are first used.
"""

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .library import MotorCatalog, normalise, open_catalog, read_requirement, read_table
    from .requirement.read import Requirement
    from .results import Judgement, MotorTable, SearchResult, Sheet, Table

__all__ = [
    "Judgement",
    "MotorCatalog",
    "MotorTable",
    "Requirement",
    "SearchResult",
    "Sheet",
    "Table",
    "normalise",
    "open_catalog",
    "read_requirement",
    "read_table",
]

_HOMES = {
    **dict.fromkeys(("Judgement", "MotorTable", "SearchResult", "Sheet", "Table"), ".results"),
    **dict.fromkeys(
        ("MotorCatalog", "normalise", "open_catalog", "read_requirement", "read_table"), ".library"
    ),
    "Requirement": ".requirement.read",
}


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    return getattr(import_module(_HOMES[name], __name__), name)


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})
