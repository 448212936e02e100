"""One mistake in a sheet made from true constants: all that a finding says of it, and nothing else.

Factors of units: NIST SP 811 (2008), appendix B.8; of conventions: definitions of rms, of phase
and line values; 234.5 + T for copper as in Langsdorf, Theory of Alternating-Current Machinery.
"""

from __future__ import annotations

import math
import re

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation
from motorfolio.schema.motor import Finding, Reconciled
from motorfolio.schema.reconcile.explain import SENTENCES
from motorfolio.schema.reconcile.run import reconcile
from motorfolio.schema.written import in_words, number

from .simulated_sheets import FULL, RPM, SERVO, UNITS, Sheet, make, put, single, spoil

BRUSHED, BLOCK, SINE = Commutation
ROOT2, ROOT3 = math.sqrt(2), math.sqrt(3)
OZ_IN, LB_IN, KGF = 7.06155, 0.1129848, 9.80665
ROW = 2

CASES = [
    (BRUSHED, "power-of-ten", [
        ("torque_constant", 10), ("torque_constant", 0.1), ("no_load_current", 100),
        ("stall_current", 0.01), ("mechanical_time_constant", 1e3),
        ("terminal_inductance", 1e3), ("nominal_voltage", 10)]),
    (BRUSHED, "rpm-vs-rad-per-second", [
        ("no_load_speed", 1 / RPM), ("nominal_speed", RPM), ("speed_torque_gradient", RPM),
        ("back_emf_constant", 1 / RPM)]),
    (BRUSHED, "rev-per-second", [
        ("no_load_speed", 60), ("nominal_speed", 1 / 60), ("speed_constant", 2 * math.pi)]),
    (BRUSHED, "ounce-inch-vs-millinewton-metre", [
        ("stall_torque", OZ_IN), ("nominal_torque", 1 / OZ_IN), ("torque_constant", OZ_IN),
        ("motor_constant", 1 / OZ_IN)]),
    (BRUSHED, "pound-inch-vs-newton-metre", [
        ("stall_torque", LB_IN), ("torque_constant", LB_IN)]),
    (BRUSHED, "kilogram-force-vs-newton", [("torque_constant", 1 / KGF)]),
    (SINE, "peak-vs-rms", [
        ("torque_constant", ROOT2), ("back_emf_constant", 1 / ROOT2),
        ("nominal_current", 1 / ROOT2)]),
    (SINE, "line-vs-phase", [
        ("terminal_resistance", 0.5), ("terminal_resistance", 2), ("back_emf_constant", ROOT3),
        ("back_emf_constant", 1 / ROOT3), ("terminal_inductance", 0.5)]),
    (SINE, "sinusoidal-current-convention", [("torque_constant", math.sqrt(1.5))]),
    (BRUSHED, "hot-vs-cold", [
        ("terminal_resistance", 1.31), ("terminal_resistance", 1 / 1.31),
        ("torque_constant", 0.85)]),
    (BRUSHED, "inertia-convention", [
        ("rotor_inertia", 386.0886), ("rotor_inertia", 4),
        ("rotor_inertia", 0.25)]),
    (SINE, "horsepower-vs-watt", [("rated_power", 1 / 745.7), ("rated_power", 745.7)]),
    (BLOCK, "poles-vs-pole-pairs", [("no_load_speed", 2), ("nominal_speed", 0.5)]),
    (BLOCK, "peak-to-peak", [("back_emf_constant", 2), ("speed_constant", 0.5)]),
    (BRUSHED, "gear-output-side", [("stall_torque", 23.4), ("nominal_torque", 43.7)]),
    (BRUSHED, "continuous-stall", [("stall_current", 0.15)]),
    (BRUSHED, "unexplained", [
        ("terminal_resistance", 2.3), ("stall_current", 1.7), ("nominal_voltage", 1.6)]),
]  # fmt: skip
FLAT = [(kind, cause, key, float(f)) for kind, cause, some in CASES for key, f in some]


def sheet(kind: Commutation = BRUSHED, seed: int = 1, n: int = 6) -> Sheet:
    keys = SERVO if kind is SINE else FULL
    return make(np.random.default_rng(seed), n, kind, keys, scatter=0.3)


