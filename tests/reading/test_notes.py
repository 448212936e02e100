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


@pytest.mark.parametrize(("note", "current"), [
    ("Currents in A peak, not in A rms.", "peak"),
    ("These are no rms values: peak of sine", "peak"),
    ("peak of sine instead of rms", "peak"),
    ("Peak value. RMS value = 0.707 x peak value.", "peak"),
    ("Amplitude; for rms, multiply by 0.707", "peak"),
    ("RMS (x1.414 for peak values)", "rms"),
    ("Currents are not peak values, they are rms", "rms"),
    ("If not stated otherwise currents are rms", "rms"),
    ("No rms values are published", None),
    ("rms × √2 = peak value", None),
    ("Scheitelwert, kein Effektivwert", "peak"),
    ("Effektivwert statt Scheitelwert", "rms"),
    ("Scheitelwert; für den Effektivwert durch 1,414 teilen", "peak"),
    ("valeur de crête au lieu de la valeur efficace", "peak"),
    ("valeur efficace, non la valeur de crête", "rms"),
    ("valore di picco, non valore efficace", "peak"),
    ("valor de pico (no eficaz)", "peak"),
    ("ピーク値です。実効値ではありません。", "peak"),
    ("峰值，除以1.414得有效值", "peak"),
    ("有效值，而不是峰值", "rms"),
])  # fmt: skip
def test_what_a_note_denies_or_converts_is_not_stated(note, current):
    s = sheet(f"{HEADINGS}\nA | 0.92 | 3.1 | 35.9 | 1.9\n\n1) {note}")
    convention = s.convention("continuous_stall_current")
    assert (convention.current if convention.basis == "stated" else None) == current


@pytest.mark.parametrize(("note", "between"), [
    ("Phase to neutral, not phase to phase", "phase"),
    ("terminal to star point", "phase"),
    ("Line to line, not line to neutral", "lines"),
    ("Außenleiter gegen Sternpunkt", "phase"),
    ("zwischen zwei Klemmen, nicht pro Strang", "lines"),
    ("entre phase et neutre à 20 °C", "phase"),
    ("entre phases (et non phase-neutre)", "lines"),
    ("tra due fasi, non fase-neutro", "lines"),
    ("fase-neutro a 20 °C", "phase"),
    ("por fase (no entre fases)", "phase"),
    ("entre fase y neutro", "phase"),
    ("線間ではなく相値", "phase"),
    ("相对中性点", "phase"),
    ("线-线（非相值）", "lines"),
    ("Star connected, neutral point not brought out", None),
])  # fmt: skip
def test_between_which_points_a_note_says_a_resistance_is_measured(note, between):
    s = sheet(f"{HEADINGS}\nA | 0.92 | 3.1 | 35.9 | 1.9\n\n3) {note}")
    convention = s.convention("terminal_resistance")
    stated = convention.between if convention.basis == "stated" else None
    assert stated == between or (between is None and convention.between == "lines")
