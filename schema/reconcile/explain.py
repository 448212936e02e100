"""A finding in an engineer's words: the relation with the numbers put in, the cause, the rivals."""

import math
from collections.abc import Sequence

import numpy as np

from ..batch import Batch
from ..motor import Amount, Cell, Finding
from ..vocabulary import quantity
from ..written import in_words as name
from ..written import number as _number
from .causes import TORQUES, shape, slipped_power
from .columns import ColumnFault
from .inference import Inferred
from .kin import Kin
from .model import FIGURES
from .observed import to_model
from .relations import CONSTANT_FIGURES, CONVENTION, FAMILY, RELATIONS, Relation, own_relation
from .suspects import Suspicion

SENTENCES = {
    "power-of-ten": "a slipped decimal point or prefix",
    "rpm-vs-rad-per-second": "rpm and rad/s taken for one another (9.549)",
    "rev-per-second": "revolutions per second taken for rpm or rad/s (60 or 2π)",
    "ounce-inch-vs-millinewton-metre": "ounce-inches and millinewton-metres taken for one another "
    "(7.0616)",
    "pound-inch-vs-newton-metre": "pound-inches and newton-metres taken for one another (0.11298)",
    "kilogram-force-vs-newton": "kilogram-force and newton taken for one another (9.80665)",
    "peak-vs-rms": "a peak value where an rms value is meant, or the reverse (√2)",
    "line-vs-phase": "a phase value where a line-to-line value is meant, or the reverse",
    "sinusoidal-current-convention": "another convention of current or back-EMF than the stated "
    "one (dc, peak or rms amperes of a sinusoidal motor)",
    "hot-vs-cold": "a value at operating temperature among values at the reference temperature, "
    "or the reverse",
    "digits-transposed": "two transposed digits",
    "figures-swapped": "two cells exchanged",
    "neighbouring-column": "the value of the next winding",
    "inertia-convention": "another convention of inertia (oz·in² for oz·in·s², GD² for J)",
    "horsepower-vs-watt": "horsepower and watt taken for one another",
    "poles-vs-pole-pairs": "poles and pole pairs, or electrical and mechanical speed, taken for "
    "one another (2)",
    "peak-to-peak": "a peak-to-peak value (2)",
    "input-vs-output-power": "electrical input taken for mechanical output",
    "gear-output-side": "a figure of a gearbox's output side",
    "friction-ignored": "a torque constant printed as torque over current, friction left out",
    "continuous-stall": "the continuous figure at standstill, not U/Ra",
    "unexplained": "none of the usual mistakes fits",
}
"""What each cause is, in a few words."""

CENTIMETRES = "gf·cm and mN·m, or kgf·cm and N·m, taken for one another (0.0980665)"
FAR = math.log(30.0)
"""Kilogram-force for newton with 9.80665 over 100, not times 100: a logarithm below this."""

PRODUCT = "torque constant times current printed as the torque, friction left out"
"""What friction left out is where the figure is a torque."""

ROLES = {"K": CONSTANT_FIGURES, "R": ("terminal_resistance",)}
"""The figures that may stand for a role of a relation."""

BY_FIGURE: dict[str, list[Relation]] = {}
for _relation in RELATIONS:
    for _role in _relation.figures:
        for _figure in ROLES.get(_role, (_role,)):
            BY_FIGURE.setdefault(_figure, []).append(_relation)

PLACES = {"row": "row", "column": "column"}


def number(value: float, digits: int = 3) -> str:
    """A value as the sentences of a finding give it."""
    return _number(value, digits)


def capital(text: str) -> str:
    """The text with its first letter a capital, the others as they are."""
    return text[:1].upper() + text[1:]


def _times(ratio: float) -> str:
    return f"{number(ratio)} times" if ratio > 0.2 else f"1/{number(1 / ratio)} of"


