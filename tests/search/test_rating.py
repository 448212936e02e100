"""A motor that carries more than its maker rates it for says so, though its heat balance allows it.

Expected numbers: T = Km·Ia, hence 0.5 N·m at 0.1 N·m/A is 5 A, 1.67 times 3 A (Fitzgerald,
Kingsley, Umans, Electric Machinery, 6th ed., section 7.7; number from memory).
"""

from pathlib import Path

import numpy as np
import pytest

from motorfolio.catalog.requirement.read import read_requirement
from motorfolio.catalog.search.documents import search_document
from motorfolio.catalog.search.run import search
from motorfolio.catalog.store import Catalog

from .made import catalog_of

NAN = np.nan


def remarks(path: Path, requirement: dict, **figures: float) -> list[str]:
    """The remarks on ratings of the one motor of such a catalog."""
    given = {
        "nominal_voltage": 48.0, "friction_torque": 0.0, "thermal_resistance": 2.0, "mass": 1.0,
        "maximum_winding_temperature": 155.0, **figures,
    }  # fmt: skip
    catalog_of(path, given, {"torque_constant": 0.1, "armature_resistance": 0.5,
                             "rotor_inertia": 1e-5, "no_load_current": 0.0})  # fmt: skip
    with Catalog.open(path) as catalog:
        found = search(catalog, read_requirement(requirement))
        document = search_document(found, (), catalog)
    (candidate,) = document["candidates"]
    return [r for r in candidate["remarks"] if "rated current" in r]


POINT = {"point": [{"torque": "0.5 N·m", "speed": "100 rad/s"}]}


def test_beyond_the_rated_current_is_said_with_the_rated_torque(tmp_path: Path) -> None:
    (said,) = remarks(tmp_path / "c", POINT, nominal_current=3.0, nominal_torque=0.3)
    assert said == (
        "it carries 1.7 times its rated current (rated torque 0.3 N·m): the sheet's thermal "
        "resistances allow it, perhaps on a cooling plate; ask the maker"
    )


def test_without_a_rated_torque_the_current_is_named(tmp_path: Path) -> None:
    (said,) = remarks(tmp_path / "c", POINT, nominal_current=3.0)
    assert "1.7 times its rated current of 3 A in the armature" in said


def test_a_rated_torque_alone_is_a_rating_too(tmp_path: Path) -> None:
    (said,) = remarks(tmp_path / "c", POINT, nominal_torque=0.25)
    assert "2 times its rated current (rated torque 0.25 N·m)" in said


def test_a_mounting_that_was_given_is_named(tmp_path: Path) -> None:
    figures = {"nominal_current": 3.0, "thermal_resistance": NAN,
               "thermal_resistance_winding_housing": 0.5,
               "thermal_resistance_housing_ambient": 1.5}  # fmt: skip
    plate = {"mounting": {"thermal_resistance": "1 K/W"}}
    (said,) = remarks(tmp_path / "c", {**POINT, **plate}, **figures)
    assert "the mounting that was given allows it" in said


@pytest.mark.parametrize(
    "figures",
    [
        {"nominal_current": 5.2},  # inside its rating
        {"nominal_current": 4.9},  # beyond it by what a rating is round to
        {},  # no rating
        # at 100 of 200 rad/s the line between 8 A and 3 A is at 5.5 A
        {"nominal_current": 3.0, "continuous_stall_current": 8.0, "nominal_speed": 200.0},
    ],
)
def test_inside_the_rating_nothing_is_said(tmp_path: Path, figures: dict) -> None:
    assert remarks(tmp_path / "c", POINT, **figures) == []


def test_above_the_line_between_two_ratings_it_is_said(tmp_path: Path) -> None:
    """At 100 of 200 rad/s the line between 5 A and 3 A is at 4 A: 1.25 times."""
    figures = {"nominal_current": 3.0, "continuous_stall_current": 5.0, "nominal_speed": 200.0}
    (said,) = remarks(tmp_path / "c", POINT, **figures)
    assert "carries 1.2 times" in said or "carries 1.3 times" in said
