"""How a table is read and how much scatter it shows, on misfits put in by hand."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.stats import norm

from motorfolio.schema.reconcile import table
from motorfolio.schema.reconcile.model import INDEX, Readings
from motorfolio.schema.reconcile.problem import Problem

from .made_up_suspicions import problem

ALL = ("stall_torque", "maximum_power", "nominal_speed")
FIELDS = {
    "stall_torque": "stall_torque_net",
    "maximum_power": "maximum_power_electrical",
    "nominal_speed": "nominal_speed_hot",
}
DEFAULT = Readings()

Loss = Callable[[Problem], np.ndarray]


def read(monkeypatch: pytest.MonkeyPatch, part: Problem, loss: Loss) -> Readings:
    """The readings found when a motor's robust loss is as told."""

    def misfit(some: Problem, robust: bool = False) -> tuple[np.ndarray, np.ndarray]:
        assert robust
        return loss(some).astype(float), np.zeros(len(some))

    monkeypatch.setattr(table, "misfit", misfit)
    return table.readings(part)


def changed(some: Problem, key: str) -> bool:
    return getattr(some.readings, FIELDS[key]) != getattr(DEFAULT, FIELDS[key])


@pytest.mark.parametrize("key", ALL)
@pytest.mark.parametrize(("gain", "chosen"), [(1.9, False), (2.0, False), (2.1, True)])
def test_another_reading_must_fit_better_by_two(monkeypatch, key, gain, chosen) -> None:
    found = read(
        monkeypatch, problem(1, key), lambda p: np.full(len(p), 9 - gain * changed(p, key))
    )
    for other in ALL:
        same = getattr(found, FIELDS[other]) == getattr(DEFAULT, FIELDS[other])
        assert same == (other != key or not chosen)


@pytest.mark.parametrize(("against", "chosen"), [(2.9, True), (3.1, False), (900.0, False)])
def test_no_motor_says_more_than_five_for_a_reading(monkeypatch, against, chosen) -> None:
    def loss(p: Problem) -> np.ndarray:
        return np.where(changed(p, "stall_torque"), [10.0, 10.0 + against], [900.0, 10.0])

    found = read(monkeypatch, problem(2, "stall_torque"), loss)
    assert found.stall_torque_net != chosen


@pytest.mark.parametrize(("gains", "chosen"), [
    ((5.0, 5.0, -900.0), True), ((5.0, 1.9, -900.0), False), ((5.0, 2.1, -900.0), True),
])  # fmt: skip
def test_nor_more_than_five_against_it(monkeypatch, gains, chosen) -> None:
    def loss(p: Problem) -> np.ndarray:
        return 1000.0 - changed(p, "stall_torque") * np.array(gains)

    found = read(monkeypatch, problem(3, "stall_torque"), loss)
    assert found.stall_torque_net != chosen


def test_only_motors_that_print_the_figure_say_how_it_is_meant(monkeypatch) -> None:
    part = problem(3, *ALL)
    part.present[0, INDEX["stall_torque"]] = False
    part.present[2, INDEX["maximum_power"]] = False
    part.y[:, INDEX["nominal_voltage"]] = (1.0, 2.0, 3.0)  # tells who it is
    asked = []

    def loss(p: Problem) -> np.ndarray:
        who = p.y[:, INDEX["nominal_voltage"]].tolist()
        asked.append((who, [key for key in ALL if changed(p, key)]))
        return np.full(len(p), 10.0)

    assert read(monkeypatch, part, loss) == DEFAULT
    assert asked == [
        ([1.0, 2.0, 3.0], []), ([2.0, 3.0], ["stall_torque"]), ([1.0, 2.0], ["maximum_power"]),
        ([1.0, 2.0, 3.0], ["nominal_speed"]),
    ]  # fmt: skip


@pytest.mark.parametrize("key", ["nominal_speed", "rated_power", "rated_efficiency"])
def test_each_figure_with_a_nominal_speed_in_it_tells_whether_it_is_hot(monkeypatch, key) -> None:
    found = read(
        monkeypatch, problem(1, key),
        lambda p: np.full(len(p), 9.0 - 3 * changed(p, "nominal_speed")),
    )  # fmt: skip
    assert found == Readings(nominal_speed_hot=True)


def test_readings_are_decided_one_upon_another(monkeypatch) -> None:
    """The second must better the first by two, not the customary one."""

    def loss(gain: float) -> Loss:
        def told(p: Problem) -> np.ndarray:
            both = changed(p, "stall_torque") and changed(p, "maximum_power")
            return np.full(len(p), 9 - 4 * changed(p, "stall_torque") - gain * both)

        return told

    part = problem(1, "stall_torque", "maximum_power")
    assert read(monkeypatch, part, loss(1.9)) == Readings(stall_torque_net=False)
    assert read(monkeypatch, part, loss(2.1)) == Readings(False, False, True)


