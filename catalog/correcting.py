"""A person's word on a figure: accept the implied value, or give another, with a reason."""

import math

from ..schema.errors import MotorfolioError
from ..schema.figure.read import POINT, read_figure
from ..schema.reconcile.run import reconcile
from ..schema.units.read import read_unit
from ..schema.vocabulary import quantities
from .documents import Document
from .store import Catalog, columns, corrections
from .store.catalog import now
from .store.load import find, motors
from .store.rejudge import rejudge

IMPLIED = "implied"
DIGITS = 4
"""Significant digits of an implied value that is accepted."""


def correct(catalog: Catalog, part: str, quantity: str, value: str, reason: str) -> Document:
    """Let a figure read ``value`` from now on; the published one stays beside it.

    value: a number with unit, in the convention the figure is published in, or "implied" for
    what the other figures imply. The motor's table is judged anew. Returns the motor's document.
    Raises MotorfolioError where there is no such figure, or nothing is implied.
    """
    if not reason.strip():
        raise MotorfolioError("A correction needs a reason: --reason TEXT.")
    with catalog.changing() as connection:
        known = find(connection, part)
        motor = next(motors(connection, [known.id]))
        figure = _figure(motor, quantity)
        if value == IMPLIED:
            value = _implied(motor, quantity, figure)
        si, low, high = _in_si(quantity, value, figure)
        corrections.add(
            connection, maker=known.maker, part_number=known.part_number, quantity=quantity,
            text=value, value=si, low=low, high=high, reason=reason.strip(), at=now(),
            published_text=figure["text"],
        )  # fmt: skip
        _judge_anew(catalog, known.id)
        return next(motors(connection, [known.id]))


def revoke(catalog: Catalog, part: str, quantity: str) -> Document:
    """End a figure's correction: what is published counts again. Returns the motor's document."""
    with catalog.changing() as connection:
        known = find(connection, part)
        ended = corrections.revoke(
            connection,
            maker=known.maker,
            part_number=known.part_number,
            quantity=quantity,
            at=now(),
        )
        if not ended:
            raise MotorfolioError(f"{known.name} has no correction of {quantity}.")
        _judge_anew(catalog, known.id)
        return next(motors(connection, [known.id]))


def _judge_anew(catalog: Catalog, motor: int) -> None:
    connection = catalog.connection
    source = connection.execute("SELECT source FROM motor WHERE id = ?", (motor,)).fetchone()[0]
    rejudge(connection, source, corrections.stored(connection), reconcile)
    columns.rebuild(connection, [source])


def _figure(motor: Document, quantity: str) -> Document:
    figure = motor["figures"].get(quantity)
    if figure is None or isinstance(figure["value"], str):
        given = ", ".join(k for k, f in motor["figures"].items() if not isinstance(f["value"], str))
        raise MotorfolioError(
            f"{motor['part_number']} has no published figure {quantity}; it has {given}."
        )
    return figure


def _implied(motor: Document, quantity: str, figure: Document) -> str:
    for finding in motor["findings"]:
        if finding["suspect"] == quantity and finding["implied"]:
            value = finding["implied"]["value"]
            unit = figure.get("printed_unit") or finding["implied"]["unit"]
            accepts = _accepts(quantity, figure)
            try:
                read = read_unit(unit, accepts)
            except MotorfolioError:
                read = read_unit(finding["implied"]["unit"], accepts)
            return f"{_rounded((value - read.offset) / read.factor)} {read.text}"
    raise MotorfolioError(
        f"Nothing implies another {quantity} of {motor['part_number']}: no finding suspects it. "
        'Give the value with its unit instead, such as "30.2 mN·m/A".'
    )


def _rounded(value: float) -> str:
    """To DIGITS significant digits, never as an integer with zeros that mean nothing."""
    decimals = DIGITS - 1 - math.floor(math.log10(abs(value))) if value else 0
    return f"{value:.{decimals}f}" if decimals >= 0 else f"{value:.{DIGITS - 1}e}"


def _accepts(quantity: str, figure: Document) -> tuple[str, ...]:
    accepts = quantities()[quantity].accepts
    return (figure["unit"],) if accepts == ("currency",) else accepts


def _in_si(quantity: str, text: str, figure: Document) -> tuple[float, float, float]:
    read = read_figure(text, POINT)
    if read is None or read.also is not None:
        raise MotorfolioError(f'"{text}" is no single number with a unit, such as "30.2 mN·m/A".')
    unit = read_unit(read.unit, _accepts(quantity, figure))
    if unit.marks:
        raise MotorfolioError(
            f'"{text}" names a convention; give the value in that of the published figure.'
        )
    if not math.isfinite(read.value) or (read.value == 0 and not quantities()[quantity].zero):
        raise MotorfolioError(f'"{text}" is no possible {quantity}.')
    low, high = sorted(end * unit.factor + unit.offset for end in (read.low, read.high))
    return read.value * unit.factor + unit.offset, low, high
