"""The plan's program with some lines allowed to give way, and what the least giving way is.

A column d >= 0, in the lines' own unit, is added to their rows:

    at least    a.n + d >= b          work         output + d >= amount
    at most     a.n - d <= b          supervision  hours given + d >= hours needed
    exactly     a.n - d + d' = b

Bounds of head counts are column bounds in the program: there the category loses its bound, and gets a row.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from fractions import Fraction
from functools import cached_property
from math import floor, gcd, inf, lcm

from solver.answer import LineKind
from solver.found import Found, Lots, tie_width
from solver.grain import whole_grain
from solver.inquiry import Inquiry
from solver.lines import HeadLine, Line
from solver.matrix import Matrix, Row, RowSense
from solver.plan import Category, Plan
from solver.program import Program
from solver.search import Search

# hours lines are continuous: an objective of a thousand per hour tells a millionth of an hour
PER_HOUR = 1000.0
FINEST = Fraction(1, 10**6)  # people
NOTHING = 1e-6  # money; who costs less is not limited by what can be paid


def paid_caps(plan: Plan, money: float) -> list[int]:
    """Lots per head count that `money` pays for; no crew that costs at most `money` has more."""
    program = Program(plan)
    return affordable(program, program.matrix.cost, money)


def affordable(program: Program, cost: Sequence[float], money: float) -> list[int]:
    """Lots per head count that `money` pays for at the objective `cost`."""
    lower, upper = program.matrix.lower, program.matrix.upper
    caps = [int(most) for most in upper[: program.head_count]]
    budget = money + tie_width(money)
    for i in range(program.head_count):
        if cost[i] > NOTHING:
            caps[i] = max(min(caps[i], floor(budget / cost[i])), int(lower[i]))
    return caps


def is_bound(head: HeadLine) -> bool:
    """Whether the line is the lower or upper bound of one head count."""
    line = head.line
    return line.kind is LineKind.BOUND and line.unit == "people" and not head.only_if_any


def is_settling(line: Line) -> bool:
    """Whether the line only says that joiners need their settling hours: nobody typed it."""
    return line.kind is LineKind.BOUND and line.unit == "hours"


@dataclass(frozen=True)
class GivingWay:
    """The least by which the lines must give way, in their unit, and a crew that then works.

    `by` is exact for lines in head counts; for hours it is what the linear program gives.
    """

    by: Fraction
    lots: Lots
    proved: bool


class Negotiable:
    """A plan whose lines can be loosened. `money`: no crew that costs more is asked for."""

    def __init__(self, plan: Plan, money: float = inf) -> None:
        self.plan = plan
        self.money = money
        self.base = Program(plan)
        self._head_of = {id(head.line): head for head in self.base.head_lines}

    @cached_property
    def program(self) -> Program:
        """The program with no more people than the money pays for."""
        return self._capped(self.plan)

    def _capped(self, plan: Plan) -> Program:
        return Program(plan, paid_caps(plan, self.money)) if self.money < inf else Program(plan)

    def head(self, line: Line) -> HeadLine | None:
        """The line in head counts, None where it is about hours or money."""
        return self._head_of.get(id(line))

    def loosened(self, lines: Sequence[Line]) -> Loosened:
        """The program with `lines` of `base` giving way together: one rule, work, group or bound.

        Budgets cannot give way here: leaving one out is a question of its own.
        """
        found = [self.head(line) for line in lines]
        given = [head for head in found if head is not None]
        if given and is_bound(given[0]):
            return self._loosened_bound(given)
        matrix = self.program.matrix.copy()
        rows = [(line.row, line.scale) for line in lines if line.row is not None]
        most = self._most(lines, given)
        sense = matrix.rows[rows[0][0]].sense
        up = _add_shift(matrix, rows, +1.0 if sense is not RowSense.AT_MOST else -1.0, most)
        down = _add_shift(matrix, rows, -1.0, most) if sense is RowSense.EQUAL else None
        return Loosened(self, self.program, matrix, given, [up] if down is None else [up, down], lines)

    def _most(self, lines: Sequence[Line], given: Sequence[HeadLine]) -> float:
        """More than this no line can need to give way; keeps the programs bounded."""
        upper = self.program.matrix.upper
        if given:
            return max((abs(h.rhs) + sum(abs(a) * upper[i] for i, a in h.terms)) / h.divisor for h in given)
        rows = [(self.program.matrix.rows[line.row], line.scale) for line in lines if line.row is not None]
        return max(_need(row, upper) * scale for row, scale in rows)

    def _loosened_bound(self, given: Sequence[HeadLine]) -> Loosened:
        span = len(self.plan.phases)
        column = given[0].terms[0][0]
        least = given[0].sense is RowSense.AT_LEAST
        j = column // span
        category = self.plan.categories[j]
        program = self._capped(_with_category(self.plan, j, _unbounded(category, least)))
        matrix = program.matrix.copy()
        asked = max(head.rhs / head.divisor for head in given)
        shift = matrix.add_column(0.0, 0.0, asked if least else matrix.upper[column] * float(program.lots[j]))
        moved = {head.terms[0][0]: head for head in given}
        for head in (h for h in self.base.head_lines if is_bound(h) and h.sense is given[0].sense):
            at, coef = head.terms[0]
            if at in moved:
                lot, sign = coef / head.divisor, 1.0 if least else -1.0
                matrix.add_row([at, shift], [lot, sign], head.sense, head.rhs / head.divisor)
            elif at // span == j:
                _bound(matrix, at, head)
        lines = [head.line for head in given]
        return Loosened(self, program, matrix, list(given), [shift], lines)


@dataclass
class Loosened:
    """A program in which `lines` may give way by the columns `shifts` (up, and down for `exactly`)."""

    negotiable: Negotiable
    program: Program
    matrix: Matrix
    given: list[HeadLine]
    shifts: list[int]
    lines: Sequence[Line]

    @cached_property
    def _kept(self) -> list[HeadLine]:
        given = {id(head) for head in self.given}
        return [head for head in self.negotiable.base.head_lines if id(head) not in given]

    @cached_property
    def step(self) -> Fraction:
        """Every crew misses the lines by a multiple of this; 0 for hours."""
        values = [Fraction(v, h.divisor) for h in self.given for v in (h.rhs, *(a for _, a in h.terms))]
        return common(values)

    def least(self, inquiry: Inquiry, money: float = inf, known: Lots | None = None) -> GivingWay | None:
        """The least giving way that lets a crew costing at most `money` work; None if none does.

        None as well where the time ran out before a crew was found: `inquiry.left` is 0 then. `known` is
        a crew that works when the lines give way far enough.
        """
        search = self._yielding(money)
        outcome = inquiry.cheapest(search, start=_start(search, known))
        if outcome.best is None:
            return None
        by = self._by(outcome.best.lots, outcome.best.objective)
        return GivingWay(by, outcome.best.lots, outcome.complete)

    def least_for(self, lots: Lots, money: float) -> Fraction | None:
        """The least giving way that lets the crew `lots` work at a cost of at most `money`."""
        objective = self._yielding(money).evaluate(lots)
        return None if objective is None else self._by(lots, objective)

    def _by(self, lots: Lots, objective: float) -> Fraction:
        by = max(-head.margin(lots) for head in self.given) if self.given else objective / self._weight()[0]
        return max(Fraction(by), Fraction(0))

    def _yielding(self, money: float) -> Search:
        """The search for the least giving way."""
        matrix = self.matrix.copy()
        if money < inf:
            costly = [(i, cost) for i, cost in enumerate(matrix.cost) if cost]
            matrix.add_row([i for i, _ in costly], [c for _, c in costly], RowSense.AT_MOST, money)
        weight, grain = self._weight()
        matrix.cost = [0.0] * matrix.width
        for shift in self.shifts:
            matrix.cost[shift] = weight
        return Search(self.program, matrix, grain=grain, head_lines=self._kept)

    def _weight(self) -> tuple[float, float]:
        """What a unit of giving way counts in the objective, and what the objective is a multiple of."""
        if self.step > FINEST:
            return 1 / float(self.step), 1.0
        return (1 / float(FINEST) if self.given else PER_HOUR / self.lines[0].scale), 0.0

    def cheapest(
        self, inquiry: Inquiry, by: Fraction | None, cutoff: float = inf, known: Lots | None = None
    ) -> tuple[Found | None, bool]:
        """The cheapest crew when the lines give way by `by` (None: without limit); whether proved."""
        search = self.costing(by)
        start = _start(search, known)
        outcome = inquiry.cheapest(search, cutoff=cutoff, start=start, choose=by is not None)
        return outcome.best, outcome.complete

    def costing(self, by: Fraction | None) -> Search:
        """The search for the cheapest crew when the lines give way by `by` (None: without limit)."""
        matrix, kept = self.matrix, self._kept
        if by is not None:
            matrix = matrix.copy()
            for shift in self.shifts:
                matrix.upper[shift] = float(by) if self.given else float(by) * (1 + 1e-9) + 1e-9
            kept = [*kept, *(moved for head in self.given for moved in relaxed(head, by))]
        return Search(self.program, matrix, grain=whole_grain(self.program), head_lines=kept)


def _start(search: Search, lots: Lots | None) -> Found | None:
    objective = None if lots is None else search.evaluate(lots)
    return None if objective is None or lots is None else Found(lots, objective)


def relaxed(head: HeadLine, by: Fraction) -> list[HeadLine]:
    """The line once it has given way by `by`; an `exactly` becomes a line on either side."""
    factor = lcm(by.denominator, head.divisor) // head.divisor
    terms = tuple((i, a * factor) for i, a in head.terms)
    divisor, rhs = head.divisor * factor, head.rhs * factor
    way = int(by * divisor)
    sides = {RowSense.AT_LEAST: -way, RowSense.AT_MOST: way}
    if head.sense is not RowSense.EQUAL:
        sides = {head.sense: sides[head.sense]}
    return [
        replace(head, terms=terms, sense=sense, rhs=rhs + move, divisor=divisor)
        for sense, move in sides.items()
    ]


def _add_shift(matrix: Matrix, rows: Sequence[tuple[int, float]], sign: float, most: float) -> int:
    """A column that moves the rows, by `sign` units of their lines."""
    shift = matrix.add_column(0.0, 0.0, most)
    for row, scale in rows:
        old = matrix.rows[row]
        matrix.rows[row] = replace(old, columns=(*old.columns, shift), coefs=(*old.coefs, sign / scale))
    return shift


def _need(row: Row, upper: Sequence[float]) -> float:
    """The most that a work or supervision row can ask for."""
    asked = sum(
        -coef * upper[column] for column, coef in zip(row.columns, row.coefs, strict=True) if coef < 0
    )
    return max(row.rhs, 0.0) + asked


def _bound(matrix: Matrix, column: int, head: HeadLine) -> None:
    """Give a column back the bound that its category lost for another phase's sake."""
    lots = head.rhs / head.terms[0][1]
    if head.sense is RowSense.AT_LEAST:
        matrix.lower[column] = lots
        matrix.upper[column] = max(matrix.upper[column], lots)
    else:
        matrix.upper[column] = min(matrix.upper[column], lots)


def _unbounded(category: Category, least: bool) -> Category:
    return replace(category, at_least=Decimal(0)) if least else replace(category, at_most=None)


def _with_category(plan: Plan, j: int, category: Category) -> Plan:
    return replace(plan, categories=(*plan.categories[:j], category, *plan.categories[j + 1 :]))


def common(values: Sequence[Fraction]) -> Fraction:
    """The largest number that all values are whole multiples of; 0 for none."""
    divisor = lcm(1, *(v.denominator for v in values))
    return Fraction(gcd(0, *(int(v * divisor) for v in values)), divisor)
