"""Constants from operating points and from the adjustment, against plain least squares.

T = Km·(I − I0), U = Ra·I + Km·ω; variances of least squares: σ²·(AᵀA)⁻¹ (textbook); the mean of
two values by their weights. Scatter of a point's current and voltage: common practice, no source.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.stats import t as student

from motorfolio.schema.batch import Point, empty_figures
from motorfolio.schema.convention import Commutation
from motorfolio.schema.motor import CANONICAL, CONSTANT_BASES, ConstantColumn
from motorfolio.schema.reconcile.adjust import Fit
from motorfolio.schema.reconcile.constants import constants, joined
from motorfolio.schema.reconcile.model import INDEX, UNKNOWNS, P
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.operating_points import fit_points
from motorfolio.schema.reconcile.run import reconcile

from .simulated_sheets import put, single

KM, RA, IDLE = 0.03, 1.2, 0.12


def points(*figures: dict[str, float], voltage: float | None = 24.0):
    batch = single()
    if voltage is not None:
        put(batch, "nominal_voltage", 0, voltage)
    batch.points = {0: [Point(str(i), f) for i, f in enumerate(figures)]}
    return batch


def at(current: float, torque: float = 1.0, speed: float = 1.0, voltage: float = 24.0):
    """On the lines, but for factors of torque and speed."""
    return {"torque": torque * KM * (current - IDLE), "current": current,
            "speed": speed * (voltage - RA * current) / KM}  # fmt: skip


# ---- operating points


def by_hand(some: list[dict[str, float]], voltage: float = 24.0):
    """Two straight lines by the textbook, and the mean of the two values of Km."""
    torque, current, speed = (
        np.array([p[k] for p in some]) for k in ("torque", "current", "speed")
    )
    u = np.full(len(some), voltage)
    out = []
    for design, target, scatter in (
        (np.stack([torque, np.ones(len(some))]).T, current, 0.05 * current.mean()),
        (np.stack([current, speed]).T, u, 0.02 * voltage),
    ):
        x = np.linalg.solve(design.T @ design, design.T @ target)
        left = target - design @ x
        freedom = len(some) - 2
        # two points leave nothing over: a fifth of the customary scatter at least
        variance = max((left**2).sum() / freedom if freedom else 0.0, (scatter / 5) ** 2)
        out.append((x, variance * np.linalg.inv(design.T @ design), left))
    (line, first, _), (volts, second, _) = out
    km = np.array([1 / line[0], volts[1]])
    sd = np.array([math.sqrt(first[0, 0]) / line[0] ** 2, math.sqrt(second[1, 1])])
    weight = 1 / np.maximum(sd, 1e-4 * km) ** 2
    mean = (km * weight).sum() / weight.sum()
    sds = (weight.sum() ** -0.5, math.sqrt(second[0, 0]), math.sqrt(first[1, 1]))
    misfit = max(
        np.abs((line[0] * torque + line[1]) / current - 1).max(),
        np.abs((u - volts[0] * current) / volts[1] - speed).max() / speed.max(),
    )
    return mean, volts[0], max(line[1], 0.0), sds, misfit


SCATTERED = [
    [at(1.0), at(5.0)],
    [at(1.0), at(5.0), at(9.0)],
    [at(1.0, 1.1), at(5.0, 0.93, 1.02), at(9.0, 1.02)],
    [at(1.0, speed=1.05), at(5.0, speed=0.9), at(9.0, speed=1.03)],
    [at(1.0, 1.3), at(2.0, 0.8, 0.9), at(7.0), at(12.0, 1.1, 1.1)],
    # the line of the current would meet the axis below naught
    [at(1.0, 1.35), at(5.0, 1.05), at(9.0)],
]


@pytest.mark.parametrize("some", SCATTERED)
def test_two_straight_lines(some: list[dict[str, float]]) -> None:
    found = fit_points(points(*some), 0)
    assert found is not None
    km, ra, idle, sds, misfit = by_hand(some)
    assert found.torque_constant == pytest.approx(km)
    assert found.resistance == pytest.approx(ra)
    assert found.no_load_current == pytest.approx(idle, abs=1e-12)
    assert found.sd == pytest.approx(sds)
    assert found.misfit == pytest.approx(misfit, abs=1e-12)


def test_a_point_s_names_and_what_goes_without_saying() -> None:
    """A nominal point's own names come before the plain ones; no torque at no load, no speed at
    stall; a point's own voltage before the sheet's."""
    plain = [at(1.0), at(5.0)]
    wanted = fit_points(points(*plain), 0)
    assert wanted is not None
    named = {f"nominal_{k}": v for k, v in plain[0].items()}
    wrong = {"torque": 9.0, "current": 99.0, "speed": 9.0}
    stall = {"stall_torque": KM * (20 - IDLE), "stall_current": 20.0}
    idle = {"no_load_speed": (24 - RA * IDLE) / KM, "no_load_current": IDLE}
    for some in (
        [wrong | named, plain[1]],
        [plain[0], plain[1] | {"stall_torque": 7.0, "stall_current": 7.0, "no_load_speed": 7.0}],
        [plain[0], stall],
        [plain[0], plain[1], stall],
        [idle, plain[1]],
        [{"no_load_speed": idle["no_load_speed"], "current": IDLE}, plain[1]],
        [plain[0], at(5.0, voltage=30.0) | {"nominal_voltage": 30.0}],
    ):
        found = fit_points(points(*some), 0)
        assert found is not None
        assert found.torque_constant == pytest.approx(KM, rel=1e-6)
        assert found.resistance == pytest.approx(RA, rel=1e-6)
        assert found.misfit == pytest.approx(0, abs=1e-9)
    # without a voltage of the sheet a point needs its own
    assert fit_points(points(*plain, voltage=None), 0) is None
    own = [p | {"nominal_voltage": 24.0} for p in plain]
    assert fit_points(points(*own, voltage=None), 0) is not None
    assert fit_points(points(own[0], plain[1], voltage=None), 0) is None


def test_torques_that_are_nearly_one_tell_nothing() -> None:
    """Less than 5 % of the largest between the least and the largest."""
    top = KM * (5.0 - IDLE)
    for share, told in ((0.94, True), (0.96, False)):
        other = share * top / KM + IDLE
        assert (fit_points(points(at(other), at(5.0)), 0) is not None) == told


def test_resistances_of_large_and_small_motors() -> None:
    """Any resistance above naught is one: 5 mΩ as well as 500 Ω."""
    for ra in (0.005, 0.5, 500.0):
        i = 10.0 / ra
        some = [{"torque": KM * x, "current": x, "speed": (24 - ra * x) / KM}
                for x in (0.1 * i, 0.3 * i)]  # fmt: skip
        found = fit_points(points(*some), 0)
        assert found is not None
        assert found.resistance == pytest.approx(ra, rel=1e-6)


@pytest.mark.parametrize("some", [[at(1.0, 1.02), at(5.0), at(9.0, 1.01)], [at(5.0), at(7.0)]])
def test_points_become_constants(some: list[dict[str, float]]) -> None:
    """Of a motor that publishes nothing else: two deviations either way, none below naught."""
    batch = points(*some)
    result = reconcile(batch)
    found = fit_points(batch, 0)
    assert found is not None
    values = (found.torque_constant, found.resistance, found.no_load_current)
    keys = ("torque_constant", "armature_resistance", "no_load_current")
    for key, value, sd in zip(keys, values, found.sd, strict=True):
        column = result.constants[key]
        assert column.value[0] == value
        assert column.high[0] == pytest.approx(value + 2 * sd)
        assert column.low[0] == pytest.approx(max(value - 2 * sd, 0.0))
        assert CONSTANT_BASES[column.basis[0]] == "derived"
        assert column.sources[column.source[0]] == (
            "nominal_torque", "nominal_speed", "nominal_current",
        )  # fmt: skip
    assert result.findings == []


def test_a_published_constant_comes_before_points() -> None:
    batch = points(at(1.0), at(5.0), at(9.0))
    put(batch, "terminal_resistance", 0, 2.0, 4)
    result = reconcile(batch)
    column = result.constants["armature_resistance"]
    assert column.value[0] == pytest.approx(2.0, rel=0.01)
    assert column.sources[column.source[0]] == ("terminal_resistance",)
    for key, value in (("torque_constant", KM), ("no_load_current", IDLE)):
        assert result.constants[key].value[0] == pytest.approx(value, rel=1e-6)


def test_an_idle_current_of_naught_is_none() -> None:
    result = reconcile(points(*SCATTERED[5]))
    assert math.isnan(result.constants["no_load_current"].value[0])
    assert math.isfinite(result.constants["torque_constant"].value[0])


@pytest.mark.parametrize(("off", "warned"), [(1.30, True), (1.05, False)])
def test_points_off_the_lines_by_a_tenth_are_a_warning(off: float, warned: bool) -> None:
    some = [at(1.0), at(5.0, off), at(9.0)]
    batch = points(*some)
    misfit = by_hand(some)[4]
    assert (misfit > 0.1) == warned
    findings = reconcile(batch).findings
    assert [(f.relation, f.severity) for f in findings] == [
        ("operating-points", "warning")
    ] * warned


# ---- constants of the adjustment


def fitted(x: dict[str, float], sd: dict[str, float], n: int = 1) -> Fit:
    """Unknowns of these values, each known by itself to so much."""
    values, covariance = np.zeros((n, P)), np.zeros((n, P, P))
    for name, value in x.items():
        values[:, UNKNOWNS.index(name)] = math.log(value)
    for i, name in enumerate(UNKNOWNS):
        covariance[:, i, i] = sd.get(name, 2.0) ** 2
    return Fit(values, covariance, np.zeros(n))


FIVE = {"torque_constant": 0.03, "resistance": 1.2, "inertia": 1e-5, "inductance": 3e-4,
        "no_load_current": 0.12, "viscous_damping": 2e-6}  # fmt: skip
PRINTED = {"torque_constant": 0.03, "terminal_resistance": 1.2, "rotor_inertia": 1e-5,
           "terminal_inductance": 3e-4, "no_load_current": 0.12,
           "friction_torque": 0.004}  # fmt: skip


def some_constants(sd: dict[str, float], reference: float = 25.0, magnet: str = "unknown"):
    batch = single()
    for key, value in PRINTED.items():
        put(batch, key, 0, value, 4)
    batch.reference_temperature[:] = reference
    batch.magnet = [magnet]
    return constants(batch, observe(batch), fitted(FIVE, sd))


def test_intervals_are_of_95_per_cent() -> None:
    """Student's t of 30 degrees of freedom, in the logarithm."""
    found = some_constants({"torque_constant": 0.02, "resistance": 0.05, "inertia": 0.1,
                            "inductance": 0.2, "no_load_current": 0.3})  # fmt: skip
    z = student.ppf(0.975, 30)
    wanted = {"torque_constant": (0.03, 0.02), "armature_resistance": (1.2, 0.05),
              "rotor_inertia": (1e-5, 0.1), "armature_inductance": (3e-4, 0.2),
              "no_load_current": (0.12, 0.3),
              "motor_constant": (0.03 / math.sqrt(1.2), math.hypot(0.02, 0.025))}  # fmt: skip
    assert set(found) == set(CANONICAL)
    for key, (value, sd) in wanted.items():
        assert found[key].value[0] == pytest.approx(value)
        assert found[key].high[0] == pytest.approx(value * math.exp(z * sd), rel=2e-3)
        assert found[key].low[0] == pytest.approx(value * math.exp(-z * sd), rel=2e-3)
    assert np.isnan(found["viscous_damping"].value[0])


