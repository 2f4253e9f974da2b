"""A program of rows and columns that is no plan, as the search takes it."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import lcm

from solver.answer import LineKind
from solver.lines import HeadLine, Line
from solver.matrix import Matrix, Row, RowSense


class BareProgram:
    """Integer columns first, then continuous ones; rows of integer columns alone are checked exactly."""

    def __init__(self, matrix: Matrix) -> None:
        self.matrix = matrix
        self.head_count = sum(matrix.integer)
        assert all(matrix.integer[: self.head_count])
        self.switches: dict[int, tuple[int, ...]] = {}
        self.budget_of: dict[Line, Fraction] = {}
        self.head_lines = [
            _head_line(i, row) for i, row in enumerate(matrix.rows) if max(row.columns) < self.head_count
        ]


def _head_line(i: int, row: Row) -> HeadLine:
    coefs = [Fraction(str(coef)) for coef in row.coefs]
    rhs = Fraction(str(row.rhs))
    divisor = lcm(rhs.denominator, *(coef.denominator for coef in coefs))
    line = Line(f"row {i}", LineKind.PRESENCE, None, "", i, 1.0, "")
    terms = tuple((c, int(coef * divisor)) for c, coef in zip(row.columns, coefs, strict=True))
    return HeadLine(line, terms, row.sense, int(rhs * divisor), divisor)


def largest(
    cost: Sequence[float], rows: Sequence[Sequence[float]], rhs: Sequence[float], most: float = 1000
) -> Matrix:
    """max cost.x, rows.x <= rhs, 0 <= x <= most, x integer, as a minimisation."""
    matrix = Matrix()
    for c in cost:
        matrix.add_column(-float(c), 0.0, most, integer=True)
    for row, b in zip(rows, rhs, strict=True):
        columns = [i for i, a in enumerate(row) if a]
        matrix.add_row(columns, [float(row[i]) for i in columns], RowSense.AT_MOST, float(b))
    return matrix
