"""From which evidence on a convention is inferred, on misfits put in by hand."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable

import numpy as np
import pytest

from motorfolio.schema.batch import Batch
from motorfolio.schema.convention import Commutation, Convention, default_convention, to_dc
from motorfolio.schema.reconcile import inference
from motorfolio.schema.reconcile.inference import OPTIONS, Inferred, infer
from motorfolio.schema.reconcile.model import FIGURES, INDEX
from motorfolio.schema.reconcile.observed import observe
from motorfolio.schema.reconcile.problem import Problem
from motorfolio.schema.vocabulary import quantity

from .simulated_sheets import put, restate, single

BRUSHED, BLOCK, SINE = Commutation
RA, LA, KM, KE, KN = ("terminal_resistance", "terminal_inductance", "torque_constant",
                      "back_emf_constant", "speed_constant")  # fmt: skip
WHO = INDEX["peak_torque"]
STAR, DELTA = (
    {"between": "phase", "connection": "star"},
    {"between": "phase", "connection": "delta"},
)

Loss = Callable[[int, dict[str, float]], float]
"""χ² of a motor whose figures mean so much more, in logarithms, than the customary reading."""


def table(kind: Commutation, *keys: str, n: int = 1) -> Batch:
    """Motors that print these figures and state no convention."""
    batch = single(kind, n)
    for key in keys:
        for row in range(n):
            put(batch, key, row, 0.03)
        restate(batch, key, basis="assumed")
    return batch


def inferred(monkeypatch, batch: Batch, loss: Loss) -> tuple[Batch, list[Inferred]]:
    part = observe(batch)
    part.y[:, WHO] = np.arange(len(batch))
    kept = part.y.copy()

    def misfit(some: Problem, robust: bool = False) -> tuple[np.ndarray, None]:
        assert robust
        out = []
        for y in some.y:
            motor = int(y[WHO])
            more = y - kept[motor]
            out.append(loss(motor, {FIGURES[i]: more[i] for i in np.flatnonzero(more).tolist()}))
        return np.array(out, dtype=float), None

    monkeypatch.setattr(inference, "misfit", misfit)
    found = infer(batch, part)
    assert (part.y == kept).all()
    return found


def meaning(kind: Commutation, key: str, **changes: str | None) -> float:
    """How much more a figure means than in the customary convention, in logarithms."""
    usual = default_convention(key, quantity(key).carries, kind)
    factor = to_dc(key, usual.with_(**changes), kind) / to_dc(key, usual, kind)
    return math.log(factor)


def means(kind: Commutation, more: dict[str, float], key: str, **changes: str | None) -> bool:
    return abs(more.get(key, 0.0) - meaning(kind, key, **changes)) < 1e-9


UNUSUAL = [
    # how much less usual than the default, as −2 × log odds (common practice, no source)
    (SINE, KM, {"current": "peak"}, 3.0, "currents peak"),
    (SINE, KM, {"current": "dc"}, 5.0, "currents dc, through two phases"),
    (SINE, KE, {"voltage": "peak"}, 2.5, "back-EMF line-to-line peak"),
    (SINE, KE, {"voltage": "peak", "between": "phase"}, 4.0, "back-EMF of a phase, peak"),
    (SINE, KE, {"voltage": "rms", "between": "phase"}, 4.5, "back-EMF of a phase, rms"),
    (SINE, RA, STAR, 3.0, "resistance and inductance of a star's phase"),
    (SINE, RA, DELTA, 6.0, "resistance and inductance of a delta's winding"),
    (BLOCK, KM, {"current": "rms"}, 4.0, "currents rms"),
    (BLOCK, KE, {"voltage": "peak", "between": "lines"}, 3.0,
     "back-EMF line-to-line peak of a sine"),
    (BLOCK, KN, {"voltage": "rms", "between": "lines"}, 4.0,
     "back-EMF line-to-line rms of a sine"),
    (BLOCK, LA, STAR, 3.0, "resistance and inductance of a star's phase"),
    (BLOCK, LA, DELTA, 6.0, "resistance and inductance of a delta's winding"),
]  # fmt: skip


@pytest.mark.parametrize(("kind", "key", "changes", "cost", "words"), UNUSUAL)
@pytest.mark.parametrize("more", [0.1, 0.0, -0.1])
def test_an_unusual_convention_must_fit_better_by_nine_and_its_cost(
    monkeypatch, kind, key, changes, cost, words, more
) -> None:
    batch = table(kind, key)

    def loss(_: int, shift: dict[str, float]) -> float:
        if means(kind, shift, key, **changes):
            return 50.0
        return 50.0 + (20.0 if shift else 9.0 + cost + more)

    after, found = inferred(monkeypatch, batch, loss)
    (convention,) = after.figures[key].conventions
    if more < 0:
        assert found == []
        assert after is batch
        return
    (one,) = found
    assert (one.kind, one.figures, one.words, one.departs) == (kind, (key,), (words,), (words,))
    assert one.against == pytest.approx(9 + cost + more)
    assert (one.motors, one.entries.tolist(), one.rivals) == (1, [0], ())
    assert convention == batch.figures[key].conventions[0].with_(**changes, basis="inferred")
    assert batch.figures[key].conventions[0].basis == "assumed"


@pytest.mark.parametrize(("worse", "sure"), [(6.1, True), (5.9, False)])
def test_the_customary_convention_is_named_where_the_figures_show_it(monkeypatch, worse, sure):
    """Every other one is worse by nine: here by its rarity of three and this."""
    batch = table(SINE, RA, LA)

    def loss(_: int, shift: dict[str, float]) -> float:
        if not shift:
            return 7.0
        return 7.0 + (worse if means(SINE, shift, RA, **STAR) else 19.0)

    after, found = inferred(monkeypatch, batch, loss)
    assert bool(found) == sure
    for key in (RA, LA):
        (convention,) = after.figures[key].conventions
        assert convention == Convention(between="lines", basis="inferred" if sure else "assumed")
    if sure:
        (one,) = found
        assert (one.figures, one.departs, one.against, one.rivals) == ((RA, LA), (), 0.0, ())
        assert one.words == ("resistance and inductance line-to-line",)


@pytest.mark.parametrize(("against", "departs"), [(12.9, True), (13.1, False)])
def test_no_motor_says_more_than_twenty_five(monkeypatch, against, departs) -> None:
    """One for a star's phase by far, one against it: 25 less 13 and the cost of three is nine."""

    def loss(motor: int, shift: dict[str, float]) -> float:
        star = means(SINE, shift, RA, **STAR)
        if shift and not star:
            return 9000.0
        return (100.0 if star else 900.0) if motor == 0 else 40.0 + against * star

    _, found = inferred(monkeypatch, table(SINE, RA, n=2), loss)
    assert bool(found and found[0].departs) == departs