def test_sinusoidal_motors_are_not_asked(monkeypatch) -> None:
    part = problem(2, *ALL)
    part.servo[:] = (True, False)
    part.y[:, INDEX["nominal_voltage"]] = (1.0, 2.0)

    def loss(p: Problem) -> np.ndarray:
        assert (p.y[:, INDEX["nominal_voltage"]] == 2.0).all()
        return np.full(len(p), 9.0)

    assert read(monkeypatch, part, loss) == DEFAULT
    part.servo[:] = True
    assert read(monkeypatch, part, loss) == DEFAULT


# ---- scatter

GRID = (0.2, 0.35, 0.5, 0.7, 0.85, 1.0, 1.2, 1.45)
CUT = 3.0


def scale(
    monkeypatch: pytest.MonkeyPatch, part: Problem, chi2: Loss, log_covariance: Loss
) -> float:
    def misfit(some: Problem, robust: bool = False) -> tuple[np.ndarray, np.ndarray]:
        assert robust
        assert len(some.scale) == len(some)
        assert not some.present[:, INDEX["peak_torque"]].any()
        return chi2(some), log_covariance(some)

    monkeypatch.setattr(table, "misfit", misfit)
    kept = part.present.copy()
    found = table.scale(part)
    assert (part.present == kept).all()
    return found


@pytest.mark.parametrize("true", GRID)
def test_a_scatter_from_a_fifth_to_half_as_much_again_is_told(monkeypatch, true) -> None:
    found = scale(monkeypatch, problem(3, "torque_constant"),
                  lambda p: 1e5 * np.log(p.scale / true) ** 2,
                  lambda p: np.zeros(len(p)))  # fmt: skip
    assert found == pytest.approx(true)


def test_the_scatter_is_the_mean_square_of_what_is_likely(monkeypatch) -> None:
    """Written out: a normal density of every figure and law, integrated over the unknowns, times a
    lognormal prior of sd 0.3. The Cauchy loss of normal deviates falls short of their squares by
    its mean (scipy.integrate.quad)."""
    part = problem(3, "torque_constant", "rotor_inertia", "peak_torque")
    part.present[1, INDEX["rotor_inertia"]] = False
    part.digits[:], part.scatter[:] = 0.01, 0.03
    part.digits[:, INDEX["rotor_inertia"]] = 0.05
    part.servo[:] = (False, False, True)
    part.bound[0, [0, 2]] = part.bound[1:, :] = True
    laws = 2 + 5 + 4  # that of the nominal speed only bounds a servo motor's
    square, lost = np.array([3.0, 1.5, 2.0]), np.array([1.0, 0.3, 0.5])
    found = scale(monkeypatch, part,
                  lambda p: np.tile(square, len(GRID)) / p.scale**2,
                  lambda p: np.tile(lost, len(GRID)) * np.log(p.scale))  # fmt: skip
    mean, _ = quad(lambda z: CUT**2 * math.log1p((z / CUT) ** 2) * norm.pdf(z), -12, 12)
    weights = []
    for s in GRID:
        log_likelihood = laws * -math.log(s)
        for m in range(3):
            log_likelihood -= 0.5 * square[m] / s**2 / mean
            log_likelihood += 0.5 * lost[m] * math.log(s)
            for digits in (0.01,) if m == 1 else (0.01, 0.05):
                log_likelihood -= math.log(math.hypot(digits, 0.03 * s))
        weights.append(math.exp(log_likelihood - 0.5 * (math.log(s) / 0.3) ** 2))
    expected = math.sqrt(sum(w * s * s for w, s in zip(weights, GRID, strict=True)) / sum(weights))
    assert found == pytest.approx(expected, rel=1e-4)


def test_figures_of_no_say_leave_the_scatter_where_it_was(monkeypatch) -> None:
    """Only the prior: its mean square about 1."""
    part = problem(2, "peak_torque")
    found = scale(monkeypatch, part, lambda p: np.zeros(len(p)), lambda p: np.zeros(len(p)))
    weights = [math.exp(-0.5 * (math.log(s) / 0.3) ** 2) for s in GRID]
    expected = sum(w * s * s for w, s in zip(weights, GRID, strict=True)) / sum(weights)
    assert found**2 == pytest.approx(expected)


def test_a_table_is_judged_by_two_hundred_and_forty_of_its_motors() -> None:
    assert table.sample(239).tolist() == list(range(239))
    assert table.sample(240).tolist() == list(range(240))
    spread = table.sample(10_000)
    assert spread.size == 240
    assert (spread[0], spread[-1]) == (0, 9_999)
    assert np.diff(spread).max() <= math.ceil(9_999 / 239)
