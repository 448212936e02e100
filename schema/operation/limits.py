"""Utilisations of a motor's limits, required/available, and the verdict that follows from them."""

from __future__ import annotations

from dataclasses import dataclass, fields
from enum import IntEnum
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

#: The limits in the order in which `Utilisations.limiting` counts them.
LIMITS = ("voltage", "speed", "peak_current", "continuous_current", "thermal", "peak_torque")


class Verdict(IntEnum):
    """What is known about a motor in a requirement."""

    FEASIBLE = 0
    UNKNOWN = 1
    REJECTED = 2


@dataclass
class Utilisations:
    """What the cycle takes of each limit; arrays of one shape (M, R) or (M,), NaN = unknown.

    The six limits are pure numbers. `runaway` marks thermal runaway: there is no winding
    temperature, `thermal` is NaN, the rest is that of the cold motor, which is rejected. Currents
    are armature amperes, the worse of cold and hot, `peak_current_value` without PWM ripple,
    `rms_current` with it; `ripple_current` is its rms over the cycle, `ripple_peak_to_peak` its
    largest swing (brushed and block only). `peak_voltage` is a magnitude in V, `peak_speed` in
    rad/s and `peak_torque_value` in N·m are those of the motor's shaft, `winding_temperature` in
    °C (the peak of the periodic state where time constants are known), `copper_loss` in W the mean
    over the cycle at the winding temperature, at the ambient where that is unknown.
    `ripple_unknown` marks motors whose ripple was asked for and left out, since their inductance
    is unknown, `friction_assumed` those without any friction figure (friction counted as 0).
    """

    voltage: Array
    speed: Array
    peak_current: Array
    continuous_current: Array
    thermal: Array
    peak_torque: Array
    runaway: NDArray[np.bool_]
    peak_current_value: Array
    rms_current: Array
    ripple_current: Array
    ripple_peak_to_peak: Array
    peak_voltage: Array
    peak_speed: Array
    peak_torque_value: Array
    winding_temperature: Array
    copper_loss: Array
    ripple_unknown: NDArray[np.bool_]
    friction_assumed: NDArray[np.bool_]
    needed: tuple[str, ...]

    def _arrays(self) -> dict[str, NDArray[Any]]:
        return {f.name: getattr(self, f.name) for f in fields(self) if f.name != "needed"}

    def reshape(self, *shape: int) -> Utilisations:
        """The same in another shape."""
        arrays = {name: array.reshape(shape) for name, array in self._arrays().items()}
        return Utilisations(**arrays, needed=self.needed)

    def take(self, index: Any) -> Utilisations:
        """The entries at `index`."""
        arrays = {name: array[index] for name, array in self._arrays().items()}
        return Utilisations(**arrays, needed=self.needed)

    def put(self, index: Any, other: Utilisations) -> None:
        """Overwrite the entries at `index`."""
        theirs = other._arrays()
        for name, array in self._arrays().items():
            array[index] = theirs[name]

    @classmethod
    def joined(cls, parts: list[Utilisations]) -> Utilisations:
        """One after the other along the first axis."""
        columns = [part._arrays() for part in parts]
        arrays = {name: np.concatenate([c[name] for c in columns]) for name in columns[0]}
        return cls(**arrays, needed=parts[0].needed)

    @classmethod
    def worst(cls, corners: list[Utilisations]) -> Utilisations:
        """Each figure at its worst among corners of the same motors; unknown in one is unknown."""
        first, *others = corners
        arrays = first._arrays()
        for other in others:
            for name, array in other._arrays().items():
                arrays[name] = np.maximum(arrays[name], array)
        lost = arrays["runaway"]
        arrays["thermal"] = np.where(lost, np.nan, arrays["thermal"])
        return cls(**arrays, needed=first.needed)

    @property
    def largest(self) -> Array:
        """Largest known utilisation: infinite in runaway, NaN where nothing is known."""
        result = self.voltage
        for name in LIMITS[1:]:
            result = np.fmax(result, getattr(self, name))
        return np.where(self.runaway, np.inf, result)

    @property
    def limiting(self) -> NDArray[np.int8]:
        """Index in LIMITS of the largest known utilisation (thermal in runaway), −1 for none."""
        result = np.full(self.voltage.shape, -1, np.int8)
        most = np.full(self.voltage.shape, -np.inf)
        for index, name in enumerate(LIMITS):
            value = getattr(self, name)
            above = value > most
            result[above] = index
            most = np.where(above, value, most)
        result[self.runaway] = LIMITS.index("thermal")
        return result

    @property
    def lacking(self) -> NDArray[np.bool_]:
        """Where a limit that the requirement needs is unknown."""
        result = np.zeros(self.voltage.shape, bool)
        for name in self.needed:
            result |= np.isnan(getattr(self, name))
        return result & ~self.runaway

    def verdict(self, reserve: float = 0.0) -> NDArray[np.int8]:
        """Verdict codes: known above 1 − reserve rejects, else a lacking one leaves it unknown."""
        result = np.where(self.lacking, Verdict.UNKNOWN, Verdict.FEASIBLE).astype(np.int8)
        result[self.largest > 1 - reserve] = Verdict.REJECTED
        return result
