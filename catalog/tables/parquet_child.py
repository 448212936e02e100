"""Run as a program of its own: reads the Parquet file of that name, prints its rows as JSON lines.

A damaged file may end the process, or make it ask for any amount of memory or time. Here only this
process ends, and its memory and time are limited where the system can. Nothing of this package is
imported.

Output: a line {"columns": names, "passed": names of columns that hold no plain values}, then a line
[cells] a row, then null; or {"error": text}. A cell is null, a text, a number, true or false, or
[kind, text] of a decimal number or a date.
"""

import contextlib
import decimal
import json
import math
import sys
from collections.abc import Callable
from typing import Any

_MOST_MEMORY = 4_000_000_000
_SECONDS, _SECONDS_A_MEGABYTE = 30, 2
_MOST_CELLS, _MOST_CELLS_A_BYTE = 4_000_000, 200
_MOST_CHARACTERS = 20_000
_ROWS = 2_000


def main(path: str, size: int) -> None:
    with contextlib.suppress(ImportError, OSError, ValueError):
        import resource

        seconds = _SECONDS + _SECONDS_A_MEGABYTE * size // 1_000_000
        resource.setrlimit(resource.RLIMIT_AS, (_MOST_MEMORY, _MOST_MEMORY))
        resource.setrlimit(resource.RLIMIT_CPU, (seconds, seconds))
    import pyarrow as pa
    import pyarrow.parquet as pq

    pa.set_cpu_count(1)
    pa.set_io_thread_count(1)
    try:
        # mapping the file would end the process where it is cut short meanwhile
        file = pq.ParquetFile(path, memory_map=False)
        schema, cells = file.schema_arrow, file.metadata.num_rows * file.metadata.num_columns
        if cells > _MOST_CELLS + _MOST_CELLS_A_BYTE * size:
            return _put({"error": f"claims {cells} cells in {size} bytes"})
        plain = [i for i, kind in enumerate(schema.types) if not pa.types.is_nested(kind)]
        plain = [i for i in plain if not _is_binary(pa, schema.types[i])]
        names = schema.names
        _put({
            "columns": [names[i] for i in plain],
            "passed": [name for i, name in enumerate(names) if i not in plain],
        })  # fmt: skip
        writers = [_cell_of(pa, schema.types[i]) for i in plain]
        for batch in file.iter_batches(batch_size=_ROWS, use_threads=False):
            columns = [
                [None if value is None else write(value) for value in batch.column(i).to_pylist()]
                for i, write in zip(plain, writers, strict=True)
            ]
            for row in zip(*columns, strict=True):
                _put(row)
    except (pa.ArrowException, OSError, ValueError, MemoryError, OverflowError) as error:
        return _put({"error": str(error)})
    return _put(None)


def _put(value: object) -> None:
    sys.stdout.write(json.dumps(value) + "\n")


def _is_binary(pa: Any, kind: Any) -> bool:
    if pa.types.is_dictionary(kind):
        kind = kind.value_type
    return (
        pa.types.is_binary(kind)
        or pa.types.is_large_binary(kind)
        or pa.types.is_fixed_size_binary(kind)
    )


def _cell_of(pa: Any, kind: Any) -> Callable[[Any], object]:
    """What makes a cell of a value of this kind."""
    if pa.types.is_float32(kind) or pa.types.is_float16(kind):
        digits = 7 if pa.types.is_float32(kind) else 3
        return lambda value: _number(float(f"{value:.{digits}g}"))
    if pa.types.is_floating(kind):
        return _number
    return _other


def _number(value: float) -> object:
    if math.isfinite(value):
        return value
    return None if math.isnan(value) else str(value)


def _other(value: Any) -> object:
    if isinstance(value, str):
        if len(value) > _MOST_CHARACTERS:
            raise ValueError(f"a text of {len(value)} characters")
        return value
    if value is None or isinstance(value, bool | int):
        return value
    if isinstance(value, float):
        return _number(value)
    if isinstance(value, decimal.Decimal):
        return ["number", f"{value:f}"]
    return ["date", str(value)]


if __name__ == "__main__":
    main(sys.argv[1], int(sys.argv[2]))
