"""What figures hold under: a voltage, a speed, a time, a temperature, in cells and headings.

All sheets are invented; the forms are common practice, no source.
"""

import pytest

from .sheets import RPM, sheet


def test_a_cells_temperature_is_its_figures_and_another_condition_is_told():
    s = sheet("""
        Part no. | Terminal resistance | Peak current | No load current
        A | 1.2 Ω @ 20 °C | 30 A/10 s | 0.9 A (24 V)
    """)
    assert s.motors() == {
        "A": {"terminal_resistance": 1.2, "peak_current": 30.0, "no_load_current": 0.9}
    }
    assert s.convention("terminal_resistance").temperature == 20.0
    assert s.unread == set()
    told = [r for r in s.reading.remarks if "is not used" in r]
    assert len(told) == 2
    assert '"10 s"' in told[0]
    assert '"24 V"' in told[1]


def test_a_second_figure_before_a_condition_is_kept():
    s = sheet(
        "Type | Nominal voltage [V] | Torque constant\nA | 24 | 0.28 Nm/A (39.6 oz-in/A) @ 20 °C"
    )
    assert s.motors()["A"]["torque_constant"] == 0.28
    assert s.convention("torque_constant").temperature == 20.0
    (again,) = s.batch.repeats["torque_constant"]
    # NIST SP 811 (2008), App. B.8: ozf·in
    assert again.value[0] == pytest.approx(39.6 * 7.061552e-3, rel=1e-6)


def test_two_amounts_of_one_kind_are_listed():
    s = sheet("Part no. | Nominal voltage | Torque constant [Nm/A]\nA | 12 V at 900 mV | 0.3")
    assert s.motors() == {"A": {"torque_constant": 0.3}}
    assert "12 V at 900 mV" in s.unread


@pytest.mark.parametrize(("heading", "cell", "expected"), [
    ("Back EMF at 1000 rpm [V]", "8.2", 8.2 / (1000 * RPM)),
    ("EMK bei 1000 min-1 [mV]", "820", 0.82 / (1000 * RPM)),
    ("F.c.é.m. à 1000 tr/min [V]", "8.2", 8.2 / (1000 * RPM)),
])  # fmt: skip
def test_a_back_emf_at_a_speed_is_divided_by_it(heading, cell, expected):
    s = sheet(f"Type | Rated torque [Nm] | {heading}\nA | 0.3 | {cell}")
    assert s.motors()["A"]["back_emf_constant"] == pytest.approx(expected)


def test_a_voltage_at_a_speed_is_no_supply():
    s = sheet("Type | Rated torque at 3000 rpm [Nm] | Voltage at 3000 rpm [V]\nA | 0.3 | 24")
    assert s.motors() == {"A": {"nominal_torque": 0.3}}
    assert "24" in s.unread


def test_a_tolerance_behind_the_unit_of_a_heading():
    s = sheet("Type | Rated torque [Nm] | Speed constant (rpm/V ±10 %)\nA | 0.3 | 100")
    column = s.batch.figures["speed_constant"]
    assert column.value[0] == pytest.approx(100 * RPM)
    assert (column.low[0], column.high[0]) == pytest.approx((90 * RPM, 110 * RPM))


def test_a_unit_with_brackets_of_its_own_beside_another():
    s = sheet("Type | Rated torque [Nm] | Motor constant [mNm/sqrt(W) (oz-in/√W)]\nA | 0.3 | 31.2")
    assert s.motors()["A"]["motor_constant"] == pytest.approx(0.0312)