class Narrator:
    """Writes the findings of one batch."""

    def __init__(self, batch: Batch) -> None:
        self.batch = batch
        self._kin: Kin | None = None
        self._factor: dict[str, list[float]] = {}
        self._dc: dict[str, list[float]] = {}

    @property
    def kin(self) -> Kin:
        """The families of the batch."""
        if self._kin is None:
            self._kin = Kin(self.batch)
        return self._kin

    def cell(self, motor: int, figure: str) -> Cell | None:
        """The place of a figure in the file."""
        column = self.batch.figures.get(figure)
        if column is None:
            return None
        row, col = int(column.row[motor]), int(column.column[motor])
        source = self.batch.source
        return Cell(sheet=source.sheet, page=source.page, row=row or None, column=col or None)

    def unit(self, figure: str, motor: int) -> tuple[str, float, float]:
        """Unit of a figure's heading, with factor and offset to SI."""
        column = self.batch.figures[figure]
        i = int(column.heading[motor])
        if i < len(self.batch.headings) and self.batch.headings[i].unit:
            heading = self.batch.headings[i]
            return heading.unit, heading.factor, heading.offset
        return quantity(figure).unit, 1.0, 0.0

    def amount(self, figure: str, motor: int, value_si: float) -> str:
        """A value in the unit the figure is printed in."""
        unit, factor, offset = self.unit(figure, motor)
        text = number((value_si - offset) / factor)
        return text if unit in ("", "1") else f"{text} {unit}"

    def printed(self, figure: str, motor: int) -> str:
        """A figure as printed, with its unit."""
        column = self.batch.figures[figure]
        text = (column.text[motor] or "").strip()
        if not text:
            return self.amount(figure, motor, float(column.value[motor]))
        unit = self.unit(figure, motor)[0]
        return text if unit in ("", "1") or unit in text else f"{text} {unit}"

    def place(self, motor: int, figure: str) -> str:
        """ " (row 7, column 5)", or nothing where unknown."""
        cell = self.cell(motor, figure)
        if cell is None or (cell.row is None and cell.column is None):
            return ""
        parts = [f"{word} {getattr(cell, key)}" for key, word in PLACES.items()
                 if getattr(cell, key) is not None]  # fmt: skip
        return f" ({', '.join(parts)})"

    def dc_factor(self, figure: str, motor: int) -> float:
        """Value of the DC motor at the reference temperature over the published one."""
        if figure not in self._factor:
            column = self.batch.figures[figure]
            self._factor[figure] = np.exp(to_model(figure, column, self.batch)).tolist()
        return self._factor[figure][motor]

    def dc(self, figure: str, motor: int) -> float:
        """A published figure as that of the DC motor, SI; NaN where not given."""
        if figure not in self._dc:
            column = self.batch.figures.get(figure)
            if column is None:
                return math.nan
            factor = np.exp(to_model(figure, column, self.batch))
            self._dc[figure] = (column.value * factor).tolist()
        return self._dc[figure][motor]

    def relation_of(self, motor: int, figure: str, doubted: frozenset[str]) -> tuple[
        Relation | None, dict[str, str]
    ]:  # fmt: skip
        """The first relation that ties the figure to published ones, and who stands for K, R."""
        for relation in BY_FIGURE.get(figure, ()):
            roles: dict[str, str] = {}
            for role in relation.others:
                options = ROLES.get(role, (role,))
                given = [k for k in options if math.isfinite(self.dc(k, motor))]
                better = [k for k in given if k == figure] or [k for k in given if k not in doubted]
                if better:
                    roles[role] = better[0]
            if len(roles) < len(relation.others):
                continue
            used = {relation.left, *roles.values()}
            if figure not in used or (used - {figure}) & doubted:
                continue
            if math.isfinite(self.dc(relation.left, motor)):
                return relation, roles
        return None, {}

    def equation(self, motor: int, relation: Relation, roles: dict[str, str]) -> tuple[str, float]:
        """The relation with the printed numbers put in, and its left over its right side."""
        values = {role: np.asarray(self.dc(key, motor)) for role, key in roles.items()}
        for role, key in roles.items():
            if role == "K" and key == "speed_constant":
                values[role] = 1.0 / values[role]
        right = float(relation.right(values))
        left = relation.left
        shown = {role: self.printed(key, motor) for role, key in roles.items()}
        if roles.get("K") == "speed_constant":
            shown["K"] = f"1/({shown['K']})"
        text = (
            f"{relation.formula}: {relation.template.format(**shown)} gives "
            f"{self.amount(left, motor, right / self.dc_factor(left, motor))}, printed is "
            f"{self.printed(left, motor)}"
        )
        used = (left, *roles.values())
        if any(abs(self.dc_factor(key, motor) - 1.0) > 1e-3 for key in used):
            text += ", all brought to the DC motor's conventions"
        with np.errstate(divide="ignore", invalid="ignore"):
            ratio = self.dc(left, motor) / right if right > 0 else math.nan
        return text, ratio

    def finding(self, suspicion: Suspicion, severity: str, doubted: frozenset[str]) -> Finding:
        """The finding of one suspicion; doubted are the motor's other suspects."""
        motor, figure = suspicion.motor, FIGURES[suspicion.figure]
        rivals = tuple(FIGURES[f] for f in suspicion.rivals)
        partner = () if suspicion.partner is None else (FIGURES[suspicion.partner],)
        # the others of the relation that shows the contradiction
        rest = doubted - {figure, *rivals}
        relation, roles = self.relation_of(motor, figure, frozenset(rest | {*partner}))
        by_family = suspicion.by_family and relation is None and not rivals
        shown = relation.name if relation else own_relation(figure)
        if by_family:
            shown = FAMILY + figure.replace("_", "-")
        ratio = math.exp(suspicion.log_ratio)
        column = self.batch.figures[figure]
        implied = float(column.value[motor]) / ratio
        cause, *others = suspicion.causes
        amount = self.amount(figure, motor, implied)
        text = f"{capital(name(figure))} {self.printed(figure, motor)}{self.place(motor, figure)}"
        if partner:
            text += (
                f" and {name(partner[0])} {self.printed(partner[0], motor)}"
                f"{self.place(motor, partner[0])} seem to be exchanged: with the two numbers in "
                f"each other's place all figures agree; {name(figure)} would be {amount}."
            )
        elif rivals:
            against = [f"{name(r)} {self.printed(r, motor)}{self.place(motor, r)}" for r in rivals]
            text = f"{', '.join([text, *against[:-1]])} and {against[-1]} contradict one another"
        elif by_family:
            unit, factor, _ = self.unit(figure, motor)
            alike = self.kin.words(motor, figure, implied, factor, unit)
            text += f" is {_times(ratio)} what its family implies ({amount}): {alike}"
        else:
            text += f" is {_times(ratio)} what the other figures imply ({amount})"
        names: tuple[str, ...] = (figure,)
        if relation is not None:
            equation, _ = self.equation(motor, relation, roles)
            text = f"{text.rstrip('.')}{'.' if partner else ':'} {equation}."
            names = (figure, *(k for k in (relation.left, *roles.values()) if k != figure))
        elif not partner:
            text += "."
        names = tuple(dict.fromkeys((figure, *partner, *rivals, *names)))
        if rivals:
            text += (
                " Nothing else on the sheet tells which is wrong. The constants are worked out "
                f"without {name(figure)}: it is {_times(ratio)} what the rest implies ({amount})."
            )
            names = (figure, *rivals)
        because = self.because(motor, figure, suspicion.causes, suspicion.log_ratio, suspicion.sd)
        text += f" {because}"
        return Finding(
            part_number=self.batch.part_number[motor],
            severity=severity,
            relation=shown,
            figures=names,
            suspect=None if rivals else figure,
            ratio=ratio,
            cause=cause,
            other_causes=tuple(others),
            implied=Amount(value=implied, unit=quantity(figure).unit),
            cell=self.cell(motor, figure),
            message=text,
        )

    def column(
        self, fault: ColumnFault, motors: np.ndarray | None, severity: str
    ) -> tuple[int, Finding]:
        """The finding of a mistake that a column shares; the first motor concerned."""
        figure = FIGURES[fault.figure]
        column = self.batch.figures[figure]
        if motors is None:
            motors = np.flatnonzero(np.isfinite(column.value))
        first = int(motors[0])
        rivals = tuple(FIGURES[f] for f in fault.rivals)
        ratio = math.exp(fault.log_ratio)
        implied = float(column.value[first]) / ratio
        cause, *others = fault.causes
        heading = (
            self.batch.headings[int(column.heading[first])].text if self.batch.headings else ""
        )
        told = f' under the heading "{heading}"' if heading else ""
        text = (
            f"{capital(name(figure))}{told} is {_times(ratio)} what the other figures imply, "
            f"alike for {len(motors)} motors: {self.batch.part_number[first]} has "
            f"{self.printed(figure, first)}{self.place(first, figure)}, implied is "
            f"{self.amount(figure, first, implied)}"
        )
        relation, roles = self.relation_of(first, figure, frozenset())
        names: tuple[str, ...] = (figure, *rivals)
        if relation is not None:
            equation, _ = self.equation(first, relation, roles)
            text += f" ({equation})"
            if not rivals:
                names = tuple(dict.fromkeys((figure, relation.left, *roles.values())))
        text += ". One mistake in the heading rather than one in every cell."
        if rivals:
            listed = ", ".join(name(r) for r in names)
            text += f" Nothing else in the table tells which is wrong: {listed}."
            text += f" The constants are worked out without {name(figure)}."
        because = self.because(first, figure, fault.causes, fault.log_ratio, fault.sd)
        return first, Finding(
            part_number=None,
            scope="column",
            part_numbers=tuple(self.batch.part_number[m] for m in motors.tolist()),
            severity=severity,
            relation=relation.name if relation else own_relation(figure),
            figures=names,
            suspect=None if rivals else figure,
            ratio=ratio,
            cause=cause,
            other_causes=tuple(others),
            implied=Amount(value=implied, unit=quantity(figure).unit),
            cell=self.cell(first, figure),
            message=f"{text} {because}",
        )

    def inference(self, inferred: Inferred) -> Finding:
        """The note on conventions that the figures show where the sheet doesn't say."""
        first = int(inferred.entries[0])
        evidence = f"the figures of {inferred.motors} motor{'s' * (inferred.motors > 1)} agree"
        if inferred.signature:
            evidence += f" ({inferred.signature})"
        text = (
            f"The sheet doesn't state all conventions of its {inferred.kind.word} motors; taken as "
            f"{', '.join(inferred.words)}, with which {evidence}."
        )
        if inferred.departs:
            text += f" The customary reading would not fit ({', '.join(inferred.departs)})."
        if inferred.rivals:
            text += f" Fits as well: {'; '.join(inferred.rivals)}."
        cause = "unexplained"
        for word, named in (("peak", "peak-vs-rms"), ("phase", "line-vs-phase"),
                            ("dc", "sinusoidal-current-convention")):  # fmt: skip
            if any(word in d for d in inferred.departs):
                cause = named
        return Finding(
            part_number=None, scope="column",
            part_numbers=tuple(self.batch.part_number[m] for m in inferred.entries.tolist()),
            severity="note", relation=CONVENTION, figures=inferred.figures, cause=cause,
            cell=self.cell(first, inferred.figures[0]), message=text,
        )  # fmt: skip

    def points(self, motor: int, misfit: float) -> Finding:
        """The note on operating points that no one motor gives."""
        return Finding(
            part_number=self.batch.part_number[motor], severity="warning",
            relation="operating-points", figures=(),
            message=f"The published operating points don't lie on the straight lines of one motor: "
            f"the worst is off by {number(100 * misfit, 2)} %.",
        )  # fmt: skip

    def because(
        self, motor: int, figure: str, causes: Sequence[str], log_ratio: float, sd: float
    ) -> str:
        """The likeliest cause of a figure's ratio in a sentence, with the others."""
        form = shape(figure, int(self.batch.commutation[motor]), self.unit(figure, motor)[0])
        first, *others = (
            _cause(c, figure, slipped_power(form, c, log_ratio, sd), log_ratio) for c in causes
        )
        text, also = f"Likely {first}", "; also possible: "
        if causes[0] == "unexplained":
            text, also = "None of the usual mistakes explains the ratio", "; the nearest: "
        return f"{text}{also if others else ''}{', '.join(others)}."


def _cause(cause: str, figure: str, power: int, log_ratio: float) -> str:
    """What a cause is, for a figure, with the power of ten that slipped besides."""
    if cause == "kilogram-force-vs-newton" and abs(power) == 2 and abs(log_ratio) < FAR:
        return CENTIMETRES
    text = PRODUCT if cause == "friction-ignored" and figure in TORQUES else SENTENCES[cause]
    if power:
        text += f" with a decimal point {abs(power)} place{'s' * (abs(power) > 1)} off"
    return text
