"""Moves as people describe them, a distance in a time, as segments of a cycle.

Everything is in the load's own terms: m, m/s and N on a linear axis, rad, rad/s and N·m on a
rotary one. A move starts and ends at standstill.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..errors import MotorfolioError
from ..written import quantity
from .cycle import COLUMNS, Cycle

Array = NDArray[np.float64]

#: Share of a ramp's time in which an S-curve's acceleration rises, and falls again (common
#: practice, no source).
JERK_SHARE = 0.25
#: Steps of constant acceleration in which an acceleration that rises evenly is drawn. They grow
#: finer towards its peak, which is met within half the last step: 1/128 of it.
_STEPS = 8
_FINER = 1 - (1 - np.arange(_STEPS + 1) / _STEPS) ** 2


class MoveError(MotorfolioError):
    """A move that can't be made: the text says what is missing or in contradiction."""


@dataclass(frozen=True)
class Ramps:
    """A speed profile from standstill to standstill: `top` speed, `ramp` time up and again down,
    `cruise` time between, all above 0 (cruise from 0)."""

    top: float
    ramp: float
    cruise: float

    @property
    def time(self) -> float:
        return 2 * self.ramp + self.cruise


def ramps(
    distance: float,
    *,
    profile: str,
    time: float | None = None,
    top_speed: float | None = None,
    acceleration: float | None = None,
    unit: str = "m",
) -> Ramps:
    """The profile that covers `distance` (above 0, in `unit`) with what is told of it.

    `thirds` and `triangular` need the time or the top speed: s = (2/3)·v·t and s = v·t/2.
    `trapezoidal` and `s-curve` need two of time, top speed and (mean) acceleration, the S-curve
    may do with one of the first two and is then timed like `thirds`; s = v·(t − t_ramp) with
    ramps of one length. Raises MoveError.
    """
    told = {"time": time, "top_speed": top_speed, "acceleration": acceleration}
    given = [name for name, value in told.items() if value is not None]
    share = {"thirds": 1 / 3, "triangular": 1 / 2}.get(profile)
    if share is None and len(given) == 1 and acceleration is None and profile == "s-curve":
        share = 1 / 3
    if share is not None:
        if len(given) != 1 or acceleration is not None:
            raise MoveError(f"a {profile} move takes either time or top_speed, and nothing else")
        if top_speed is None:
            assert time is not None
            top_speed = distance / (time * (1 - share))
        whole = distance / (top_speed * (1 - share))
        return Ramps(top_speed, whole * share, whole * (1 - 2 * share))
    if len(given) != 2:
        raise MoveError(f"a {profile} move takes two of time, top_speed and acceleration")
    if acceleration is None:
        assert time is not None
        assert top_speed is not None
        ramp = time - distance / top_speed
        if not 0 < ramp <= time / 2 * (1 + 1e-9):
            raise MoveError(
                f"{quantity(distance, unit)} in {quantity(time, 's')} needs a top speed above "
                f"{quantity(distance / time, f'{unit}/s')} and at most "
                f"{quantity(2 * distance / time, f'{unit}/s')}, not "
                f"{quantity(top_speed, f'{unit}/s')}"
            )
        return Ramps(top_speed, ramp, max(time - 2 * ramp, 0.0))
    if time is None:
        assert top_speed is not None
        top = min(top_speed, math.sqrt(acceleration * distance))
        return Ramps(top, top / acceleration, distance / top - top / acceleration)
    least = 2 * math.sqrt(distance / acceleration)
    if time < least * (1 - 1e-9):
        raise MoveError(
            f"{quantity(distance, unit)} takes at least {quantity(least, 's')} at "
            f"{quantity(acceleration, f'{unit}/s²')}, not {quantity(time, 's')}"
        )
    root = math.sqrt(max((acceleration * time) ** 2 - 4 * acceleration * distance, 0.0))
    top = (acceleration * time - root) / 2
    return Ramps(top, top / acceleration, max(time - 2 * top / acceleration, 0.0))


def _speeds(shape: Ramps, profile: str) -> tuple[Array, Array, NDArray[np.intp]]:
    """Durations (S,), speeds at their ends (S + 1,), and stretches (S,) of a move: speeding up,
    top speed, slowing down."""
    if profile == "s-curve":
        # While the acceleration rises the speed is a parabola in x = t/ramp: x²/(2·j·(1 − j)).
        j = JERK_SHARE
        bend = _FINER * j
        low = bend**2 / (2 * j * (1 - j))
        times = np.concatenate([bend, (1 - bend)[::-1]])
        values = np.concatenate([low, (1 - low)[::-1]])
    else:
        times = values = np.array([0.0, 1.0])
    up = times * shape.ramp
    down = shape.ramp + shape.cruise + up
    t = np.concatenate([up, down])
    v = shape.top * np.concatenate([values, values[::-1]])
    stretch = np.repeat([0, 1, 2], [len(up) - 1, 1, len(down) - 1])
    kept = np.diff(t) > 1e-12 * t[-1]
    return np.diff(t)[kept], v[np.concatenate([kept, [True]])], stretch[kept]


def move(
    distance: float,
    *,
    profile: str = "thirds",
    time: float | None = None,
    top_speed: float | None = None,
    acceleration: float | None = None,
    effort: float = 0.0,
    unit: str = "m",
) -> Cycle:
    """A move over `distance` (its sign is the direction; `unit` names it in a refusal) against an
    `effort` that opposes it."""
    way = math.copysign(1.0, distance)
    shape = ramps(
        abs(distance), profile=profile, time=time, top_speed=top_speed,
        acceleration=acceleration, unit=unit,
    )  # fmt: skip
    duration, speed, stretch = _speeds(shape, profile)
    speed = way * speed
    against = np.full(duration.size, way * effort)
    return Cycle(duration, speed[:-1], speed[1:], against, against, stretch)


def rest(duration: float, effort: float = 0.0) -> Cycle:
    """Standstill."""
    zero, held = np.zeros(1), np.array([effort])
    return Cycle(np.array([duration]), zero, zero, held, held)


def one_after_the_other(parts: list[Cycle]) -> Cycle:
    """The parts as one cycle."""
    begin = np.cumsum([0, *(part.stretches[-1] + 1 for part in parts[:-1])])
    stretches = [part.stretches + first for part, first in zip(parts, begin, strict=True)]
    columns = {name: np.concatenate([getattr(part, name) for part in parts]) for name in COLUMNS}
    return Cycle(**columns, stretch=np.concatenate(stretches))
