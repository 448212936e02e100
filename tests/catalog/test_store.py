"""What is stored comes back: documents, batches and columns, through a new connection."""

import math

import numpy as np
import pytest

from motorfolio.catalog.importing.documents import motor_documents
from motorfolio.catalog.store import Catalog, CatalogError, columns
from motorfolio.catalog.store.intervals import encode
from motorfolio.catalog.store.write import Writer
from motorfolio.schema.motor import Amount, Cell, ConstantColumn, Finding, Reconciled
from motorfolio.schema.vocabulary import quantities

from .conftest import column


def reconciled(batch):
    """Constants and findings made by hand, so that the store is tested alone."""
    n = len(batch)
    value = np.array([0.0302, 0.0604 / math.sqrt(1.5), np.nan])[:n]
    constants = {
        "torque_constant": ConstantColumn(
            value, value * 0.98, value * 1.02, np.array([0, 1, -1], dtype=np.int8)[:n],
            [(), ("torque_constant", "nominal_voltage")], np.array([0, 1, 0], dtype=np.int32)[:n],
        )
    }  # fmt: skip
    findings = [
        Finding(
            part_number="A-1", severity="error", relation="kt-kv", figures=("torque_constant",),
            suspect="torque_constant", ratio=1.41, cause="peak-vs-rms",
            other_causes=("unexplained",),
            implied=Amount(value=0.0214, unit="N·m/A"), cell=Cell(sheet="Motors", row=2, column=3),
            message="Torque constant is 1.41 times what the others imply.",
        ),
        Finding(
            part_number="A-2", scope="column", part_numbers=("A-2", "A-3"), severity="note",
            relation="thermal", figures=("price",), message="Both say so.",
        ),
    ]  # fmt: skip
    return Reconciled(batch, constants, findings, [0, 1])


def store(path, batch, result=None):
    result = result or reconciled(batch)
    with Catalog.open(path, create=True) as catalog, catalog.changing() as connection:
        number = connection.execute(
            "INSERT INTO imports(at, files, motors) VALUES ('', 1, 3)"
        ).lastrowid
        writer = Writer(connection, number)
        file_id = writer.add_file(
            file=batch.source.file, sha256=batch.source.sha256, format="csv", layout="rows",
            options="", remarks=[],
        )  # fmt: skip
        stored = writer.add_table(file_id, 0, batch, result)
        columns.rebuild(connection, stored.touched_sources)
    return stored


def near(a, b):
    """Equal, numbers to 1e-9, in nested documents."""
    if isinstance(a, dict):
        return a.keys() == b.keys() and all(near(a[k], b[k]) for k in a)
    if isinstance(a, list):
        return len(a) == len(b) and all(map(near, a, b))
    if isinstance(a, float) and isinstance(b, int | float):
        return a == pytest.approx(b, rel=1e-9)
    return a == b


def test_a_stored_motor_is_the_motor_that_was_read(catalog_file, batch):
    store(catalog_file, batch)
    expected = motor_documents(reconciled(batch))
    with Catalog.open(catalog_file) as catalog:
        for document in expected:
            found = catalog.motor(document["part_number"])
            for key in document:
                assert near(document[key], found[key]), key
            assert found.keys() == document.keys()


def test_a_motor_says_where_each_figure_stood(catalog_file, batch):
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        first, second = catalog.motor("A-1"), catalog.motor("A-2")
    place = {"sheet": "Motors", "page": None, "row": 2, "column": 3}
    assert first["figures"]["torque_constant"]["cell"] == place
    assert first["figures"]["torque_constant"]["heading"] == "Kt (mNm/A)"
    assert second["figures"]["torque_constant"]["cell"]["row"] == 9
    assert first["figures"]["price"]["unit"] == "EUR"
    assert first["figures"]["price"]["value"] == 0
    (condition,) = second["conditions"]
    assert condition["when"] == "at 48 V"
    assert condition["figures"]["nominal_current"]["cell"]["row"] == 3


