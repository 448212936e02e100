"""Under which convention a figure is published, and what it is worth on the DC motor.

Every motor is reduced to the DC motor at its terminals: torque constant = back-EMF constant,
terminal resistance and inductance, armature current. ``to_dc`` gives the factor that takes a
published value there.
"""

import math
from dataclasses import dataclass, replace
from enum import IntEnum


class Commutation(IntEnum):
    """How a motor's windings are switched; the number is its code in arrays and the catalog."""

    BRUSHED = 0
    BLOCK = 1
    SINUSOIDAL = 2

    @property
    def word(self) -> str:
        """The name used in JSON and options."""
        return self.name.lower()


@dataclass(frozen=True, slots=True)
class Convention:
    """The conventions of one published figure; None where a kind doesn't apply or isn't said.

    current and voltage: "dc", "peak" or "rms"; between: "lines" or "phase"; connection: "star"
    or "delta"; temperature in °C; basis: "stated", "inferred" or "assumed".
    """

    current: str | None = None
    voltage: str | None = None
    between: str | None = None
    connection: str | None = None
    temperature: float | None = None
    shape: str | None = None
    basis: str = "assumed"

    def with_(self, **changes: str | float | None) -> "Convention":
        """A copy with these fields changed."""
        return replace(self, **changes)  # type: ignore[arg-type]

    def as_json(self) -> dict[str, str | float]:
        """Only the keys that apply, as interface documents give them."""
        keys = ("current", "voltage", "between", "connection", "temperature", "shape")
        known = {k: v for k in keys if (v := getattr(self, k)) is not None}
        return {**known, "basis": self.basis} if known else {}


SQRT2, SQRT3, SQRT3_2 = math.sqrt(2.0), math.sqrt(3.0), math.sqrt(1.5)


def armature_current(current: str | None, commutation: Commutation) -> float:
    """Armature amperes per printed ampere.

    Sinusoidal: the armature current is √(3/2) of the rms and √3/2 of the peak phase current, so
    that torque is Km·Ia and copper loss Ra·Ia². Block: two phases carry the armature current for
    two thirds of a turn, so rms phase current is √(2/3) of it and the peak is it. Brushed and
    "dc": one. None is dc.
    """
    if current is None or current == "dc" or commutation is Commutation.BRUSHED:
        return 1.0
    if current == "rms":
        return SQRT3_2
    return SQRT3 / 2 if commutation is Commutation.SINUSOIDAL else 1.0


def dc_back_emf(convention: Convention, commutation: Commutation) -> float:
    """Back-EMF constant of the DC motor per printed back-EMF constant.

    Sinusoidal: peak line-to-line. Block: the mean that six-step currents make of it, 3/π of the
    peak on a sine; on an ideal trapezoid the peak itself, whose rms is √5/3 of it between lines
    (flat for 60°) and √7/3 in a phase (flat for 120°). Stated dc, or not said: one.
    """
    if convention.voltage in (None, "dc") or commutation is Commutation.BRUSHED:
        return 1.0
    trapezoid = convention.shape == "trapezoidal"
    star_phase = convention.between == "phase" and convention.connection != "delta"
    rms_to_peak = 3 / math.sqrt(7 if star_phase else 5) if trapezoid else SQRT2
    to_peak = rms_to_peak if convention.voltage == "rms" else 1.0
    if star_phase:
        to_peak *= 2.0 if trapezoid else SQRT3
    if commutation is Commutation.BLOCK and not trapezoid:
        to_peak *= 3 / math.pi
    return to_peak


def terminal_impedance(convention: Convention) -> float:
    """Line-to-line resistance (or inductance) per printed one: star 2, delta 2/3 of a winding."""
    if convention.between != "phase":
        return 1.0
    return 2.0 / 3.0 if convention.connection == "delta" else 2.0


def to_dc(key: str, convention: Convention, commutation: Commutation) -> float:
    """Factor from a published figure to that of the DC motor at the terminals; 1 if it has none."""
    match key:
        case "torque_constant":
            return 1.0 / armature_current(convention.current, commutation)
        case "back_emf_constant":
            return dc_back_emf(convention, commutation)
        case "speed_constant":
            return 1.0 / dc_back_emf(convention, commutation)
        case "terminal_resistance" | "terminal_inductance":
            return terminal_impedance(convention)
        case _ if key.endswith("_current"):
            return armature_current(convention.current, commutation)
        case _:
            return 1.0


def default_convention(key: str, carries: frozenset[str], commutation: Commutation) -> Convention:
    """What is taken where a sheet doesn't say: see the README's page on conventions.

    Sinusoidal sheets: A rms, V rms line-to-line, R and L line-to-line. Block and brushed: dc and
    terminal values (common practice, no source).
    """
    sinusoidal = commutation is Commutation.SINUSOIDAL
    brushed = commutation is Commutation.BRUSHED
    voltage = None
    if "voltage" in carries:
        emf = key in ("back_emf_constant", "speed_constant")
        voltage = "rms" if (sinusoidal and emf) or key == "mains_voltage" else "dc"
    return Convention(
        current=("rms" if sinusoidal else "dc") if "current" in carries else None,
        voltage=voltage,
        between="lines" if "between" in carries and not brushed else None,
    )
