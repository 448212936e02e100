"""What a call of import is told, and what it gives: options, and the result of each file."""

import hashlib
import json
from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

from ...schema.batch import Heading
from ...schema.motor import Reconciled
from ..documents import Document

MOST_SHOWN = 8
"""So many motors of a file are shown with their constants after an import."""

MOST_FINDINGS = 1000
"""So many findings of a file are kept to be printed; all of them are stored."""


@dataclass(frozen=True, slots=True)
class Options:
    """What a call tells about its files.

    overrides: heading as printed → "quantity[:unit[:convention]]"; keep: use them for the
    maker's further files too.
    """

    maker: str | None = None
    series: str | None = None
    sheet: str | None = None
    format: str | None = None
    commutation: str | None = None
    overrides: Mapping[str, str] = field(default_factory=dict)
    keep: bool = False
    strict: bool = False
    dry_run: bool = False

    def fingerprint(self, headings: Sequence[Heading]) -> str:
        """How a file was read, as text: the same bytes with the same fingerprint say the same."""
        told = [self.maker, self.series, self.sheet, self.commutation]
        read = [
            [h.text, h.quantity, h.unit, h.convention.as_json() if h.convention else None]
            for h in headings
        ]
        digest = hashlib.sha256(json.dumps(read, ensure_ascii=False).encode()).hexdigest()
        return json.dumps([*told, digest], ensure_ascii=False)


class Constants(NamedTuple):
    """A motor's constants in SI as an import shows them; NaN where unknown."""

    part_number: str
    torque_constant: float
    armature_resistance: float
    rotor_inertia: float
    motor_constant: float


def first_constants(reconciled: Reconciled, most: int) -> list[Constants]:
    """Those of the first motors of a table."""
    n = min(most, len(reconciled.batch))
    columns = [reconciled.constants[key].value[:n].tolist() for key in Constants._fields[1:]]
    return [*map(Constants, reconciled.batch.part_number[:n], *columns)]


@dataclass(slots=True)
class FileResult:
    """What one file gave: how its headings were read, what was not, its motors, the findings.

    ``severities`` counts all findings; ``findings`` and ``documents`` hold all of them when
    documents were asked for, else the first MOST_FINDINGS that are more than notes, and none.
    ``as_before`` of the ``replaced`` motors have the same figures; ``left_behind`` names motors of
    an earlier file of this name that are not in it.
    """

    file: str
    sha256: str
    format: str
    layout: str = "rows"
    headings: list[Heading] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    unread: list[Document] = field(default_factory=list)
    findings: list[Document] = field(default_factory=list)
    documents: list[Document] = field(default_factory=list)
    makers: set[str] = field(default_factory=set)
    severities: Counter[str] = field(default_factory=Counter)
    constants: list[Constants] = field(default_factory=list)
    motors: int = 0
    stored: int = 0
    replaced: int = 0
    as_before: int = 0
    left_behind: list[str] = field(default_factory=list)
    unchanged: bool = False

    def as_json(self) -> Document:
        """The file's part of the document that ``import --json`` prints."""
        return {
            "file": self.file,
            "sha256": self.sha256,
            "layout": self.layout,
            "reading": [
                {
                    "heading": h.text,
                    "quantity": h.quantity,
                    "unit": h.unit or None,
                    "convention": (h.convention.as_json() or None) if h.convention else None,
                    "score": round(h.score, 3),
                    "reason": h.reason,
                }
                for h in self.headings
            ],
            "unread": self.unread,
            "remarks": self.remarks,
            "motors": self.documents,
            "findings": self.findings,
            "stored": self.stored,
            "replaced": self.replaced,
            "as_before": self.as_before,
            "left_behind": self.left_behind,
            "unchanged": self.unchanged,
        }


@dataclass(slots=True)
class ImportResult:
    """All files of a call; ``refused`` where --strict stored nothing."""

    files: list[FileResult]
    refused: bool = False

    def as_json(self) -> Document:
        """The document that ``import --json`` prints."""
        return {"files": [file.as_json() for file in self.files]}
