"""What a motor figure is: units, numbers, vocabulary, conventions, relations, physics.

Pure: no files beyond its own data, no database, no terminal, and nothing from
``motorfolio.catalog``. Importing this package loads nothing: the public names are fetched when
they are first used.
"""

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .entry import Entry, Finding, Motor, json_schema
    from .errors import MotorfolioError
    from .units.convert import convert
    from .vocabulary import quantities

__all__ = [
    "Entry",
    "Finding",
    "Motor",
    "MotorfolioError",
    "convert",
    "json_schema",
    "quantities",
]

_HOMES = {
    "Entry": ".entry",
    "Finding": ".entry",
    "Motor": ".entry",
    "MotorfolioError": ".errors",
    "convert": ".units.convert",
    "json_schema": ".entry",
    "quantities": ".vocabulary",
}


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    return getattr(import_module(_HOMES[name], __name__), name)


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})
