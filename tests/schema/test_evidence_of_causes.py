"""What a motor's own text, neighbours and figures say for a cause: each offer by hand.

How common a mistake is: common practice, no source. Densities by scipy. Torque T = Km·(I − I0),
copper by 234.5 + T (Langsdorf, Theory of Alternating-Current Machinery, ex. 1-15), ferrite
−0.20 %/K (Modelica Standard Library, hard magnetic materials).
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.stats import norm

from motorfolio.schema.batch import Batch, Heading
from motorfolio.schema.convention import Commutation
from motorfolio.schema.reconcile.adjust import Fit
from motorfolio.schema.reconcile.causes import CODE, shape, static_scores
from motorfolio.schema.reconcile.evidence import Evidence, TableEvidence, transpositions
from motorfolio.schema.reconcile.model import FIGURES, INDEX, UNKNOWNS, F, P
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.suspects import LeftOut
from motorfolio.schema.vocabulary import quantity

from .simulated_sheets import put
from .simulated_sheets import sheet as printed

BRUSHED, SERVO = Commutation.BRUSHED, Commutation.SINUSOIDAL


def evidence(batch: Batch, **unknowns: float) -> Evidence:
    """With a first fit in which the unknowns have these values, 1 where not told."""
    x = np.zeros((len(batch), P))
    for name, value in unknowns.items():
        x[:, UNKNOWNS.index(name)] = math.log(value)
    fitted = Fit(x, np.zeros((len(batch), P, P)), np.zeros(len(batch)))
    return Evidence(batch, observe(batch), fitted)


def score(e: Evidence, cause: str, key: str, log_ratio: float, sd: float, motor: int = 0) -> float:
    found = e.scores(np.array([motor]), np.array([INDEX[key]]), np.array([log_ratio]),
                     np.array([sd]))  # fmt: skip
    return float(found[0, CODE[cause]])


# ---- digits


@pytest.mark.parametrize(
    ("text", "others"),
    [
        ("254", ["524", "245"]),
        ("2.54", ["5.24", "2.45"]),
        ("2,54 A", ["5.24", "2.45"]),
        ("1 234", ["2134", "1324", "1243"]),
        ("about 10.50", ["01.50", "15.00", "10.05"]),
        ("1224", ["2124", "1242"]),
        ("7", []),
        ("12 (34)", ["21"]),
        ("105-320", ["015", "150"]),
    ],
)
def test_neighbouring_digits_exchanged(text: str, others: list[str]) -> None:
    first = "10.50" if "10.50" in text else "".join(c for c in text.split("(")[0].split("-")[0]
                                                    if c.isdigit() or c in ".,")  # fmt: skip
    number = float(first.replace(",", "."))
    assert transpositions(text) == pytest.approx([math.log(number / float(o)) for o in others])


def test_each_exchange_of_digits_has_its_share() -> None:
    """254 printed where 245 or 524 is meant: one in twelve of all mistakes, by two."""
    batch = printed(stall_current=254.0)
    batch.figures["stall_current"].text[0] = "254"
    e = evidence(batch)
    for other in (245, 524):
        found = score(e, "digits-transposed", "stall_current", math.log(254 / other), 0.01)
        assert found == pytest.approx(math.log(0.08 / 2) + norm.logpdf(0, scale=0.01))
        beside = score(e, "digits-transposed", "stall_current", math.log(254 / other) + 0.015, 0.01)
        assert beside == pytest.approx(math.log(0.08 / 2) + norm.logpdf(0.015, scale=0.01))
    assert score(e, "digits-transposed", "stall_current", math.log(2), 0.01) == -math.inf
    # the same ratio the other way round is another mistake
    assert score(e, "digits-transposed", "stall_current", math.log(524 / 254), 0.01) == -math.inf


# ---- friction


@pytest.mark.parametrize("idle", [0.1, 0.3])
@pytest.mark.parametrize(
    ("key", "printed_idle"), [("torque_constant", True), ("nominal_torque", True),
                              ("torque_constant", False), ("nominal_torque", False)],
)  # fmt: skip
def test_friction_left_out_of_the_rated_point(key: str, printed_idle: bool, idle: float) -> None:
    """T_N/I_N for Km is low by 1 − I0/I_N, Km·I_N for T_N high by as much; I0/I_N as printed, where
    it is, and to 1 %."""
    figures = {key: 1.0}
    if printed_idle:
        figures |= {"no_load_current": 2 * idle, "nominal_current": 2.0}
        e = evidence(printed(**figures), no_load_current=0.01, nominal_current=7.0)
    else:
        e = evidence(printed(**figures), no_load_current=7.0 * idle, nominal_current=7.0)
    factor = math.log(1 - idle) * (1 if key == "torque_constant" else -1)
    for away in (0.0, 0.01, -0.02):
        found = score(e, "friction-ignored", key, factor + away, 0.008)
        spread = math.hypot(0.008, 0.01)
        by_hand = math.log(0.10) + norm.logpdf(away, scale=spread)
        assert found == pytest.approx(by_hand, abs=2e-3)
    assert score(e, "friction-ignored", key, -factor, 0.008) == -math.inf


def test_friction_left_out_of_the_stall_torque() -> None:
    """Km·Is for Km·(Is − I0): high by 1/(1 − I0·Ra/U), to half a per cent."""
    for idle in (0.06, 0.2):
        e = evidence(printed(stall_torque=1.0), voltage=24.0, resistance=1.5,
                     no_load_current=16 * idle)  # fmt: skip
        factor = -math.log(1 - idle)
        for away in (0.0, 0.01):
            found = score(e, "friction-ignored", "stall_torque", factor + away, 0.01)
            by_hand = math.log(0.08) + norm.logpdf(away, scale=math.hypot(0.01, 0.005))
            assert found == pytest.approx(by_hand)
        assert score(e, "friction-ignored", "stall_torque", -factor, 0.01) == -math.inf


def test_a_motor_that_idles_at_its_rating_has_a_bound() -> None:
    """I0 near or above I_N or Is: no logarithm of nothing; at most 98 % are friction (e^−0.02)."""
    bound = math.log1p(-math.exp(-0.02))
    e = evidence(printed(torque_constant=1.0, no_load_current=3.0, nominal_current=2.0))
    assert math.isfinite(score(e, "friction-ignored", "torque_constant", bound, 0.01))
    assert score(e, "friction-ignored", "torque_constant", bound + 0.5, 0.01) == -math.inf
    e = evidence(printed(stall_torque=1.0), voltage=1.0, resistance=2.0, no_load_current=3.0)
    assert math.isfinite(score(e, "friction-ignored", "stall_torque", -bound, 0.01))


def test_friction_is_left_out_of_no_other_figure() -> None:
    e = evidence(printed(motor_constant=1.0, no_load_current=0.2, nominal_current=2.0))
    for ratio in (0.9, 1 / 0.9):
        found = score(e, "friction-ignored", "motor_constant", math.log(ratio), 0.01)
        assert found == -math.inf


# ---- power


def test_electrical_input_printed_as_the_rated_power() -> None:
    """U·I_N over what the other figures imply; a quarter of such mistakes, to 2 %."""
    batch = printed(rated_power=120.0, nominal_voltage=24.0, nominal_current=5.0)
    e = evidence(batch, voltage=24.0, nominal_current=5.0)
    for output in (96.0, 80.0):
        found = score(e, "input-vs-output-power", "rated_power", math.log(120 / output), 0.01)
        by_hand = math.log(0.25) + norm.logpdf(0, scale=math.hypot(0.01, 0.02))
        assert found == pytest.approx(by_hand)
    # 110 W is neither the input nor, in the band of any efficiency, as likely
    e = evidence(printed(rated_power=100.0, nominal_voltage=24.0, nominal_current=5.0),
                 voltage=24.0, nominal_current=5.0)  # fmt: skip
    band = math.log(0.10 / math.log(3.0 / 1.05))
    found = score(e, "input-vs-output-power", "rated_power", math.log(100 / 50), 0.01)
    assert found == pytest.approx(band)


@pytest.mark.parametrize("missing", ["nominal_voltage", "nominal_current"])
def test_input_is_told_by_both_of_its_factors(missing: str) -> None:
    figures = {"rated_power": 120.0, "nominal_voltage": 24.0, "nominal_current": 5.0}
    del figures[missing]
    e = evidence(printed(**figures), voltage=24.0, nominal_current=5.0)
    band = math.log(0.10 / math.log(3.0 / 1.05))
    found = score(e, "input-vs-output-power", "rated_power", math.log(1.25), 0.01)
    assert found == pytest.approx(band)


# ---- temperature


@pytest.mark.parametrize(
    ("key", "reference", "hottest", "factor"),
    [
        ("terminal_resistance", 25.0, 155.0, 389.5 / 259.5),
        ("terminal_resistance", 20.0, 100.0, 334.5 / 254.5),
        ("torque_constant", 25.0, 125.0, 1 - 0.002 * 100),
        ("back_emf_constant", 20.0, 155.0, 1 - 0.002 * 135),
        ("torque_constant", 100.0, 25.0, 1 + 0.002 * 75),
    ],
)
def test_a_value_at_the_hottest_winding(key, reference, hottest, factor) -> None:
    batch = printed(**{key: 1.0}, maximum_winding_temperature=hottest)
    batch.magnet = ["ferrite"]
    batch.reference_temperature[:] = reference
    e = evidence(batch)
    for away in (0.0, 0.01):
        found = score(e, "hot-vs-cold", key, math.log(factor) + away, 0.005)
        by_hand = math.log(0.15) + norm.logpdf(away, scale=math.hypot(0.005, 0.02))
        assert found == pytest.approx(by_hand)


def test_a_winding_hardly_warmer_explains_nothing() -> None:
    """Less than 2 %: 6 K of copper are 2.3 %, 5 K 1.9 %."""
    for hottest, told in ((30.0, False), (31.0, True), (20.0, False), (19.0, True), (25.0, False)):
        e = evidence(printed(terminal_resistance=1.0, maximum_winding_temperature=hottest))
        factor = math.log((234.5 + hottest) / 259.5)
        found = score(e, "hot-vs-cold", "terminal_resistance", factor, 0.005)
        assert (found > 0) == told, hottest
    e = evidence(printed(terminal_resistance=1.0))
    assert score(e, "hot-vs-cold", "terminal_resistance", 0.05, 0.005) < 0


def test_other_figures_have_no_hottest_value() -> None:
    e = evidence(printed(motor_constant=1.0, maximum_winding_temperature=155.0))
    band = math.log(0.05 / math.log(0.97 / 0.78))
    found = score(e, "hot-vs-cold", "motor_constant", math.log(0.9), 0.005)
    assert found == pytest.approx(band)


# ---- the next winding


def neighbour(batch: Batch, key: str, motor: int) -> float:
    return score(evidence(batch), "neighbouring-column", key, math.log(1.5), 0.01, motor)


def test_the_next_winding_s_value_to_the_digits() -> None:
    """A third of the digits' deviation; one in seventeen mistakes (0.06)."""
    batch = printed(4, stall_current=[10.0, 10.001, 15.0, 10.001])
    batch.series = ["A", "A", "A", "B"]
    digits = 0.01 / 10 / math.sqrt(12)  # four digits are printed
    e = evidence(batch)
    gap = math.log(
        batch.figures["stall_current"].value[1] / batch.figures["stall_current"].value[0]
    )
    by_hand = math.log(0.06) + norm.logpdf(gap, scale=3e-4)
    assert digits / 3 < 3e-4
    for motor in (0, 1):
        found = score(e, "neighbouring-column", "stall_current", math.log(1.5), 0.01, motor)
        assert found == pytest.approx(by_hand)
    # another value, and another series
    assert neighbour(batch, "stall_current", 2) < -1000
    assert neighbour(batch, "stall_current", 3) == -math.inf
    batch.series[3] = "A"
    assert neighbour(batch, "stall_current", 3) < -1000


