"""Our own branch and bound over the warm relaxation: the proof for plans small enough.

Land & Doig, An automatic method of solving discrete programming problems, Econometrica 28 (1960)
497-520, depth first. Pruning uses a bound that is safe against rounding (see matrix.DualBound); every
crew it accepts has been re-solved at whole lots and its head-count lines checked in integers.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import replace
from fractions import Fraction
from math import ceil, inf
from typing import Any

import numpy as np

from solver.branching import Split
from solver.engine import LpStatus, Relaxation
from solver.found import Found, Limits, Lots, Outcome, tie_width
from solver.lines import HeadLine
from solver.matrix import DualBound, Floats, Ints, Matrix, forgiving, loosened_rhs, roundoff
from solver.program import Program
from solver.walk import InOrder, Node, Walk, Worth


class Search:
    """Branch and bound for one program. Head counts in `fractional` may be fractional.

    `grain`: every whole crew's objective is a multiple of it (0: unknown). `matrix` is the program's own
    or one derived from it for a question: columns may be appended, rows added, the objective replaced.
    """

    def __init__(
        self,
        program: Program,
        matrix: Matrix | None = None,
        *,
        grain: float = 0.0,
        fractional: Iterable[int] = (),
        head_lines: Sequence[HeadLine] | None = None,
    ) -> None:
        """`head_lines` stand in for the program's where a question lets some of them give way."""
        self.program = program
        self._head_lines = program.head_lines if head_lines is None else head_lines
        self.matrix = program.matrix if matrix is None else matrix
        self.relaxation = Relaxation(forgiving(self.matrix))
        self.grain = grain
        self._dual_bound = DualBound(self.matrix)
        self._lower = np.array(self.matrix.lower)
        self._upper = np.array(self.matrix.upper)
        self._node_lower, self._node_upper = self._lower.copy(), self._upper.copy()
        free = set(fractional)
        self.heads = [c for c in range(program.head_count) if c not in free]
        self.all_whole = len(free) == 0
        switches = list(program.switches)
        self._columns: Ints = np.array([*self.heads, *switches], dtype=np.intp)
        self._number = 0
        self._now = Node(-inf, 0, self._lower[self._columns], self._upper[self._columns])

    # ---- questions ---------------------------------------------------------------------------

    def relax(self, lower: Floats | None = None, upper: Floats | None = None) -> LpStatus:
        """Solve the relaxation within a box of the integer columns (default: the program's)."""
        self.apply(self._root(lower, upper))
        return self.relaxation.solve()

    @property
    def columns(self) -> Ints:
        """The integer columns of the matrix, in the order of a box: head counts first, then switches."""
        return self._columns

    def box(self) -> tuple[Floats, Floats]:
        """Fresh copies of the integer columns' bounds: head counts first, then switches."""
        return self._lower[self._columns].copy(), self._upper[self._columns].copy()

    def set_rhs(self, row: int, rhs: float) -> None:
        """Change the right-hand side of one row, also of the nodes still open."""
        changed = replace(self.matrix.rows[row], rhs=rhs)
        self.relaxation.set_rhs(row, loosened_rhs(changed, roundoff(self.matrix, changed)))
        self._dual_bound.set_rhs(row, rhs)

    def root_bound(self) -> float:
        """A safe bound on every whole crew's objective from the relaxation alone; inf if it is empty."""
        return self.bound(self._now) if self.relax() is LpStatus.OPTIMAL else inf

    def evaluate(self, lots: Sequence[int]) -> float | None:
        """The objective of a whole crew, None if it is not workable."""
        if any(line.margin(lots) < 0 for line in self._head_lines):
            return None
        fixed = np.array([lots[c] for c in self.heads] + self._switch_values(lots), dtype=np.float64)
        if (fixed < self._lower[self._columns]).any() or (fixed > self._upper[self._columns]).any():
            return None
        self.apply(Node(-inf, 0, fixed, fixed))
        if self.relaxation.solve() is not LpStatus.OPTIMAL or self._over_budget(lots):
            return None
        return self.relaxation.objective

    def _over_budget(self, lots: Sequence[int]) -> bool:
        """Budgets, in exact money: a row of millions lets a cent pass as rounding."""
        program = self.program
        if not program.budget_of or self._head_lines is not program.head_lines:
            return False
        cost = program.ledger.paper_cost(lots)
        allowed = 0.0
        if program.costs_hours:
            cost += Fraction(program.running_cost(self.relaxation.x))
            allowed = tie_width(float(cost)) / 2
        return any(cost > at_most + Fraction(allowed) for at_most in program.budget_of.values())

    def cheapest(
        self,
        limits: Limits,
        *,
        key: Callable[[Lots], Any] | None = None,
        start: Found | None = None,
        box: tuple[Floats, Floats] | None = None,
        cutoff: float = inf,
    ) -> Outcome:
        """The best whole crew in the box whose objective is below `cutoff`.

        With `key`, of crews equal within TIE the one of least key: all of them are looked at.
        """
        run = Walk(self, limits, key, start, cutoff)
        return run.depth_first(self._root(*(box or (None, None))))

    def within(
        self,
        cutoff: float,
        most: int,
        limits: Limits,
        heard: Callable[[int], None] | None = None,
    ) -> tuple[list[Found], bool]:
        """All whole crews of objective <= cutoff, cheapest first, at most `most`; True if complete.

        A node is either cut, a crew and the rest around it, or split.
        """
        run = Walk(self, limits, None, None, cutoff)
        return run.cheapest_first(self._root(None, None), most, heard)

    def in_order(self, limits: Limits, *, worth: Worth | None = None, cutoff: float = inf) -> InOrder:
        """Whole crews of objective < cutoff one by one, cheapest first.

        `worth(lower, upper)` may drop a box of the integer columns (see `box`) in which nothing is wanted.
        """
        return InOrder(Walk(self, limits, None, None, cutoff), self._root(None, None), worth)

    # ---- machinery ---------------------------------------------------------------------------

    def _root(self, lower: Floats | None, upper: Floats | None) -> Node:
        low, high = self.box()
        return Node(-inf, 0, low if lower is None else lower, high if upper is None else upper)

    def _switch_values(self, lots: Sequence[int]) -> list[int]:
        return [int(any(lots[h] for h in heads)) for heads in self.program.switches.values()]

    def apply(self, node: Node) -> None:
        """Give the relaxation the bounds of a node."""
        now = self._now
        changed = np.nonzero((node.lower != now.lower) | (node.upper != now.upper))[0]
        for i in changed.tolist():
            self.relaxation.set_bounds(int(self._columns[i]), float(node.lower[i]), float(node.upper[i]))
        self._now = node

    def child(
        self, node: Node, bound: float, i: int, lower: float, upper: float, split: Split | None = None
    ) -> Node:
        """A node of `node` with column `i` held between `lower` and `upper`."""
        low, high = node.lower.copy(), node.upper.copy()
        low[i], high[i] = max(low[i], lower), min(high[i], upper)
        self._number += 1
        return Node(bound, self._number, low, high, split)

    def bound(self, node: Node) -> float:
        """A bound on every whole crew of the node just solved, safe against the LP code's rounding."""
        return self.rounded(self.bound_and_reduced(node)[0])

    def bound_and_reduced(self, node: Node) -> tuple[float, Floats]:
        """The bound before it is rounded up to the grain, and the reduced costs of the integer columns."""
        lower, upper = self._node_lower, self._node_upper
        lower[self._columns], upper[self._columns] = node.lower, node.upper
        bound, reduced = self._dual_bound.value_and_reduced(self.relaxation.prices, lower, upper)
        return bound, reduced[self._columns]

    def rounded(self, bound: float) -> float:
        """The least objective a whole crew can have that is not below `bound`."""
        if not self.grain or not np.isfinite(bound):
            return bound
        return ceil(bound / self.grain - 1e-6) * self.grain