def test_what_motors_say_is_added(monkeypatch) -> None:
    for each, departs in ((4.1, True), (3.9, False)):
        _, found = inferred(
            monkeypatch, table(SINE, RA, n=3),
            lambda _, shift, each=each: 0.0 if means(SINE, shift, RA, **STAR) else
            (25.0 if shift else each),
        )  # fmt: skip
        assert bool(found) == departs
        if departs:
            assert found[0].against == pytest.approx(3 * each)
            assert (found[0].motors, found[0].entries.tolist()) == (3, [0, 1, 2])


@pytest.mark.parametrize(("n", "asked"), [(59, 59), (60, 60), (61, 60), (200, 60)])
def test_sixty_motors_speak_for_all(monkeypatch, n: int, asked: int) -> None:
    seen = set()

    def loss(motor: int, shift: dict[str, float]) -> float:
        seen.add(motor)
        return 20.0 if shift else 0.0

    _, ((one,)) = inferred(monkeypatch, table(BLOCK, KM, n=n), loss)
    assert (one.motors, one.entries.tolist()) == (asked, list(range(n)))
    assert len(seen) == asked
    assert max(seen) == n - 1


# ---- several groups of figures at once


def both(monkeypatch, told: dict[tuple[bool, bool], float], other: float = 25.0):
    """χ² by whether the back-EMF is of a peak and the resistance of a star's phase."""

    def loss(_: int, shift: dict[str, float]) -> float:
        peak, star = means(SINE, shift, KE, voltage="peak"), means(SINE, shift, RA, **STAR)
        if (KE in shift and not peak) or (RA in shift and not star):
            return other
        return told[peak, star]

    return inferred(monkeypatch, table(SINE, KE, RA), loss)


