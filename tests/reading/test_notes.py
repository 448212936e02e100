"""What notes say of conventions, and to which headings they belong. All sheets are invented."""

import pytest

from .sheets import sheet

HEADINGS = "Type | Cont. stall torque [Nm] | Cont. stall current (A) 1) | Ke (V/krpm) 2) | R (Ω) 3)"


@pytest.mark.parametrize(("notes", "current", "voltage", "between"), [
    (["1) Peak of sine wave current. To obtain the rms value divide by 1.414.",
      "2) Peak value, line to line; divide by 1.414 for rms.", "3) Phase to neutral."],
     "peak", "peak", "phase"),
    (["1) peak (not rms)", "2) peak, line to line", "3) per phase (not line-to-line)"],
     "peak", "peak", "phase"),
    (["1) Currents 0-to-peak. 2) Line-to-line, zero-to-peak. 3) Line to neutral at 25 °C."],
     "peak", "peak", "phase"),
    (["1) valeur efficace", "2) valeur de crête, entre phases", "3) entre phase et neutre à 20 °C"],
     "rms", "peak", "phase"),
    (["1) 电流为峰值", "2) 线电压峰值", "3) 相电阻，20℃"], "peak", "peak", "phase"),
])  # fmt: skip
def test_a_note_states_its_own_headings_convention_and_nothing_else(
    notes, current, voltage, between
):
    s = sheet(f"{HEADINGS}\nA | 0.92 | 3.1 | 35.9 | 1.9\n\n" + "\n".join(notes))
    assert s.convention("continuous_stall_current").current == current
    assert s.convention("back_emf_constant").voltage == voltage
    assert s.convention("back_emf_constant").between == "lines"
    assert s.convention("terminal_resistance").between == between


@pytest.mark.parametrize("marks", ["①②③", ["※1", "※2", "※3"], ["注1", "注2", "注3"]])
def test_marks_of_other_scripts_tie_a_note_to_its_heading(marks):
    a, b, c = marks
    s = sheet(f"""
        型号 | 连续堵转转矩 N·m | 连续堵转电流 A {a} | 反电势常数 V/krpm {b} | 电阻 Ω {c}
        A | 0.92 | 3.1 | 35.9 | 1.9

        {a} 电流为峰值
        {b} 线电压有效值
        {c} 每相，20℃
    """)
    assert s.convention("continuous_stall_current").current == "peak"
    assert s.convention("back_emf_constant").voltage == "rms"
    assert s.convention("terminal_resistance").between == "phase"
    assert not s.reading.unread


def test_a_note_about_a_symbol_is_about_its_quantity():
    s = sheet("""
        Type | Kt [Nm/A] | Ke [V/krpm] | R [Ω]
        A | 0.3 | 35.9 | 1.9

        All currents are peak of sine (not rms).
        Ke is the peak line-to-line voltage; R is measured per phase (not line-to-line).
    """)
    assert s.convention("torque_constant").current == "peak"
    assert s.convention("back_emf_constant").between == "lines"
    assert s.convention("terminal_resistance").between == "phase"


@pytest.mark.parametrize(("heading", "cell", "torque"), [
    ("Peak torque N·m (oz-in)", "0.93", 0.93),
    ("Peak torque N·m (oz-in)", "0.93 (131.7)", 0.93),
    ("Peak torque [N·m (oz-in)]", "0.93 (131.7)", 0.93),
    ("Peak torque [mN·m / oz-in]", "930", 0.93),
    ("Peak torque M_max (mN·m)", "930", 0.93),
])  # fmt: skip
def test_of_two_units_the_first_is_that_of_the_first_figure(heading, cell, torque):
    s = sheet(f"Type | Torque constant [Nm/A] | {heading}\nA | 0.3 | {cell}")
    assert s.motors()["A"]["peak_torque"] == pytest.approx(torque, rel=1e-12)
    assert not s.reading.remarks
