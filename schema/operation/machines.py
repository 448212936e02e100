"""Motors as columns: the constants of many motors as a DC motor at its terminals, SI, at 25 °C."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, fields
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..convention import Commutation

Array = NDArray[np.float64]
Index = NDArray[np.intp] | NDArray[np.bool_] | slice


@dataclass
class Machines:
    """Columns of shape (M,), float64 in SI (temperatures in °C), NaN where a figure is unknown.

    Constants are those of the equivalent DC motor at 25 °C; all currents are armature amperes.
    `Machines.of` fills what is not given with NaN.
    """

    torque_constant: Array
    armature_resistance: Array
    armature_inductance: Array
    rotor_inertia: Array
    coulomb_torque: Array
    viscous_damping: Array
    pole_pairs: Array
    commutation: NDArray[np.int8]
    magnet_coefficient: Array
    thermal_resistance_winding_housing: Array
    thermal_resistance_housing_ambient: Array
    thermal_resistance: Array
    thermal_time_constant_winding: Array
    thermal_time_constant_housing: Array
    maximum_winding_temperature: Array
    rated_temperature_rise: Array
    rating_ambient: Array
    nominal_current: Array
    continuous_stall_current: Array
    nominal_speed: Array
    peak_current: Array
    peak_torque: Array
    maximum_speed: Array

    @classmethod
    def of(cls, **columns: ArrayLike) -> Machines:
        """Columns broadcast to one length; missing ones NaN, commutation brushed if not given."""
        names = [field.name for field in fields(cls)]
        unknown = columns.keys() - set(names)
        if unknown:
            raise TypeError(f"no such column of Machines: {', '.join(sorted(unknown))}")
        shape = np.broadcast_shapes((1,), *(np.shape(column) for column in columns.values()))
        built: dict[str, Any] = {}
        for name in names:
            if name == "commutation":
                given, kind = columns.get(name, Commutation.BRUSHED), np.int8
            else:
                given, kind = columns.get(name, np.nan), np.float64
            built[name] = np.array(np.broadcast_to(np.asarray(given, kind), shape))
        return cls(**built)

    def __len__(self) -> int:
        return len(self.torque_constant)

    def columns(self) -> Mapping[str, NDArray[Any]]:
        """The columns by name."""
        return {field.name: getattr(self, field.name) for field in fields(self)}

    def take(self, index: Index) -> Machines:
        """The motors at `index` (integers, repeated at will, a mask or a slice)."""
        return Machines(**{name: column[index] for name, column in self.columns().items()})

    def scaled(self, torque_constant: ArrayLike, armature_resistance: ArrayLike) -> Machines:
        """The same motors with two constants multiplied: a corner of their tolerances."""
        columns = dict(self.columns())
        columns["torque_constant"] = self.torque_constant * np.asarray(torque_constant)
        columns["armature_resistance"] = self.armature_resistance * np.asarray(armature_resistance)
        return Machines(**columns)


def coulomb_torque(
    friction_torque: ArrayLike,
    torque_constant: ArrayLike,
    no_load_current: ArrayLike,
    viscous_damping: ArrayLike = np.nan,
    armature_resistance: ArrayLike = np.nan,
    nominal_voltage: ArrayLike = np.nan,
) -> Array:
    """Coulomb friction torque in N·m, NaN where nothing tells it.

    The published friction torque, else Km·I0 − b·n0, not below 0, with the no-load speed
    n0 = (U − Ra·I0)/Km and b = 0 unless published (torque balance at no load).
    """
    friction, Km, I0, b, Ra, U = np.broadcast_arrays(
        *(
            np.asarray(column, float)
            for column in (
                friction_torque,
                torque_constant,
                no_load_current,
                viscous_damping,
                armature_resistance,
                nominal_voltage,
            )
        )
    )
    viscous = np.where(np.isnan(b) | (b == 0), 0.0, b * (U - Ra * I0) / Km)
    return np.where(np.isnan(friction), np.maximum(Km * I0 - viscous, 0.0), friction)


#: Armature amperes for one ampere of a drive, by convention and by commutation code. Sinusoidal:
#: Ia = √(3/2)·I_rms = (√3/2)·I_peak (power-invariant phase transformation); block: the current
#: flows in two of three phases, so that its rms in a phase is √(2/3) of it.
_ARMATURE_AMPERES: dict[str, tuple[float, float, float]] = {
    "dc": (1.0, 1.0, 1.0),
    "peak": (1.0, 1.0, np.sqrt(3) / 2),
    "rms": (1.0, np.sqrt(1.5), np.sqrt(1.5)),
}


def armature_amperes(current: float, convention: str, commutation: NDArray[np.int8]) -> Array:
    """A drive's current ("dc", "peak" or "rms" of a phase) in armature amperes, shape (M,)."""
    return current * np.array(_ARMATURE_AMPERES[convention])[commutation]
