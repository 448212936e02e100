"""What several suspicions have in common: from which number on, and which of them."""

from __future__ import annotations

import math

import pytest

from motorfolio.schema.reconcile.merge import exchanged_neighbours, shared_causes, shared_faults
from motorfolio.schema.reconcile.model import FIGURES

from .made_up_suspicions import printed, suspicion
from .simulated_sheets import put, single

# ---- neighbours exchanged


@pytest.mark.parametrize(("off", "led"), [(2.4, True), (-2.4, True), (2.6, False), (-2.6, False)])
@pytest.mark.parametrize("which", [0, 1])
def test_neighbours_have_each_other_s_value_within_two_and_a_half_deviations(
    which: int, off: float, led: bool
) -> None:
    """By the larger of their two deviations."""
    batch = printed("stall_current", 1.0, 1.5)
    for sds in ((0.04, 0.01), (0.01, 0.04)):
        pair = [suspicion(0, "stall_current", 1 / 1.5, sd=sds[0]),
                suspicion(1, "stall_current", 1.5, sd=sds[1])]  # fmt: skip
        pair[which].log_ratio += off * 0.04
        exchanged_neighbours(batch, pair)
        assert {s.causes[0] for s in pair} == {"neighbouring-column" if led else "unexplained"}


def test_just_two_and_a_half_deviations_are_too_many() -> None:
    batch = printed("stall_current", 1.0, 1.0)
    for off in ((0.1, 0.0), (0.0, -0.1), (0.0, 0.1)):
        pair = [suspicion(0, "stall_current", 1.0, sd=0.04),
                suspicion(1, "stall_current", 1.0, sd=0.04)]  # fmt: skip
        pair[0].log_ratio, pair[1].log_ratio = off
        exchanged_neighbours(batch, pair)
        assert {s.causes[0] for s in pair} == {"unexplained"}


def test_a_suspicion_without_a_neighbour_ends_no_search() -> None:
    """A pair is found after one without a neighbour, and after one of another series."""
    batch = printed("stall_current", 3.0, 1.0, 4.0, 1.0, 1.5)
    batch.series = ["A", "B", "A", "A", "A"]
    alone = [suspicion(0, "stall_current", 3.0), suspicion(1, "stall_current", 1 / 3)]
    pair = [suspicion(3, "stall_current", 1 / 1.5), suspicion(4, "stall_current", 1.5)]
    exchanged_neighbours(batch, [*alone, *pair])
    assert [s.causes[0] for s in alone] == ["unexplained"] * 2
    assert [s.causes[0] for s in pair] == ["neighbouring-column"] * 2


def test_motors_of_no_series_are_neighbours() -> None:
    batch = printed("stall_current", 1.0, 1.5)
    batch.series = [None, None]
    pair = [suspicion(0, "stall_current", 1 / 1.5), suspicion(1, "stall_current", 1.5)]
    exchanged_neighbours(batch, pair)
    assert [s.causes for s in pair] == [("neighbouring-column",)] * 2


# ---- one cause of several figures


def stalls(*causes: tuple[str, ...]) -> list:
    keys = ("stall_torque", "stall_current")
    return [suspicion(2, key, 0.2, own) for key, own in zip(keys, causes, strict=True)]


def test_both_figures_of_the_stall_must_allow_the_continuous_one() -> None:
    both = stalls(("power-of-ten", "continuous-stall"), ("continuous-stall",))
    shared_causes(both)
    assert [s.causes[0] for s in both] == ["continuous-stall"] * 2
    one = stalls(("power-of-ten", "continuous-stall"), ("power-of-ten",))
    shared_causes(one)
    assert [s.causes for s in one] == [("power-of-ten", "continuous-stall"), ("power-of-ten",)]


def test_one_figure_of_the_stall_beside_another_is_no_continuous_stall() -> None:
    causes = ("power-of-ten", "continuous-stall")
    for key in ("stall_torque", "stall_current"):
        pair = [suspicion(0, key, 0.2, causes), suspicion(0, "nominal_speed", 0.2, causes)]
        shared_causes(pair)
        assert [s.causes for s in pair] == [causes] * 2


def test_other_motors_are_looked_at_after_one_with_one_suspicion() -> None:
    alone = suspicion(7, "rotor_inertia", 10.0)
    both = stalls(("power-of-ten", "continuous-stall"), ("continuous-stall",))
    shared_causes([alone, *both])
    assert [s.causes[0] for s in both] == ["continuous-stall"] * 2
    assert alone.causes == ("unexplained",)


@pytest.mark.parametrize(("ratio", "geared"), [
    (2.30, True), (2.15, False), (1 / 2.3, False),
])  # fmt: skip
def test_a_gear_is_of_more_than_about_two_to_one(ratio: float, geared: bool) -> None:
    """Its ratio's logarithm above 0.8: gears of less are rare (common practice, no source)."""
    both = [suspicion(1, "nominal_torque", ratio), suspicion(1, "peak_torque", ratio)]
    shared_causes(both)
    assert {s.causes[0] for s in both} == {"gear-output-side" if geared else "unexplained"}


