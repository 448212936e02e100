"""What a finding says and holds, sentence by sentence, on a sheet of few figures by hand.

24 V, 1.2 Ω, 0.03 N·m/A, 0.12 A at no load: Is = 20 A, Ts = 0.5964 N·m (no published source).
"""

from __future__ import annotations

import math

import pytest

from motorfolio.schema.batch import Batch, Heading, Source
from motorfolio.schema.convention import Commutation
from motorfolio.schema.motor import Cell
from motorfolio.schema.reconcile.explain import SENTENCES, Narrator, capital, number
from motorfolio.schema.reconcile.model import INDEX
from motorfolio.schema.reconcile.relations import RELATIONS
from motorfolio.schema.reconcile.suspects import Suspicion

from .simulated_sheets import restate
from .simulated_sheets import sheet as printed

BRUSHED, SINE = Commutation.BRUSHED, Commutation.SINUSOIDAL
SHEET = {"nominal_voltage": 24.0, "terminal_resistance": 1.2, "torque_constant": 0.03,
         "stall_current": 40.0, "no_load_current": 0.12, "speed_constant": 1 / 0.03}  # fmt: skip
NO_CAUSE = "None of the usual mistakes explains the ratio."
STALL = "Is = U/Ra: 24.00 V/(1.200 Ω) gives 20 A, printed is 40.00 A"


def sheet(kind: Commutation = BRUSHED, n: int = 1, **figures: float) -> Batch:
    return printed(n, kind, **(figures or SHEET))


def suspicion(key: str, ratio: float, causes=("unexplained",), motor: int = 0, **more) -> Suspicion:
    rivals = tuple(INDEX[k] for k in more.pop("rivals", ()))
    partner = INDEX[more.pop("partner")] if "partner" in more else None
    return Suspicion(motor, INDEX[key], rivals, math.log(ratio), 0.01, 0.01, 100.0, causes,
                     partner, **more)  # fmt: skip


def told(found: Suspicion, batch: Batch | None = None, doubted: frozenset[str] = frozenset()):
    return Narrator(batch or sheet()).finding(found, "error", doubted)


# ---- one figure


def test_a_suspect_with_its_relation() -> None:
    found = told(suspicion("stall_current", 2.0))
    assert found.message == (
        "Stall current 40.00 A (row 2, column 4) is 2 times what the other figures imply (20 A): "
        f"{STALL}. {NO_CAUSE}"
    )
    assert (found.part_number, found.scope, found.severity) == ("X0", "motor", "error")
    assert found.relation == "stall-current"
    assert found.figures == ("stall_current", "nominal_voltage", "terminal_resistance")
    assert (found.suspect, found.cause, found.other_causes) == ("stall_current", "unexplained", ())
    assert found.ratio == pytest.approx(2.0)
    assert found.implied is not None
    assert (found.implied.value, found.implied.unit) == (pytest.approx(20.0), "A")
    assert found.cell == Cell(row=2, column=4)


@pytest.mark.parametrize(
    ("ratio", "said"),
    [(5.0, "5 times"), (0.21, "0.21 times"), (0.19, "1/5.26 of"), (1e-3, "1/1000 of")],
)
def test_a_small_share_is_one_over_a_number(ratio: float, said: str) -> None:
    found = told(suspicion("stall_current", ratio))
    assert f" is {said} what the other figures imply ({number(40 / ratio)} A): " in found.message


def test_causes_in_their_order() -> None:
    causes = ("power-of-ten", "continuous-stall", "neighbouring-column")
    found = told(suspicion("stall_current", 10.0, causes))
    assert found.message.endswith(
        "Likely a slipped decimal point or prefix; also possible: the continuous figure at "
        "standstill, not U/Ra, the value of the next winding."
    )
    assert (found.cause, found.other_causes) == (causes[0], causes[1:])
    found = told(suspicion("stall_current", 1.9, ("unexplained", "peak-to-peak")))
    assert found.message.endswith(f"{NO_CAUSE[:-1]}; the nearest: a peak-to-peak value (2).")


