"""What the load asks over time: segments of linear speed and torque, and their cuts by sign.

Speeds and torques are those of the load (rad/s, N·m); positive torque is what the motor must give
in the direction of positive speed. A cycle repeats for ever.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..errors import MotorfolioError

Array = NDArray[np.float64]

#: Speeds below this share of the cycle's largest are standstill: unit conversion leaves such dust.
_DUST = 1e-12


COLUMNS = ("duration", "speed_start", "speed_end", "torque_start", "torque_end")


class CycleError(MotorfolioError):
    """The cycle can't be run: the text names the segment or row and what would do."""


@dataclass(frozen=True)
class Cycle:
    """Segments in order, arrays of shape (S,): duration in s, load speed, external load torque.

    Speed and torque are linear inside a segment, so that its acceleration is constant. `stretch`
    numbers what was asked in one: a bent ramp is one stretch of several segments. If it is left
    out, each segment is its own.
    """

    duration: Array
    speed_start: Array
    speed_end: Array
    torque_start: Array
    torque_end: Array
    stretch: NDArray[np.intp] | None = None

    def __post_init__(self) -> None:
        for name in COLUMNS:
            column = np.atleast_1d(np.asarray(getattr(self, name), float))
            if column.ndim != 1 or column.shape != np.shape(np.atleast_1d(self.duration)):
                raise CycleError(f"Cycle: {name} must hold one number for each duration.")
            if not np.isfinite(column).all():
                where = int(np.flatnonzero(~np.isfinite(column))[0]) + 1
                raise CycleError(f"Cycle: segment {where} has no finite {name}; give one.")
            object.__setattr__(self, name, column)
        if self.duration.size == 0:
            raise CycleError("Cycle: it has no segment; give at least one torque and speed.")
        if (self.duration <= 0).any():
            where = int(np.flatnonzero(self.duration <= 0)[0]) + 1
            raise CycleError(f"Cycle: segment {where} lasts no time; give a duration above 0 s.")

    @classmethod
    def from_points(cls, points: Iterable[tuple[float, float, float]]) -> Cycle:
        """Points of (torque, speed, duration), each held at constant speed, one after the other."""
        rows = np.array(list(points), float).reshape(-1, 3)
        torque, speed, duration = rows.T
        return cls(duration, speed, speed, torque, torque)

    @classmethod
    def from_rows(cls, time: ArrayLike, speed: ArrayLike, torque: ArrayLike) -> Cycle:
        """Rows of a table, linear between rows; two rows at one time are a step of torque.

        Raises CycleError where time goes backward, speed steps, or the cycle does not end at the
        speed that it began with.
        """
        t, w, m = (np.asarray(column, float) for column in (time, speed, torque))
        if not t.ndim == w.ndim == m.ndim == 1 or not t.size == w.size == m.size:
            raise CycleError("Cycle: time, speed and torque must be columns of equal length.")
        if t.size < 2:
            raise CycleError("Cycle: it has fewer than two rows; give its start and its end.")
        for name, column in (("time", t), ("speed", w), ("torque", m)):
            if not np.isfinite(column).all():
                where = int(np.flatnonzero(~np.isfinite(column))[0]) + 1
                raise CycleError(f"Cycle: row {where} has no finite {name}; give a number.")
        step = np.diff(t)
        if (step < 0).any():
            where = int(np.flatnonzero(step < 0)[0]) + 2
            raise CycleError(
                f"Cycle: time goes backward in row {where} ({t[where - 2]:g} s to "
                f"{t[where - 1]:g} s); put the rows in the order of time."
            )
        tolerance = 1e-9 * np.abs(w).max()
        jump = (step == 0) & (np.abs(np.diff(w)) > tolerance)
        if jump.any():
            where = int(np.flatnonzero(jump)[0]) + 2
            raise CycleError(
                f"Cycle: speed steps at {t[where - 1]:g} s (row {where}); only torque may step, "
                "so give the change of speed some time."
            )
        if abs(w[-1] - w[0]) > tolerance:
            raise CycleError(
                f"Cycle: it begins at {w[0]:g} rad/s and ends at {w[-1]:g} rad/s; a cycle repeats, "
                "so end it at the speed it begins with."
            )
        kept = step > 0
        if not kept.any():
            raise CycleError("Cycle: it lasts no time; give rows at different times.")
        return cls(step[kept], w[:-1][kept], w[1:][kept], m[:-1][kept], m[1:][kept])

    @property
    def stretches(self) -> NDArray[np.intp]:
        """The number of the stretch that each segment belongs to (S,), counted from 0."""
        if self.stretch is None:
            return np.arange(self.duration.size)
        return np.cumsum(np.diff(self.stretch, prepend=self.stretch[0]) != 0)

    @property
    def period(self) -> float:
        """Duration of the whole cycle in s."""
        return float(self.duration.sum())

    def pieces(self, load_inertia: float = 0.0, gear_efficiency: float = 1.0) -> Pieces:
        """The cycle cut where the sign of the load's speed or power changes, seen by the gear."""
        w0, w1 = (np.where(np.abs(w) <= _DUST * self._top_speed, 0.0, w) for w in self._speeds)
        acceleration = (w1 - w0) / self.duration
        t0 = self.torque_start + load_inertia * acceleration
        t1 = self.torque_end + load_inertia * acceleration
        cuts = np.sort(
            np.stack(
                [np.zeros_like(w0), _crossing(w0, w1), _crossing(t0, t1), np.ones_like(w0)], axis=1
            ),
            axis=1,
        )
        begin, end = cuts[:, :-1], cuts[:, 1:]
        kept = end - begin > _DUST
        segment = np.broadcast_to(np.arange(w0.size)[:, None], kept.shape)[kept]
        begin, end = begin[kept], end[kept]
        speed = np.stack([w0[segment] + (w1 - w0)[segment] * s for s in (begin, end)], axis=1)
        torque = np.stack([t0[segment] + (t1 - t0)[segment] * s for s in (begin, end)], axis=1)
        motion = np.sign(speed.sum(axis=1))  # one-sided: never the sign at zero speed itself
        power = np.sign(torque.sum(axis=1)) * motion
        through_gear = np.where(
            power > 0, 1 / gear_efficiency, np.where(power < 0, gear_efficiency, 1.0)
        )
        ones = np.ones((segment.size, 2))
        basis = np.stack(
            [
                torque * through_gear[:, None],
                acceleration[segment][:, None] * ones,
                motion[:, None] * ones,
                speed,
            ],
            axis=2,
        )
        return Pieces((end - begin) * self.duration[segment], basis, self.stretches[segment])

    @property
    def _speeds(self) -> tuple[Array, Array]:
        return self.speed_start, self.speed_end

    @property
    def _top_speed(self) -> float:
        return float(max(np.abs(self.speed_start).max(), np.abs(self.speed_end).max()))