def alarms(result: Reconciled) -> list[Finding]:
    return [f for f in result.findings if f.severity != "note"]


def printed(s: Sheet, key: str, row: int = ROW) -> str:
    return f"{s.batch.figures[key].text[row]} {UNITS[key][0]}".strip()


def written(key: str, value: float) -> str:
    unit, factor = UNITS[key]
    return f"{number(value / factor, 3)} {unit}".strip()


def times(ratio: float | None) -> str:
    assert ratio is not None
    return f"{number(ratio, 3)} times" if ratio > 0.2 else f"1/{number(1 / ratio, 3)} of"


def sources(result: Reconciled, row: int) -> set[str]:
    return {key for c in result.constants.values() for key in c.sources[c.source[row]]}


def holds(s: Sheet, result: Reconciled, row: int) -> None:
    """The constants that made the sheet lie in the intervals given for them."""
    names = {"torque_constant": "Km", "armature_resistance": "Ra", "armature_inductance": "La",
             "rotor_inertia": "J", "no_load_current": "I0"}  # fmt: skip
    for name, true in names.items():
        column = result.constants[name]
        if math.isfinite(column.value[row]):
            assert column.low[row] * 0.99 <= s.truth[true][row] <= column.high[row] * 1.01, name
            assert column.low[row] < column.value[row] < column.high[row]
    assert math.isfinite(result.constants["torque_constant"].value[row])


@pytest.mark.parametrize(("kind", "cause", "key", "factor"), FLAT)
def test_one_wrong_figure(kind: Commutation, cause: str, key: str, factor: float) -> None:
    s = sheet(kind)
    right = float(s.figures[key][ROW])
    spoil(s.batch, key, ROW, factor)
    result = reconcile(s.batch)
    (found,) = alarms(result)
    assert (found.part_number, found.suspect, found.cause) == (f"X{ROW}", key, cause)
    assert (found.scope, found.severity) == ("motor", "error")
    assert cause not in found.other_causes
    assert "unexplained" not in found.other_causes
    assert len(found.other_causes) <= 3
    assert found.ratio == pytest.approx(factor, rel=0.06)
    assert found.implied is not None
    assert found.implied.value == pytest.approx(right, rel=0.06)
    column = s.batch.figures[key]
    assert found.ratio * found.implied.value == pytest.approx(column.value[ROW], rel=1e-9)
    assert found.cell is not None
    assert (found.cell.row, found.cell.column) == (ROW + 2, column.column[ROW])
    assert found.figures[0] == key
    # what the constants are worked out from
    assert key not in sources(result, ROW)
    assert sources(result, ROW)
    holds(s, result, ROW)
    # the sentence
    text = found.message
    start = f"{in_words(key)} {printed(s, key)} (row {ROW + 2}, column {column.column[ROW]}) is "
    assert text.lower().startswith(start.lower())
    assert f"is {times(found.ratio)} what " in text
    assert f" ({written(key, found.implied.value)}): " in text
    said = "None of the usual mistakes" if cause == "unexplained" else f"Likely {SENTENCES[cause]}"
    assert text.count(said) == 1
    places = [text.find(SENTENCES[c]) for c in found.other_causes if c[:4] not in ("kilo", "fric")]
    assert places == sorted(places)
    assert all(place > text.find(said) for place in places)
    for other in found.figures[1:]:
        if not found.relation.startswith("family"):
            assert printed(s, other) in text, other


