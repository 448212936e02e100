"""Motors out of the catalog: JSON and TOML with all that is known, CSV and Parquet as a table."""

import io
from collections.abc import Callable
from pathlib import Path
from typing import TextIO

from ..store import Catalog
from .delimited import inert, write_csv
from .units import Units, read_units
from .whole import write_json, write_toml

__all__ = ["Units", "as_text", "export", "export_parquet", "inert", "read_units"]


def export(catalog: Catalog, format: str, out: TextIO, units: Units | None = None) -> int:
    """Write all motors as "csv", "json" or "toml"; returns how many.

    units: CSV in these units instead of SI; a quantity that isn't among them stays in SI.
    """
    writers: dict[str, Callable[[], int]] = {
        "json": lambda: write_json(catalog.motors(), out),
        "toml": lambda: write_toml(catalog.motors(), out),
        "csv": lambda: write_csv(catalog.motors, out, units or {}),
    }
    return writers[format]()


def export_parquet(catalog: Catalog, path: Path, units: Units | None = None) -> int:
    """Write the columns that CSV has as numbers and texts of a Parquet file; returns how many
    motors. Raises MotorfolioError where the extra ``parquet`` is not installed."""
    from .parquet import write_parquet

    return write_parquet(catalog.motors, path, units or {})


def as_text(catalog: Catalog, format: str, units: Units | None = None) -> str:
    """The export as one text."""
    out = io.StringIO()
    export(catalog, format, out, units)
    return out.getvalue()
