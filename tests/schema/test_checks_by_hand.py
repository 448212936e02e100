"""Direct checks on sheets of few figures: limits from both sides, and what the notes say.

An interval of width w has the standard uncertainty w/√12 (JCGM 100:2008, 4.3.7). Limits and
customary scatter: common practice, no source.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.batch import Batch, empty_figures
from motorfolio.schema.convention import Commutation
from motorfolio.schema.motor import Amount, Cell
from motorfolio.schema.reconcile import checks
from motorfolio.schema.reconcile.explain import Narrator

from .simulated_sheets import put, sheet, single

BRUSHED, SERVO = Commutation.BRUSHED, Commutation.SINUSOIDAL


def exact(batch: Batch, key: str, values: list[float], half: float = 0.0) -> None:
    """Values that were printed with so much to either side, in relation to them."""
    column = batch.figures.get(key)
    if column is None:
        put(batch, key, 0, values[0])
        column = batch.figures[key]
    column.value[:] = values
    column.low[:], column.high[:] = column.value * (1 - half), column.value * (1 + half)


# ---- order and poles


def test_an_order_that_is_wrong_by_more_than_five_per_cent() -> None:
    batch = sheet(4, nominal_speed=[104.9, 105.1, 99.0, 106.0], no_load_speed=100.0)
    exact(batch, "no_load_speed", [100.0] * 4)
    exact(batch, "nominal_speed", [104.9, 105.1, 99.0, 106.0])
    found = checks.bounds(Narrator(batch), {3: {"mass"}})
    assert [m for m, _ in found] == [1, 3]
    small, great = (batch.figures[k].text[1] for k in ("nominal_speed", "no_load_speed"))
    assert found[0][1].message == (
        f"Nominal speed {small} rpm (row 3, column 1) is greater than no-load speed {great} rpm "
        "(row 3, column 2); one of them is wrong."
    )
    assert found[0][1].relation == "nominal-speed-below-no-load-speed"
    assert found[0][1].cell == Cell(row=3, column=1)
    # one doubted motor does not hide the next
    assert [m for m, _ in checks.bounds(Narrator(batch), {1: {"no_load_speed"}})] == [3]


def test_every_order_is_looked_at() -> None:
    """Though an earlier pair is not published."""
    batch = sheet(1, nominal_current=5.0, stall_current=4.0, rated_efficiency=0.9)
    exact(batch, "rated_efficiency", [1.05])
    found = [f.relation for _, f in checks.bounds(Narrator(batch), {})]
    assert found == ["nominal-current-below-stall-current", "efficiency-below-one"]


def test_an_efficiency_above_one_in_words() -> None:
    batch = sheet(3, rated_efficiency=0.9)
    exact(batch, "rated_efficiency", [1.05, 0.99, 1.3])
    batch.figures["rated_efficiency"].text[2] = "130"
    (_, first), (m, finding) = checks.bounds(Narrator(batch), {})
    assert first.part_number == "X0"
    assert m == 2
    assert finding.message == "Rated efficiency 130 % (row 4, column 1) is above 100 %."
    assert (finding.relation, finding.figures) == ("efficiency-below-one", ("rated_efficiency",))
    assert (finding.ratio, finding.cell) == (None, Cell(row=4, column=1))


def test_poles_in_words() -> None:
    batch = sheet(2, poles=[8, 12], pole_pairs=[4, 3])
    ((m, finding),) = checks.poles(Narrator(batch))
    assert (m, finding.ratio, finding.part_number) == (1, 2.0, "X1")
    assert finding.message == (
        "Poles 12.00 (row 3, column 1) are not twice the pole pairs 3.000; either may be wrong."
    )
    assert finding.figures == ("poles", "pole_pairs")
    assert (finding.relation, finding.suspect) == ("poles-pole-pairs", None)
    assert finding.cell == Cell(row=3, column=1)
    del batch.figures["poles"]
    assert checks.poles(Narrator(batch)) == []


# ---- frames


def family(key: str, odd: float, n: int = 5, half: float = 0.0) -> Batch:
    """Windings of 0.5 of one size, and one that stands off."""
    batch = sheet(n + 1, **{"mass": 0.5} if key == "mass" else {"thermal_resistance": 0.5})
    if key not in batch.figures:
        batch.figures[key] = batch.figures.pop("thermal_resistance")
    batch.series = ["A"] * (n + 1)
    exact(batch, key, [0.5] * n + [odd], half)
    return batch


@pytest.mark.parametrize(
    ("key", "custom"),
    [("mass", 0.02), ("thermal_resistance", 0.10), ("thermal_resistance_winding_housing", 0.10),
     ("thermal_resistance_housing_ambient", 0.10)],
)  # fmt: skip
@pytest.mark.parametrize("half", [0.0, 0.05])
def test_a_frame_s_figure_stands_off_by_its_scatter(key: str, custom: float, half: float) -> None:
    """5 % and 3.5 deviations of the digits and of custom, 1.2 with that of the median; from 15 %
    and five deviations on it is an error."""
    digits = max(2 * half / math.sqrt(12), 1e-5)
    sd = math.hypot(digits, 1.2 * custom)
    limit = 1.05 + 3.5 * sd
    everyone = np.ones(6, dtype=bool)
    for odd in (limit * 1.003, 1 / (limit * 1.003)):
        ((m, finding),) = checks.frames(Narrator(family(key, 0.5 * odd, half=half)), everyone)
        assert (m, finding.suspect, finding.figures) == (5, key, (key,))
        assert finding.relation == "family-" + key.replace("_", "-")
        assert finding.ratio == pytest.approx(odd)
        assert finding.implied is not None
        assert finding.implied.value == pytest.approx(0.5)
    for odd in (limit / 1.003, 1.003 / limit):
        assert checks.frames(Narrator(family(key, 0.5 * odd, half=half)), everyone) == []
    severe = 1 + max(0.15, 5 * sd)
    for odd, severity in ((severe * 1.004, "error"), (severe / 1.004, "warning")):
        if odd > limit * 1.003:
            ((_, finding),) = checks.frames(Narrator(family(key, 0.5 * odd, half=half)), everyone)
            assert (finding.severity, finding.cause) == (severity, "unexplained")


def test_a_frame_s_figure_in_words() -> None:
    batch = family("mass", 50.0)
    batch.figures["mass"].text[5] = "50000"
    ((_, finding),) = checks.frames(Narrator(batch), np.ones(6, dtype=bool))
    assert finding.message == (
        "Mass 50000 g (row 7, column 1) is 100 times that of the other windings of this size "
        "(500 g). Likely a slipped decimal point or prefix; also possible: kilogram-force and "
        "newton taken for one another (9.80665) with a decimal point 3 places off."
    )
    assert (finding.severity, finding.cause) == ("error", "power-of-ten")
    assert finding.other_causes == ("kilogram-force-vs-newton",)
    assert finding.implied == Amount(pytest.approx(0.5), "kg")
    assert finding.part_number == "X5"
    assert finding.cell == Cell(row=7, column=1)


def test_a_mass_of_naught_is_none() -> None:
    for nothing in (0.0, -0.5, math.nan):
        batch = family("mass", nothing)
        assert checks.frames(Narrator(batch), np.ones(6, dtype=bool)) == []


def test_unlike_resistances_have_no_majority() -> None:
    """Within 15 % for a thermal resistance, 5 % for a mass."""
    everyone = np.ones(6, dtype=bool)
    for key, spread, agree in (("mass", 1.045, True), ("mass", 1.06, False),
                               ("thermal_resistance", 1.14, True),
                               ("thermal_resistance", 1.16, False)):  # fmt: skip
        batch = family(key, 0.5)
        # the median of six is between the third and the fourth
        exact(batch, key, [0.5 / spread, 0.5 / spread, 0.5, 0.5, 0.5 * spread, 5.0])
        assert bool(checks.frames(Narrator(batch), everyone)) == agree, (key, spread)


# ---- figures given twice


def twice(key: str, first: list[float], second: list[float], half: float = 0.0) -> Batch:
    n = len(first)
    batch = sheet(n, **{key: 1.0})
    other = sheet(n, **{key: 1.0}).figures[key]
    exact(batch, key, first, half)
    other.value[:] = second
    other.low[:], other.high[:] = other.value * (1 - half), other.value * (1 + half)
    batch.repeats[key] = [other]
    return batch


@pytest.mark.parametrize("half", [0.0, 0.01, 0.03])
def test_two_that_agree_to_their_digits(half: float) -> None:
    """2 % and three deviations of both."""
    sd = math.sqrt(2) * max(2 * half / math.sqrt(12), 1e-5)
    limit = 1.02 + 3 * sd
    values = [limit * 1.002, limit / 1.002, 1.002 / limit, 1 / limit / 1.002]
    batch = twice("motor_constant", values, [1.0] * 4, half)
    found = checks.repeats(Narrator(batch))
    assert [m for m, _ in found] == [0, 3]
    assert [f.ratio for _, f in found] == pytest.approx([values[0], values[3]])
    assert {f.relation for _, f in found} == {"given-twice"}


def test_two_that_differ_in_words() -> None:
    batch = twice("motor_constant", [0.03, 0.03], [0.003, 0.03])
    batch.figures["motor_constant"].text[0] = "30"
    second = batch.repeats["motor_constant"][0]
    second.text[0], second.row[0], second.column[0] = "3", 9, 5
    ((_, finding),) = checks.repeats(Narrator(batch))
    assert finding.message == (
        "Motor constant is given twice: 30 mNm/√W (row 2, column 1) and 3 (row 9, column 5), a "
        "ratio of 10; the first stands. Likely a slipped decimal point or prefix."
    )
    assert (finding.part_number, finding.severity) == ("X0", "error")
    assert finding.implied == Amount(0.003, "N·m/√W")
    assert finding.cell == Cell(row=2, column=1)


@pytest.mark.parametrize(
    ("ratio", "cause", "severity"),
    [(1.045, "hot-vs-cold", "warning"), (0.93, "hot-vs-cold", "error"), (1.3, None, "warning")],
)
def test_a_small_gap_that_a_cause_explains_is_a_warning(ratio, cause, severity) -> None:
    """An error from 5 % on. A magnet that is warm: 3 to 22 % less."""
    if cause and ratio > 1:
        ratio = 1 / ratio
    ((_, finding),) = checks.repeats(Narrator(twice("motor_constant", [ratio], [1.0])))
    assert (finding.cause, finding.severity) == (cause or "unexplained", severity)


def test_what_is_repeated_without_a_first_or_is_text_is_passed_over() -> None:
    batch = twice("motor_constant", [2.0], [1.0])
    repeated = batch.repeats.pop("motor_constant")
    batch.repeats = {"mass": repeated, "series": repeated, "motor_constant": repeated * 2}
    batch.figures["series"] = batch.figures["motor_constant"]
    found = checks.repeats(Narrator(batch))
    assert [f.figures for _, f in found] == [("motor_constant",)] * 2


# ---- the thermal rating


def rated(n: int = 1, **given: float | list[float]) -> Batch:
    """1 A · 2 Ω at 25 °C in 125 °C: 2 Ω · 359.5/259.5 = 2.7707 Ω (Langsdorf, ex. 1-15)."""
    batch = single(BRUSHED, n)
    figures = {"nominal_current": 1.0, "terminal_resistance": 2.0, "thermal_resistance": 72.1848,
               "maximum_winding_temperature": 125.0, **given}  # fmt: skip
    for i, (key, values) in enumerate(figures.items()):
        batch.figures[key] = column = empty_figures(n)
        column.value[:] = column.low[:] = column.high[:] = values
        column.row[:], column.column[:] = np.arange(n) + 2, i + 1
    return batch


def test_a_rating_in_words() -> None:
    ((m, note),) = checks.thermal(Narrator(rated(ambient_temperature=45.0)), {})
    assert m == 0
    assert note.message == (
        "The rated current does not follow from the thermal resistances: (Rth1 + Rth2)·I_N²·"
        "Ra(T_max) is a rise of 200 K of 80 K permitted. More than permitted: the rating may hold "
        "on a cooling plate or with forced air, for which the printed resistances are not."
    )
    assert note.figures == ("nominal_current", "thermal_resistance", "terminal_resistance",
                            "maximum_winding_temperature")  # fmt: skip
    assert (note.relation, note.part_number) == ("thermal-rating", "X0")
    assert note.cell == Cell(row=2, column=1)
    ((_, note),) = checks.thermal(Narrator(rated(thermal_resistance=18.0462)), {})
    assert "is a rise of 50 K of 100 K permitted. Less than permitted: the rating may be a" in (
        note.message
    )


def test_the_ends_of_many_ratings_are_shares_of_what_is_permitted() -> None:
    """Not rises: 171 K of 80 K is a larger share than 200 K of 100 K."""
    batch = rated(13)
    figures = batch.figures
    figures["nominal_current"].value[7] = 0.94
    figures["nominal_current"].value[6] = 0.5
    figures["thermal_resistance"].value[6] = 261.4  # · 0.25 A² · 2 Ω · 339.5/259.5 = 171 K
    figures["maximum_winding_temperature"].value[6] = 105.0
    ((_, note),) = checks.thermal(Narrator(batch), {})
    assert "a rise of 177 K of 100 K permitted (X7) to 171 K of 80 K (X6)." in note.message


@pytest.mark.parametrize(
    "missing", ["nominal_current", "terminal_resistance", "maximum_winding_temperature"]
)
def test_a_rating_wants_current_resistance_and_limit(missing: str) -> None:
    batch = rated()
    del batch.figures[missing]
    assert checks.thermal(Narrator(batch), {}) == []


def test_a_doubted_figure_tells_no_rating() -> None:
    batch = rated(3)
    for key in ("nominal_current", "thermal_resistance", "terminal_resistance",
                "maximum_winding_temperature"):  # fmt: skip
        ((m, note),) = checks.thermal(Narrator(batch), {0: {key}, 1: {"mass"}})
        assert (m, note.part_numbers) == (1, ("X1", "X2"))
        assert note.ratio == pytest.approx(2.0, rel=1e-4)
    assert checks.thermal(Narrator(batch), {i: {"nominal_current"} for i in range(3)}) == []


def test_copper_from_the_sheet_s_reference() -> None:
    """From 20 °C: 2 Ω · 359.5/254.5."""
    batch = rated()
    batch.reference_temperature[:] = 20.0
    ((_, note),) = checks.thermal(Narrator(batch), {})
    assert note.ratio == pytest.approx(72.1848 * 2 * 359.5 / 254.5 / 100, rel=1e-5)


# ---- the note on scatter


LAW = {
    # what is left of a relation, the others at their right values, and its customary scatter:
    # that of its law, or of its figures together
    "stall_current": (20.0, math.hypot(0.02, 0.02)),
    "speed_torque_gradient": (1.2 / 0.03**2, math.sqrt(0.02**2 + 0.02**2 + 0.01**2)),
    "motor_constant": (0.03 / math.sqrt(1.2), math.sqrt(0.02**2 + 0.01**2 + 0.02**2)),
    "no_load_speed": ((24 - 1.2 * 0.12) / 0.03, 0.025),
    "nominal_torque": (0.03 * (3.12 - 0.12), 0.07),
    "nominal_speed": ((24 - 1.2 * 3.12) / 0.03, 0.025),
    "maximum_efficiency": ((1 - math.sqrt(0.12 * 1.2 / 24)) ** 2, math.hypot(0.02, 0.02, 0.10)),
}
GIVEN = {"nominal_voltage": 24.0, "terminal_resistance": 1.2, "torque_constant": 0.03,
         "no_load_current": 0.12, "nominal_current": 3.12}  # fmt: skip


def law_sheet(key: str, value: float, kind: Commutation = BRUSHED, half: float = 0.0) -> Batch:
    batch = sheet(1, kind, **GIVEN, **{key: value})
    for other, known in GIVEN.items():
        exact(batch, other, [known])
        batch.figures[other].conventions = [type(batch.figures[other].conventions[0])()]
    exact(batch, key, [value], half)
    return batch


@pytest.mark.parametrize("half", [0.0, 0.02])
@pytest.mark.parametrize("key", LAW)
def test_a_departure_beyond_custom_is_noted(key: str, half: float) -> None:
    """5 %, or two customary deviations where that is more, beyond what the digits leave."""
    right, custom = LAW[key]
    # the voltage of a sheet counts as known to 0.1 %, printed exactly or not
    voltage = math.sqrt(3) * 1e-3 * (key not in ("speed_torque_gradient", "motor_constant",
                                                 "nominal_torque"))  # fmt: skip
    limit = max(0.05, 2 * custom) + voltage + half
    for sign in (1, -1):
        batch = law_sheet(key, right * math.exp(sign * (limit + 0.004)), half=half)
        ((_, note),) = checks.scatter(Narrator(batch), lambda m: False)
        assert note.figures[0] == key
        assert note.ratio == pytest.approx(math.exp(sign * (limit + 0.004)), rel=1e-6)
        batch = law_sheet(key, right * math.exp(sign * (limit - 0.004)), half=half)
        assert checks.scatter(Narrator(batch), lambda m: False) == []


def test_constants_that_agree_to_five_per_cent_are_not_noted() -> None:
    """Though each is customarily known to 1 %: Kt = Ke."""
    batch = sheet(4, torque_constant=0.03, back_emf_constant=0.03)
    exact(batch, "torque_constant", [0.03] * 4)
    exact(batch, "back_emf_constant", [0.03 * math.exp(gap) for gap in (0.047, 0.053, -0.047, 0)])
    ((m, note),) = checks.scatter(Narrator(batch), lambda m: False)
    assert (m, note.figures) == (1, ("torque_constant", "back_emf_constant"))


def test_a_note_on_scatter_in_words() -> None:
    batch = law_sheet("stall_current", 22.0)
    ((m, note),) = checks.scatter(Narrator(batch), lambda m: False)
    assert (m, note.part_number, note.severity) == (0, "X0", "note")
    assert note.message == (
        "Consistent within customary scatter; the widest: Is = U/Ra: 24.00 V/(1.200 Ω) gives 20 A, "
        "printed is 22.00 A."
    )
    assert (note.relation, note.cell) == ("within-customary-scatter", Cell(row=2, column=6))
    assert note.figures == ("stall_current", "nominal_voltage", "terminal_resistance")


def test_a_servo_s_rated_speed_is_the_maker_s_choice() -> None:
    assert checks.scatter(Narrator(law_sheet("nominal_speed", 400.0)), lambda m: False)
    servo = law_sheet("nominal_speed", 400.0, SERVO)
    assert checks.scatter(Narrator(servo), lambda m: False) == []
    assert checks.scatter(Narrator(law_sheet("nominal_torque", 0.12, SERVO)), lambda m: False)


def test_bounds_and_rough_relations_are_no_scatter() -> None:
    """T_pk ≤ 1.05·Km·I_pk, n0 ≈ U/Km, and Coulomb friction alone."""
    for figures in ({"peak_torque": 0.1, "peak_current": 10.0}, {"friction_torque": 0.002}):
        batch = sheet(1, torque_constant=0.03, no_load_current=0.12, **figures)
        assert checks.scatter(Narrator(batch), lambda m: False) == []
    batch = sheet(1, torque_constant=0.03, nominal_voltage=24.0, no_load_speed=700.0)
    assert checks.scatter(Narrator(batch), lambda m: False) == []


def test_whichever_figure_publishes_km_stands_for_it() -> None:
    """The torque constant first, then that of back-EMF, then the speed constant."""
    batch = sheet(3, terminal_resistance=1.2, motor_constant=[0.03] * 3, torque_constant=0.03,
                  back_emf_constant=0.03, speed_constant=1 / 0.03)  # fmt: skip
    batch.figures["torque_constant"].value[1:] = math.nan
    batch.figures["back_emf_constant"].value[2] = math.nan
    found = checks.scatter(Narrator(batch), lambda m: False)
    assert [f.figures for _, f in found] == [
        ("motor_constant", key, "terminal_resistance")
        for key in ("torque_constant", "back_emf_constant", "speed_constant")
    ]
    for _, note in found:
        assert note.ratio == pytest.approx(math.sqrt(1.2), rel=2e-3)


def test_each_motor_has_its_widest_relation() -> None:
    batch = sheet(3, nominal_voltage=24.0, terminal_resistance=1.2, torque_constant=0.03,
                  stall_current=[23.0, 22.0, 20.0],
                  speed_torque_gradient=[1500.0, 1600.0, 1333.3])  # fmt: skip
    found = checks.scatter(Narrator(batch), lambda m: False)
    assert [(m, f.figures[0]) for m, f in found] == [
        (0, "stall_current"), (1, "speed_torque_gradient"),
    ]  # fmt: skip
    assert [m for m, _ in checks.scatter(Narrator(batch), lambda m: m == 0)] == [1]
