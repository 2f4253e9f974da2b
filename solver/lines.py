"""What the columns and rows of a program mean to the planner: lines, and those in head counts alone."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import NamedTuple

from solver.answer import LineKind
from solver.matrix import RowSense


class Column(NamedTuple):
    """What a column means: its letter in the formulation and the names it belongs to."""

    letter: str
    category: str | None
    other: str | None
    phase: str | None


@dataclass(frozen=True)
class Line:
    """One condition the planner knows, in one phase (None: over all).

    `row` is its matrix row, or None where it is a column's bound; row x `scale` is in `unit`.
    """

    name: str
    kind: LineKind
    phase: str | None
    unit: str
    row: int | None
    scale: float
    says: str


@dataclass(frozen=True)
class HeadLine:
    """A line in head counts alone, in integers: (sum terms . lots {>=, <=, =} rhs) / divisor units.

    `only_if_any` marks least-if-any: it binds only where the one head count is not zero.
    """

    line: Line
    terms: tuple[tuple[int, int], ...]
    sense: RowSense
    rhs: int
    divisor: int
    only_if_any: bool = False

    def margin(self, lots: Sequence[Fraction | int]) -> Fraction:
        """Exact room (>= 0) or miss (< 0) of a crew in lots, in the line's unit."""
        total = sum(coef * lots[i] for i, coef in self.terms)
        if self.only_if_any and total == 0:
            return Fraction(0)
        room = Fraction(total - self.rhs) / self.divisor
        if self.sense is RowSense.AT_MOST:
            return -room
        return room if self.sense is RowSense.AT_LEAST else -abs(room)