def test_few_digits_may_be_further_from_the_neighbour_s() -> None:
    batch = printed(2, stall_current=[15.0, 16.0])
    for array in (batch.figures["stall_current"].low, batch.figures["stall_current"].high):
        array[:] = [14.5, 15.5] if array[0] < 15 else [15.5, 16.5]
    found = neighbour(batch, "stall_current", 0)
    sd = 1 / 15 / math.sqrt(12) / 3
    assert found == pytest.approx(math.log(0.06) + norm.logpdf(math.log(15 / 16), scale=sd))


def test_a_neighbour_on_either_side_and_none_beyond_the_table() -> None:
    batch = printed(3, stall_current=[10.0, 15.0, 10.0])
    assert neighbour(batch, "stall_current", 0) < -1000
    assert neighbour(batch, "stall_current", 2) < -1000
    for row in (0, 2):
        put(batch, "stall_current", row, 15.0, 4)
        assert neighbour(batch, "stall_current", 1) > 0
        assert neighbour(batch, "stall_current", row) > 0
        put(batch, "stall_current", row, 10.0, 4)
    batch.figures["stall_current"].value[1] = math.nan
    assert neighbour(batch, "stall_current", 0) == -math.inf


def test_figures_that_windings_share_have_no_neighbour_s_value() -> None:
    """Inertia, friction, time constants and voltage are those of the size."""
    shared = {"rotor_inertia", "motor_constant", "mechanical_time_constant", "friction_torque",
              "electrical_time_constant", "nominal_voltage", "maximum_efficiency"}  # fmt: skip
    for key in (*shared, "torque_constant", "speed_torque_gradient"):
        assert (neighbour(printed(2, **{key: 0.5}), key, 0) == -math.inf) == (key in shared)


