"""How a table's suspicions become its findings: their order, severity, and who is doubted.

24 V, 1.2 Ω: Is = U/Ra = 20 A; the figures by hand, the suspicions as the adjustment hands them on.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from motorfolio.schema.batch import Batch
from motorfolio.schema.convention import Commutation
from motorfolio.schema.motor import Reconciled
from motorfolio.schema.reconcile import run
from motorfolio.schema.reconcile.adjust import fit
from motorfolio.schema.reconcile.columns import ColumnFault
from motorfolio.schema.reconcile.explain import Narrator
from motorfolio.schema.reconcile.families import observe_families
from motorfolio.schema.reconcile.model import INDEX, Readings
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.suspects import Suspicion, doubtful

from .simulated_sheets import FULL, SERVO, make, put, single, spoil

BRUSHED = Commutation.BRUSHED


def sheet(n: int, **figures: float | list[float]) -> Batch:
    batch = single(n=n)
    for key, values in figures.items():
        for row, value in enumerate(np.broadcast_to(values, n).tolist()):
            put(batch, key, row, value, 4)
    return batch


def suspicion(motor: int, key: str, ratio: float, causes=("unexplained",), **more) -> Suspicion:
    rivals = tuple(INDEX[k] for k in more.pop("rivals", ()))
    partner = INDEX[more.pop("partner")] if "partner" in more else None
    return Suspicion(motor, INDEX[key], rivals, math.log(ratio), 0.01, 0.01, 100.0, causes, partner)


def column(key: str, ratio: float, causes=("unexplained",)) -> ColumnFault:
    return ColumnFault(INDEX[key], (), math.log(ratio), 0.01, 0.01, causes)


def report(batch: Batch, some: list[Suspicion], faults: list[ColumnFault] | None = None):
    out = Reconciled(batch, {})
    table = run._Table(Readings(), 1.0, faults or [], [])
    run._report(out, Narrator(batch), table, some, np.zeros(len(batch), dtype=bool))
    assert len(out.findings) == len(out.finding_motor)
    return [(m, f.relation, f.severity) for m, f in
            zip(out.finding_motor, out.findings, strict=True)]  # fmt: skip


def sheet_of(n: int, **more: float | list[float]) -> Batch:
    """Stall currents of 22 A (10 % of scatter) below rated ones of 30 A: notes and warnings."""
    return sheet(n, nominal_voltage=24.0, terminal_resistance=1.2, stall_current=22.0,
                 nominal_current=30.0, **more)  # fmt: skip


NOTE = "within-customary-scatter"
ORDER = "nominal-current-below-stall-current"


def test_a_table_without_suspicions_has_its_direct_checks() -> None:
    assert report(sheet_of(2), []) == [
        (0, ORDER, "warning"), (1, ORDER, "warning"), (0, NOTE, "note"), (1, NOTE, "note"),
    ]  # fmt: skip


def test_a_suspect_motor_has_no_note_and_its_suspect_no_second_finding() -> None:
    """Nor have the rivals and the partner of an exchange; another figure's is of its own."""
    rest = [(0, ORDER, "warning"), (2, ORDER, "warning"), (0, NOTE, "note"), (2, NOTE, "note")]
    found = report(sheet_of(3), [suspicion(1, "stall_current", 2.0)])
    assert found == [(1, "stall-current", "error"), *rest]
    found = report(sheet_of(3), [suspicion(1, "terminal_resistance", 2.0,
                                           rivals=("stall_current",))])  # fmt: skip
    assert found == [(1, "stall-current", "error"), *rest]
    found = report(sheet_of(3), [suspicion(1, "terminal_resistance", 2.0, ("figures-swapped",),
                                           partner="nominal_current")])  # fmt: skip
    assert found == [(1, "stall-current", "error"), *rest]
    found = report(sheet_of(3), [suspicion(1, "terminal_resistance", 2.0)])
    assert sorted(found) == sorted([(1, "stall-current", "error"), (1, ORDER, "warning"), *rest])


