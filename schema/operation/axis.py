"""From what the load does to what its shaft must give: rotary loads and linear axes."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from .cycle import Cycle

#: Standard acceleration of free fall in m/s² (BIPM, The International System of Units, 9th ed.,
#: via CGPM 1901).
GRAVITY = 9.80665


@dataclass(frozen=True)
class Axis:
    """A load on a shaft: `travel` in m per rad on a linear axis, None on a rotary one.

    `inertia` in kg·m² is what rotates with the shaft; `friction` (N or N·m) opposes motion and
    vanishes at standstill; `steady` (N or N·m) always pulls against positive speed; `mass` and
    `counterweight` in kg move on the axis, `slope` in rad is the axis's angle to the horizontal
    (π/2: lifting). `efficiency` is that of a screw.
    """

    travel: float | None = None
    inertia: float = 0.0
    friction: float = 0.0
    steady: float = 0.0
    mass: float = 0.0
    counterweight: float = 0.0
    slope: float = 0.0
    efficiency: float = 1.0

    @property
    def lever(self) -> float:
        """Torque per force, and speed per speed of the shaft: m on a linear axis, else 1."""
        return 1.0 if self.travel is None else self.travel

    @property
    def gravity(self) -> float:
        """Weight that pulls against positive motion in N; a counterweight hangs on a rope."""
        return GRAVITY * (self.mass * math.sin(self.slope) - self.counterweight)

    @property
    def reflected_inertia(self) -> float:
        """Inertia of all that moves, at the shaft, in kg·m²."""
        return self.inertia + (self.mass + self.counterweight) * self.lever**2

    @property
    def holding(self) -> float:
        """What the axis asks of the shaft at standstill, N or N·m."""
        return self.gravity + self.steady

    @property
    def separate_inertia(self) -> float:
        """Inertia that `at_shaft` leaves to be accelerated: all, but for what a screw drives."""
        return self.reflected_inertia if self.efficiency == 1 else self.inertia

    def at_shaft(self, cycle: Cycle) -> Cycle:
        """A cycle of the axis (m/s and N, or rad/s and N·m) as one of its shaft.

        Weight, friction and steady effort are added, cut where the direction turns. What passes
        a screw is divided by its efficiency where the motor drives, multiplied where it brakes,
        left alone at standstill; the mass's own acceleration passes the screw, too.
        """
        parts = _cut(cycle, self._zeros_of_speed(cycle), apart=True)
        motion = np.sign(parts.speed_start + parts.speed_end)
        added = self.holding + self.friction * motion
        start, end = parts.torque_start + added, parts.torque_end + added
        if self.efficiency != 1:
            acceleration = (parts.speed_end - parts.speed_start) / parts.duration
            pushed = (self.mass + self.counterweight) * acceleration
            parts = Cycle(
                parts.duration, parts.speed_start, parts.speed_end, start + pushed, end + pushed,
                parts.stretches,
            )  # fmt: skip
            parts = _cut(parts, _crossing(parts.torque_start, parts.torque_end))
            start, end = parts.torque_start, parts.torque_end
            power = np.sign(start + end) * np.sign(parts.speed_start + parts.speed_end)
            through = np.where(
                power > 0, 1 / self.efficiency, np.where(power < 0, self.efficiency, 1)
            )
            start, end = start * through, end * through
        lever = self.lever
        return Cycle(
            parts.duration,
            parts.speed_start / lever,
            parts.speed_end / lever,
            start * lever,
            end * lever,
            parts.stretches,
        )

    @staticmethod
    def _zeros_of_speed(cycle: Cycle) -> np.ndarray:
        return _crossing(cycle.speed_start, cycle.speed_end)


def _crossing(start: np.ndarray, end: np.ndarray) -> np.ndarray:
    """Share of each segment at which a linear quantity changes its sign, 0 where it does not."""
    crosses = start * end < 0
    return np.where(crosses, start / np.where(crosses, start - end, 1.0), 0.0)


def _cut(cycle: Cycle, at: np.ndarray, *, apart: bool = False) -> Cycle:
    """The same cycle with the segments cut at a share of their duration (0: not cut); with
    ``apart`` what lies behind a cut is a stretch of its own."""
    if not (at > 0).any():
        return cycle
    begin = np.stack([np.zeros_like(at), at], axis=1).ravel()
    end = np.stack([np.where(at > 0, at, 1.0), np.ones_like(at)], axis=1).ravel()
    kept = np.stack([np.ones(at.shape, bool), at > 0], axis=1).ravel()
    which = np.repeat(np.arange(at.size), 2)[kept]
    begin, end = begin[kept], end[kept]

    def between(first: np.ndarray, last: np.ndarray, share: np.ndarray) -> np.ndarray:
        return first[which] + (last - first)[which] * share

    return Cycle(
        (end - begin) * cycle.duration[which],
        between(cycle.speed_start, cycle.speed_end, begin),
        between(cycle.speed_start, cycle.speed_end, end),
        between(cycle.torque_start, cycle.torque_end, begin),
        between(cycle.torque_start, cycle.torque_end, end),
        2 * cycle.stretches[which] + (apart & (begin > 0)),
    )