# ---- the table


def test_printed_numbers_are_in_their_own_units() -> None:
    batch = printed(2, no_load_current=[0.25, 0.5], torque_constant=0.031)
    batch.figures["no_load_current"].value[1] = 0.0
    e = TableEvidence(batch, observe(batch))
    assert np.exp(e.printed[:, INDEX["torque_constant"]]) == pytest.approx([31.0, 31.0])
    assert np.exp(e.printed[0, INDEX["no_load_current"]]) == pytest.approx(250.0)
    assert np.isnan(e.printed[1, INDEX["no_load_current"]])
    assert np.isfinite(e.printed).sum() == 3
    batch.headings = []
    bare = TableEvidence(batch, observe(batch))
    assert np.exp(bare.printed[0, INDEX["torque_constant"]]) == pytest.approx(0.031)
    assert bare.unit(0, INDEX["torque_constant"]) == ""


def test_where_and_how_a_figure_is_printed() -> None:
    batch = printed(2, no_load_current=[0.25, 0.5], torque_constant=0.031)
    e = TableEvidence(batch, observe(batch))
    assert e.unit(1, INDEX["no_load_current"]) == "mA"
    assert e.unit(1, INDEX["torque_constant"]) == "mNm/A"
    assert e.unit(1, INDEX["stall_torque"]) == ""
    assert e.place(1, INDEX["torque_constant"]) == (3, 2)
    assert e.place(0, INDEX["no_load_current"]) == (2, 1)
    assert e.text(1, INDEX["no_load_current"]) == "500.0"
    assert e.text(1, INDEX["stall_torque"]) == ""
    batch.figures["torque_constant"].text[0] = None
    assert e.text(0, INDEX["torque_constant"]) == ""


