"""Catalogs for the tests: from columns of SI figures, or from the true constants of the samples."""

from __future__ import annotations

import json
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

import numpy as np

from motorfolio.catalog.store import Catalog, columns
from motorfolio.catalog.store.write import Writer
from motorfolio.schema.batch import MODEL_BASES, TextColumn, blank_batch, empty_figures
from motorfolio.schema.convention import Commutation, Convention
from motorfolio.schema.motor import CANONICAL, ConstantColumn, Reconciled

ROOT = Path(__file__).parent.parent.parent
SAMPLES = ROOT / "sample_entries"
STATED = MODEL_BASES.index("stated")


def catalog_of(
    path: Path,
    figures: Mapping[str, Any],
    constants: Mapping[str, Any],
    *,
    commutation: Any = 0,
    magnet: Sequence[str] | str = "unknown",
    makers: Sequence[str] | None = None,
    parts: Sequence[str] | None = None,
    texts: Mapping[str, Sequence[str]] | None = None,
) -> Path:
    """A catalog of N motors from columns in SI (scalars are repeated, NaN is a gap)."""
    n = max((np.size(c) for c in [*figures.values(), *constants.values()]), default=0)
    if parts is not None:
        n = len(parts)
    batch = blank_batch(list(parts or (f"M-{i:06d}" for i in range(n))), maker="Made-up Motors")
    if makers is not None:
        batch.maker = list(makers)
    batch.commutation = np.broadcast_to(np.asarray(commutation, np.int8), (n,)).copy()
    batch.commutation_basis[:] = STATED
    batch.magnet = [magnet] * n if isinstance(magnet, str) else list(magnet)
    for key, column in figures.items():
        values = np.broadcast_to(np.asarray(column, float), (n,)).copy()
        figure = empty_figures(n)
        figure.value, figure.low, figure.high = values, values * 0.998, values * 1.002
        figure.conventions = [Convention(current="dc")]
        batch.figures[key] = figure
    for key, column in (texts or {}).items():
        zeros = np.zeros(n, np.int32)
        batch.texts[key] = TextColumn(list(column), zeros, zeros)
    made = {}
    for key in CANONICAL:
        given = constants.get(key, np.nan)
        values = np.broadcast_to(np.asarray(given, float), (n,)).copy()
        low, high = values * 0.97, values * 1.03
        kind = np.zeros(n, np.int32)
        made[key] = ConstantColumn(values, low, high, kind.astype(np.int8), [(key,)], kind)
    with Catalog.open(path, create=True) as catalog, catalog.changing() as connection:
        import_id = connection.execute(
            "INSERT INTO imports(at, files, motors) VALUES ('2025-01-01T00:00:00Z', 1, ?)", (n,)
        ).lastrowid
        assert import_id is not None
        writer = Writer(connection, import_id)
        file = writer.add_file(
            file="made.csv", sha256="0", format="csv", layout="rows", options="", remarks=()
        )
        stored = writer.add_table(file, 0, batch, Reconciled(batch, made))
        columns.rebuild(connection, stored.touched_sources)
    return path


def sample_catalog(path: Path) -> Path:
    """The invented sample motors by their true constants and figures."""
    truth = json.loads((SAMPLES / "truth.json").read_text(encoding="utf-8"))["motors"]
    motors = list(truth.values())

    def column(part: str, key: str) -> np.ndarray:
        values = [motor[part].get(key) for motor in motors]
        return np.array([np.nan if v is None else v for v in values], float)

    kinds = np.array([int(Commutation[m["commutation"].upper()]) for m in motors])
    keys = sorted({key for motor in motors for key in motor["figures"]})
    figures = {key: column("figures", key) for key in keys}
    for key in figures:
        # truth.json has currents in the sheet's convention: A rms on the servo sheets
        if key.endswith("_current"):
            figures[key] = np.where(kinds == 2, figures[key] * np.sqrt(1.5), figures[key])
    return catalog_of(
        path,
        figures,
        {key: column("constants", key) for key in CANONICAL},
        commutation=kinds,
        magnet=[motor["magnet"].lower() for motor in motors],
        makers=[motor["maker"] for motor in motors],
        parts=list(truth),
    )
