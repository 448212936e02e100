"""Mistakes whose size depends on the motor, put into simulated sheets and named again."""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.batch import empty_figures
from motorfolio.schema.convention import Commutation
from motorfolio.schema.operation.cycle import Cycle
from motorfolio.schema.operation.demand import Demand, Surroundings
from motorfolio.schema.operation.judge import judge
from motorfolio.schema.operation.machines import Machines
from motorfolio.schema.reconcile.adjust import fit
from motorfolio.schema.reconcile.model import FAMILY_ROWS, FIGURES, INDEX, UNKNOWNS, ridge
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.run import reconcile
from motorfolio.schema.reconcile.suspects import contradicts, leave_out, shortlist
from motorfolio.schema.written import percent

from .simulated_sheets import FULL, Sheet, make, put, single, spoil

BRUSHED = Commutation.BRUSHED
ROW = 2


def sheet(seed: int) -> Sheet:
    return make(np.random.default_rng(seed), 6, BRUSHED, FULL, scatter=0.3)


def only_alarm(s: Sheet):
    (finding,) = [f for f in reconcile(s.batch).findings if f.severity != "note"]
    assert finding.part_number == f"X{ROW}"
    return finding


@pytest.mark.parametrize("seed", range(4))
def test_friction_left_out_of_the_torque_constant(seed: int) -> None:
    """T_N/I_N in place of Km: smaller by I0/I_N (torque balance T = Km·(I − I0))."""
    s = sheet(seed)
    g = {key: float(values[ROW]) for key, values in s.figures.items()}
    put(s.batch, "torque_constant", ROW, g["nominal_torque"] / g["nominal_current"])
    found = only_alarm(s)
    assert (found.suspect, found.cause) == ("torque_constant", "friction-ignored")
    idle = g["no_load_current"] / g["nominal_current"]
    assert found.ratio == pytest.approx(1 - idle, abs=0.02)


@pytest.mark.parametrize("seed", range(4))
def test_electrical_for_mechanical_power(seed: int) -> None:
    """U·I_N in place of T_N·n_N: greater by one over the efficiency."""
    s = sheet(seed)
    g = {key: float(values[ROW]) for key, values in s.figures.items()}
    taken = g["nominal_voltage"] * g["nominal_current"]
    put(s.batch, "rated_power", ROW, taken)
    found = only_alarm(s)
    assert (found.suspect, found.cause) == ("rated_power", "input-vs-output-power")
    given_ = g["nominal_torque"] * g["nominal_speed"]
    assert found.ratio == pytest.approx(taken / given_, rel=0.06)


@pytest.mark.parametrize("seed", range(4))
@pytest.mark.parametrize("hottest", [100.0, 155.0])
def test_a_resistance_at_the_hottest_winding(seed: int, hottest: float) -> None:
    """(234.5 + T)/(234.5 + 25) (Langsdorf, Theory of Alternating-Current Machinery, ex. 1-15)."""
    s = sheet(seed)
    s.batch.figures["maximum_winding_temperature"] = column = empty_figures(6)
    column.value[:] = column.low[:] = column.high[:] = hottest
    warm = (234.5 + hottest) / 259.5
    put(s.batch, "terminal_resistance", ROW, float(s.figures["terminal_resistance"][ROW]) * warm)
    found = only_alarm(s)
    assert (found.suspect, found.cause) == ("terminal_resistance", "hot-vs-cold")
    assert found.ratio == pytest.approx(warm, rel=0.06)


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_two_digits_exchanged(seed: int) -> None:
    s = sheet(seed)
    text = s.batch.figures["terminal_resistance"].text[ROW] or ""
    places = [k for k, sign in enumerate(text) if sign.isdigit()]
    signs = list(text)
    signs[places[0]], signs[places[1]] = signs[places[1]], signs[places[0]]
    wrong = "".join(signs)
    spoil(s.batch, "terminal_resistance", ROW, float(wrong) / float(text))
    s.batch.figures["terminal_resistance"].text[ROW] = wrong
    found = only_alarm(s)
    assert (found.suspect, found.cause) == ("terminal_resistance", "digits-transposed")
    assert found.implied is not None
    assert found.implied.value == pytest.approx(s.figures["terminal_resistance"][ROW], rel=0.06)


# ---- what the search for suspects relies on


def test_each_figure_left_out_is_a_fit_without_it() -> None:
    """Against the fits one by one; what a fit implies is the figure's own relation at its
    constants, here for those that are products of powers."""
    problem = observe(sheet(5).batch)
    left = leave_out(problem)
    for key in ("torque_constant", "stall_current", "speed_torque_gradient", "rotor_inertia"):
        figure = INDEX[key]
        for motor in (0, 3):
            part = problem.take(np.array([motor])).without(np.array([figure]))
            fitted = fit(part)
            assert left.chi2[motor, figure] == pytest.approx(fitted.chi2[0], rel=1e-6)
            x = dict(zip(UNKNOWNS, fitted.x[0], strict=True))
            implied = {"torque_constant": x["torque_constant"],
                       "stall_current": x["voltage"] - x["resistance"],
                       "speed_torque_gradient": x["resistance"] - 2 * x["torque_constant"],
                       "rotor_inertia": x["inertia"]}[key]  # fmt: skip
            expected = problem.y[motor, figure] - implied
            assert left.log_ratio[motor, figure] == pytest.approx(expected, abs=1e-6)
    absent = ~problem.present
    assert absent.any()
    assert np.isnan(left.chi2[absent]).all()


