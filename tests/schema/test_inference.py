"""Conventions that a sheet doesn't state are found from the figures, with their rivals."""

import math

import numpy as np
import pytest

from motorfolio.schema.convention import Commutation, Convention, to_dc
from motorfolio.schema.reconcile.run import reconcile

from .simulated_sheets import SERVO, make, restate

SINE, BLOCK = Commutation.SINUSOIDAL, Commutation.BLOCK
R2, R3 = math.sqrt(2), math.sqrt(3)

# Kt/Ke in SI as printed: sine drive from k = phase peak constant, Kt 1.5·k per A peak and
# (3/√2)·k per A rms (MathWorks, Surface Mount PMSM: flux from Kt and from Ke; NEMA's 13.662 is
# the same 0.866); six-step 3√3/π·k per A dc (brute-force integration over a turn)
SIGNATURES = [
    ("peak", "peak", "phase", SINE, 1.5), ("peak", "rms", "phase", SINE, 2.12132),
    ("peak", "peak", "lines", SINE, 0.866025), ("peak", "rms", "lines", SINE, 1.224745),
    ("rms", "peak", "phase", SINE, 2.12132), ("rms", "rms", "phase", SINE, 3.0),
    ("rms", "peak", "lines", SINE, 1.224745), ("rms", "rms", "lines", SINE, 1.732051),
    ("dc", "peak", "lines", BLOCK, 0.954930), ("dc", "rms", "lines", BLOCK, 1.350474),
    ("rms", "peak", "lines", BLOCK, 1.169545), ("rms", "rms", "lines", BLOCK, 1.653987),
]  # fmt: skip


@pytest.mark.parametrize(("current", "voltage", "between", "kind", "ratio"), SIGNATURES)
def test_signature_table(current, voltage, between, kind, ratio):
    kt = to_dc("torque_constant", Convention(current=current), kind)
    ke = to_dc("back_emf_constant", Convention(voltage=voltage, between=between), kind)
    assert ke / kt == pytest.approx(ratio, rel=1e-5)


def unstated(factors: dict[str, float], seed: int = 1):
    """A servo table that states no convention, with figures in others than the customary."""
    sheet = make(np.random.default_rng(seed), 6, SINE, SERVO)
    for key, factor in factors.items():
        column = sheet.batch.figures[key]
        for array in (column.value, column.low, column.high):
            array *= factor
    for key in sheet.batch.figures:
        restate(sheet.batch, key, basis="assumed")
    return sheet


CURRENTS = ("nominal_current", "continuous_stall_current", "peak_current")


@pytest.mark.parametrize(
    ("factors", "key", "field", "value"),
    [
        ({}, "back_emf_constant", "voltage", "rms"),
        ({"back_emf_constant": R2}, "back_emf_constant", "voltage", "peak"),
        ({"back_emf_constant": 1 / R3}, "back_emf_constant", "between", "phase"),
        ({"terminal_resistance": 0.5, "terminal_inductance": 0.5}, "terminal_resistance",
         "between", "phase"),
        ({"terminal_resistance": 1.5, "terminal_inductance": 1.5}, "terminal_resistance",
         "connection", "delta"),
        ({"torque_constant": 1 / R2} | dict.fromkeys(CURRENTS, R2), "torque_constant", "current",
         "peak"),
    ],
)  # fmt: skip
def test_the_convention_that_makes_the_figures_agree_is_found(factors, key, field, value):
    sheet = unstated(factors)
    result = reconcile(sheet.batch)
    column = result.batch.figures[key]
    assert getattr(column.conventions[0], field) == value
    assert column.conventions[0].basis == "inferred"
    assert [f for f in result.findings if f.severity != "note"] == []
    (note,) = [f for f in result.findings if f.relation == "convention"]
    assert key in note.figures
    assert "agree" in note.message
    truth = sheet.truth["Km"]
    assert result.constants["torque_constant"].value == pytest.approx(truth, rel=0.04)


def test_a_signature_with_two_origins_lists_the_rival():
    """1.2247 is Kt per A rms with Ke peak, or Kt per A peak with Ke rms: nothing else tells."""
    sheet = unstated({"back_emf_constant": R2})
    for key in list(sheet.batch.figures):
        if key not in ("torque_constant", "back_emf_constant"):
            del sheet.batch.figures[key]
    (note,) = [f for f in reconcile(sheet.batch).findings if f.relation == "convention"]
    assert "Fits as well" in note.message
    assert "currents peak" in note.message


def test_a_stated_convention_is_never_changed_but_contradicted():
    sheet = make(np.random.default_rng(2), 6, SINE, SERVO)
    column = sheet.batch.figures["back_emf_constant"]
    for array in (column.value, column.low, column.high):
        array *= R2
    result = reconcile(sheet.batch)
    assert result.batch.figures["back_emf_constant"].conventions[0].voltage == "rms"
    (finding,) = [f for f in result.findings if f.severity != "note"]
    assert (finding.scope, finding.suspect, finding.cause) == (
        "column", "back_emf_constant", "peak-vs-rms",
    )  # fmt: skip


def test_a_figure_again_in_other_units_means_what_the_first_does():
    """Nm/A and oz-in/A of one sheet: what the figures show of the one holds for the other."""
    from motorfolio.catalog.reading import ReadOptions, read
    from motorfolio.catalog.tables.grid import Grid, TableFile
    from motorfolio.schema.reconcile.checks import GIVEN_TWICE
    from motorfolio.schema.reconcile.run import reconcile

    rows = [["Part number", "Peak torque [Nm]", "Torque constant [Nm/A]",
             "Torque constant [oz-in/A]", "Back EMF constant [V/krpm]"],
            ["A", "1.62", "0.0940", "13.31", "9.84"], ["B", "2.5", "0.1880", "26.62", "19.69"],
            ["C", "3.5", "0.2820", "39.93", "29.53"]]  # fmt: skip
    grid = Grid(rows, [1, 2, 3, 4], [1, 2, 3, 4, 5])
    file = TableFile("a.csv", "0" * 64, "csv", [grid])
    (batch,) = read(file, ReadOptions(commutation="sinusoidal")).batches
    found = reconcile(batch)
    assert GIVEN_TWICE not in {f.relation for f in found.findings}
