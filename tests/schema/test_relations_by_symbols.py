"""Every relation's right side, against its printed formula and its template read as arithmetic."""

from __future__ import annotations

import math
import re
from dataclasses import FrozenInstanceError

import numpy as np
import pytest

from motorfolio.schema.reconcile.causes import shape
from motorfolio.schema.reconcile.explain import BY_FIGURE
from motorfolio.schema.reconcile.model import FIGURES, Readings
from motorfolio.schema.reconcile.relations import (
    BOUNDS,
    CONSTANT_FIGURES,
    RELATIONS,
    Relation,
    own_relation,
)

SYMBOLS = {
    # figure: the symbol of the formulas, and a value that stands in no simple ratio to the others
    "K": ("Km", 0.0371), "R": ("Ra", 1.313), "torque_constant": ("Kt", 0.0419),
    "back_emf_constant": ("Ke", 0.0433), "speed_constant": ("Kn", 23.7),
    "terminal_resistance": ("Ra", 1.409), "terminal_inductance": ("La", 0.00231),
    "rotor_inertia": ("J", 1.13e-5), "nominal_voltage": ("U", 27.1),
    "no_load_current": ("I0", 0.171), "no_load_speed": ("n0", 673.0),
    "nominal_current": ("I_N", 2.93), "nominal_torque": ("T_N", 0.0889),
    "nominal_speed": ("n_N", 541.0), "stall_current": ("Is", 19.7), "stall_torque": ("Ts", 0.653),
    "peak_current": ("I_pk", 17.3), "continuous_stall_current": ("I_cs", 3.37),
}  # fmt: skip
LEFT = {
    "torque_constant": "Kt", "back_emf_constant": "Ke", "stall_current": "Is",
    "stall_torque": "Ts", "no_load_speed": "n0", "speed_torque_gradient": "Δn/ΔT",
    "motor_constant": "motor constant", "mechanical_time_constant": "τm",
    "electrical_time_constant": "τe", "nominal_torque": "T_N", "rated_power": "P_N",
    "nominal_speed": "n_N", "maximum_power": "P_max", "maximum_efficiency": "η_max",
    "rated_efficiency": "η_N", "friction_torque": "T_f", "continuous_stall_torque": "T_cs",
    "peak_torque": "T_pk",
}  # fmt: skip


def arithmetic(text: str) -> float:
    """The value of a formula in the signs of the sentences; every value in brackets."""
    for sign, python in (("·", "*"), ("−", "-"), ("²", "**2"), ("√", "math.sqrt")):
        text = text.replace(sign, python)
    return float(eval(text, {"math": math}))


def values(relation: Relation) -> dict[str, np.ndarray]:
    return {key: np.array([SYMBOLS[key][1]]) for key in relation.others}


@pytest.mark.parametrize("relation", RELATIONS, ids=lambda r: r.formula)
def test_the_template_gives_the_right_side(relation: Relation) -> None:
    shown = {key: f"({SYMBOLS[key][1]!r})" for key in relation.others}
    found = relation.right(values(relation))
    assert found.shape == (1,)
    assert float(found[0]) == pytest.approx(arithmetic(relation.template.format(**shown)))
    for key in relation.others:
        assert f"{{{key}}}" in relation.template


@pytest.mark.parametrize("relation", RELATIONS, ids=lambda r: r.formula)
def test_the_formula_is_of_these_symbols(relation: Relation) -> None:
    """The sentences give the formula first; its right side is what is computed."""
    left, _, right = re.split(r" ([=≈≤]) ", relation.formula)
    if right == "1":  # a product of two that are reciprocal
        symbols = sorted(left.split("·"))
        mine = {LEFT[relation.left], *(SYMBOLS[k][0] for k in relation.others)}
        assert set(symbols) in (mine, {"Km", "Kn"})
        assert float(relation.right(values(relation))[0]) == pytest.approx(1 / 23.7)
        return
    assert left == LEFT[relation.left]
    text = right.removeprefix("1.05·") if relation.left == "peak_torque" else right
    # the longer symbols first, each by its value
    for symbol, value in sorted((SYMBOLS[k] for k in relation.others), key=lambda s: -len(s[0])):
        assert symbol in text
        text = re.sub(
            rf"(?<![A-Za-z0-9_]){re.escape(symbol)}(?![A-Za-z0-9_])", f"({value!r})", text
        )
    found = float(relation.right(values(relation))[0])
    assert found == pytest.approx(arithmetic(text))


def test_figures_of_a_relation_start_with_its_left() -> None:
    for relation in RELATIONS:
        assert relation.figures[0] == relation.left
        assert relation.figures[1:] == relation.others
        assert len(set(relation.figures)) == len(relation.figures)


def test_every_figure_with_a_relation_is_found_by_it() -> None:
    """Those that publish Km stand for "K", the terminal resistance for "R"; in the order of the
    table, so that the first complete one is shown."""
    for figure, found in BY_FIGURE.items():
        stands_for = {figure}
        if figure in CONSTANT_FIGURES:
            stands_for.add("K")
        if figure == "terminal_resistance":
            stands_for.add("R")
        assert found == [r for r in RELATIONS for f in r.figures if f in stands_for], figure


def test_the_relation_a_figure_is_reported_under() -> None:
    """One whose equation has the figure: its own, or by its constant."""
    names = {r.name for r in RELATIONS}
    for figure in FIGURES:
        name = own_relation(figure)
        assert name in names, figure
        if figure == "viscous_damping":  # Km·I0 = T_c + b·n0
            assert name == "friction-torque"
            continue
        roles = {figure}
        roles |= {"K"} if figure in CONSTANT_FIGURES else set()
        roles |= {"R"} if figure == "terminal_resistance" else set()
        assert any(roles & set(r.figures) for r in RELATIONS if r.name == name), figure


def test_bounds_are_of_one_quantity_each() -> None:
    """n_N < n0, T_N < T_s, I0 < I_N < I_s: named as they are ordered."""
    assert len(BOUNDS) == 4
    for name, small, great in BOUNDS:
        assert name == f"{small}-below-{great}".replace("_", "-")
        assert small.rpartition("_")[2] == great.rpartition("_")[2]


def test_what_is_shared_by_all_cannot_be_changed() -> None:
    """The relations, the readings and the stored factors of a figure."""
    for thing, name in ((RELATIONS[0], "left"), (Readings(), "stall_torque_net"),
                        (shape("mass", 0, ""), "code")):  # fmt: skip
        with pytest.raises(FrozenInstanceError):
            setattr(thing, name, None)
