"""The rows behind a long table's head: which are motors, and the cells that none of them takes."""

import re
from collections.abc import Sequence

from ..cells import missing
from ..headings.lexicon import squeeze, tokens
from ..layout.blocks import HEADINGS, is_data, row_score
from ..matching.match import Match
from ..model import Table, Unread

_DIGIT = re.compile(r"\d")
_UNHEADED = "no heading stands over it"


class FurtherRows:
    """Takes the rows of a continuation chunk by chunk; whatever is no motor's is listed."""

    def __init__(self, table: Table, matches: Sequence[Match], unread: list[Unread]) -> None:
        self.table = table
        self.unread = unread
        self.heads = {tuple(row) for row in table.head}
        self.spelled = {_spelled(row) for row in table.head}
        self.columns = list(table.columns)
        self.blank_so_far = [
            m for m in matches if m.role == "unread" and not any(map(_given, m.field.texts))
        ]
        taken = {m.field.source for m in matches}
        self.free = [c for c in range(len(self.columns)) if c not in taken]
        self.probe = next((m.field.source for m in matches if m.role == "figure"), None)
        self.other_heads = 0  # the row of the headings of another table, while its rows go on

    def motors(
        self, numbers: list[int], rows: list[list[str]]
    ) -> tuple[list[int], list[list[str]]]:
        """The rows of motors among these, with their numbers."""
        numbers, rows = self._of_this_table(numbers, rows)
        keep = [
            k
            for k, row in enumerate(rows)
            if len(row) - row.count("") > 1 and tuple(row) not in self.heads
        ]
        if len(keep) < len(rows):
            kept = set(keep)
            for k, row in enumerate(rows):
                if k not in kept and any(row) and tuple(row) not in self.heads:
                    self._list_row(numbers[k], row, "a row with a single cell")
            rows, numbers = [rows[k] for k in keep], [numbers[k] for k in keep]
        self._list_free(numbers, rows)
        return numbers, rows

    def _of_this_table(
        self, numbers: list[int], rows: list[list[str]]
    ) -> tuple[list[int], list[list[str]]]:
        """The rows that stand under the table's own headings, not under others further down."""
        c = self.probe
        if c is None:
            return numbers, rows
        odd = [k for k, row in enumerate(rows) if (t := row[c]) and not _DIGIT.search(t)]
        heads = [
            k
            for k in odd
            if tuple(rows[k]) in self.heads
            or (not is_data(rows[k]) and row_score(rows[k]) >= HEADINGS)
        ]
        if not heads and not self.other_heads:
            return numbers, rows
        own: list[int] = []
        at = set(heads)
        for k, row in enumerate(rows):
            if k in at:
                self.other_heads = 0 if _spelled(row) in self.spelled else numbers[k]
            elif self.other_heads:
                reason = (
                    f"it stands under the headings of row {self.other_heads}, which differ from "
                    "the table's; import these rows as a file of their own"
                )
                self._list_row(numbers[k], row, reason)
            else:
                own.append(k)
        return [numbers[k] for k in own], [rows[k] for k in own]

    def _list_row(self, number: int, row: Sequence[str], reason: str) -> None:
        text = " ".join(t for t in row if t)
        self._list(None, number, self.columns[0] if self.columns else 1, "", text, reason)

    def _list(
        self, match: Match | None, row: int, column: int | None, heading: str, text: str,
        reason: str,
    ) -> None:  # fmt: skip
        guesses = match.guesses if match else ()
        self.unread.append(
            Unread(None, heading, self.table.sheet, self.table.page, row, column, text, reason,
                   guesses)
        )  # fmt: skip

    def _list_free(self, numbers: list[int], rows: list[list[str]]) -> None:
        """List cells in columns without a heading, and the first of a heading not read that had
        no cell in the head."""
        width = len(self.columns)
        for c in self.free:
            for number, row in zip(numbers, rows, strict=True):
                if row[c] and _given(row[c]):
                    self._list(
                        None, number, self.columns[c], "", row[c], "no heading stands over it"
                    )
        if any(len(row) > width for row in rows):
            known = self.columns == list(range(1, width + 1))
            for number, row in zip(numbers, rows, strict=True):
                for c in range(width, len(row)):
                    if row[c]:
                        place = c + 1 if known else None
                        self._list(None, number, place, "", row[c], _UNHEADED)
        for m in list(self.blank_so_far):
            c = m.field.source
            k = next((k for k, row in enumerate(rows) if _given(row[c])), None)
            if k is not None:
                self._list(m, numbers[k], m.field.column, m.field.heading, rows[k][c], m.reason)
                self.blank_so_far.remove(m)


def _given(text: str) -> bool:
    return bool(text) and not missing(text)


def _spelled(row: Sequence[str]) -> tuple[str, ...]:
    return tuple(squeeze(tokens(t)) for t in row)
