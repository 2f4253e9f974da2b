"""Dual prices of a relaxation, each with the range of its right-hand side in which it holds.

For row prices y of an optimum, value(rhs) = value(now) + y_i (rhs - rhs_i) holds exactly as long as some
x keeps every row of nonzero price tight and every column of nonzero reduced cost at its bound
(complementary slackness). So each end of the range is a linear program over that face, whatever the
basis, and nothing depends on which of several optimal bases the engine stopped at.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from solver.engine import LpStatus, Relaxation
from solver.matrix import Floats, Matrix, RowSense

ZERO_PRICE = 1e-10  # of the largest price
ZERO_COST = 1e-9  # of what a reduced cost is the difference of
ENDLESS = 1e13  # right-hand sides moved further than a tenth of this are called without limit


@dataclass(frozen=True)
class Priced:
    """d objective / d right-hand side, and the right-hand sides it holds for (None: without limit)."""

    price: float
    low: float | None
    high: float | None


class Ranging:
    """Prices of the rows of a linear program (integrality is ignored). ValueError if it has no optimum."""

    def __init__(self, matrix: Matrix) -> None:
        self._matrix = matrix
        relaxation = Relaxation(matrix)
        status = relaxation.solve()
        if status is not LpStatus.OPTIMAL:
            raise ValueError(f"nothing to range: the relaxation is {status.name.lower()}")
        self.objective = relaxation.objective
        self._prices = _without_noise(relaxation.prices)
        self._shifts: list[int] = []
        self._face = Relaxation(self._optimal_face())

    def priced(self, row: int) -> Priced:
        """The price of `row` on the side where it is loosened, with its range.

        Where the optimum is degenerate the price differs between the sides: the one for loosening is
        given. An equality is loosened upwards where that is possible.
        """
        found = self._held(row)
        rhs, step = self._matrix.rows[row].rhs, self._matrix.rows[row].sense
        down = step is RowSense.AT_LEAST
        if _reaches(found, rhs, down):
            return found
        return self._beside(row, down) or self._beside(row, not down) or found

    def _held(self, row: int) -> Priced:
        """The price at hand, and how far it holds."""
        rhs = self._matrix.rows[row].rhs
        low, high = (self._end(row, sign) for sign in (-1, +1))
        return Priced(
            float(self._prices[row]),
            None if low is None else rhs + min(low, 0.0),
            None if high is None else rhs + max(high, 0.0),
        )

    def _beside(self, row: int, down: bool) -> Priced | None:
        """The price just beside the right-hand side, None where there is none that reaches back to it."""
        was = self._matrix.rows[row]
        for share in (1e-3, 1e-5, 1e-7):
            step = share * max(1.0, abs(was.rhs))
            matrix = self._matrix.copy()
            matrix.rows[row] = replace(was, rhs=was.rhs - step if down else was.rhs + step)
            try:
                found = Ranging(matrix)._held(row)
            except ValueError:
                continue
            near = found.high if down else found.low
            slack = 1e-9 * max(1.0, abs(was.rhs))
            if near is None or (near >= was.rhs - slack if down else near <= was.rhs + slack):
                return found
        return None

    # ---- the face of all optima --------------------------------------------------------------

    def _optimal_face(self) -> Matrix:
        matrix, y = self._matrix, self._prices
        reduced = np.array(matrix.cost)
        size = np.abs(reduced)
        for row, price in zip(matrix.rows, y, strict=True):
            for column, coef in zip(row.columns, row.coefs, strict=True):
                reduced[column] -= coef * price
                size[column] += abs(coef * price)
        face = Matrix([0.0] * matrix.width, matrix.lower[:], matrix.upper[:], matrix.integer[:])
        for column in np.nonzero(np.abs(reduced) > ZERO_COST * size)[0].tolist():
            at = matrix.lower[column] if reduced[column] > 0 else matrix.upper[column]
            face.lower[column] = face.upper[column] = at
        face.rows = [
            replace(row, sense=RowSense.EQUAL) if price else row
            for row, price in zip(matrix.rows, y, strict=True)
        ]
        self._shifts = [_add_shift(face, i) for i in range(len(face.rows))]
        return face

    def _end(self, row: int, sign: int) -> float | None:
        """How far the right-hand side can move in the direction of `sign`; None: without limit."""
        face, shift = self._face, self._shifts[row]
        face.set_bounds(shift, -ENDLESS, ENDLESS)
        face.set_cost(shift, -float(sign))
        end = float(face.x[shift]) if face.solve() is LpStatus.OPTIMAL else 0.0
        face.set_bounds(shift, 0.0, 0.0)
        face.set_cost(shift, 0.0)
        return end if abs(end) < ENDLESS / 10 else None


def _add_shift(face: Matrix, row: int) -> int:
    """A column, held at 0, that moves the row's right-hand side."""
    shift = face.add_column(0.0, 0.0, 0.0)
    asked = face.rows[row]
    face.rows[row] = replace(asked, columns=(*asked.columns, shift), coefs=(*asked.coefs, -1.0))
    return shift


def _reaches(found: Priced, rhs: float, down: bool) -> bool:
    """Whether the price holds for more than the right-hand side itself, on the side asked for."""
    end = found.low if down else found.high
    return end is None or abs(end - rhs) > 1e-7 * max(1.0, abs(rhs))


def _without_noise(prices: Floats) -> Floats:
    largest = float(np.abs(prices).max(initial=0.0))
    cleaned: Floats = np.where(np.abs(prices) > ZERO_PRICE * max(1.0, largest), prices, 0.0)
    return cleaned
