"""Dual prices of the plan's lines in the relaxation: what a line costs when people may be fractional."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from solver.loosened import is_bound
from solver.matrix import Matrix
from solver.plan import Plan
from solver.program import Program
from solver.ranging import Priced, Ranging


@dataclass(frozen=True)
class _Place:
    """The row that stands for a line, and the line's units per unit of the row."""

    row: int
    scale: float


class FractionalPrices:
    """d floor / d right-hand side of every line of a plan, as the line is typed, with its range.

    The right-hand side is the amount of a work, the bound of a presence rule or head count, the money of
    a budget; of a supervision line it is hours asked beyond those of the charges, of a ratio, share or
    least-if-any line people beyond what the rule gives. ValueError if no fractional crew exists.
    """

    def __init__(self, plan: Plan) -> None:
        program = Program(plan, open_ended=True)
        self._places: list[_Place] = []
        matrix = _without_implied_bounds(program)
        bounds = {id(head.line): head for head in program.head_lines if is_bound(head)}
        for line in program.lines:
            head = bounds.get(id(line))
            if head is None:
                assert line.row is not None
                self._places.append(_Place(line.row, line.scale))
            else:
                columns = [i for i, _ in head.terms]
                coefs = [a / head.divisor for _, a in head.terms]
                row = matrix.add_row(columns, coefs, head.sense, head.rhs / head.divisor)
                self._places.append(_Place(row, 1.0))
        self._ranging = Ranging(matrix)
        self.floor = self._ranging.objective

    def priced(self, index: int) -> Priced:
        """Price and range of the program's line number `index`, in money per unit of the line."""
        place = self._places[index]
        found = self._ranging.priced(place.row)
        low, high = (None if end is None else end * place.scale for end in (found.low, found.high))
        return Priced(found.price / place.scale + 0.0, low, high)


def _without_implied_bounds(program: Program) -> Matrix:
    """The program's matrix with no column bounds but zero, where rows say the same.

    A bound beside a row that says the same would take part of the row's price.
    """
    matrix = program.matrix.copy()
    for i in range(matrix.width):
        if i not in program.switches:
            matrix.upper[i] = np.inf
    for i in range(program.head_count):
        matrix.lower[i] = 0.0
    for (k, _), column in program.bought.items():
        most = program.plan.works[k].buy_in_most
        matrix.upper[column] = np.inf if most is None else float(most)
    return matrix
