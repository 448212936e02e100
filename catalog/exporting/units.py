"""The units, and with them the conventions, that a person wants an export in."""

import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ...schema.convention import Convention
from ...schema.errors import MotorfolioError
from ...schema.units.read import Unit, read_unit
from ...schema.vocabulary import quantities


@dataclass(frozen=True, slots=True)
class ChosenUnit:
    """How a quantity is to be written: a unit, with convention words that may have been in it."""

    unit: Unit

    def in_convention(self, convention: dict[str, Any] | None) -> Convention | None:
        """The convention to convert to, or None where the unit names none.

        Lines and phase differ by star or delta: where that is not known, the figure stays as
        it is, and its heading says so.
        """
        marks = self.unit.marks
        if not marks:
            return None
        old = convention_of(convention)
        kind = next((k for k in ("rms", "peak", "dc") if k in marks), None)
        changes: dict[str, str | float | None] = {}
        if kind and old.current is not None:
            changes["current"] = kind
        if kind and old.voltage is not None and old.current is None:
            changes["voltage"] = kind
        if old.between and old.connection and ("lines" in marks or "phase" in marks):
            changes["between"] = "lines" if "lines" in marks else "phase"
        return old.with_(**changes)


Units = dict[str, ChosenUnit]


def read_units(path: Path) -> Units:
    """A TOML file of quantity = unit, such as ``torque_constant = "mN·m/A rms"``."""
    try:
        chosen = tomllib.loads(path.read_text(encoding="utf-8-sig"))
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
        raise MotorfolioError(
            f'{path}: no TOML file of units, such as torque_constant = "mN·m/A" ({error}).'
        ) from None
    units: Units = {}
    for key, text in chosen.items():
        quantity = quantities().get(key)
        if quantity is None or quantity.text or not isinstance(text, str):
            raise MotorfolioError(
                f'{path}: "{key}" is no quantity with a unit; write lines such as '
                'torque_constant = "mN·m/A".'
            )
        try:
            units[key] = ChosenUnit(read_unit(text, quantity.accepts))
        except MotorfolioError as error:
            raise MotorfolioError(f"{path}: {key}: {error}") from None
    return units


def convention_of(found: dict[str, Any] | None) -> Convention:
    """A document's convention as the schema has it."""
    return Convention(**(found or {}))
