"""A figure in another unit and another convention, as a person asks for it.

What the text does not say is never made up: a figure without "rms" or "peak" is not turned into
either, and from a winding to the terminals it takes the connection. What is taken for granted is
told in ``remark``.
"""

from dataclasses import dataclass, replace
from typing import NamedTuple, NoReturn

from ..convention import Commutation, Convention, to_dc
from ..errors import MotorfolioError, excerpt
from .read import Unit, UnitError, finite, number_and_unit, read_unit, spelt_out, unit_of

COMMUTATIONS = ("sinusoidal", "block")
CONNECTIONS = ("star", "delta")

_CONSTANTS, _SPEED_CONSTANT = ("N·m/A", "V·s/rad"), ("rad/(s·V)",)
_RECIPROCALS = {_CONSTANTS: _SPEED_CONSTANT, _SPEED_CONSTANT: _CONSTANTS}

_CARRIERS = {
    "A": "nominal_current",
    "N·m/A": "torque_constant",
    "V": "back_emf_constant",
    "V·s/rad": "back_emf_constant",
    "rad/(s·V)": "speed_constant",
    "Ω": "terminal_resistance",
    "H": "terminal_inductance",
}
"""SI unit → a quantity whose conventions a figure in it has; a voltage goes as the back-EMF."""


class Converted(NamedTuple):
    """A value in the unit that was asked for; ``remark`` says how the text was taken where it
    has more than its plain meaning."""

    value: float
    unit: str
    remark: str


def convert(
    text: str, target: str, *, commutation: str | None = None, connection: str | None = None
) -> Converted:
    """A number with its unit in another unit: ("4.3 V/krpm", "N·m/A") → 0.0411 N·m/A.

    A torque constant and a back-EMF constant are the same SI number on the DC motor and convert
    to each other; a speed constant is their reciprocal. Words such as rms, peak, dc, lines and
    phase are conventions, and converted too: ("5 A rms", "A peak") → 7.07 A peak. ``commutation``
    ("sinusoidal", "block") is needed between dc and the others, ``connection`` ("star", "delta")
    between phase and lines. Degrees Celsius to kelvin and back are temperatures. Raises
    MotorfolioError.
    """
    _check(commutation, COMMUTATIONS)
    _check(connection, CONNECTIONS)
    wanted = unit_of(target)
    if wanted is None:
        raise UnitError(target, "not understood as a unit to convert to")
    value, unit = number_and_unit(text)
    known = unit_of(unit)
    said = []
    if known is not None and {known.si, wanted.si} == {"°C", "K"}:
        if wanted.si == "K":
            wanted = read_unit(target, ("°C",))
        said.append("taken as a temperature, not as a difference")
    reciprocal = next((_RECIPROCALS[k] for k in _RECIPROCALS if wanted.si in k), ())
    accepts = next((k for k in _RECIPROCALS if wanted.si in k), (wanted.si,))
    if not unit and wanted.si != "1":
        raise UnitError(text, f"a number without a unit; {spelt_out(accepts)} would do")
    turned = known is not None and known.si in reciprocal
    source = read_unit(unit, reciprocal if turned else accepts)
    factor, divisor, remarks = _conventions(_said(source), _said(wanted), commutation, connection)
    si = (value * source.factor + source.offset) * factor
    if turned:
        if si == 0:
            raise UnitError(unit, "a constant of zero has no reciprocal")
        si = 1 / si
        remarks.append(f"the reciprocal: 1/({text.strip()})")
    if "°C" not in (source.si, wanted.si):
        said += [source.remark, wanted.remark]
    remark = "; ".join(dict.fromkeys(r for r in (*said, *remarks) if r))
    return Converted(finite((si / divisor - wanted.offset) / wanted.factor, text), target, remark)


def _check(word: str | None, known: tuple[str, ...]) -> None:
    if word is not None and word not in known:
        raise MotorfolioError(f'"{excerpt(word)}" is not known here; {" or ".join(known)} would do')


# ---- conventions


@dataclass(frozen=True, slots=True)
class _Said:
    """A unit with what its words say: level "rms", "peak", "peak-to-peak" or "dc"; between
    "lines" or "phase"."""

    text: str
    si: str
    level: str | None
    between: str | None

    @property
    def in_amperes(self) -> bool:
        return self.si in ("A", "N·m/A")


