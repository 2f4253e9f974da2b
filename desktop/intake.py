"""A table on its way into the plan: which sheet, what its rows are, what its columns mean, its fate.

No widget: the import dialog shows it and changes it, tests drive it alone.
"""

from __future__ import annotations

from collections.abc import Sequence

from desktop import import_words as say
from desktop.document import Document, Refusals
from solver.tableimport import (
    Fate,
    ImportResult,
    Mapping,
    Meaning,
    RowResult,
    Sheet,
    UnreadableTable,
    What,
    import_rows,
    likeliest,
    propose_mapping,
)

# categories name works, rules name categories: what is named comes in first
_ORDER = (What.WORKS, What.CATEGORIES, What.RULES)
_FIRST_SHOWN = {Fate.REFUSED: 0, Fate.NEW: 2, Fate.CHANGED: 2}


class Intake:
    """Sheets of one source, read into `document` one at a time.

    After every choice `mapping` and `result` are fresh; `result` is None where the table as a whole cannot
    come in, `refusal` then says why.
    """

    def __init__(self, document: Document, sheets: Sequence[Sheet], what: What | None = None) -> None:
        """`what`: the rows are known to be that; otherwise the headers suggest it."""
        self._document = document
        self.sheets = tuple(sheets)
        self._what = what
        self._done: set[int] = set()
        self.at = 0
        self.what = What.CATEGORIES
        self._proposed = propose_mapping(self.sheets[0], self.what, document.plan)
        self._chosen: dict[int, Meaning | None] = {}
        self.mapping = self._proposed
        self.result: ImportResult | None = None
        self.refusal = ""
        self.choose_sheet(self._next_of(range(len(self.sheets))))

    @property
    def sheet(self) -> Sheet:
        """The sheet looked at."""
        return self.sheets[self.at]

    @property
    def rows(self) -> tuple[RowResult, ...]:
        """Every row's fate: refused ones first, then those to be looked at, each in table order."""
        rows = self.result.rows if self.result else ()
        return tuple(sorted(rows, key=lambda r: 1 if r.remarks and not r.reasons else _FIRST_SHOWN[r.fate]))

    def choose_sheet(self, at: int) -> None:
        """Look at another sheet; what its rows are is suggested anew."""
        self.at = at
        self.choose_what(self._what or likeliest(self.sheet, self._document.plan))

    def choose_what(self, what: What) -> None:
        """Take the rows as `what`."""
        self.what = what
        self._propose(None)

    def choose_header(self, row: int) -> None:
        """Take `row` (from 0) as the header."""
        self._propose(row)

    def assign(self, column: int, meaning: Meaning | None) -> None:
        """Give a column a meaning by hand, or leave it out.

        The latest choice of each column counts: a meaning that was only passed over while choosing goes back
        to the column it was taken from.
        """
        self._chosen.pop(column, None)
        self._chosen[column] = meaning
        mapping = self._proposed
        for at, chosen in self._chosen.items():
            mapping = mapping.assigned(at, chosen)
        self._take(mapping)

    def may_go_in(self, without_refused: bool) -> bool:
        """Whether `accept` would import something."""
        if self.result is None or not self.result.understood:
            return False
        return without_refused or not self.result.refused

    def accept(self, *, without_refused: bool = False) -> None:
        """Put the table into the plan, as one undo step.

        Raises ImportRefused where rows are refused and the planner did not agree to leave them out; the plan
        is then untouched.
        """
        assert self.result is not None
        plan = self.result.plan_after(without_refused=without_refused)
        self._document.edit(say.UNDO_STEP[self.what], plan, refused=self._refused_after(self.result))
        self._done.add(self.at)

    def next_sheet(self) -> int | None:
        """The sheet to go on with once this one is in, None if there is none."""
        left = [i for i in range(len(self.sheets)) if i not in self._done | {self.at} and self._holds(i)]
        return self._next_of(left) if left else None

    def _propose(self, header_row: int | None) -> None:
        """What the headers say, before anything is chosen by hand."""
        self._chosen.clear()
        self._proposed = propose_mapping(self.sheet, self.what, self._document.plan, header_row)
        self._take(self._proposed)

    def _take(self, mapping: Mapping) -> None:
        self.mapping, self.result, self.refusal = mapping, None, ""
        try:
            self.result = import_rows(self.sheet, mapping, self._document.plan)
        except UnreadableTable as refused:
            self.refusal = str(refused)

    def _holds(self, at: int) -> bool:
        """Whether the headers of a sheet were recognised."""
        what = likeliest(self.sheets[at], self._document.plan)
        return propose_mapping(self.sheets[at], what, self._document.plan).header_row is not None

    def _next_of(self, sheets: Sequence[int]) -> int:
        """Of `sheets` the one that others depend on; in doubt the first that holds something."""
        plan = self._document.plan
        return min(
            sheets, key=lambda i: (not self._holds(i), _ORDER.index(likeliest(self.sheets[i], plan)), i)
        )

    def _refused_after(self, result: ImportResult) -> Refusals:
        """What was refused in a cell is gone where the table brings a value for that cell."""
        names = {row.name for row in result.understood}
        keys = {column.meaning.key for column in self.mapping.columns if column.meaning}
        return {
            place: refusal
            for place, refusal in self._document.refused.items()
            if not (place[0] == self.what.value and place[1] in names and place[2] in keys)
        }
