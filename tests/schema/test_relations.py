"""The relations agree with the made-up motor of closed-form values, with each other, and with the
adjustment's own rows."""

import math

import numpy as np
import pytest

from motorfolio.schema.reconcile.adjust import fit
from motorfolio.schema.reconcile.model import INDEX
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.relations import OWN_RELATION, RELATIONS
from motorfolio.schema.reconcile.suspects import predicted
from motorfolio.schema.vocabulary import quantities

from .simulated_sheets import put, single

# Derived by hand from U = 24 V, Ra = 1.2 Ω, Km = 0.030 N·m/A, I0 = 0.12 A, J = 1e-5 kg·m²,
# La = 0.3 mH, and confirmed with python-control and scipy's solve_ivp (no published source).
CLOSED_FORM = {
    "nominal_voltage": 24.0, "terminal_resistance": 1.2, "torque_constant": 0.030,
    "back_emf_constant": 0.030, "speed_constant": 1 / 0.030, "no_load_current": 0.12,
    "rotor_inertia": 1e-5, "terminal_inductance": 0.3e-3, "stall_current": 20.0,
    "no_load_speed": 795.2, "stall_torque": 0.5964, "speed_torque_gradient": 1333.3333,
    "mechanical_time_constant": 13.3333e-3, "electrical_time_constant": 0.25e-3,
    "maximum_efficiency": 0.851080666, "maximum_power": 118.564320, "motor_constant": 0.02738613,
    "friction_torque": 0.0036, "nominal_current": 3.12, "nominal_torque": 0.090,
    "nominal_speed": 675.2, "rated_power": 60.768, "rated_efficiency": 60.768 / 74.88,
    "continuous_stall_current": 3.0, "continuous_stall_torque": 0.09,
}  # fmt: skip


def values() -> dict[str, np.ndarray]:
    v = {k: np.array(x) for k, x in CLOSED_FORM.items()}
    return v | {"K": v["torque_constant"], "R": v["terminal_resistance"]}


@pytest.mark.parametrize("relation", RELATIONS, ids=lambda r: f"{r.name} {r.formula}")
def test_relation_holds_for_the_closed_form_motor(relation):
    v = values()
    if relation.left == "peak_torque":
        pytest.skip("a bound, not an equation")
    approximate = "≈" in relation.formula
    right = float(relation.right(v))
    assert right == pytest.approx(float(v[relation.left]), rel=0.05 if approximate else 1e-4)


def test_the_adjustment_predicts_every_figure_that_the_relations_give():
    batch = single()
    for key in ("nominal_voltage", "terminal_resistance", "torque_constant", "no_load_current",
                "rotor_inertia", "terminal_inductance", "nominal_current"):  # fmt: skip
        put(batch, key, 0, CLOSED_FORM[key], 6)
    for key in ("no_load_speed", "stall_torque", "nominal_torque", "nominal_speed",
                "friction_torque"):  # fmt: skip
        put(batch, key, 0, CLOSED_FORM[key], 6)
    problem = observe(batch)
    fitted = fit(problem)
    for key in ("stall_current", "speed_torque_gradient", "mechanical_time_constant",
                "electrical_time_constant", "maximum_efficiency", "motor_constant",
                "rated_power", "maximum_power", "speed_constant"):  # fmt: skip
        value, _ = predicted(problem, fitted, np.array([INDEX[key]]))
        assert math.exp(value[0]) == pytest.approx(CLOSED_FORM[key], rel=2e-3), key


def test_permanent_magnet_motor_of_fitzgerald():
    """Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed., ex. 7.9, p. 389 (read through a
    volunteer's companion of the book): 50 V, 1.25 A at no load, 1.03 Ω, 2100 r/min: Km printed
    0.22 V·s/rad."""
    batch = single()
    put(batch, "nominal_voltage", 0, 50.0)
    put(batch, "no_load_current", 0, 1.25)
    put(batch, "terminal_resistance", 0, 1.03)
    put(batch, "no_load_speed", 0, 2100 * math.pi / 30, 4)
    problem = observe(batch)
    assert math.exp(fit(problem).x[0, 0]) == pytest.approx(0.22, abs=0.005)


def test_names_are_stable_words_and_figures_exist():
    known = set(quantities()) | {"K", "R"}
    for relation in RELATIONS:
        assert set(relation.figures) <= known
        assert relation.name == relation.name.lower().replace(" ", "-")
    assert set(OWN_RELATION.values()) <= {r.name for r in RELATIONS}