def test_a_value_is_implausible_beyond_twice_any_motor_s() -> None:
    """e^0.7 beyond the range of the vocabulary, up or down, printed or implied."""
    batch = printed(1, terminal_resistance=1.0, torque_constant=0.03)
    ra, km = INDEX["terminal_resistance"], INDEX["torque_constant"]
    low, high = (math.log(v) for v in quantity("terminal_resistance").plausible)
    for y, beyond in ((low - 0.69, False), (low - 0.71, True), (high + 0.69, False),
                      (high + 0.71, True), (low, False), (high, False)):  # fmt: skip
        problem = observe(batch)
        left = LeftOut(*(np.where(problem.present, 0.0, np.nan) for _ in range(3)))
        problem.y[0, ra] = y
        cost = TableEvidence(batch, problem).implausible(problem, left)
        assert cost.shape == (1, F)
        assert cost[0, km] == beyond  # what the other figure leaves
        assert cost[0, ra] == beyond  # as implied, since the ratio is one
        problem.y[0, ra] = 0.0
        left.log_ratio[0, ra] = -y
        cost = TableEvidence(batch, problem).implausible(problem, left)
        assert cost[0, ra] == beyond
        assert cost[0, km] == 0
    # of a figure that is not there, nothing is
    assert np.delete(cost[0], [ra, km]).tolist() == [0.0] * (F - 2)


def test_a_column_s_scores_are_those_of_its_first_motor() -> None:
    batch = printed(3, SERVO, torque_constant=0.03)
    batch.commutation[0] = int(BRUSHED)
    e = TableEvidence(batch, observe(batch))
    km = INDEX["torque_constant"]
    for motors in ([1, 0], [0, 2], [2]):
        kind = int(batch.commutation[motors[0]])
        wanted = static_scores(shape("torque_constant", kind, "mNm/A"), np.log([1.4]),
                               np.array([0.02]))[0]  # fmt: skip
        found = e.column_scores(km, np.array(motors), math.log(1.4), 0.02)
        assert found.tolist() == wanted.tolist()


def test_each_suspect_has_the_causes_of_its_figure_kind_and_heading() -> None:
    """Several at once, two headings of one figure among them, as each alone."""
    batch = printed(4, SERVO, torque_constant=[0.03, 0.031, 0.06, 0.09], mass=0.5,
                    motor_constant=0.1)  # fmt: skip
    batch.commutation[1] = int(BRUSHED)
    batch.headings.append(Heading("Kt", "torque_constant", "oz-in/A", factor=7.0616e-3))
    batch.figures["torque_constant"].heading[3] = len(batch.headings) - 1
    e = evidence(batch)
    motors = np.array([0, 3, 2, 1, 0])
    keys = ["torque_constant"] * 4 + ["motor_constant"]
    figures = np.array([INDEX[k] for k in keys])
    log_ratio, sd = np.log([1.41, 7.06, 1.41, 1.41, 1.41]), np.array([0.01, 0.02, 0.01, 0.01, 0.01])
    together = e.scores(motors, figures, log_ratio, sd)
    for i, (m, f) in enumerate(zip(motors.tolist(), figures.tolist(), strict=True)):
        one = slice(i, i + 1)
        alone = e.scores(motors[one], figures[one], log_ratio[one], sd[one])[0]
        assert together[i].tolist() == alone.tolist()
        form = shape(FIGURES[f], int(batch.commutation[m]), e.unit(m, f))
        static = static_scores(form, log_ratio[one], sd[one])[0]
        assert (alone >= static).all()
        for cause in ("peak-vs-rms", "ounce-inch-vs-millinewton-metre", "unexplained"):
            assert alone[CODE[cause]] == static[CODE[cause]]
