"""What a finding says of its cause: only what explains the ratio, and the sentence says it all."""

import math

import numpy as np
import pytest

from motorfolio.schema.batch import empty_figures
from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.causes import causes_of, shape, slipped_power, static_scores
from motorfolio.schema.reconcile.checks import thermal
from motorfolio.schema.reconcile.explain import SENTENCES, Narrator
from motorfolio.schema.reconcile.run import reconcile

from .simulated_sheets import FULL, SERVO, make, put, restate, single, spoil

BRUSHED, BLOCK, SINE = Commutation


def alarms(result):
    return [f for f in result.findings if f.severity != "note"]


def causes(figure: str, ratio: float, unit: str = "", sd: float = 0.01, kind: int = 0):
    form = shape(figure, kind, unit)
    return causes_of(static_scores(form, np.log([ratio]), np.array([sd]))[0])


# factors: NIST SP 811 (2008), appendix B.8; what a hand mistakes and what it doesn't: common
# practice, no source
@pytest.mark.parametrize(
    ("figure", "ratio", "unit", "never"),
    [
        # 9.549 over 10, 0.11298 times 10: two slips that would undo one another
        ("speed_constant", 1.09, "rpm/V", "rpm-vs-rad-per-second"),
        ("speed_constant", 1.047, "rpm/V", "rpm-vs-rad-per-second"),
        ("nominal_torque", 1.10, "mNm", "pound-inch-vs-newton-metre"),
        ("nominal_torque", 1.13, "mNm", "pound-inch-vs-newton-metre"),
        # grams and centimetres hold no force
        ("rotor_inertia", 10.0, "gcm2", "kilogram-force-vs-newton"),
        # 8 is neither 7.06 nor 9.81 where the digits tell them apart
        ("stall_torque", 8.0, "mNm", "ounce-inch-vs-millinewton-metre"),
        ("stall_torque", 8.0, "mNm", "kilogram-force-vs-newton"),
    ],
)
def test_a_factor_that_does_not_explain_the_ratio_is_not_offered(figure, ratio, unit, never):
    for sd in (0.005, 0.01, 0.02):
        assert never not in causes(figure, ratio, unit, sd)


def test_an_inertia_in_kilogram_force_may_be_one_in_kilograms():
    """1 kgf·m·s² = 9.80665 kg·m² (NIST SP 811, appendix B.8)."""
    assert "kilogram-force-vs-newton" in causes("rotor_inertia", 1 / 9.80665, "kg·m²")


@pytest.mark.parametrize(
    ("factor", "power", "said"),
    [
        (7.061552, 0, None),
        (7061.552, 3, "3 places"),
        (0.7061552, -1, "1 place "),
        (0.01412, -1, ""),
    ],
)
def test_a_decimal_slip_that_is_part_of_a_cause_is_said(factor, power, said):
    """1 ozf·in = 7.061552 mN·m (NIST SP 811, appendix B.8)."""
    sd = 0.004
    form = shape("stall_torque", int(BRUSHED), "mNm")
    found = slipped_power(form, "ounce-inch-vs-millinewton-metre", math.log(factor), sd)
    assert found == power
    batch = single()
    put(batch, "stall_torque", 0, 0.3)
    text = Narrator(batch).because(
        0, "stall_torque", ("ounce-inch-vs-millinewton-metre",), math.log(factor), sd
    )
    assert ("decimal point" in text) == (power != 0)
    if said:
        assert said.strip() in text


@pytest.mark.parametrize("seed", range(12))
def test_the_sentence_names_the_causes_of_the_document_and_no_others(seed):
    rng = np.random.default_rng(seed)
    kind, keys = ((BRUSHED, FULL), (SINE, SERVO))[seed % 2]
    sheet = make(rng, 6, kind, keys)
    key = str(rng.choice(["terminal_resistance", "torque_constant", "rotor_inertia"]))
    spoil(sheet.batch, key, 2, float(rng.choice([0.1, 0.5, 1.35, 1.7, 10.0, 9.8])))
    found = alarms(reconcile(sheet.batch))
    assert found
    for finding in found:
        assert "unexplained" not in finding.other_causes
        named = {cause for cause, words in SENTENCES.items() if words in finding.message}
        named |= {"unexplained"} if "None of the usual" in finding.message else set()
        assert named == {finding.cause, *finding.other_causes}


