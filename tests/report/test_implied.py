"""What is wrong by the family, or by a bound, is drawn and claimed as the findings have it."""

import pytest

from motorfolio.catalog import open_catalog
from motorfolio.catalog.report.implied import implied_figures
from motorfolio.catalog.report.pictures.make import figures_of
from motorfolio.catalog.store import Catalog

# five windings of one size, invented: U, n0, I0, Ts, Is, R, kt, kn by the DC motor's equations
SHEET = """Type;U [V];n0 [rpm];I0 [mA];Is [A];R [ohm];kt [mNm/A];kn [rpm/V];J [gcm2];m [g]
K-06;6.00;6730;75.0;6.82;0.880;8.42;1134;7.20;55
K-09;9.00;6690;50.0;4.48;2.01;12.7;752;7.20;55
K-12;12.0;6710;37.0;3.38;3.55;16.9;565;7.20;550
K-18;18.0;6690;24.7;2.24;8.02;25.4;376;72.0;55
K-24;24.0;6690;18.7;1.68;14.3;33.9;282;7.20;55
"""


@pytest.fixture(scope="module")
def catalog(tmp_path_factory):
    folder = tmp_path_factory.mktemp("implied")
    (folder / "k.csv").write_text(SHEET, encoding="utf-8")
    with open_catalog(folder / "c.sqlite", create=True) as made:
        made.add(folder / "k.csv")
    with Catalog.open(folder / "c.sqlite") as catalog:
        yield catalog


@pytest.mark.parametrize(("part", "key"), [("K-18", "rotor_inertia"), ("K-12", "mass")])
def test_an_outlier_of_its_family_has_a_row_and_the_title(catalog: Catalog, part, key) -> None:
    known = catalog.find(part)
    (row,) = [f for f in implied_figures(catalog, {known.id: catalog.motor(part)})[known.id]
              if f.severity]  # fmt: skip
    assert (row.key, row.severity, row.by_family) == (key, "error", True)
    assert row.ratio == pytest.approx(10.0, rel=0.02)
    assert row.low < row.ratio < row.high
    (axes,) = figures_of(catalog, part).axes
    name = key.replace("_", " ")
    assert axes.get_title("left").startswith(f"{part}: the printed {name} disagrees with the rest")
    assert any("by its family" in t.get_text() for t in axes.get_yticklabels())


def test_a_sound_motor_agrees_with_itself(catalog: Catalog) -> None:
    known = catalog.find("K-24")
    found = implied_figures(catalog, {known.id: catalog.motor("K-24")})[known.id]
    assert found
    assert not any(f.severity for f in found)