def test_the_severity_is_by_ratio_and_cause() -> None:
    for ratio, causes, severity in (
        (1.12, ("unexplained", "peak-vs-rms"), "warning"), (1.2, ("unexplained",), "error"),
        (1.12, ("peak-vs-rms", "power-of-ten"), "error"),
    ):  # fmt: skip
        found = report(sheet_of(3), [suspicion(1, "stall_current", ratio, causes)])
        assert found[0] == (1, "stall-current", severity)


def test_most_of_a_column_is_said_once_and_first() -> None:
    """Of the motors that share it no other check looks at the figure, nor is scatter noted."""
    some = [suspicion(m, "stall_current", 2.0, ("peak-to-peak",)) for m in (3, 1, 2)]
    other = suspicion(0, "terminal_resistance", 3.0)
    found = report(sheet_of(4), [other, *some])
    assert found == [
        (1, "stall-current", "error"), (0, "stall-current", "error"), (0, ORDER, "warning"),
    ]  # fmt: skip


def test_a_whole_column_is_doubted_everywhere() -> None:
    batch = sheet_of(3)
    found = report(batch, [], [column("stall_current", 1.1)])
    assert found == [(0, "stall-current", "warning")]
    found = report(batch, [], [column("stall_current", 1.1, ("unexplained", "peak-vs-rms"))])
    assert found == [(0, "stall-current", "warning")]
    found = report(batch, [], [column("stall_current", 1.1, ("peak-vs-rms",))])
    assert found == [(0, "stall-current", "error")]
    found = report(batch, [], [column("stall_current", 1.3)])
    assert found == [(0, "stall-current", "error")]
    # a column that has no part in the order of figures
    found = report(batch, [suspicion(1, "nominal_current", 1.5)],
                   [column("terminal_resistance", 1.3)])  # fmt: skip
    assert found == [
        (0, "stall-current", "error"), (1, "nominal-torque", "error"), (0, ORDER, "warning"),
        (2, ORDER, "warning"),
    ]  # fmt: skip


def test_two_suspects_of_one_motor_show_no_relation_of_each_other() -> None:
    batch = sheet_of(2)
    out = Reconciled(batch, {})
    some = [suspicion(1, "stall_current", 2.0), suspicion(1, "terminal_resistance", 3.0)]
    run._report(out, Narrator(batch), run._Table(Readings(), 1.0, [], []), some,
                np.zeros(2, dtype=bool))  # fmt: skip
    for finding in out.findings[:2]:
        assert "Is = U/Ra" not in finding.message
        assert len(finding.figures) == 1


def test_other_direct_checks_reach_the_table() -> None:
    batch = sheet(6, mass=[0.5, 0.5, 0.5, 5.0, 0.5, 0.5], poles=8,
                  pole_pairs=[4, 4, 4, 4, 4, 8], motor_constant=1.0)  # fmt: skip
    batch.series = ["A"] * 6
    batch.repeats["motor_constant"] = [
        sheet(6, motor_constant=[1, 2, 1, 1, 1, 1]).figures.popitem()[1]
    ]
    out = Reconciled(batch, {})
    run._report(out, Narrator(batch), run._Table(Readings(), 1.0, [], []), [],
                np.ones(6, dtype=bool))  # fmt: skip
    found = [(m, f.relation) for m, f in zip(out.finding_motor, out.findings, strict=True)]
    assert found == [(5, "poles-pole-pairs"), (3, "family-mass"), (1, "given-twice")]


# ---- the adjustment without its suspects


def test_a_motor_is_adjusted_again_without_its_suspects() -> None:
    s = make(np.random.default_rng(4), 3, BRUSHED, FULL, scatter=0.3)
    spoil(s.batch, "torque_constant", 1, 1.3)
    problem = observe(s.batch)
    problem.family_sd[:] = 0.1
    problem.family[:] = 0.0
    base = fit(problem)
    before = base.x.copy()
    removed = np.zeros_like(problem.present)
    removed[1, INDEX["torque_constant"]] = True
    alone = fit(problem.take(np.array([1])).without(np.array([INDEX["torque_constant"]])))
    run._refit(problem, base, removed)
    assert base.x[[0, 2]] == pytest.approx(before[[0, 2]])
    assert base.x[1] == pytest.approx(alone.x[0])
    assert base.covariance[1] == pytest.approx(alone.covariance[0])
    assert problem.present.sum() == observe(s.batch).present.sum() - 1
    assert not problem.present[1, INDEX["torque_constant"]]
    assert np.isinf(problem.family_sd).all()