def test_the_batch_is_rebuilt_as_it_was(catalog_file, batch):
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        again = catalog.batch(1)
    assert (again.part_number, again.maker, again.series) == (
        batch.part_number, batch.maker, batch.series,
    )  # fmt: skip
    assert again.headings == batch.headings
    assert again.source == batch.source
    assert again.notes == batch.notes
    assert again.points == batch.points
    assert again.conditions == batch.conditions
    assert again.magnet == batch.magnet
    for name in ("commutation", "commutation_basis", "magnet_basis", "reference_temperature",
                 "reference_temperature_basis"):  # fmt: skip
        np.testing.assert_array_equal(getattr(again, name), getattr(batch, name))
    assert again.figures.keys() == batch.figures.keys()
    pairs = [(again.figures[key], batch.figures[key]) for key in batch.figures]
    pairs.append((again.repeats["torque_constant"][0], batch.repeats["torque_constant"][0]))
    for got, had in pairs:
        given = ~np.isnan(had.value)
        for part in ("value", "low", "high"):
            np.testing.assert_allclose(getattr(got, part), getattr(had, part), rtol=1e-9)
        assert got.text == had.text
        assert got.qualifiers == had.qualifiers
        for part in ("row", "column", "heading"):
            np.testing.assert_array_equal(getattr(got, part)[given], getattr(had, part)[given])
        for i in np.flatnonzero(given):
            assert got.conventions[got.convention[i]] == had.conventions[had.convention[i]]
    assert again.texts["protection"].text == batch.texts["protection"].text


def test_columns_are_the_same_from_the_cache_and_from_the_rows(catalog_file, batch):
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        cached = catalog.columns(columns.CACHED)
        rows = columns.select(catalog.connection, 1, columns.CACHED)
    assert cached["id"].tolist() == [1, 2, 3]
    for name in columns.CACHED:
        np.testing.assert_array_equal(cached[name], rows[name], err_msg=name)
    assert cached["torque_constant"][0] == 0.0302
    assert cached["commutation"].tolist() == [0, 2, 2]
    assert cached["magnet_coefficient"].tolist() == [0, 0, -0.0011]


def test_a_column_that_is_not_cached_comes_from_the_rows(catalog_file, batch):
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        found = catalog.columns(["published_torque_constant", "axial_load", "torque_constant"])
        np.testing.assert_array_equal(found["published_torque_constant"], [0.0302, 0.0604, np.nan])
        assert np.isnan(found["axial_load"]).all()
        with pytest.raises(KeyError):
            catalog.columns(["axle_load"])


def test_currents_come_in_armature_amperes(catalog_file, batch):
    """A servo's rms amperes times √(3/2): so that copper loss is Ra·Ia² (physics of the
    power-invariant transformation); a brushed motor's amperes are what they are."""
    from motorfolio.schema.convention import Convention

    rms = Convention(current="rms")
    batch.figures["peak_current"] = column(
        [3.0, 3.0, 3.0], ["3", "3", "3"], heading=0, at=9, conventions=[rms]
    )
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        found = catalog.columns(["armature_peak_current", "peak_current"])
    assert found["armature_peak_current"] == pytest.approx([3.0, 3 * 1.5**0.5, 3 * 1.5**0.5])
    assert found["peak_current"].tolist() == [3, 3, 3]


@pytest.mark.parametrize(
    ("low", "high", "expected"),
    [(39.5, 40.5, 40.0), (-30.0, 110.0, np.nan), (np.nan, 40.0, np.nan)],
)
def test_a_range_of_temperatures_is_no_rating_ambient(catalog_file, batch, low, high, expected):
    batch.figures["ambient_temperature"] = column(
        [40.0] * 3, ["x"] * 3, heading=0, at=9, low=[low] * 3, high=[high] * 3
    )
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        np.testing.assert_array_equal(
            catalog.columns(["rating_ambient"])["rating_ambient"], [expected] * 3
        )


def test_rows_edited_by_hand_are_what_counts(catalog_file, batch):
    store(catalog_file, batch)
    with Catalog.open(catalog_file, write=True) as catalog:
        catalog.connection.execute("UPDATE constants SET torque_constant = 0.5 WHERE id = 2")
        assert catalog.columns(["torque_constant"])["torque_constant"][1] == 0.5


def test_pole_pairs_are_half_the_poles(catalog_file, batch):
    batch.figures["poles"] = column([8, 8, np.nan], ["8", "8", None], heading=0, at=9)
    batch.figures["pole_pairs"] = column([3, np.nan, np.nan], ["3", None, None], heading=0, at=10)
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        np.testing.assert_array_equal(catalog.columns(["pole_pairs"])["pole_pairs"], [3, 4, np.nan])


