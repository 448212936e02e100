"""The scorer itself: a perfect reading has no fault, and every kind of fault is seen."""

from __future__ import annotations

import copy
from typing import Any

import pytest
from score import Score, compare, expectation, names

READABLE = [name for name in names() if not expectation(name).get("error")]


def perfect(wanted: dict[str, Any]) -> dict[str, Any]:
    """The import document of a reader that makes no mistake."""
    wanted = copy.deepcopy(wanted)
    motors = [
        {
            "part_number": part,
            "figures": expected["figures"]
            | {key: {"value": text} for key, text in expected.get("texts", {}).items()},
            "conditions": [
                {"when": c["when"][0], "figures": c["figures"]}
                for c in expected.get("conditions", [])
            ],
            "points": expected.get("points", []),
        }
        for part, expected in wanted["motors"].items()
    ]
    unread = [
        {"part_number": None, "heading": text, "text": "", "guesses": []}
        for text in wanted.get("must_be_unread", [])
    ]
    return {"files": [{"motors": motors, "unread": unread}]}


def compared(wanted: dict[str, Any], document: dict[str, Any]) -> Score:
    card = Score("trial")
    compare(wanted, document, card)
    return card


@pytest.mark.parametrize("name", READABLE)
def test_a_perfect_reading_has_no_fault(name: str) -> None:
    wanted = expectation(name)
    card = compared(wanted, perfect(wanted))
    assert not card.wrong + card.missing + card.superfluous
    assert card.unread == 0
    assert card.right >= sum(len(m["figures"]) for m in wanted["motors"].values())


def _trial() -> tuple[dict[str, Any], dict[str, Any], dict[str, Any]]:
    wanted = expectation("two_temperatures")
    document = perfect(wanted)
    return wanted, document, document["files"][0]["motors"][0]


def test_a_wrong_value_a_lost_convention_and_an_invented_figure_are_wrong() -> None:
    wanted, document, motor = _trial()
    motor["figures"]["rotor_inertia"]["value"] *= 1.001
    motor["figures"]["torque_constant"]["convention"] = None
    motor["figures"]["pole_pairs"] = {"value": 4}
    motor["conditions"][0]["figures"]["back_emf_constant"]["value"] *= 2
    card = compared(wanted, document)
    assert len(card.wrong) == 5  # the condition's value is wrong and not on the sheet
    assert not card.missing


def test_a_figure_is_missing_unless_listed() -> None:
    wanted, document, motor = _trial()
    del motor["figures"]["terminal_resistance"]
    assert len(compared(wanted, document).missing) == 1
    item = {"part_number": None, "heading": "x", "text": "", "guesses": ["terminal_resistance"]}
    document["files"][0]["unread"].append(item)
    card = compared(wanted, document)
    assert (card.unread, card.missing) == (1, [])


def test_motors_too_many_or_too_few_are_faults() -> None:
    wanted, document, _ = _trial()
    motors = document["files"][0]["motors"]
    motors[1] = {**motors[1], "part_number": "another"}
    card = compared(wanted, document)
    assert len(card.missing) == 1
    assert len(card.wrong) == 1


def test_what_must_be_listed_is_missing_when_it_is_not() -> None:
    wanted = expectation("undecidable_comma")
    document = perfect(wanted)
    document["files"][0]["unread"] = []
    document["files"][0]["motors"][0]["figures"]["peak_torque"] = {"value": 1.25}
    card = compared(wanted, document)
    assert len(card.missing) == 2
    assert card.wrong
