"""A gear as a part: what its sheet says, in SI; and the words by which tables name that."""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache


@dataclass(frozen=True, slots=True)
class Gear:
    """One gear in SI; None where its sheet gives no figure. Inertia is that at the motor's shaft,
    torques those at the output, backlash in rad, the largest input speed in rad/s."""

    part_number: str
    maker: str
    series: str | None
    ratio: float
    stages: int | None = None
    efficiency: float | None = None
    inertia: float | None = None
    mass: float | None = None
    continuous_torque: float | None = None
    peak_torque: float | None = None
    maximum_input_speed: float | None = None
    backlash: float | None = None
    diameter: float | None = None
    length: float | None = None
    price: float | None = None
    currency: str | None = None


UNITS = {
    "ratio": "1",
    "stages": "1",
    "efficiency": "1",
    "inertia": "kg·m²",
    "mass": "kg",
    "continuous_torque": "N·m",
    "peak_torque": "N·m",
    "maximum_input_speed": "rad/s",
    "backlash": "rad",
    "diameter": "m",
    "length": "m",
    "price": "currency",
}
"""Figure → SI unit; part number, maker and series are text."""


@cache
def gear_words() -> Mapping[str, tuple[str, ...]]:
    """Figure → the names that tables give it, in all languages; "fillers" may stand beside one."""
    import tomllib
    from importlib import resources

    text = resources.files("motorfolio.schema").joinpath("gears.toml").read_text(encoding="utf-8")
    return {
        key: tuple(name for names in languages.values() for name in names)
        for key, languages in tomllib.loads(text).items()
    }