def _crossing(start: Array, end: Array) -> Array:
    """Fraction of the segment at which a linear quantity passes zero; 0 where it does not."""
    crosses = start * end < 0
    return np.where(crosses, start / np.where(crosses, start - end, 1.0), 0.0)


@dataclass(frozen=True)
class Pieces:
    """A cycle seen at the motor as four time functions, linear in each of P pieces.

    `basis` has shape (P, 2, 4): at the start and the end of each piece the load torque after the
    gear's losses (N·m, still to be divided by the ratio), load acceleration (rad/s², to be
    multiplied by ratio and inertia), sign of motion (0 in a dwell), load speed (rad/s, to be
    multiplied by the ratio). The motor's torque is a linear combination of the four, so that
    mean squares come from one 4 × 4 matrix, whatever the number of pieces. `stretch` (P,) numbers
    the stretches of the cycle that they are pieces of.
    """

    duration: Array
    basis: Array
    stretch: NDArray[np.intp]

    @property
    def period(self) -> float:
        return float(self.duration.sum())

    @cached_property
    def gram(self) -> Array:
        """Means over the cycle of the products of the four functions, shape (4, 4)."""
        first, second = self.basis[:, 0], self.basis[:, 1]
        total = first + second
        products = np.einsum("p,pi,pj->ij", self.duration, total, total)
        products += np.einsum("p,pi,pj->ij", self.duration, first, first)
        products += np.einsum("p,pi,pj->ij", self.duration, second, second)
        return products / (6 * self.period)

    @property
    def mean_speed(self) -> float:
        """Mean magnitude of the load speed in rad/s."""
        magnitude = np.abs(self.basis[:, :, 3]).mean(axis=1)
        return float(self.duration @ magnitude / self.period)

    @cached_property
    def corners(self) -> Array:
        """Distinct rows of `basis` but for their sign, shape (E, 4): where magnitudes peak."""
        rows = self.basis.reshape(-1, 4)
        leading = rows[np.arange(len(rows)), (rows != 0).argmax(axis=1)]
        return np.unique(np.where(leading < 0, -1.0, 1.0)[:, None] * rows + 0.0, axis=0)

    @cached_property
    def accelerated(self) -> Array:
        """The pieces of `basis` in which speed changes, each of them once, shape (Q, 2, 4)."""
        return np.unique(self.basis[self.basis[:, 0, 1] != 0], axis=0)

    @cached_property
    def is_constant(self) -> bool:
        """Whether nothing varies over the cycle, so that no temperature can swing."""
        return bool((self.basis == self.basis[0, 0]).all())
