"""Motors with all that is known of them, as JSON or TOML."""

import json
import re
from collections.abc import Iterable
from typing import Any, TextIO

from ..documents import Document


def write_json(motors: Iterable[Document], out: TextIO) -> int:
    out.write('{"motors": [')
    n = 0
    for n, motor in enumerate(motors, 1):
        out.write(",\n" if n > 1 else "\n")
        json.dump(motor, out, ensure_ascii=False, allow_nan=False)
    out.write("\n]}\n")
    return n


def write_toml(motors: Iterable[Document], out: TextIO) -> int:
    n = 0
    for n, motor in enumerate(motors, 1):
        out.write("\n[[motors]]\n" if n > 1 else "[[motors]]\n")
        tables = {}
        for key, value in motor.items():
            if key in ("figures", "constants", "model", "source"):
                tables[key] = value
            elif value is not None and value != []:
                out.write(f"{key} = {_toml(value)}\n")
        for key, table in tables.items():
            out.write(f"\n[motors.{key}]\n")
            for name, value in table.items():
                if value is not None:
                    out.write(f"{name} = {_toml(value)}\n")
    return n


def _toml(value: Any) -> str:
    if isinstance(value, dict):
        inside = ", ".join(
            f"{_toml_key(k)} = {_toml(v)}" for k, v in value.items() if v is not None
        )
        return f"{{ {inside} }}" if inside else "{}"
    if isinstance(value, list | tuple):
        return f"[{', '.join(_toml(item) for item in value if item is not None)}]"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int | float):
        return repr(value)
    # a JSON string is a TOML string, but for DEL
    return json.dumps(value, ensure_ascii=False).replace("\x7f", "\\u007f")


def _toml_key(key: str) -> str:
    return key if re.fullmatch(r"[\w-]+", key, re.ASCII) else _toml(key)