PEAK_WORDS = "back-EMF line-to-line peak"
STAR_WORDS = "resistance and inductance of a star's phase"
LINES_WORDS = "resistance and inductance line-to-line"


@pytest.mark.parametrize(("better", "departs"), [(14.6, True), (14.4, False)])
def test_rarities_of_two_groups_add(monkeypatch, better, departs) -> None:
    """2.5 and 3, and nine for the departure."""
    told = {(True, True): 0.0, (False, False): better, (True, False): 24.0, (False, True): 24.0}
    after, found = both(monkeypatch, told)
    assert bool(found) == departs
    if departs:
        (one,) = found
        assert one.figures == (KE, RA)
        assert one.words == one.departs == (PEAK_WORDS, STAR_WORDS)
        assert after.figures[KE].conventions[0].voltage == "peak"
        assert after.figures[RA].conventions[0].connection == "star"


def test_a_group_is_named_only_if_it_departs_or_is_sure(monkeypatch) -> None:
    """Peak surely; of the winding the star is a rival of the customary lines, three worse by its
    rarity, and five more."""
    for worse, words, rivals in ((5.0, (PEAK_WORDS,), (STAR_WORDS,)),
                                 (7.0, (PEAK_WORDS, LINES_WORDS), ())):  # fmt: skip
        told = {(True, False): 0.0, (True, True): worse, (False, False): 24.0, (False, True): 24.0}
        after, (one,) = both(monkeypatch, told)
        assert (one.words, one.departs, one.rivals) == (words, (PEAK_WORDS,), rivals)
        assert one.against == pytest.approx(24.0)
        assert after.figures[KE].conventions[0].basis == "inferred"
        basis = after.figures[RA].conventions[0].basis
        assert basis == ("inferred" if len(words) > 1 else "assumed")
        assert one.figures == ((KE, RA) if len(words) > 1 else (KE,))


def test_a_group_of_which_nothing_is_known_ends_no_search(monkeypatch) -> None:
    """Whether the back-EMF is of a peak nobody can tell; of the winding the star is sure."""
    told = {(True, True): 0.0, (True, False): 24.0, (False, False): 24.0, (False, True): 0.0}
    after, (one,) = both(monkeypatch, told)
    assert (one.figures, one.words, one.rivals) == ((RA,), (STAR_WORDS,), (PEAK_WORDS,))
    assert after.figures[KE].conventions[0].basis == "assumed"


def test_rivals_are_three_in_the_order_of_their_odds_and_told_by_what_differs(monkeypatch) -> None:
    """The default is no rival where it is worse by nine."""
    rms_phase = {"voltage": "rms", "between": "phase"}
    peak_phase = {"voltage": "peak", "between": "phase"}

    def loss(_: int, shift: dict[str, float]) -> float:
        emf = {
            name: means(SINE, shift, KE, **c)
            for name, c in (
                ("peak", {"voltage": "peak"}),
                ("phase", peak_phase),
                ("rms", rms_phase),
            )
        }
        star, delta = means(SINE, shift, RA, **STAR), means(SINE, shift, RA, **DELTA)
        if not any(emf.values()):
            return 25.0
        # with the rarities: peak 2.5, peak star 6.5, of a phase peak 4 + 3, rms 4.5 + 2, star 7.6
        if emf["peak"]:
            return 24.0 if delta else 1.0 if star else 0.0
        if emf["phase"]:
            return 24.0 if star or delta else 3.0
        return 0.1 if star else 24.0 if delta else 2.0

    _, (one,) = inferred(monkeypatch, table(SINE, KE, RA), loss)
    assert one.words == (PEAK_WORDS,)
    of_phase = "back-EMF of a phase, rms"
    assert sorted(one.rivals[:2]) == sorted((STAR_WORDS, of_phase))
    assert one.rivals[2] == "back-EMF of a phase, peak"
    assert len(one.rivals) == 3


def test_a_rival_in_two_groups_is_told_in_both(monkeypatch) -> None:
    told = {(True, True): 4.0, (True, False): 0.0, (False, False): 24.0, (False, True): 4.0}
    _, (one,) = both(monkeypatch, told)
    usual = "back-EMF line-to-line rms"
    assert one.rivals == (f"{usual} with {STAR_WORDS}", STAR_WORDS)