def test_damping_is_given_where_it_is_published() -> None:
    batch = single()
    batch.figures["viscous_damping"] = column = empty_figures(1)
    column.value[:] = column.low[:] = column.high[:] = 2e-6
    found = constants(batch, observe(batch), fitted(FIVE, {"viscous_damping": 0.2}))
    damping = found["viscous_damping"]
    assert damping.value[0] == pytest.approx(2e-6)
    assert damping.high[0] == pytest.approx(2e-6 * math.exp(student.ppf(0.975, 30) * 0.2), rel=2e-3)
    assert CONSTANT_BASES[damping.basis[0]] == "published"


@pytest.mark.parametrize(("sd", "given"), [(0.34, True), (0.36, False)])
def test_a_constant_known_to_a_third(sd: float, given: bool) -> None:
    found = some_constants({"rotor_inertia": 0.01, "inertia": sd})["rotor_inertia"]
    assert math.isfinite(found.value[0]) == given
    assert found.basis[0] == (CONSTANT_BASES.index("published") if given else -1)
    assert math.isfinite(found.low[0]) == math.isfinite(found.high[0]) == given


@pytest.mark.parametrize("magnet", ["ferrite", "unknown"])
@pytest.mark.parametrize("reference", [20.0, 60.0])
def test_constants_are_of_25_degrees(reference: float, magnet: str) -> None:
    """Copper by 234.5 + T (Langsdorf, ex. 1-15), ferrite −0.20 %/K."""
    sd = dict.fromkeys(FIVE, 0.02)
    plain, found = some_constants(sd), some_constants(sd, reference, magnet)
    copper = 259.5 / (234.5 + reference)
    flux = 1 - 0.002 * (25 - reference) * (magnet == "ferrite")
    factors = {"armature_resistance": copper, "torque_constant": flux,
               "motor_constant": flux / math.sqrt(copper)}  # fmt: skip
    for key in ("torque_constant", "armature_resistance", "motor_constant", "rotor_inertia",
                "armature_inductance", "no_load_current"):  # fmt: skip
        for name in ("value", "low", "high"):
            ratio = getattr(found[key], name)[0] / getattr(plain[key], name)[0]
            assert ratio == pytest.approx(factors.get(key, 1.0)), (key, name)


