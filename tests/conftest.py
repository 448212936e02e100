"""How properties are tried: no test measures time, so a busy machine fails none."""

from hypothesis import HealthCheck, settings

settings.register_profile(
    "any speed",
    parent=settings.default,
    deadline=None,
    suppress_health_check={*settings.default.suppress_health_check, HealthCheck.too_slow},
)
settings.load_profile("any speed")