def test_a_suspect_on_another_side_of_its_relation() -> None:
    """The suspect comes first, then the left figure and the others of the equation."""
    found = told(suspicion("terminal_resistance", 0.5))
    assert found.figures == ("terminal_resistance", "stall_current", "nominal_voltage")
    assert found.message.startswith(
        "Terminal resistance 1.200 Ω (row 2, column 2) is 0.5 times what the other figures imply "
        f"(2.4 Ω): {STALL}."
    )
    assert found.implied is not None
    assert (found.implied.value, found.implied.unit) == (pytest.approx(2.4), "Ω")


def test_a_speed_constant_stands_for_km_by_its_reciprocal() -> None:
    batch = sheet(terminal_resistance=1.2, speed_constant=1 / 0.03, speed_torque_gradient=2000.0)
    found = told(suspicion("speed_torque_gradient", 1.5), batch)
    text = batch.figures["speed_constant"].text[0]
    assert f"Δn/ΔT = Ra/Km²: 1.200 Ω/(1/({text} rpm/V))² gives 12.7 rpm/mNm" in found.message
    assert found.figures == ("speed_torque_gradient", "terminal_resistance", "speed_constant")


def test_without_a_relation_nothing_is_put_in() -> None:
    batch = sheet(rotor_inertia=1e-5, terminal_resistance=1.2)
    found = told(suspicion("rotor_inertia", 4.0, ("inertia-convention",)), batch)
    assert found.message == (
        "Rotor inertia 100.0 g·cm² (row 2, column 1) is 4 times what the other figures imply "
        f"(25 g·cm²). Likely {SENTENCES['inertia-convention']}."
    )
    assert found.relation == "mechanical-time-constant"
    assert found.figures == ("rotor_inertia",)


# ---- two and more


def test_two_that_contradict_one_another() -> None:
    found = told(suspicion("stall_current", 2.0, rivals=("terminal_resistance",)))
    assert found.message == (
        "Stall current 40.00 A (row 2, column 4) and terminal resistance 1.200 Ω (row 2, column 2) "
        f"contradict one another: {STALL}. Nothing else on the sheet tells which is wrong. The "
        "constants are worked out without stall current: it is 2 times what the rest implies "
        f"(20 A). {NO_CAUSE}"
    )
    assert found.suspect is None
    assert found.figures == ("stall_current", "terminal_resistance")


def test_three_that_contradict_one_another() -> None:
    rivals = ("terminal_resistance", "nominal_voltage")
    found = told(suspicion("stall_current", 2.0, rivals=rivals))
    assert found.message.startswith(
        "Stall current 40.00 A (row 2, column 4), terminal resistance 1.200 Ω (row 2, column 2) "
        "and nominal voltage 24.00 V (row 2, column 1) contradict one another: "
    )
    assert found.figures == ("stall_current", *rivals)


def test_two_exchanged() -> None:
    batch = sheet(no_load_speed=800.0, nominal_speed=400.0, mass=0.5)
    found = told(suspicion("no_load_speed", 0.5, ("figures-swapped",), partner="nominal_speed"),
                 batch)  # fmt: skip
    assert found.message == (
        "No-load speed 7639 rpm (row 2, column 1) and nominal speed 3820 rpm (row 2, column 2) "
        "seem to be exchanged: with the two numbers in each other's place all figures agree; "
        "no-load speed would be 15300 rpm. Likely two cells exchanged."
    )
    assert found.figures == ("no_load_speed", "nominal_speed")
    assert (found.suspect, found.relation) == ("no_load_speed", "no-load-speed")


def test_two_exchanged_with_a_relation_that_shows_it() -> None:
    """None that the partner or another suspect has a part in."""
    found = told(suspicion("terminal_resistance", 0.5, ("figures-swapped",),
                           partner="no_load_current"))  # fmt: skip
    assert f"terminal resistance would be 2.4 Ω. {STALL}. Likely two" in found.message
    assert found.figures == ("terminal_resistance", "no_load_current", "stall_current",
                             "nominal_voltage")  # fmt: skip
    found = told(suspicion("terminal_resistance", 0.5, ("figures-swapped",),
                           partner="stall_current"))  # fmt: skip
    assert STALL not in found.message


# ---- which relation is shown


