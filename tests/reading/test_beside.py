"""Labels right of figures: more figures of the one motor, or another table beside the first.

All sheets are invented; the layouts are common practice, no source.
"""

from dataclasses import replace

import pytest

from motorfolio.catalog.reading import ReadOptions, read
from motorfolio.catalog.tables.grid import TableFile

from .sheets import Sheet, grid, sheet

RAD = 3.141592653589793 / 30


@pytest.mark.parametrize("head", ["Model | | BX-40", "Brushed DC motor | | "])
def test_two_lists_of_labels_side_by_side_are_of_one_motor(head):
    s = sheet(f"""
        {head} | Torque constant | mNm/A | 21.2
        Nominal voltage | V | 12 | Terminal resistance | Ω | 0.86
        No load speed | rpm | 5300 | Terminal inductance | mH | 0.1
        No load current | mA | 45 | Rotor inertia | gcm² | 11.4
    """)
    (figures,) = s.motors().values()
    assert figures == pytest.approx({
        "torque_constant": 0.0212, "nominal_voltage": 12, "terminal_resistance": 0.86,
        "no_load_speed": 5300 * RAD, "terminal_inductance": 1e-4, "no_load_current": 0.045,
        "rotor_inertia": 11.4e-7,
    })  # fmt: skip
    assert s.batch.figures["rotor_inertia"].column[0] == 6


def test_a_table_of_an_encoder_beside_the_motors_is_listed():
    s = sheet("""
        | | AA-12 | AA-24 | Encoder EN-5 | |
        Nominal voltage | V | 12 | 24 | Counts per turn | | 512
        No load speed | rpm | 5300 | 5250 | Supply voltage | V | 5
        Torque constant | mNm/A | 21.2 | 43.0 | Max. speed | rpm | 37500
        Weight | g | 112 | 112 | Weight | g | 7
    """)
    assert set(s.motors()) == {"AA-12", "AA-24"}
    assert s.motors()["AA-24"]["mass"] == pytest.approx(0.112)
    assert {"512", "5", "37500", "7"} <= s.unread


def test_remarks_and_labels_in_a_second_language_are_no_further_table():
    s = sheet("""
        Model | Modell | | AA-12 | AA-24 | Remark
        Nominal voltage | Nennspannung | V | 12 | 24 | nominal voltage of the drive
        No load speed | Leerlaufdrehzahl | rpm | 5300 | 5250 | no load speed ±10 %
        Torque constant | Drehmomentkonstante | mNm/A | 21.2 | 43.0 |
    """)
    assert {k: len(v) for k, v in s.motors().items()} == {"AA-12": 3, "AA-24": 3}


def _page(text: str) -> dict[str, dict[str, float]]:
    page = replace(grid(text), page=1)
    reading = read(TableFile("plate.pdf", "0" * 64, "pdf", [page]), ReadOptions())
    return Sheet(reading, list(reading.batches)).motors()


def test_figures_of_the_frame_printed_once_in_the_middle_of_a_page_hold_for_all():
    motors = _page("""
        | | AA-12 | AA-24 | AA-48
        Nominal voltage | V | 12 | 24 | 48
        Terminal resistance | Ω | 0.86 | 3.45 | 13.7
        Rotor inertia | gcm² | | 11.4 |
        Weight | g | | 112 |
    """)
    assert [m["mass"] for m in motors.values()] == [0.112] * 3
    assert [m["rotor_inertia"] for m in motors.values()] == pytest.approx([11.4e-7] * 3)


def test_figures_printed_once_between_two_motors_hold_for_both_and_name_no_third():
    motors = _page("""
        | | AA-12 | | AA-24
        Nominal voltage | V | 12 | | 24
        Terminal resistance | Ω | 0.86 | | 3.45
        Weight | g | | 112 |
    """)
    assert {k: v["mass"] for k, v in motors.items()} == {"AA-12": 0.112, "AA-24": 0.112}


def test_a_winding_figure_in_the_middle_alone_is_that_motors():
    motors = _page("""
        | | AA-12 | AA-24 | AA-48
        Nominal voltage | V | 12 | 24 | 48
        Terminal resistance | Ω | | 3.45 |
        Weight | g | | 112 |
    """)
    assert [set(m) for m in motors.values()] == [
        {"nominal_voltage"},
        {"nominal_voltage", "terminal_resistance", "mass"},
        {"nominal_voltage"},
    ]