def test_a_source_moves_its_constant_by_three_per_cent() -> None:
    """Of its own movement: gain is covariance over the figure's variance."""
    batch = single()
    put(batch, "torque_constant", 0, 0.03, 4)
    put(batch, "back_emf_constant", 0, 0.03, 4)
    problem = observe(batch)
    km = INDEX["torque_constant"]
    for gain, named in ((0.028, False), (0.032, True)):
        f = fitted({"torque_constant": 0.03}, {"torque_constant": math.sqrt(gain) * 0.01})
        problem.digits[:], problem.scatter[:] = 0.0, 0.01
        problem.scatter[0, INDEX["back_emf_constant"]] = 0.005
        column = constants(batch, problem, f)["torque_constant"]
        sources = column.sources[column.source[0]]
        assert ("torque_constant" in sources) == named
        assert "back_emf_constant" in sources
        assert CONSTANT_BASES[column.basis[0]] == ("reconciled" if named else "published")
        problem.present[0, km] = False
        column = constants(batch, problem, f)["torque_constant"]
        assert column.sources[column.source[0]] == ("back_emf_constant",)
        problem.present[0, km] = True


def test_palettes_of_portions_become_one() -> None:
    def part(sources: list[tuple[str, ...]], source: list[int], start: float):
        n = len(source)
        value = start + np.arange(n)
        column = ConstantColumn(value, value - 0.5, value + 0.5, np.arange(n, dtype=np.int8),
                                sources, np.array(source, dtype=np.int32))  # fmt: skip
        return dict.fromkeys(CANONICAL, column)

    one = part([("a",), ("b", "c")], [1, 0, 1], 1.0)
    two = part([("d",), ("b", "c"), ("a",)], [0, 1, 2, 0], 11.0)
    whole = joined([one, two])["torque_constant"]
    assert whole.sources == [("a",), ("b", "c"), ("d",)]
    assert whole.source.tolist() == [1, 0, 1, 2, 1, 0, 2]
    assert whole.source.dtype == np.int32
    assert whole.value.tolist() == [1, 2, 3, 11, 12, 13, 14]
    assert whole.low.tolist() == [0.5, 1.5, 2.5, 10.5, 11.5, 12.5, 13.5]
    assert whole.high.tolist() == [1.5, 2.5, 3.5, 11.5, 12.5, 13.5, 14.5]
    assert whole.basis.tolist() == [0, 1, 2, 0, 1, 2, 3]


@pytest.mark.parametrize("kind", list(Commutation))
def test_no_entries_have_no_constants(kind: Commutation) -> None:
    result = reconcile(single(kind, 0))
    assert result.findings == []
    assert {len(c.value) for c in result.constants.values()} == {0}
