"""Rows that every crew of a wanted chance satisfies, with right-hand sides that follow the box looked at.

An inequality c.m >= d in the people present, kept by every covered day, must hold with the wanted chance;
so c.n >= d + what absences take with that certainty (see losses). Units bought in lower d in step.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from solver.chances import SAME, Chances
from solver.coverage import Inequality
from solver.losses import sure_loss
from solver.matrix import Floats, Ints, Matrix, RowSense
from solver.program import Program
from solver.search import Search


@dataclass(frozen=True)
class _SafeRow:
    """Matrix row `row`: sum each[j] n_jt + ... >= need + loss; `columns` are the head counts of the phase."""

    row: int
    columns: Ints
    each: Floats
    need: float


class SafeRows:
    """The rows of one question, in a matrix of `program`."""

    def __init__(self, program: Program, matrix: Matrix, chances: Chances, wanted: float) -> None:
        self._program = program
        self._wanted = wanted - SAME
        self._days = chances.days
        self._losses: dict[tuple[int, bytes], float] = {}
        self._rows = [
            self._add(matrix, t, inequality)
            for t in range(len(program.phases))
            for inequality in chances.coverage.inequalities(self._days.easiest(t, self._nobody, 0.0))
        ]

    @property
    def _nobody(self) -> Sequence[int]:
        return [0] * self._program.head_count

    def _add(self, matrix: Matrix, t: int, inequality: Inequality) -> _SafeRow:
        program = self._program
        heads = np.array([program.head(j, t) for j in range(len(program.categories))], dtype=np.intp)
        columns, coefs = [], []
        for j, column in enumerate(heads.tolist()):
            if inequality.each[j]:
                columns.append(column)
                coefs.append(float(inequality.each[j]) * float(program.lots[j]))
        for k, column in self._bought(t):
            if inequality.work[k] > 0:
                hours = program.best_output(k) * program.periods(t)
                columns.append(column)
                coefs.append(float(inequality.work[k]) / float(hours))
        row = matrix.add_row(columns, coefs, RowSense.AT_LEAST, inequality.need)
        return _SafeRow(row, heads, inequality.each, inequality.need)

    def _bought(self, t: int) -> Iterator[tuple[int, int]]:
        return ((k, column) for (k, at), column in self._program.bought.items() if at == t)

    def follow(self, search: Search, lower: Floats, upper: Floats) -> None:
        """Set the right-hand sides for the crews between `lower` and `upper` (lots)."""
        for one in self._rows:
            lots = np.where(one.each > 0, lower[one.columns], upper[one.columns])
            slack = 1e-9 * max(1.0, abs(one.need))
            search.set_rhs(one.row, one.need + self._loss(one, lots * self._days.per_lot) - slack)

    def _loss(self, one: _SafeRow, heads: Floats) -> float:
        heads = np.where(one.each == 0, 0.0, heads)
        key = (one.row, heads.tobytes())
        if key not in self._losses:
            counts = [int(n) for n in heads]
            each = (one.each * self._days.size).tolist()
            self._losses[key] = sure_loss(each, counts, self._days.away.tolist(), self._wanted)
        return self._losses[key]