@pytest.mark.parametrize("ratio", [0.0980665, 1 / 0.0980665])
def test_gram_force_centimetres_for_millinewton_metres_are_no_decimal_slip(ratio):
    """1 gf·cm = 0.0980665 mN·m (NIST SP 811, appendix B.8: 1 kgf·m = 9.80665 N·m)."""
    batch = single()
    put(batch, "stall_torque", 0, 0.3)
    cause = ("kilogram-force-vs-newton",)
    text = Narrator(batch).because(0, "stall_torque", cause, math.log(ratio), 0.004)
    assert "gf·cm and mN·m" in text
    assert "decimal point" not in text


def test_friction_left_out_of_a_torque_is_not_said_of_a_torque_constant():
    batch = single()
    put(batch, "nominal_torque", 0, 0.03)
    text = Narrator(batch).because(0, "nominal_torque", ("friction-ignored",), 0.06, 0.01)
    assert "torque constant times current" in text


def test_a_cell_s_cause_does_not_hang_on_the_other_rows():
    """A rated torque 10 % high, of which friction explains 4 %, and nothing else any of it."""
    seen = set()
    rows = 5
    for left_out in (None, 0, 1, 3, 4):
        keep = [i for i in range(rows) if i != left_out]
        batch = single(n=len(keep))
        batch.series = ["K"] * len(keep)
        for row, i in enumerate(keep):
            u = 12.0 * 1.3**i
            km, i_n = 0.0142 * 1.3**i, 2.9 / 1.3**i
            ra, i_0 = 0.58 * 1.3 ** (2 * i), 0.038 * i_n
            torque = km * (i_n - i_0) * (1.10 if i == 2 else 1.0)
            for key, value in (
                ("nominal_voltage", u), ("no_load_speed", (u - ra * i_0) / km),
                ("no_load_current", i_0), ("nominal_speed", (u - ra * i_n) / km),
                ("nominal_torque", torque), ("nominal_current", i_n),
                ("stall_current", u / ra), ("stall_torque", km * (u / ra - i_0)),
                ("terminal_resistance", ra), ("torque_constant", km),
                ("speed_constant", 1 / km),
            ):  # fmt: skip
                put(batch, key, row, value, 3)
        (finding,) = alarms(reconcile(batch))
        assert finding.part_number == f"X{keep.index(2)}"
        seen.add((finding.severity, finding.cause, finding.other_causes))
    assert seen == {("warning", "unexplained", ())}


def test_friction_that_is_itself_printed_roundly_still_explains_a_torque_constant():
    """Kt printed as T/I where I0 is 22 % of I, and I0 printed 10 % high (its customary scatter)."""
    rows = 5
    batch = single(n=rows)
    batch.series = ["K"] * rows
    for i in range(rows):
        u, km, i_n = 12.0 * 1.3**i, 0.0142 * 1.3**i, 2.9 / 1.3**i
        ra, i_0 = 0.58 * 1.3 ** (2 * i), 0.222 * i_n
        for key, value in (
            ("nominal_voltage", u), ("no_load_speed", (u - ra * i_0) / km),
            ("no_load_current", i_0 * (1.1 if i == 2 else 1.0)),
            ("nominal_speed", (u - ra * i_n) / km), ("nominal_torque", km * (i_n - i_0)),
            ("nominal_current", i_n), ("stall_current", u / ra),
            ("stall_torque", km * (u / ra - i_0)), ("terminal_resistance", ra),
            ("torque_constant", km * (0.778 if i == 2 else 1.0)), ("speed_constant", 1 / km),
        ):  # fmt: skip
            put(batch, key, i, value, 3)
    (finding,) = [f for f in alarms(reconcile(batch)) if f.suspect == "torque_constant"]
    assert "friction-ignored" in (finding.cause, *finding.other_causes)


