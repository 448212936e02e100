"""A table of invented motors, as a batch made by hand and as a CSV file."""

import numpy as np
import pytest

from motorfolio.catalog.cli import main
from motorfolio.schema.batch import (
    Batch,
    Condition,
    FigureColumn,
    Heading,
    PlacedFigure,
    Point,
    Source,
    TextColumn,
    blank_batch,
)
from motorfolio.schema.convention import Convention

# Computed from true constants: Km 25 mN·m/A, Ra 0.8 Ω … and so on, rounded as a sheet prints them.
TABLE = """\
Part number,Nominal voltage [V],No-load speed [rpm],No-load current [mA],Torque constant [mNm/A],\
Speed constant [rpm/V],Terminal resistance [Ohm],Terminal inductance [mH],Stall current [A],\
Rotor inertia [gcm²],Mass [g]
PUFFIN-A,12,4557,60,25.0,382,0.800,0.120,15.0,40.2,210
PUFFIN-B,24,4564,31,50.0,191,3.20,0.480,7.50,40.2,210
PUFFIN-C,36,4567,20,75.0,127,7.20,1.08,5.00,40.2,210
"""


@pytest.fixture
def sheet(tmp_path):
    """The table as a file."""
    path = tmp_path / "puffin.csv"
    path.write_text(TABLE, encoding="utf-8")
    return path


@pytest.fixture
def catalog_file(tmp_path):
    return tmp_path / "motors.sqlite"


@pytest.fixture
def run(catalog_file, monkeypatch, capsys):
    """Run a command on the test's catalog: (status, standard output, standard error)."""
    monkeypatch.setenv("MOTORFOLIO_CATALOG", str(catalog_file))
    monkeypatch.setenv("NO_COLOR", "1")
    monkeypatch.setenv("COLUMNS", "160")

    def call(*arguments):
        status = main([str(argument) for argument in arguments])
        captured = capsys.readouterr()
        return status, captured.out, captured.err

    return call


def column(values, texts, *, heading, at, conventions=None, which=None, low=None, high=None):
    """A figure column of one motor a row, from row 2 of the file; interval ±1 % unless given."""
    n = len(values)
    value = np.array(values, dtype=float)
    return FigureColumn(
        value,
        value * 0.99 if low is None else np.array(low, dtype=float),
        value * 1.01 if high is None else np.array(high, dtype=float),
        texts,
        conventions or [Convention()],
        np.array(which or [0] * n, dtype=np.int32),
        np.full(n, heading, dtype=np.int32),
        np.arange(2, n + 2, dtype=np.int32),
        np.full(n, at, dtype=np.int32),
    )


@pytest.fixture
def batch() -> Batch:
    """Three motors that have something of everything a batch can hold."""
    nan = np.nan
    b = blank_batch(
        ["A-1", "A-2", "A-3"], maker="Examplar", source=Source("a.csv", "ab" * 32, sheet="Motors")
    )
    b.series = ["S", "S", None]
    b.headings = [
        Heading("U (V)", "nominal_voltage", "V", Convention(voltage="dc"), 1.0, "a name of it"),
        Heading("Kt (mNm/A)", "torque_constant", "mNm/A", None, 0.9, "a name of it", 1e-3),
        Heading("Protection", "protection"),
        Heading("Kt (oz-in/A)", "torque_constant", "oz-in/A", None, 0.8, "", 7.0616e-3),
        Heading("Temp (°F)", "maximum_winding_temperature", "°F", None, 1.0, "", 5 / 9, -160 / 9),
        Heading("Price (EUR)", "price", "EUR"),
    ]
    voltage = column([12, 24, 19], ["12", "24", "10…28"], heading=0, at=2,
                     low=[12, 24, 10], high=[12, 24, 28])  # fmt: skip
    torque = column(
        [0.0302, 0.0604, nan], ["30.2", "60.4", None], heading=1, at=3,
        conventions=[Convention(current="rms", basis="stated"), Convention(current="dc")],
        which=[0, 1, 0], low=[0.03015, 0.06035, nan], high=[0.03025, 0.06045, nan],
    )  # fmt: skip
    torque.row[1] = 9  # a merged cell stands in another row
    temperature = column([125, 125, 155], ["257", "257", "≤ 311"], heading=4, at=7,
                         low=[124.72222] * 2 + [nan], high=[125.27778] * 2 + [155])  # fmt: skip
    temperature.qualifiers = {2: "at most"}
    price = column([0, 99.5, nan], ["0", "99.50", None], heading=5, at=8,
                   low=[0, 99.495, nan], high=[0, 99.505, nan])  # fmt: skip
    b.figures = {
        "nominal_voltage": voltage,
        "torque_constant": torque,
        "maximum_winding_temperature": temperature,
        "price": price,
    }
    b.repeats = {
        "torque_constant": [column([nan, 0.0611, nan], [None, "8.65", None], heading=3, at=4)]
    }
    rows = np.arange(2, 5, dtype=np.int32)
    b.texts = {
        "protection": TextColumn(["IP54", None, "IP65"], rows, np.full(3, 5, dtype=np.int32))
    }
    placed = PlacedFigure(1.5, 1.45, 1.55, "1.5", "A", Convention(current="rms"), "about", 3, 6)
    b.conditions = [Condition("at 48 V", {1: {"nominal_current": placed}})]
    b.points = {2: [Point("maximum output", {"nominal_torque": 0.1, "nominal_speed": 300.0}, 4)]}
    b.commutation[1:] = 2
    b.commutation_basis[1:] = 1
    b.magnet[2], b.magnet_basis[2] = "ndfeb", 1
    b.reference_temperature[2] = 20.0
    b.notes = ["All values at 25 °C"]
    return b