# ---- which figures


def fits_star(_: int, shift: dict[str, float]) -> float:
    return 0.0 if means(SINE, shift, RA, **STAR) or means(SINE, shift, LA, **STAR) else 20.0


def test_figures_that_measure_nothing_are_not_asked(monkeypatch) -> None:
    """All of them bounds: neither in the words nor changed."""
    batch = table(SINE, RA, LA, n=2)
    batch.figures[LA].qualifiers = {0: "at most", 1: "at least"}
    after, (one,) = inferred(monkeypatch, batch, fits_star)
    assert one.figures == (RA,)
    assert after.figures[LA].conventions[0].basis == "assumed"
    batch.figures[RA].value[:] = np.nan
    assert inferred(monkeypatch, batch, fits_star) == (batch, [])
    batch.figures[LA].qualifiers = {0: "at most"}
    _, (one,) = inferred(monkeypatch, batch, fits_star)
    assert one.figures == (LA,)


def test_stated_conventions_stay(monkeypatch) -> None:
    """Of a palette only the assumed ones are changed; a column without one is not asked."""
    batch = table(SINE, RA, LA, n=2)
    stated = Convention(between="lines", basis="stated")
    column = batch.figures[RA]
    column.conventions = [stated, *column.conventions]
    column.convention[:] = (0, 1)
    batch.figures[LA].conventions += [stated]
    batch.figures[LA].convention[:] = 1
    after, (one,) = inferred(monkeypatch, batch, lambda motor, shift: fits_star(motor, shift)
                             if motor else 0.0)  # fmt: skip
    assert one.figures == (RA,)
    assert after.figures[RA].conventions == [stated, Convention(**STAR, basis="inferred")]
    assert after.figures[LA] is batch.figures[LA]


def test_what_one_kind_of_motors_shows_holds_for_that_kind(monkeypatch) -> None:
    """In a table of several kinds; brushed motors are not asked at all."""
    for apart in (True, False):
        batch = table(SINE, RA, n=6)
        batch.commutation[:] = (BRUSHED, SINE, BLOCK, SINE, BRUSHED, BLOCK)
        if apart:
            batch.figures[RA].conventions *= 2
            batch.figures[RA].convention[:] = batch.commutation == SINE
        seen = set()

        def loss(motor: int, shift: dict[str, float], seen=seen) -> float:
            seen.add(motor)
            star = means(SINE, shift, RA, **STAR)
            return 20.0 * (star != (motor in (1, 3)) or (bool(shift) and not star))

        after, found = inferred(monkeypatch, batch, loss)
        assert [(one.kind, one.entries.tolist()) for one in found] == [
            (SINE, [1, 3]), (BLOCK, [2, 5]),
        ]  # fmt: skip
        assert seen == {1, 2, 3, 5}
        column = after.figures[RA]
        lines, star = Convention(between="lines"), Convention(**STAR, basis="inferred")
        assert [column.conventions[i] for i in column.convention.tolist()] == [
            lines, star, lines.with_(basis="inferred"), star, lines, lines.with_(basis="inferred"),
        ]  # fmt: skip
    assert inferred(monkeypatch, table(BRUSHED, RA), loss)[1] == []


# ---- what is told besides


def test_the_ratio_of_kt_and_ke_is_told_as_printed(monkeypatch) -> None:
    """Of the motors that print both."""
    batch = table(SINE, KM, KE, n=4)
    batch.figures[KM].value[:] = 0.06, 0.1, 0.065, 0.9
    batch.figures[KE].value[:] = 0.05, 0.05, 0.05, np.nan
    _, (one,) = inferred(monkeypatch, batch, lambda _, shift: 20.0 if shift else 0.0)
    assert one.signature == "Kt/Ke in SI as printed is 1.300"
    _, (one,) = inferred(monkeypatch, table(SINE, RA), lambda _, shift: 20.0 if shift else 0.0)
    assert one.signature == ""


def test_the_meanings_tried_are_constants() -> None:
    option = OPTIONS[SINE][0][1][0]
    with pytest.raises(dataclasses.FrozenInstanceError):
        option.cost = 1.0
