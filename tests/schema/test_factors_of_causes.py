"""Which usual mistakes each figure can have, and their factors: a table by what the figure holds.

Factors of units: NIST SP 811 (2008), appendix B.8. Factors of conventions: definitions of rms, of
line and phase. How common a mistake is, and in what band a warm winding lies: common practice, no
source.
"""

from __future__ import annotations

import math

import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.causes import CAUSES, shape

BRUSHED, BLOCK, SERVO = (int(kind) for kind in Commutation)
INCH, GRAVITY = 0.0254, 9.80665
OUNCE, POUND = 0.028349523125, 0.45359237  # kg
ROOT2, ROOT3 = math.sqrt(2), math.sqrt(3)

PER_RMS = math.sqrt(1.5)  # armature amperes in an ampere rms, sinusoidal
PER_PEAK = ROOT3 / 2
SINUSOIDAL = (
    # Kt over Ke as printed in SI: per A rms or A peak, against lines or phase, peak or rms
    PER_RMS * ROOT2, PER_RMS, PER_RMS * ROOT3, PER_RMS * ROOT3 * ROOT2, PER_PEAK,
    PER_PEAK * ROOT3, 3 / math.pi, 3 / math.pi * ROOT2, 3 / math.pi * PER_RMS,
    3 / math.pi * ROOT2 * PER_RMS,
)  # fmt: skip
"""Of 1.225, 1.5 and 2.121 each comes from two pairs of conventions."""

Factors = dict[str, tuple[float, ...]]

OF_ANY: Factors = {"power-of-ten": (10.0, 1e2, 1e3, 1e4, 1e5, 1e6)}
OF_ANGLE: Factors = {
    "rpm-vs-rad-per-second": (60 / (2 * math.pi),),
    "rev-per-second": (60.0, 2 * math.pi),
}
OF_FORCE: Factors = {"kilogram-force-vs-newton": (GRAVITY,)}
OF_TORQUE: Factors = {
    "ounce-inch-vs-millinewton-metre": (OUNCE * GRAVITY * INCH * 1e3,),
    "pound-inch-vs-newton-metre": (POUND * GRAVITY * INCH,),
    **OF_FORCE,
}
OF_INERTIA: Factors = {
    # in² for in·s²: gravity over an inch; GD² for J: 4; a radius for a diameter once: 2; gf·cm·s²
    "inertia-convention": (GRAVITY / INCH, 4.0, 2.0, GRAVITY * 100),
}
OF_POWER: Factors = {"horsepower-vs-watt": (550 * POUND * GRAVITY * 12 * INCH, 75 * GRAVITY)}
OF_CURRENT: Factors = {"peak-vs-rms": (ROOT2,)}
OF_SERVO_CURRENT: Factors = {**OF_CURRENT, "sinusoidal-current-convention": SINUSOIDAL}
OF_EMF: Factors = {
    "peak-vs-rms": (ROOT2,), "peak-to-peak": (2.0,), "poles-vs-pole-pairs": (2.0,),
}  # fmt: skip
OF_SERVO_EMF: Factors = {
    **OF_EMF, "line-vs-phase": (ROOT3,), "sinusoidal-current-convention": SINUSOIDAL,
}  # fmt: skip
OF_WINDING: Factors = {"line-vs-phase": (2.0, 1.5, 3.0)}  # star, delta, star for delta

SPEEDS = ("no_load_speed", "nominal_speed", "maximum_speed")
CURRENTS = ("no_load_current", "nominal_current", "stall_current", "continuous_stall_current",
            "peak_current")  # fmt: skip
TORQUES = ("nominal_torque", "stall_torque", "peak_torque", "continuous_stall_torque",
           "friction_torque")  # fmt: skip