def test_a_column_of_equal_cells_is_not_the_neighbour_s_value():
    """Two alike delta windings whose back-EMF is printed as that of a star: 1/√3."""
    batch = single(SINE, n=2)
    batch.series = ["Z", "Z"]
    for i in range(2):
        for key, value in (
            ("torque_constant", 0.500), ("back_emf_constant", 0.5774 / math.sqrt(3)),
            ("terminal_resistance", 2.0), ("motor_constant", 0.408), ("rotor_inertia", 3e-5),
        ):  # fmt: skip
            put(batch, key, i, value, 3)
    restate(batch, "torque_constant", current="peak")
    restate(batch, "back_emf_constant", voltage="peak", between="lines")
    restate(batch, "terminal_resistance", between="lines")
    (finding,) = alarms(reconcile(batch))
    assert (finding.scope, finding.suspect) == ("column", "back_emf_constant")
    assert finding.cause == "line-vs-phase"
    assert "neighbouring-column" not in finding.other_causes


def test_what_only_the_family_tells_is_said_to_be_by_the_family():
    untimed = tuple(k for k in FULL if not k.endswith("time_constant"))
    sheet = make(np.random.default_rng(9), 7, BRUSHED, untimed)
    for i in range(7):
        put(sheet.batch, "rotor_inertia", i, 7.2e-7, 3)
    spoil(sheet.batch, "rotor_inertia", 3, 10.0)
    (finding,) = alarms(reconcile(sheet.batch))
    assert (finding.suspect, finding.relation) == ("rotor_inertia", "family-rotor-inertia")
    assert "six other windings of this size print" in finding.message
    assert "other figures imply" not in finding.message


def test_where_a_relation_tells_the_family_is_not_brought_in():
    sheet = make(np.random.default_rng(9), 7, BRUSHED, FULL)
    spoil(sheet.batch, "rotor_inertia", 3, 10.0)
    (finding,) = alarms(reconcile(sheet.batch))
    assert finding.relation == "mechanical-time-constant"
    assert "family" not in finding.message


def test_two_that_contradict_each_other_are_named_alike_and_the_constants_say_how():
    batch = single()
    for key, value in (("torque_constant", 0.71), ("terminal_resistance", 0.81),
                       ("motor_constant", 0.455)):  # fmt: skip
        put(batch, key, 0, value)
    batch.figures["back_emf_constant"] = batch.figures["torque_constant"]
    result = reconcile(batch)
    (finding,) = alarms(result)
    assert finding.suspect is None
    left_out = next(k for k in finding.figures if f"without {k.replace('_', ' ')}" in
                    finding.message)  # fmt: skip
    assert "contradict one another" in finding.message
    sources = result.constants["motor_constant"]
    used = sources.sources[sources.source[0]]
    assert left_out not in used


def _rated(currents: list[float]):
    """2 Ω, 20 K/W, at most 125 °C over 25 °C."""
    batch = single(n=len(currents))
    for key, value in (("terminal_resistance", 2.0), ("maximum_winding_temperature", 125.0),
                       ("thermal_resistance", 20.0), ("nominal_current", 0.0)):  # fmt: skip
        batch.figures[key] = empty_figures(len(currents))
        for part in ("value", "low", "high"):
            getattr(batch.figures[key], part)[:] = currents if key == "nominal_current" else value
    return batch


def test_the_thermal_rating_has_two_directions_and_two_reasons():
    """R(125 °C)/R(25 °C) = 359.5/259.5 for copper (IEC 60034-1, 8.6.2.3.3, from memory): 20 K/W ·
    2 Ω · 1.3854 · I² is 13.9 K at 0.5 A, 55.4 K at 1 A and 222 K at 2 A, of 100 K."""
    notes = [note for _, note in thermal(Narrator(_rated([0.5, 1.0, 2.0, 1.3])), {})]
    assert len(notes) == 2
    hot, cool = notes
    assert "222 K of 100 K" in hot.message
    assert "cooling plate" in hot.message
    assert hot.part_number == "X2"
    assert "13.9 K of 100 K permitted (X0), 55.4 K of 100 K (X1)" in cool.message
    assert "cautious" in cool.message
    assert "cooling plate" not in cool.message
    assert cool.part_numbers == ("X0", "X1")


def test_of_many_ratings_the_two_ends_are_said():
    ((_, note),) = thermal(Narrator(_rated(list(np.linspace(0.4, 1.0, 30)))), {})
    assert "8.87 K of 100 K permitted (X0) to 55.4 K of 100 K (X29)" in note.message
    assert "X7" not in note.message
