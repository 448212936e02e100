"""Units with their exact factors, and the ways in which makers spell them.

Factors from the definitions lb = 0.45359237 kg, in = 0.0254 m, g_n = 9.80665 m/s² (NIST SP 811,
2008 ed., appendix B; UCUM); spellings: common practice, no source.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction

POUND = Fraction("0.45359237")
INCH = Fraction("0.0254")
GRAVITY = Fraction("9.80665")
OUNCE_INCH = POUND / 16 * GRAVITY * INCH
POUND_INCH = POUND * GRAVITY * INCH


@dataclass(frozen=True)
class Unit:
    """SI value = printed number · factor · π^pi; ``says`` is the convention the spelling states."""

    name: str
    factor: Fraction
    spellings: tuple[str, ...]
    pi: int = 0
    system: str = "metric"
    says: tuple[tuple[str, str], ...] = ()

    def to_si(self, number: Decimal | Fraction | str | int) -> float:
        """The SI value of a printed number, correctly rounded but for the last bits of π."""
        return float(Fraction(number) * self.factor) * math.pi**self.pi

    def from_si(self, value: float) -> float:
        return value / (float(self.factor) * math.pi**self.pi)


def _unit(
    name: str,
    factor: Fraction | str | int,
    *spellings: str,
    pi: int = 0,
    system: str = "metric",
    **says: str,
) -> Unit:
    return Unit(name, Fraction(factor), spellings or (name,), pi, system, tuple(says.items()))


RMS = {"current": "rms"}
PER_MINUTE = Fraction(1, 30)
PER_KRPM = Fraction(3, 100)

_TORQUES = {
    "mNm": (Fraction("0.001"), ("mNm", "mN·m", "mN m", "mN-m", "mN.m"), "metric"),
    "Nm": (Fraction(1), ("Nm", "N·m", "N m", "N-m", "N.m"), "metric"),
    "Ncm": (Fraction("0.01"), ("Ncm", "N·cm", "N-cm"), "metric"),
    "oz-in": (OUNCE_INCH, ("oz-in", "oz·in", "oz.in", "ozf-in", "ozf·in", "oz in"), "imperial"),
    "lb-in": (POUND_INCH, ("lb-in", "lbf·in", "lb·in", "in-lb", "lbf-in"), "imperial"),
    "lb-ft": (POUND_INCH * 12, ("lb-ft", "lbf·ft", "ft-lb"), "imperial"),
    "gf-cm": (GRAVITY / 100_000, ("gf·cm", "gf-cm", "g·cm", "g-cm"), "gravitational"),
    "kgf-cm": (GRAVITY / 100, ("kgf·cm", "kgf-cm", "kgf.cm", "kg·cm", "kg-cm"), "gravitational"),
}

TORQUES = [_unit(n, f, *s, system=y) for n, (f, s, y) in _TORQUES.items()]
TORQUE_CONSTANTS = [
    _unit(f"{n}/A", f, *(f"{x}/A" for x in s), system=y) for n, (f, s, y) in _TORQUES.items()
]
TORQUE_CONSTANTS_RMS = [
    _unit(f"{n}/Arms", f, f"{s[0]}/Arms", f"{s[1]}/Arms", f"{s[0]}/A rms", system=y, **RMS)
    for n, (f, s, y) in _TORQUES.items()
    if n in ("Nm", "lb-in", "oz-in")
]
VOLTS = [_unit("V", 1, "V", "VDC", "V DC", "Volt")]
SPEEDS = [
    _unit("rpm", PER_MINUTE, "rpm", "min⁻¹", "1/min", "r/min", "min-1", "RPM", "rev/min", pi=1),
]
SPEEDS_BY_LANGUAGE = {
    "de": ("U/min", "min⁻¹", "1/min", "min-1"),
    "fr": ("tr/min", "min⁻¹", "min-1"),
    "it": ("giri/min", "min⁻¹", "rpm"),
    "es": ("rpm", "min⁻¹", "min-1"),
    "ja": ("r/min", "rpm", "min⁻¹"),
    "zh": ("r/min", "rpm", "转/分"),
}
CURRENTS = [_unit("A", 1), _unit("mA", "0.001")]
CURRENTS_RMS = [_unit("Arms", 1, "Arms", "A rms", "A_rms", **RMS)]
POWERS = [_unit("W", 1), _unit("kW", 1000), _unit("hp", 550 * POUND_INCH * 12, system="imperial")]
EFFICIENCIES = [_unit("%", "0.01")]
RESISTANCES = [
    _unit("Ohm", 1, "Ω", "Ohm", "ohm", "ohms"),
    _unit("mOhm", "0.001", "mΩ", "mOhm", "mohm"),
]
INDUCTANCES = [_unit("mH", "0.001"), _unit("uH", "0.000001", "µH", "uH")]
SPEED_CONSTANTS = [
    _unit("rpm/V", PER_MINUTE, "rpm/V", "min⁻¹/V", "r/min/V", "min-1/V", "RPM/V", pi=1)
]
BACK_EMF = [
    _unit("V/krpm", PER_KRPM, "V/krpm", "V/1000rpm", "V/1000 rpm", "V/1000 min⁻¹", pi=-1),
    _unit("mV/rpm", PER_KRPM, "mV/rpm", "mV/min⁻¹", "mV·min", pi=-1),
    _unit("Vs/rad", 1, "V·s/rad", "Vs/rad", "V/(rad/s)"),
]
BACK_EMF_RMS = [
    _unit(
        "Vrms/krpm",
        PER_KRPM,
        "Vrms/krpm",
        "V rms/krpm",
        "Vrms/1000rpm",
        "Vrms/1000 min⁻¹",
        pi=-1,
        voltage="rms",
    )
]
MOTOR_CONSTANTS = [
    _unit("mNm/sqrtW", "0.001", "mNm/√W", "mN·m/√W", "mNm/sqrt(W)"),
    _unit("Nm/sqrtW", 1, "Nm/√W", "N·m/√W", "Nm/sqrt(W)"),
    _unit("oz-in/sqrtW", OUNCE_INCH, "oz-in/√W", "oz·in/√W", system="imperial"),
]
GRADIENTS = [
    _unit("rpm/mNm", PER_MINUTE * 1000, "rpm/mNm", "min⁻¹/mNm", "r/min/mN·m", pi=1),
    _unit("rpm/Nm", PER_MINUTE, "rpm/Nm", "min⁻¹/Nm", pi=1),
    _unit("rpm/oz-in", PER_MINUTE / OUNCE_INCH, "rpm/oz-in", pi=1, system="imperial"),
]
MILLISECONDS = [_unit("ms", "0.001"), _unit("us", "0.000001", "µs", "us")]
SECONDS = [_unit("s", 1, "s", "sec"), _unit("min", 60)]
INERTIAS = [
    _unit("gcm2", "0.0000001", "gcm²", "g·cm²", "g cm²", "g-cm²", "gcm2", "g-cm^2"),
    _unit("kgcm2", "0.0001", "kgcm²", "kg·cm²", "kg-cm²", "kgcm2", "kg.cm²"),
    _unit("kgm2", 1, "kgm²", "kg·m²", "kg m²", "kg-m²", "kgm2"),
    _unit("oz-in-s2", OUNCE_INCH, "oz-in-s²", "oz-in-sec²", "oz·in·s²", system="imperial"),
    _unit("oz-in2", POUND / 16 * INCH**2, "oz-in²", "oz·in²", system="imperial"),
    _unit("lb-in-s2", POUND_INCH, "lb-in-s²", "lb·in·s²", system="imperial"),
    _unit("gf-cm-s2", GRAVITY / 100_000, "gf·cm·s²", "gf-cm-s²", system="gravitational"),
]
SCALED_INERTIAS = [
    _unit(f"1e{power} kgm2", Fraction(10) ** power, *spellings)
    for power, spellings in {
        -4: ("×10⁻⁴ kg·m²", "10⁻⁴ kg·m²", "10^-4 kgm2", "kg·m² × 10⁻⁴", "x10⁻⁴ kgm²"),
        -6: ("×10⁻⁶ kg·m²", "10⁻⁶ kgm²", "10^-6 kg·m²", "kg·m² ×10⁻⁶", "x10^-6 kgm²"),
        -7: ("×10⁻⁷ kg·m²", "10⁻⁷ kg·m²", "10^-7 kgm²", "kg·m² × 10⁻⁷"),
    }.items()
]
SCALED_SPEEDS = [
    _unit("krpm", PER_MINUTE * 1000, "×1000 rpm", "krpm", "× 10³ min⁻¹", "kr/min", pi=1)
]
THERMAL_RESISTANCES = [_unit("K/W", 1, "K/W", "°C/W", "K/W")]
TEMPERATURES = [_unit("°C", 1, "°C", "℃")]
KELVINS = [_unit("K", 1)]
MASSES = [
    _unit("g", "0.001"),
    _unit("kg", 1),
    _unit("oz", POUND / 16, system="imperial"),
    _unit("lb", POUND, "lb", "lbs", system="imperial"),
]
LENGTHS = [_unit("mm", "0.001"), _unit("in", INCH, "in", "inch", system="imperial")]
COUNTS = [_unit("", 1, "")]