def test_a_relation_without_a_doubted_figure() -> None:
    """Km by the torque constant, or where that is doubted by the speed constant."""
    figures = {"nominal_voltage": 24.0, "torque_constant": 0.03, "speed_constant": 40.0,
               "no_load_speed": 900.0}  # fmt: skip
    says = Narrator(sheet(**figures))
    relation, roles = says.relation_of(0, "no_load_speed", frozenset())
    assert relation is not None
    assert relation.formula == "n0 ≈ U/Km"
    assert roles == {"nominal_voltage": "nominal_voltage", "K": "torque_constant"}
    relation, roles = says.relation_of(0, "no_load_speed", frozenset({"torque_constant"}))
    assert relation is not None
    assert roles["K"] == "speed_constant"
    # a suspect stands for itself
    relation, roles = says.relation_of(0, "speed_constant", frozenset({"torque_constant"}))
    assert relation is not None
    assert (relation.formula, roles["K"]) == ("n0 ≈ U/Km", "speed_constant")
    relation, roles = says.relation_of(0, "speed_constant", frozenset())
    assert relation is not None
    assert relation.name == "torque-constant-speed-constant"
    for doubted in ({"torque_constant", "nominal_voltage"}, {"torque_constant", "no_load_speed"}):
        assert says.relation_of(0, "speed_constant", frozenset(doubted)) == (None, {})
    assert says.relation_of(0, "mass", frozenset()) == (None, {})


def test_a_relation_wants_its_left_figure_and_all_others() -> None:
    figures = {"terminal_resistance": 1.2, "nominal_voltage": 24.0}
    says = Narrator(sheet(**figures))
    assert says.relation_of(0, "terminal_resistance", frozenset()) == (None, {})
    figures = {"terminal_resistance": 1.2, "stall_current": 20.0}
    says = Narrator(sheet(**figures))
    assert says.relation_of(0, "stall_current", frozenset()) == (None, {})
    batch = sheet(n=2)
    batch.figures["nominal_voltage"].value[1] = math.nan
    says = Narrator(batch)
    assert says.relation_of(1, "stall_current", frozenset()) == (None, {})
    assert says.relation_of(0, "stall_current", frozenset())[0] is not None


def test_another_suspect_of_the_motor_shows_nothing() -> None:
    """A relation with it would show a contradiction that is not there."""
    found = told(suspicion("stall_current", 2.0), doubted=frozenset({"terminal_resistance"}))
    assert STALL not in found.message
    assert found.figures == ("stall_current",)
    found = told(suspicion("stall_current", 2.0, rivals=("terminal_resistance",)),
                 doubted=frozenset({"terminal_resistance", "stall_current"}))  # fmt: skip
    assert STALL in found.message


# ---- numbers


def test_numbers_are_brought_to_the_dc_motor() -> None:
    """0.05 N·m/A of amperes rms is 0.05/√1.5 of the DC motor (T = Km·√1.5·I_rms)."""
    batch = sheet(SINE, torque_constant=0.05, back_emf_constant=0.03)
    says = Narrator(batch)
    assert says.dc("torque_constant", 0) == pytest.approx(0.05 / math.sqrt(1.5))
    assert says.dc("torque_constant", 0) == says.dc("torque_constant", 0)
    assert says.dc_factor("torque_constant", 0) == pytest.approx(1 / math.sqrt(1.5))
    assert math.isnan(says.dc("mass", 0))
    relation = next(r for r in RELATIONS if r.formula == "Kt = Ke")
    text, ratio = says.equation(0, relation, {"back_emf_constant": "back_emf_constant"})
    ke = batch.figures["back_emf_constant"].value[0] * math.sqrt(2)  # rms between lines to peak
    assert ratio == pytest.approx(0.05 / math.sqrt(1.5) / ke)
    printed = batch.figures["back_emf_constant"].text[0]
    assert text == (
        f"Kt = Ke: {printed} V/krpm gives {number(ke * math.sqrt(1.5) * 1e3)} mNm/A, printed is "
        "50.00 mNm/A, all brought to the DC motor's conventions"
    )
    for key in ("torque_constant", "back_emf_constant"):
        restate(batch, key, current=None, voltage=None)
        text, _ = Narrator(batch).equation(0, relation, {"back_emf_constant": "back_emf_constant"})
        assert ("all brought" in text) == (key == "torque_constant")