def test_the_views_read_plainly(catalog_file, batch):
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        wide = catalog.connection.execute(
            "SELECT part_number, torque_constant_Nm_per_A, published_torque_constant_Nm_per_A, "
            "nominal_voltage_V, protection FROM motors"
        ).fetchall()
        published = catalog.connection.execute(
            "SELECT heading, text, printed_unit, value, low, high, unit, convention, sheet, "
            '"row", "column" FROM figures_as_published WHERE part_number = \'A-1\' '
            "AND quantity = 'torque_constant'"
        ).fetchall()
        findings = catalog.connection.execute(
            "SELECT part_number, severity, message FROM findings_plain"
        ).fetchall()
    assert wide[0] == ("A-1", 0.0302, 0.0302, 12.0, "IP54")
    assert [row[0] for row in wide] == ["A-1", "A-2", "A-3"]
    assert published == [
        ("Kt (mNm/A)", "30.2", "mNm/A", 0.0302, pytest.approx(0.03015), pytest.approx(0.03025),
         "N·m/A", "rms", "Motors", 2, 3)
    ]  # fmt: skip
    assert findings[0][:2] == ("A-1", "error")


def test_every_quantity_has_its_column(catalog_file, batch):
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        names = {row[1] for row in catalog.connection.execute("PRAGMA table_info(figure_value)")}
        text = {row[1] for row in catalog.connection.execute("PRAGMA table_info(figure_text)")}
    numbers = {key for key, q in quantities().items() if not q.text}
    assert names == numbers | {"id"}
    assert text == quantities().keys() - {"part_number", "maker", "series"} | {"id"}


def test_findings_come_worst_first_and_by_motor(catalog_file, batch):
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        everything = catalog.findings()
        of_third = catalog.findings(["A-3"])
    assert [f["severity"] for f in everything] == ["error", "note"]
    assert everything[0]["cell"] == {"sheet": "Motors", "page": None, "row": 2, "column": 3}
    assert everything[0]["implied"] == {"value": 0.0214, "unit": "N·m/A"}
    assert everything[1]["part_numbers"] == ["A-2", "A-3"]
    assert of_third == [everything[1]]


def test_a_motor_of_two_makers_must_be_named_with_its_maker(catalog_file, batch):
    store(catalog_file, batch)
    batch.maker = ["Other/Half"] * 3
    store(catalog_file, batch)
    with Catalog.open(catalog_file) as catalog:
        with pytest.raises(CatalogError, match="Examplar/A-1, Other/Half/A-1"):
            catalog.motor("A-1")
        assert catalog.motor("Examplar/A-1")["maker"] == "Examplar"
        assert catalog.motor("Other/Half/A-1")["maker"] == "Other/Half"
        with pytest.raises(CatalogError, match="no motor Nobody/A-1"):
            catalog.motor("Nobody/A-1")


def test_intervals_are_kept_by_the_last_digit():
    value = np.array([0.0302, 24800.0, 5.0, 19.0, 0.5])
    low = np.array([0.03015, 24750.0, 5.0, 10.0, np.nan])
    high = np.array([0.03025, 24850.0, 5.0, 28.0, 0.5])
    figures = column(
        value, ["30.2", "24800", "5", "10…28", "≤ 0.5"], heading=0, at=1, low=low, high=high
    )
    digits, others = encode(figures, np.array([1e-3, 1.0, 1.0, 1.0, 1.0]))
    np.testing.assert_array_equal(digits, [-1, 2, np.nan, np.nan, np.nan])
    assert [entry for entry, _, _ in others] == [3, 4]


def test_many_motors_under_changing_headings(catalog_file):
    """Motors whose conventions differ share as many patterns as there are combinations."""
    from motorfolio.schema.batch import blank_batch
    from motorfolio.schema.convention import Convention

    n = 500
    batch = blank_batch([f"N-{i}" for i in range(n)])
    which = [i % 3 for i in range(n)]
    conventions = [Convention(current=kind) for kind in ("dc", "rms", "peak")]
    batch.figures["torque_constant"] = column(
        [0.1] * n, ["100"] * n, heading=-1, at=3, conventions=conventions, which=which
    )
    empty = {name: c for name, c in reconciled(blank_batch(["x"])).constants.items() if not name}
    store(catalog_file, batch, Reconciled(batch, empty))
    with Catalog.open(catalog_file) as catalog:
        patterns = catalog.connection.execute(
            "SELECT count(DISTINCT pattern) FROM motor"
        ).fetchone()
        kinds = [m["figures"]["torque_constant"]["convention"]["current"] for m in catalog.motors()]
        rows = [m["figures"]["torque_constant"]["cell"]["row"] for m in catalog.motors()]
    assert patterns == (3,)
    assert kinds == [["dc", "rms", "peak"][i % 3] for i in range(n)]
    assert rows == list(range(2, n + 2))
