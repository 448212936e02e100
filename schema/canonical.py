"""The constants that every motor is reduced to, by name; light, so that a search starts fast."""

CONSTANT_BASES = ("published", "derived", "reconciled")
"""How a constant was come by; arrays hold the index."""

CANONICAL: dict[str, str] = {
    "torque_constant": "N·m/A",
    "armature_resistance": "Ω",
    "armature_inductance": "H",
    "rotor_inertia": "kg·m²",
    "no_load_current": "A",
    "viscous_damping": "N·m·s/rad",
    "motor_constant": "N·m/√W",
}
"""The constants every motor is reduced to, with their SI units (the DC motor, at 25 °C)."""