@pytest.mark.parametrize(
    ("key", "factor", "relation", "law"),
    [
        # the relations of the DC motor: Fitzgerald, Kingsley, Umans, Electric Machinery, 6th ed.,
        # sections 7.7 and 11.1 (chapter numbers from memory)
        ("rotor_inertia", 0.25, "mechanical_time_constant",
         lambda v: v["rotor_inertia"] * v["terminal_resistance"] / v["torque_constant"] ** 2),
        ("stall_current", 0.15, "stall_current",
         lambda v: v["nominal_voltage"] / v["terminal_resistance"]),
        ("stall_torque", OZ_IN, "stall_torque",
         lambda v: v["torque_constant"] * (v["stall_current"] - v["no_load_current"])),
        ("torque_constant", 10.0, "torque_constant", lambda v: 1 / v["speed_constant"]),
        ("terminal_inductance", 1e3, "electrical_time_constant",
         lambda v: v["terminal_inductance"] / v["terminal_resistance"]),
    ],
)  # fmt: skip
def test_the_relation_with_its_numbers(key, factor, relation, law) -> None:
    """What the sentence says a relation gives is the relation at the printed numbers."""
    s = sheet()
    spoil(s.batch, key, ROW, factor)
    (found,) = alarms(reconcile(s.batch))
    values = {k: float(c.value[ROW]) for k, c in s.batch.figures.items()}
    unit, scale = UNITS[relation]
    given = re.search(r" gives ([\d.,]+) (\S+), printed is ", found.message)
    assert given is not None
    assert given[2] == unit
    assert float(given[1]) * scale == pytest.approx(law(values), rel=0.006)
    assert f"printed is {printed(s, relation)}." in found.message
    assert "conventions" not in found.message  # a brushed motor's figures are those of the DC motor


def test_a_servo_s_numbers_are_brought_to_the_dc_motor() -> None:
    s = sheet(SINE)
    spoil(s.batch, "torque_constant", ROW, 10.0)
    (found,) = alarms(reconcile(s.batch))
    assert "all brought to the DC motor's conventions" in found.message
    given = re.search(r" gives ([\d.,]+) mNm/A, printed is ", found.message)
    assert given is not None
    assert float(given[1]) * 1e-3 == pytest.approx(s.figures["torque_constant"][ROW], rel=0.05)


@pytest.mark.parametrize("n", [1, 3, 10])
@pytest.mark.parametrize(
    ("key", "factor", "cause"),
    [("stall_torque", 1 / OZ_IN, "ounce-inch-vs-millinewton-metre"),
     ("no_load_speed", 60.0, "rev-per-second"), ("torque_constant", 0.01, "power-of-ten")],
)  # fmt: skip
def test_in_tables_of_any_size(key: str, factor: float, cause: str, n: int) -> None:
    s = sheet(n=n, seed=n)
    row = n - 1
    spoil(s.batch, key, row, factor)
    result = reconcile(s.batch)
    (found,) = alarms(result)
    assert (found.part_number, found.suspect, found.cause) == (f"X{row}", key, cause)
    assert found.ratio == pytest.approx(factor, rel=0.06)
    assert key not in sources(result, row)
    holds(s, result, row)
    for other in range(row):
        assert key in sources(result, other)
        holds(s, result, other)