BY_FIGURE: dict[str, tuple[Factors, Factors]] = {
    # figure: of brushed motors, of motors that have a drive
    **dict.fromkeys(SPEEDS, (OF_ANGLE | {"poles-vs-pole-pairs": (2.0,)},) * 2),
    **dict.fromkeys(TORQUES, (OF_TORQUE, OF_TORQUE)),
    **{
        key: tuple(some | {"peak-to-peak": (2.0,)} for some in (OF_CURRENT, OF_SERVO_CURRENT))
        for key in CURRENTS
    },
    "torque_constant": (OF_TORQUE | OF_CURRENT, OF_TORQUE | OF_SERVO_CURRENT),
    "motor_constant": (OF_TORQUE, OF_TORQUE),
    "viscous_damping": (OF_ANGLE | OF_TORQUE,) * 2,
    "speed_torque_gradient": (OF_ANGLE | OF_TORQUE,) * 2,
    "back_emf_constant": (OF_ANGLE | OF_EMF, OF_ANGLE | OF_SERVO_EMF),
    "speed_constant": (OF_ANGLE | OF_EMF, OF_ANGLE | OF_SERVO_EMF),
    "rated_power": (OF_POWER, OF_POWER),
    "maximum_power": (OF_POWER, OF_POWER),
    "nominal_voltage": ({"peak-vs-rms": (ROOT2,), "line-vs-phase": (ROOT3,)},) * 2,
    "terminal_resistance": ({}, OF_WINDING),
    "terminal_inductance": ({}, OF_WINDING),
    "electrical_time_constant": ({}, {"line-vs-phase": (2.0, 1.5)}),
    "mechanical_time_constant": ({}, {"line-vs-phase": (2.0, 1.5)}),
    "rotor_inertia": (OF_INERTIA | OF_FORCE,) * 2,
    "mass": (OF_FORCE, OF_FORCE),
    "thermal_resistance": ({}, {}),
    "maximum_efficiency": ({}, {}),
    "rated_efficiency": ({}, {}),
}
FIXED = frozenset({
    "power-of-ten", "peak-vs-rms", "line-vs-phase", "sinusoidal-current-convention",
    "peak-to-peak", "poles-vs-pole-pairs",
})  # fmt: skip
"""Not mistakes of a unit: no prefix slips with them."""


def slips(cause: str, factor: float) -> tuple[int, ...]:
    """The powers of ten that may slip with a unit; a kilogram-force also as gf·cm in N·m."""
    if cause in FIXED or factor == 2.0:
        return (0,)
    return (*range(-3, 4), *((4, 5, -4, -5) if "force" in cause else ()))


def expected(factors: Factors) -> set[tuple[str, float, int]]:
    """Cause, logarithm of printed over implied, and the power of ten in it; both ways round."""
    out = set()
    for cause, some in (OF_ANY | factors).items():
        for factor in some:
            for power in slips(cause, factor):
                log_factor = math.log(factor) + power * math.log(10)
                # two slips that nearly undo one another would have been seen, each
                if power and abs(log_factor) < math.log(1.25):
                    continue
                for sign in (1, -1):
                    out.add((cause, round(sign * log_factor, 5) + 0.0, sign * power))
    return out


@pytest.mark.parametrize("kind", [BRUSHED, BLOCK, SERVO])
@pytest.mark.parametrize("figure", BY_FIGURE)
def test_the_factors_of_every_figure(figure: str, kind: int) -> None:
    form = shape(figure, kind, "")
    rows = zip(form.code.tolist(), form.log_factor.tolist(), form.power.tolist(), strict=True)
    found = [(CAUSES[code], round(log, 5) + 0.0, power) for code, log, power in rows]
    wanted = expected(BY_FIGURE[figure][kind != BRUSHED])
    assert {(c, p) for c, _, p in found} == {(c, p) for c, _, p in wanted}
    for cause, power in {(c, p) for c, _, p in wanted}:
        got = sorted({log for c, log, p in found if (c, p) == (cause, power)})
        want = sorted({log for c, log, p in wanted if (c, p) == (cause, power)})
        assert got == pytest.approx(want, abs=2e-5), (cause, power)
