"""What a requirement asks of any motor: the load's cycle, gear, supply, drive and surroundings."""

from __future__ import annotations

from dataclasses import dataclass, field

from .cycle import Cycle


@dataclass(frozen=True)
class Gearing:
    """Load inertia (kg·m², at the load), gear efficiency and gear inertia (at the motor shaft)."""

    load_inertia: float = 0.0
    efficiency: float = 1.0
    inertia: float = 0.0


@dataclass(frozen=True)
class Supply:
    """The bridge's dc supply: the lowest voltage that it sags to, None where none is given."""

    voltage: float | None = None
    max_duty: float = 1.0
    bridge_drop: float = 0.0
    pwm_frequency: float | None = None

    @property
    def available(self) -> float | None:
        """U_avail = d_max·U_bus − U_drop in V."""
        if self.voltage is None:
            return None
        return self.max_duty * self.voltage - self.bridge_drop


@dataclass(frozen=True)
class Drive:
    """Current limits in A; conventions "dc" (armature amperes), "peak" or "rms" of a phase."""

    peak_current: float | None = None
    continuous_current: float | None = None
    convention: str = "dc"
    continuous_convention: str | None = None  # where it is another than that of the peak


@dataclass(frozen=True)
class Surroundings:
    """Ambient in °C; the mounting's own thermal resistance housing–ambient in K/W, if any; the
    share of the temperature rise that is permissible (below 1 in thin air)."""

    ambient: float = 25.0
    thermal_resistance_housing_ambient: float | None = None
    permissible_rise: float = 1.0


@dataclass(frozen=True)
class Demand:
    """All that is asked, but for the gear ratio."""

    cycle: Cycle
    gearing: Gearing = field(default_factory=Gearing)
    supply: Supply = field(default_factory=Supply)
    drive: Drive = field(default_factory=Drive)
    surroundings: Surroundings = field(default_factory=Surroundings)