@pytest.mark.parametrize("seed", range(6))
def test_the_short_list_loses_no_fault(seed: int) -> None:
    """The best figure of all refits is among those that the linearised test hands on."""
    rng = np.random.default_rng(seed)
    s = sheet(seed)
    keys = ("torque_constant", "stall_torque", "no_load_speed", "terminal_resistance",
            "nominal_torque", "speed_constant")  # fmt: skip
    for row, key in enumerate(keys):
        spoil(s.batch, key, row, float(rng.choice([0.5, 1.4, 2.0, 10.0])))
    problem = observe(s.batch)
    base = fit(problem)
    left = leave_out(problem)
    listed = shortlist(problem)
    for row in range(6):
        best = int(np.nanargmin(left.chi2[row]))
        assert listed[row, best], FIGURES[best]
        assert contradicts(base.chi2, left)[row, best]
        assert FIGURES[best] == keys[row]


def test_what_no_figure_tells_keeps_its_prior() -> None:
    """Unknowns that no published figure reaches: prior mean and variance, uncorrelated."""
    batch = single()
    put(batch, "torque_constant", 0, 0.03)
    put(batch, "terminal_resistance", 0, 1.2)
    fitted = fit(observe(batch))
    mean, weight = ridge()
    for name in ("inertia", "inductance", "peak_current"):
        i = UNKNOWNS.index(name)
        assert fitted.x[0, i] == pytest.approx(mean[i])
        assert fitted.covariance[0, i, i] == pytest.approx(1 / weight[i])
        assert np.abs(np.delete(fitted.covariance[0, i], i)).max() < 1e-12
    i = UNKNOWNS.index("torque_constant")
    assert fitted.x[0, i] == pytest.approx(math.log(0.03), abs=1e-3)
    assert 0 < fitted.covariance[0, i, i] < 0.01
    assert len(FAMILY_ROWS) == 4


# ---- and two of operation and writing


def test_a_rated_current_in_a_cooler_ambient() -> None:
    """No temperature is known: (I/I_cont)², with magnets at the ambient as strong as they are."""
    m = Machines.of(torque_constant=1.0, armature_resistance=1.0, nominal_current=2.0,
                    rating_ambient=40.0, magnet_coefficient=-0.002)  # fmt: skip
    cycle = Cycle.from_points([(1.0, 0.0, 1.0)])
    for ambient in (5.0, 25.0, 40.0):
        flux = 1 - 0.002 * (ambient - 25)
        found = judge(m, Demand(cycle, surroundings=Surroundings(ambient, None, 0.8)))
        assert found.thermal[0, 0] == pytest.approx((1 / flux / 2) ** 2 / 0.8, rel=1e-9)
    hotter = judge(m, Demand(cycle, surroundings=Surroundings(45.0)))
    assert np.isnan(hotter.thermal[0, 0])


def test_shares_that_are_none() -> None:
    assert percent(None) == percent(math.nan) == "–"
    assert (percent(math.inf), percent(-math.inf)) == ("∞", "-∞")
    assert percent(0.1234, 1) == "12.3 %"
    assert (percent(0.05, signed=True), percent(0.05)) == ("+5 %", "5 %")


# ---- families


@pytest.mark.parametrize("seed", [9, 10])
@pytest.mark.parametrize(
    ("key", "factor", "cause"),
    [("rotor_inertia", 4.0, "inertia-convention"), ("terminal_inductance", 10.0, "power-of-ten"),
     ("terminal_resistance", 2.0, "unexplained"), ("torque_constant", 10.0, "power-of-ten")],
)  # fmt: skip
def test_the_other_windings_of_a_frame_tell(key, factor, cause, seed) -> None:
    """Motor constant, inertia and La/Ra are the frame's: what no relation of one motor shows, its
    family does."""
    keys = ("torque_constant", "terminal_resistance", "rotor_inertia", "terminal_inductance",
            "no_load_current", "nominal_voltage")  # fmt: skip
    s = make(np.random.default_rng(seed), 6, BRUSHED, keys)
    spoil(s.batch, key, ROW, factor)
    found = only_alarm(s)
    assert (found.suspect, found.cause) == (key, cause)
    assert found.relation == "family-" + key.replace("_", "-")
    assert found.ratio == pytest.approx(factor, rel=0.1)
    s.batch.series = [f"{row}" for row in range(6)]  # six frames of one winding
    assert [f for f in reconcile(s.batch).findings if f.severity != "note"] == []


def test_a_limit_below_the_rating_s_ambient_says_nothing() -> None:
    """The sheet's rated current holds up to a temperature that it starts from: no rise to go by."""
    m = Machines.of(
        torque_constant=1.0, armature_resistance=1.0, nominal_current=2.0, rating_ambient=60.0,
        maximum_winding_temperature=[50.0, 60.0, 100.0],
    )  # fmt: skip
    found = judge(m, Demand(Cycle.from_points([(1.0, 0.0, 1.0)])))
    assert np.isnan(found.winding_temperature[:2, 0]).all()
    assert found.winding_temperature[2, 0] == pytest.approx(25 + 40 / 4)
