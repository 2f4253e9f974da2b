"""A mixed integer program in matrix form: minimise cost.x, rows, bounds; what the engines are given."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from enum import StrEnum

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]
Ints = npt.NDArray[np.intp]


FAR = 1e5  # columns beyond this are taken to be no further out in a solution


class RowSense(StrEnum):
    """Direction of a row; the values are the letters CBC's C interface and MPS files use."""

    AT_LEAST = "G"
    AT_MOST = "L"
    EQUAL = "E"


@dataclass(frozen=True)
class Row:
    """sum coefs[i] x[columns[i]] {>=, <=, =} rhs."""

    columns: tuple[int, ...]
    coefs: tuple[float, ...]
    sense: RowSense
    rhs: float


@dataclass
class Matrix:
    """The program while it is being put together, and afterwards. Columns are added before rows."""

    cost: list[float] = field(default_factory=list)
    lower: list[float] = field(default_factory=list)
    upper: list[float] = field(default_factory=list)
    integer: list[bool] = field(default_factory=list)
    rows: list[Row] = field(default_factory=list)

    def add_column(self, cost: float, lower: float, upper: float, integer: bool = False) -> int:
        """Append a column and return its index."""
        self.cost.append(cost)
        self.lower.append(lower)
        self.upper.append(upper)
        self.integer.append(integer)
        return len(self.cost) - 1

    def add_row(self, columns: Sequence[int], coefs: Sequence[float], sense: RowSense, rhs: float) -> int:
        """Append a row and return its index."""
        self.rows.append(Row(tuple(columns), tuple(coefs), sense, rhs))
        return len(self.rows) - 1

    def copy(self) -> Matrix:
        """An independent copy, to be changed for one question."""
        return Matrix(self.cost[:], self.lower[:], self.upper[:], self.integer[:], self.rows[:])

    @property
    def width(self) -> int:
        """Number of columns."""
        return len(self.cost)


def roundoff(matrix: Matrix, row: Row) -> float:
    """What doubles may get wrong about a row of integer columns alone; 0 for any other row."""
    if not all(matrix.integer[i] for i in row.columns):
        return 0.0
    return 2e-15 * (_size(matrix, row) + abs(row.rhs))


def _size(matrix: Matrix, row: Row) -> float:
    """The most that the row's terms can come to, signs left aside, in anything that keeps the row.

    A term can have no more than what the others, at their least, leave of the right-hand side: an unlimited
    count that an `exactly 0` forbids makes no room for others.
    """
    size = 0.0
    ends = [_ends(matrix, column, coef) for column, coef in zip(row.columns, row.coefs, strict=True)]
    over = max(row.rhs - sum(low for low, _ in ends), 0.0)
    under = max(sum(high for _, high in ends) - row.rhs, 0.0)
    for low, high in ends:
        least = low if row.sense is RowSense.AT_MOST else max(low, high - under)
        most = high if row.sense is RowSense.AT_LEAST else min(high, low + over)
        size += max(abs(least), abs(most))
    return size


def _ends(matrix: Matrix, column: int, coef: float) -> tuple[float, float]:
    """The least and the most that a term can be."""
    ends = coef * matrix.lower[column], coef * min(matrix.upper[column], FAR)
    return min(ends), max(ends)


def forgiving(matrix: Matrix) -> Matrix:
    """`matrix` with rows of integer columns loosened by their roundoff, other columns' limits by as little.

    CLP may call a program infeasible that is met exactly but for the last digit of a double. Rows and
    columns keep their places; equations get a column of their own, behind the others, to give way by.
    """
    upper = [u if whole else u * (1 + 1e-12) for u, whole in zip(matrix.upper, matrix.integer, strict=True)]
    made = Matrix(matrix.cost[:], matrix.lower[:], upper, matrix.integer[:])
    for row in matrix.rows:
        slack = roundoff(matrix, row)
        if slack and row.sense is RowSense.EQUAL:
            free = made.add_column(0.0, -slack, slack)
            row = replace(row, columns=(*row.columns, free), coefs=(*row.coefs, 1.0))
        elif slack:
            row = replace(row, rhs=loosened_rhs(row, slack))
        made.rows.append(row)
    return made


def loosened_rhs(row: Row, slack: float) -> float:
    """A row's right-hand side, `slack` looser; an equation's as it is."""
    return row.rhs + {RowSense.AT_LEAST: -slack, RowSense.AT_MOST: slack, RowSense.EQUAL: 0.0}[row.sense]


class DualBound:
    """A lower bound on cost.x that holds whatever rounding the LP code did.

    For any row prices y of the right signs, y.b + sum_j min over [l_j, u_j] of (c - A'y)_j x_j is a
    bound (Neumaier & Shcherbina, Safe bounds in linear and mixed-integer linear programming,
    Mathematical Programming 99 (2004) 283-296); the last step's own rounding is taken off.
    """

    _ROUNDING = 4e-15

    def __init__(self, matrix: Matrix) -> None:
        lengths = [len(row.columns) for row in matrix.rows]
        self._row_of = np.repeat(np.arange(len(lengths)), lengths)
        self._column_of = np.array([c for row in matrix.rows for c in row.columns], dtype=np.intp)
        self._values = np.array([v for row in matrix.rows for v in row.coefs])
        self._rhs = np.array([row.rhs for row in matrix.rows])
        self._floor = np.array([0.0 if r.sense is RowSense.AT_LEAST else -np.inf for r in matrix.rows])
        self._ceiling = np.array([0.0 if r.sense is RowSense.AT_MOST else np.inf for r in matrix.rows])
        self._cost = np.array(matrix.cost)

    def set_rhs(self, row: int, rhs: float) -> None:
        """Follow a change of one row's right-hand side."""
        self._rhs[row] = rhs

    def value(self, prices: Floats, lower: Floats, upper: Floats) -> float:
        """The bound for row prices `prices` (clipped to their signs) and the columns' bounds."""
        return self.value_and_reduced(prices, lower, upper)[0]

    def value_and_reduced(self, prices: Floats, lower: Floats, upper: Floats) -> tuple[float, Floats]:
        """The bound, and the columns' reduced costs at these prices."""
        y = np.minimum(np.maximum(prices, self._floor), self._ceiling)
        pulled = np.bincount(
            self._column_of, weights=self._values * y[self._row_of], minlength=len(self._cost)
        )
        reduced: Floats = self._cost - pulled
        ends = np.where(reduced > 0, reduced * lower, reduced * upper)
        parts = float(y @ self._rhs) + float(ends.sum())
        size = float(np.abs(y * self._rhs).sum() + np.abs(ends).sum())
        return parts - self._ROUNDING * (len(ends) + len(y)) * size, reduced