def test_a_right_side_below_naught_has_no_ratio() -> None:
    """U − Ra·I_N of a rated current above the stall current."""
    batch = sheet(nominal_voltage=24.0, terminal_resistance=10.0, nominal_current=5.0,
                  torque_constant=0.03, nominal_speed=300.0)  # fmt: skip
    roles = {"nominal_voltage": "nominal_voltage", "R": "terminal_resistance",
             "nominal_current": "nominal_current", "K": "torque_constant"}  # fmt: skip
    relation = next(r for r in RELATIONS if r.left == "nominal_speed")
    text, ratio = Narrator(batch).equation(0, relation, roles)
    assert math.isnan(ratio)
    assert "gives -8280 rpm" in text
    batch.figures["terminal_resistance"].value[0] = 4.8  # nothing left
    assert math.isnan(Narrator(batch).equation(0, relation, roles)[1])
    batch.figures["terminal_resistance"].value[0] = 4.6
    _, ratio = Narrator(batch).equation(0, relation, roles)
    speed = batch.figures["nominal_speed"].value[0]
    assert ratio == pytest.approx(speed * 0.03 / (24 - 23.0))


def test_units_of_a_heading_or_of_the_quantity() -> None:
    batch = sheet(stall_current=40.0, maximum_efficiency=0.8)
    says = Narrator(batch)
    assert says.amount("maximum_efficiency", 0, 0.815) == "81.5 %"
    batch.headings[1] = Heading("η", "maximum_efficiency", "1")
    assert Narrator(batch).amount("maximum_efficiency", 0, 0.815) == "0.815"
    batch.figures["maximum_efficiency"].text[0] = " 0.80 "
    assert Narrator(batch).printed("maximum_efficiency", 0) == "0.80"
    batch.headings[0] = Heading("I", "stall_current", "")
    assert Narrator(batch).unit("stall_current", 0) == ("A", 1.0, 0.0)
    batch.headings.clear()
    assert Narrator(batch).unit("stall_current", 0) == ("A", 1.0, 0.0)
    batch.figures["stall_current"].text[0] = "40.00 A"
    assert Narrator(batch).printed("stall_current", 0) == "40.00 A"


def test_a_cell_has_its_sheet_and_page() -> None:
    batch = sheet()
    batch.source = Source("x.pdf", sheet="S", page=7)
    assert Narrator(batch).cell(0, "stall_current") == Cell("S", 7, 2, 4)
    batch.figures["stall_current"].row[0] = batch.figures["stall_current"].column[0] = 0
    assert Narrator(batch).cell(0, "stall_current") == Cell("S", 7, None, None)
    batch.figures["stall_current"].row[0] = 9
    assert Narrator(batch).place(0, "stall_current") == " (row 9)"


def test_only_the_first_letter_becomes_a_capital() -> None:
    assert capital("back-EMF constant") == "Back-EMF constant"
    assert capital("pWM") == "PWM"
    assert capital("") == ""


# ---- a cause and the place that slipped


@pytest.mark.parametrize(
    ("ratio", "said"),
    [
        # gf·cm for mN·m is 9.80665/100; 980.665 is kilogram-force with two places
        (0.0980665, "gf·cm and mN·m, or kgf·cm and N·m, taken for one another (0.0980665)"),
        (10.19716, "gf·cm and mN·m, or kgf·cm and N·m, taken for one another (0.0980665)"),
        (980.665, f"{SENTENCES['kilogram-force-vs-newton']} with a decimal point 2 places off"),
        (98.0665, f"{SENTENCES['kilogram-force-vs-newton']} with a decimal point 1 place off"),
        (9.80665, SENTENCES["kilogram-force-vs-newton"]),
    ],
)
def test_kilogram_force_and_the_places(ratio: float, said: str) -> None:
    """NIST SP 811 (2008), appendix B.8."""
    says = Narrator(sheet(stall_torque=0.3))
    text = says.because(0, "stall_torque", ("kilogram-force-vs-newton",), math.log(ratio), 0.004)
    assert text == f"Likely {said}."


def test_friction_of_a_torque_constant_and_of_a_torque() -> None:
    says = Narrator(sheet(torque_constant=0.03, nominal_torque=0.1))
    for key, said in (("torque_constant", SENTENCES["friction-ignored"]),
                      ("nominal_torque", "torque constant times current printed as the torque, "
                       "friction left out")):  # fmt: skip
        assert says.because(0, key, ("friction-ignored",), 0.05, 0.01) == f"Likely {said}."