def test_a_few_mistakes_in_a_table_of_many_families() -> None:
    """Eight sizes of five windings, one mistake each in three of the sizes."""
    rng = np.random.default_rng(7)
    sheets = [make(rng, 5, BRUSHED, FULL, scatter=0.3) for _ in range(8)]
    batch = single(n=40)
    batch.series = [f"S{i // 5}" for i in range(40)]
    for key in FULL:
        for i in range(40):
            put(batch, key, i, float(sheets[i // 5].batch.figures[key].value[i % 5]))
    planted = {3: ("torque_constant", 10.0, "power-of-ten"),
               17: ("nominal_speed", RPM, "rpm-vs-rad-per-second"),
               39: ("stall_torque", OZ_IN, "ounce-inch-vs-millinewton-metre")}  # fmt: skip
    for row, (key, factor, _) in planted.items():
        spoil(batch, key, row, factor)
    result = reconcile(batch)
    found = {f.part_number: f for f in alarms(result)}
    assert len(alarms(result)) == len(found) == 3
    for row, (key, factor, cause) in planted.items():
        one = found[f"X{row}"]
        assert (one.suspect, one.cause, one.severity) == (key, cause, "error")
        assert one.ratio == pytest.approx(factor, rel=0.05)
        assert result.finding_motor[result.findings.index(one)] == row
        assert key not in sources(result, row)
    km = result.constants["torque_constant"]
    true = np.concatenate([s.truth["Km"] for s in sheets])
    assert np.abs(np.log(km.value / true)).max() < 0.03


COLUMNS = [
    (BRUSHED, "stall_torque", OZ_IN, "ounce-inch-vs-millinewton-metre"),
    (BRUSHED, "no_load_speed", 60.0, "rev-per-second"),
    (BRUSHED, "speed_constant", RPM, "rpm-vs-rad-per-second"),
    (BRUSHED, "terminal_resistance", 1.31, "hot-vs-cold"),
    (SINE, "terminal_resistance", 0.5, "line-vs-phase"),
    (SINE, "back_emf_constant", 1 / ROOT3, "line-vs-phase"),
]


@pytest.mark.parametrize(("kind", "key", "factor", "cause"), COLUMNS)
def test_a_whole_column(kind: Commutation, key: str, factor: float, cause: str) -> None:
    s = sheet(kind)
    for row in range(6):
        spoil(s.batch, key, row, factor)
    result = reconcile(s.batch)
    (found,) = alarms(result)
    assert (found.scope, found.part_number) == ("column", None)
    assert (found.suspect, found.cause, found.severity) == (key, cause, "error")
    assert found.part_numbers == tuple(f"X{i}" for i in range(6))
    assert found.ratio == pytest.approx(factor, rel=0.04)
    assert found.implied is not None
    assert found.implied.value == pytest.approx(s.figures[key][0], rel=0.05)
    assert found.cell is not None
    assert found.cell.row == 2
    assert f'under the heading "{key}" is {times(found.ratio)} what ' in found.message
    assert f"alike for 6 motors: X0 has {printed(s, key, 0)} (row 2, " in found.message
    assert f"implied is {written(key, found.implied.value)} (" in found.message
    assert "One mistake in the heading" in found.message
    assert len(found.figures) > 1
    for other in found.figures:
        assert printed(s, other, 0) in found.message
    for row in range(6):
        assert key not in sources(result, row)
        holds(s, result, row)


def test_most_of_a_column_is_one_finding_of_those_motors() -> None:
    s = sheet()
    for row in (0, 1, 3, 4, 5):
        spoil(s.batch, "stall_torque", row, OZ_IN)
    result = reconcile(s.batch)
    (found,) = alarms(result)
    assert (found.scope, found.suspect) == ("column", "stall_torque")
    assert {"X0", "X1", "X3", "X4", "X5"} <= set(found.part_numbers)
    assert "stall_torque" not in sources(result, 0)


@pytest.mark.parametrize(
    ("a", "b"),
    [("torque_constant", "speed_constant"), ("no_load_speed", "nominal_speed"),
     ("nominal_torque", "stall_torque"), ("nominal_current", "stall_current"),
     ("no_load_current", "nominal_current"), ("terminal_resistance", "terminal_inductance"),
     ("mechanical_time_constant", "electrical_time_constant")],
)  # fmt: skip
def test_two_cells_exchanged(a: str, b: str) -> None:
    s = sheet()
    one, two = (s.batch.figures[k] for k in (a, b))
    x, y = one.value[ROW] / UNITS[a][1], two.value[ROW] / UNITS[b][1]
    put(s.batch, a, ROW, y * UNITS[a][1])
    put(s.batch, b, ROW, x * UNITS[b][1])
    result = reconcile(s.batch)
    (found,) = alarms(result)
    assert (found.cause, found.severity) == ("figures-swapped", "error")
    assert set(found.figures[:2]) == {a, b}
    assert found.suspect in (a, b)
    assert found.implied is not None
    assert found.implied.value == pytest.approx(s.figures[found.suspect][ROW], rel=0.08)
    assert f"{printed(s, a)} (row {ROW + 2}, column {one.column[ROW]})" in found.message
    assert f"{printed(s, b)} (row {ROW + 2}, column {two.column[ROW]})" in found.message
    assert "seem to be exchanged" in found.message
    assert not {a, b} & sources(result, ROW)
    holds(s, result, ROW)


@pytest.mark.parametrize("step", [-1, 1])
@pytest.mark.parametrize("key", ["stall_current", "terminal_resistance"])
def test_the_next_winding_s_value(key: str, step: int) -> None:
    s = sheet(seed=6)
    column = s.batch.figures[key]
    for array in (column.value, column.low, column.high, column.text):
        array[ROW] = array[ROW + step]
    (found,) = alarms(reconcile(s.batch))
    assert (found.suspect, found.cause) == (key, "neighbouring-column")
    assert found.ratio == pytest.approx(s.figures[key][ROW + step] / s.figures[key][ROW], rel=0.05)


def test_two_windings_have_each_other_s_value() -> None:
    s = sheet(seed=6)
    column = s.batch.figures["stall_torque"]
    for array in (column.value, column.low, column.high, column.text):
        array[2], array[3] = array[3], array[2]
    found = alarms(reconcile(s.batch))
    assert [(f.part_number, f.suspect, f.cause) for f in found] == [
        ("X2", "stall_torque", "neighbouring-column"), ("X3", "stall_torque", "neighbouring-column")
    ]  # fmt: skip


def test_both_stall_figures_are_the_continuous_ones() -> None:
    s = sheet()
    for key in ("stall_torque", "stall_current"):
        spoil(s.batch, key, ROW, 0.21)
    found = alarms(reconcile(s.batch))
    assert {f.suspect for f in found} == {"stall_torque", "stall_current"}
    assert {f.cause for f in found} == {"continuous-stall"}
    assert {f.part_number for f in found} == {f"X{ROW}"}


def test_both_torques_are_those_of_a_gear_s_shaft() -> None:
    s = sheet()
    for key in ("stall_torque", "nominal_torque"):
        spoil(s.batch, key, ROW, 14.2 * 0.85)
    found = alarms(reconcile(s.batch))
    assert {f.suspect for f in found} == {"stall_torque", "nominal_torque"}
    assert {f.cause for f in found} == {"gear-output-side"}
    for f in found:
        assert f.ratio == pytest.approx(12.07, rel=0.06)


def test_a_second_mistake_is_not_brought_in_to_show_the_first() -> None:
    """The relation that is put into a sentence is one of figures that nothing else doubts."""
    s = sheet()
    spoil(s.batch, "torque_constant", ROW, 10.0)
    spoil(s.batch, "speed_constant", ROW, 100.0)
    result = reconcile(s.batch)
    found = {f.suspect: f for f in alarms(result)}
    assert set(found) == {"torque_constant", "speed_constant"}
    for key, other in (
        ("torque_constant", "speed_constant"),
        ("speed_constant", "torque_constant"),
    ):
        assert found[key].figures[0] == key
        assert len(found[key].figures) > 1
        assert other not in found[key].figures
        assert printed(s, other) not in found[key].message
    assert found["torque_constant"].ratio == pytest.approx(10.0, rel=0.06)
    assert found["speed_constant"].ratio == pytest.approx(100.0, rel=0.06)
    assert not {"torque_constant", "speed_constant"} & sources(result, ROW)
    holds(s, result, ROW)


@pytest.mark.parametrize("factor", [1.4, 10.0])
def test_a_mass_off_its_family(factor: float) -> None:
    s = sheet()
    spoil(s.batch, "mass", ROW, factor)
    (found,) = alarms(reconcile(s.batch))
    assert (found.suspect, found.relation) == ("mass", "family-mass")
    assert (found.part_number, found.severity) == (f"X{ROW}", "error")
    assert found.cause == ("power-of-ten" if factor == 10.0 else "unexplained")
    assert found.ratio == pytest.approx(factor, rel=0.03)
    assert found.implied is not None
    assert found.implied.value == pytest.approx(s.figures["mass"][ROW], rel=0.03)


@pytest.mark.parametrize("key", ["no_load_speed", "torque_constant"])
def test_a_digit_or_two_of_rounding_is_no_mistake(key: str) -> None:
    """Two per cent are what sheets round to (common practice, no source)."""
    for factor in (0.98, 1.02):
        s = sheet()
        spoil(s.batch, key, ROW, factor)
        assert alarms(reconcile(s.batch)) == []