@pytest.mark.parametrize(("sds", "apart", "geared"), [
    ((0.04, 0.01), 0.135, True), ((0.01, 0.04), 0.135, True), ((0.04, 0.01), 0.145, False),
    ((0.001, 0.001), 0.021, True), ((0.001, 0.001), 0.025, False),
])  # fmt: skip
def test_torques_of_a_gear_agree_within_three_of_the_larger_deviation(sds, apart, geared) -> None:
    """And 0.02 in the logarithm besides."""
    both = [suspicion(1, "nominal_torque", 5.0, sd=sds[0]),
            suspicion(1, "stall_torque", 5.0 * math.exp(apart), sd=sds[1])]  # fmt: skip
    shared_causes(both)
    assert {s.causes[0] for s in both} == {"gear-output-side" if geared else "unexplained"}


def test_a_gear_is_of_torques_and_of_two_of_them() -> None:
    one = [suspicion(1, "nominal_torque", 5.0), suspicion(1, "rotor_inertia", 5.0)]
    shared_causes(one)
    assert [s.causes[0] for s in one] == ["unexplained"] * 2
    some = [suspicion(1, "nominal_torque", 5.0), suspicion(1, "nominal_speed", 5.0),
            suspicion(1, "stall_torque", 5.0), suspicion(1, "peak_torque", 0.2),
            suspicion(1, "friction_torque", 5.0)]  # fmt: skip
    shared_causes(some)
    gear, none = "gear-output-side", "unexplained"
    assert [s.causes[0] for s in some] == [gear, none, gear, none, gear]


def test_a_gear_takes_the_place_of_a_chance_as_the_first_cause_only() -> None:
    """That one ratio is in two torques makes exchanged digits unlikely, no power of ten."""
    both = [suspicion(1, "nominal_torque", 10.0, ("power-of-ten", "digits-transposed")),
            suspicion(1, "stall_torque", 10.0, ("digits-transposed", "power-of-ten"))]  # fmt: skip
    shared_causes(both)
    assert both[0].causes == ("power-of-ten", "digits-transposed")
    assert both[1].causes == ("gear-output-side", "digits-transposed", "power-of-ten")


# ---- one mistake of a column


def tens(n: int, **more) -> list:
    return [suspicion(m, "stall_torque", 10.0, ("power-of-ten",), **more) for m in range(n)]


@pytest.mark.parametrize(("given", "wrong", "merged"), [
    (1, 1, False), (2, 2, True), (2, 1, False), (4, 3, True), (3, 2, False), (10, 7, True),
    (10, 6, False),
])  # fmt: skip
def test_a_column_s_mistake_is_of_two_motors_and_of_seven_in_ten(given, wrong, merged) -> None:
    found, left = shared_faults(printed("stall_torque", *[1.0] * given), tens(wrong))
    assert len(found) == merged
    assert len(left) == (0 if merged else wrong)


def test_motors_without_the_figure_do_not_count() -> None:
    batch = single(n=6)
    for row in (1, 3):
        put(batch, "stall_torque", row, 1.0)
    two = [suspicion(m, "stall_torque", 10.0) for m in (3, 1)]
    ((_, motors),), left = shared_faults(batch, two)
    assert (motors.tolist(), left) == ([1, 3], [])


@pytest.mark.parametrize(("sd", "off", "alike"), [
    (0.04, 0.125, True), (0.04, 0.135, False), (0.04, -0.125, True), (0.04, -0.135, False),
    (0.001, 0.012, True), (0.001, 0.014, False),
])  # fmt: skip
def test_a_ratio_is_the_column_s_within_three_deviations(
    sd: float, off: float, alike: bool
) -> None:
    """And 0.01 in the logarithm besides; about the median of all."""
    five = tens(5, sd=sd)
    five[2].log_ratio += off
    ((fault, motors),), left = shared_faults(printed("stall_torque", *[1.0] * 5), five)
    assert fault.log_ratio == pytest.approx(math.log(10))
    assert motors.tolist() == ([0, 1, 2, 3, 4] if alike else [0, 1, 3, 4])
    assert left == ([] if alike else [five[2]])


def test_a_column_s_deviations_are_medians_and_its_cause_the_clearest_motor_s() -> None:
    some = [suspicion(m, "stall_torque", 10.0, (cause,), sd=sd, implied_sd=2 * sd, saved=saved,
                      rivals=rivals)
            for m, cause, sd, saved, rivals in (
                (0, "power-of-ten", 0.01, 50.0, (9, 4)), (1, "peak-vs-rms", 0.02, 70.0, (4, 9)),
                (2, "power-of-ten", 0.04, 60.0, (9, 4, 2)))]  # fmt: skip
    ((fault, _),), _ = shared_faults(printed("stall_torque", 1.0, 1.0, 1.0), some)
    assert (fault.sd, fault.implied_sd) == (0.02, 0.04)
    assert fault.causes == ("peak-vs-rms",)
    assert fault.rivals == (4, 9)
    for s in some:
        s.causes = ("digits-transposed", "neighbouring-column")
    ((fault, _),), _ = shared_faults(printed("stall_torque", 1.0, 1.0, 1.0), some)
    assert fault.causes == ("unexplained",)


def test_a_column_is_found_after_one_that_is_none() -> None:
    batch = printed("stall_torque", *[1.0] * 3)
    for row in range(3):
        put(batch, "nominal_speed", row, 100.0)
    none = [suspicion(m, "nominal_speed", r) for m, r in enumerate((2.0, 5.0, 9.0))]
    ((fault, motors),), left = shared_faults(batch, [*none, *tens(3)])
    assert (FIGURES[fault.figure], motors.tolist(), left) == ("stall_torque", [0, 1, 2], none)
