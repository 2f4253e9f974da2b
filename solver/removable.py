"""The plan's program with lines taken away: can fractional, or whole, people keep those that are left?"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from enum import Enum

from solver.engine import LpStatus, Relaxation
from solver.found import Limits
from solver.inquiry import Inquiry
from solver.lines import HeadLine, Line
from solver.loosened import is_bound, is_settling
from solver.matrix import Matrix, Row, RowSense
from solver.plan import Plan
from solver.program import Program
from solver.search import Search

WHOLE = Limits(nodes=5_000, seconds=1.0)


class People(Enum):
    """How people may come."""

    WHOLE = "whole"
    FRACTIONAL = "fractional"


@dataclass(frozen=True)
class _Place:
    """What keeps a line in the program: a row and the columns that let it give way, or a column's bound."""

    head: HeadLine | None
    row: int | None
    elastic: tuple[int, ...]


class Removable:
    """The lines of a plan that can be left out one by one; `lines` are in the program's order.

    What nobody typed, hours and moves, always holds.
    """

    def __init__(self, plan: Plan, inquiry: Inquiry) -> None:
        """Once `inquiry` has no time left, nothing is certain any more that the relaxation does not say."""
        self._inquiry = inquiry
        base = Program(plan)
        free = (replace(c, at_least=Decimal(0), at_most=None) for c in plan.categories)
        self._open = Program(replace(plan, categories=tuple(free)))
        heads = {id(head.line): head for head in base.head_lines}
        self._always = [h for h in base.head_lines if is_settling(h.line)]
        self.lines: list[Line] = [line for line in base.lines if not is_settling(line)]
        self._matrix = self._open.matrix.copy()
        self._matrix.cost = [0.0] * self._matrix.width
        rows = iter(line.row for line in self._open.lines if not is_settling(line))
        self._places: dict[int, _Place] = {}
        for line in self.lines:
            head = heads.get(id(line))
            row = None if head is not None and is_bound(head) else next(rows)
            self._places[id(line)] = _Place(head, row, () if row is None else self._elastic(row))
        self._bounds_of: dict[int, list[Line]] = {}
        for line in self.lines:
            head = self._places[id(line)].head
            if head is not None and self._places[id(line)].row is None:
                self._bounds_of.setdefault(head.terms[0][0], []).append(line)
        self._relaxation = Relaxation(self._matrix)
        self._present = {id(line): False for line in self.lines}
        self._shown: dict[int, tuple[float, float]] = {}

    def _elastic(self, row: int) -> tuple[int, ...]:
        """Columns that let the row give way in the directions it holds in."""
        sense = self._matrix.rows[row].sense
        ways = {RowSense.AT_LEAST: (1.0,), RowSense.AT_MOST: (-1.0,), RowSense.EQUAL: (1.0, -1.0)}[sense]
        made = []
        for way in ways:
            made.append(self._matrix.add_column(0.0, 0.0, float("inf")))
            old = self._matrix.rows[row]
            self._matrix.rows[row] = replace(old, columns=(*old.columns, made[-1]), coefs=(*old.coefs, way))
        return tuple(made)

    # ---- asking ------------------------------------------------------------------------------

    def impossible(self, lines: Sequence[Line], people: People) -> bool:
        """Whether it is certain that no such people keep all of `lines`."""
        if self.relaxed_impossible(lines):
            return True
        if people is People.FRACTIONAL and not self._open.switches:
            return False
        return self._searched_impossible(lines, people)

    def relaxed_impossible(self, lines: Sequence[Line]) -> bool:
        """Whether the relaxation, switches and all, has nobody who keeps all of `lines`."""
        return self._show(lines) or self._relaxation.solve() is LpStatus.INFEASIBLE

    def _show(self, lines: Sequence[Line]) -> bool:
        """Have exactly `lines` hold in the relaxation; True if the bounds of a head count cross."""
        wanted = {id(line) for line in lines}
        for line in self.lines:
            if (id(line) in wanted) != self._present[id(line)]:
                self._present[id(line)] = id(line) in wanted
                for column in self._places[id(line)].elastic:
                    most = 0.0 if id(line) in wanted else float("inf")
                    self._relaxation.set_bounds(column, 0.0, most)
        bounds = {column: self._bounds(wanted, column) for column in self._bounds_of}
        if any(low > high for low, high in bounds.values()):
            return True
        for column, (low, high) in bounds.items():
            if self._shown.get(column) != (low, high):
                self._shown[column] = (low, high)
                self._relaxation.set_bounds(column, low, high)
        return False

    def _bounds(self, wanted: set[int], column: int) -> tuple[float, float]:
        """The bounds of a head count, in lots, when the lines `wanted` (by id) hold."""
        lower, upper = self._matrix.lower[column], self._matrix.upper[column]
        for line in self._bounds_of.get(column, ()):
            head = self._places[id(line)].head
            if id(line) in wanted and head is not None:
                bound = head.rhs / head.terms[0][1]
                if head.sense is RowSense.AT_LEAST:
                    lower = max(lower, bound)
                else:
                    upper = min(upper, bound)
        return lower, upper

    def _searched_impossible(self, lines: Sequence[Line], people: People) -> bool:
        matrix = self._without_the_others(lines)
        if any(low > high for low, high in zip(matrix.lower, matrix.upper, strict=True)):
            return True
        kept = [h for line in lines if (h := self._places[id(line)].head) is not None]
        fractional = range(self._open.head_count) if people is People.FRACTIONAL else ()
        search = Search(self._open, matrix, fractional=fractional, head_lines=[*self._always, *kept])
        outcome = search.cheapest(replace(WHOLE, seconds=min(WHOLE.seconds, self._inquiry.left)))
        return outcome.complete and outcome.best is None

    def _without_the_others(self, lines: Sequence[Line]) -> Matrix:
        """The program with only `lines`; those left out keep an empty row."""
        matrix = self._open.matrix.copy()
        matrix.cost = [0.0] * matrix.width
        wanted = {id(line) for line in lines}
        for line in self.lines:
            row = self._places[id(line)].row
            if row is not None and id(line) not in wanted:
                matrix.rows[row] = Row((), (), matrix.rows[row].sense, 0.0)
        for column in self._bounds_of:
            matrix.lower[column], matrix.upper[column] = self._bounds(wanted, column)
        return matrix