def _said(unit: Unit) -> _Said:
    levels = [m for m in ("rms", "peak-to-peak", "peak", "dc", "ac") if m in unit.marks]
    if "ac" in levels and len(levels) > 1:
        levels.remove("ac")
    betweens = [m for m in ("lines", "phase") if m in unit.marks]
    for words in (levels, betweens):
        if len(words) > 1:
            raise UnitError(unit.text, f"it says both {words[0]} and {words[1]}")
    level = "rms" if levels == ["ac"] else next(iter(levels), None)
    return _Said(unit.text.strip(), unit.si, level, next(iter(betweens), None))


def _conventions(
    a: _Said, b: _Said, commutation: str | None, connection: str | None
) -> tuple[float, float, list[str]]:
    """From a to b by way of the DC motor: the factor that takes a figure under ``a`` there, the
    divisor that takes it from there to ``b``, and what was taken for granted."""
    if not (a.level or a.between or b.level or b.between):
        return 1.0, 1.0, []
    remarks: list[str] = []
    # amperes on one side and volts on the other: the figures are alike on the DC motor only
    crossing = a.si != b.si and a.in_amperes != b.in_amperes
    if crossing:
        a, b = (_with_lines(side, remarks) for side in (a, b))
    else:
        b = _kept(a, b, remarks)
    for side, other in ((a, b), (b, a)):
        if side.level is None and (other.level or crossing):
            _refuse_unsaid(side, "rms, peak or dc")
        if side.between is None and other.between and not crossing:
            _refuse_unsaid(side, "lines or phase")
    if (a.level, a.between) == (b.level, b.between) and not crossing:
        return 1.0, 1.0, remarks
    apart = crossing or a.between != b.between
    one_dc = (a.level == "dc") != (b.level == "dc")
    if a.si not in _CARRIERS or (apart and a.si == "A") or (one_dc and a.si == "V"):
        raise MotorfolioError(
            f'"{excerpt(a.text)}" to "{excerpt(b.text)}": no rule of the trade makes one of the '
            "other."
        )
    if apart and "phase" in (a.between, b.between) and connection is None:
        _refuse(a, b, "the connection: say star or delta")
    if one_dc and commutation is None:
        _refuse(a, b, "the commutation: say sinusoidal or block")
    sines = {"rms", "peak", "peak-to-peak"} & {a.level, b.level}
    if commutation is None and sines and (crossing or a.level != b.level):
        remarks.append("for sinusoidal currents and voltages")
    switched = Commutation[(commutation or "sinusoidal").upper()]
    return _to_dc(a, switched, connection), _to_dc(b, switched, connection), remarks


def _with_lines(side: _Said, remarks: list[str]) -> _Said:
    """Volts without a word on where they are measured are those between the terminals."""
    if side.in_amperes or side.between:
        return side
    remarks.append("volts between lines")
    return replace(side, between="lines")


def _kept(a: _Said, b: _Said, remarks: list[str]) -> _Said:
    """What is asked for, with the source's convention where it names none."""
    level, between = b.level or a.level, b.between or a.between
    kept = [word for word, own in ((level, b.level), (between, b.between)) if word != own and word]
    if kept:
        remarks.append(f"still {', '.join(kept)}, as no other convention is asked for")
    return replace(b, level=level, between=between)


def _to_dc(said: _Said, commutation: Commutation, connection: str | None) -> float:
    """Factor from a figure under this convention to that of the DC motor."""
    key = _CARRIERS[said.si]
    level = "peak" if said.level == "peak-to-peak" else said.level
    convention = Convention(level, level, said.between, connection)
    factor = to_dc(key, convention, commutation)
    if said.level == "peak-to-peak":
        factor *= 2.0 if key in ("torque_constant", "speed_constant") else 0.5
    return factor


def _refuse(a: _Said, b: _Said, what: str) -> NoReturn:
    raise MotorfolioError(f'"{excerpt(a.text)}" to "{excerpt(b.text)}" depends on {what}.')


def _refuse_unsaid(side: _Said, words: str) -> NoReturn:
    raise UnitError(side.text, f"it does not say whether {words}")