def test_the_family_counts_where_it_matters() -> None:
    """A motor that stands off its size is fitted again with what the size shares."""
    n = 5
    s = make(np.random.default_rng(4), n, BRUSHED, FULL, scatter=0.3)
    for row in range(n):
        s.batch.figures["mechanical_time_constant"].value[row] = math.nan
    spoil(s.batch, "rotor_inertia", 2, 4.0)
    problem = observe(s.batch)
    base = fit(problem)
    unsure = doubtful(problem, base)
    assert not unsure[2]
    judged, again = run._with_family(problem, base, unsure)
    assert judged is base  # no family yet
    assert again is unsure
    named = np.ones(n, dtype=bool)
    assert observe_families(problem, base, unsure, np.zeros(n, dtype=np.int64), named).all()
    judged, again = run._with_family(problem, base, unsure)
    assert again.tolist() == [False, False, True, False, False]
    alone = fit(problem.take(np.array([2])))
    assert judged.x[2] == pytest.approx(alone.x[0])
    assert judged.covariance[2] == pytest.approx(alone.covariance[0])
    assert judged.chi2[2] == pytest.approx(alone.chi2[0])
    assert judged.chi2[2] > base.chi2[2] + 100
    assert judged.x[0].tolist() == base.x[0].tolist()


def test_nobody_in_doubt_is_fitted_once() -> None:
    s = make(np.random.default_rng(4), 4, BRUSHED, FULL, scatter=0.1)
    problem = observe(s.batch)
    base = fit(problem)
    unsure = np.zeros(4, dtype=bool)
    observe_families(problem, base, unsure, np.zeros(4, dtype=np.int64), ~unsure)
    judged, again = run._with_family(problem, base, unsure)
    assert judged is base
    assert again is unsure


def test_a_table_s_own_reading_and_scatter_reach_its_motors() -> None:
    """Computed from constants: a scatter of a fifth. A column at fault is no source."""
    s = make(np.random.default_rng(4), 3, BRUSHED, FULL, scatter=0.0, digits=5)
    batch, table = run._whole(s.batch)
    assert table.faults == table.inferred == []
    assert table.scale < 0.3
    assert batch is s.batch
    for row in range(3):
        spoil(s.batch, "stall_torque", row, 10.0)
    _, faulty = run._whole(s.batch)
    assert [f.figure for f in faulty.faults] == [INDEX["stall_torque"]]
    assert faulty.scale < 0.3
    found, constants, _ = run._portion(s.batch, faulty)
    assert found == []
    km = constants["torque_constant"]
    assert all("stall_torque" not in km.sources[i] for i in km.source)


@pytest.mark.parametrize(
    ("n", "series", "family"), [(3, "A", True), (3, None, False), (4, None, True), (2, "A", False)]
)
def test_three_rows_of_a_series_or_four_of_none_are_a_family(n, series, family) -> None:
    """No series name makes fewer rows one size (common practice, no source)."""
    s = make(np.random.default_rng(4), n, BRUSHED, FULL, scatter=0.1)
    s.batch.series = [series] * n
    _, _, found = run._portion(s.batch, run._Table(Readings(), 1.0, [], []))
    assert found.tolist() == [family] * n


def test_a_note_on_conventions_stands_at_the_first_motor_of_its_kind() -> None:
    """Back-EMF printed as a peak value, with no word of it: √2 of the rms that is customary."""
    s = make(np.random.default_rng(4), 3, Commutation.SINUSOIDAL, SERVO, scatter=0.1)
    for row in range(3):
        spoil(s.batch, "back_emf_constant", row, math.sqrt(2))
    for column_ in s.batch.figures.values():
        column_.conventions = [c.with_(basis="assumed") for c in column_.conventions]
    result = run.reconcile(s.batch)
    first = result.findings[0]
    assert (first.relation, first.severity) == ("convention", "note")
    assert result.finding_motor[0] == 0
    assert result.batch.figures["back_emf_constant"].conventions[0].voltage == "peak"
