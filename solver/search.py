"""Our own branch and bound over the warm relaxation: the proof for plans small enough.

Land & Doig, An automatic method of solving discrete programming problems, Econometrica 28 (1960)
497-520, depth first. Pruning uses a bound that is safe against rounding (see matrix.DualBound); every
crew it accepts has been re-solved at whole lots and its head-count lines checked in integers.
"""

from __future__ import annotations

import heapq
from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from math import ceil, inf
from time import monotonic
from typing import Any

import numpy as np

from solver.engine import LpStatus, Relaxation
from solver.lines import HeadLine
from solver.matrix import DualBound, Floats, Ints, Matrix, forgiving, loosened_rhs, roundoff
from solver.program import Program

INTEGRAL = 1e-6
# a switch of a head count without limit is on by no more than a millionth per lot
SWITCHED = 1e-9
# crews whose costs differ by less than a tenth of a cent are equally cheap
TIE = 1e-3

Lots = tuple[int, ...]
Worth = Callable[[Floats, Floats], bool]


@dataclass(frozen=True)
class Found:
    """One whole crew, in lots, with the objective the program gives it."""

    lots: Lots
    objective: float


@dataclass(frozen=True)
class Outcome:
    """What a search knows: `complete` means nothing is better than `best` (or nothing exists)."""

    best: Found | None
    bound: float
    complete: bool
    nodes: int


@dataclass(order=True)
class _Node:
    """A box of head counts and switches, with a bound inherited from its parent."""

    bound: float
    number: int
    lower: Floats
    upper: Floats


@dataclass(frozen=True)
class Limits:
    """Where a search gives up."""

    nodes: int = 20_000
    seconds: float = inf


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
        self.solved = 0
        self._dual_bound = DualBound(self.matrix)
        self._lower = np.array(self.matrix.lower)
        self._upper = np.array(self.matrix.upper)
        free = set(fractional)
        self._heads = [c for c in range(program.head_count) if c not in free]
        self._whole = len(free) == 0
        switches = list(program.switches)
        self._columns: Ints = np.array([*self._heads, *switches], dtype=np.intp)
        self._number = 0
        self._now = _Node(-inf, 0, self._lower[self._columns], self._upper[self._columns])

    # ---- questions ---------------------------------------------------------------------------

    def relax(self, lower: Floats | None = None, upper: Floats | None = None) -> LpStatus:
        """Solve the relaxation within a box of the integer columns (default: the program's)."""
        self._apply(self._root(lower, upper))
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
        return self._bound(self._now) if self.relax() is LpStatus.OPTIMAL else inf

    def evaluate(self, lots: Sequence[int]) -> float | None:
        """The objective of a whole crew, None if it is not workable."""
        if any(line.margin(lots) < 0 for line in self._head_lines):
            return None
        fixed = np.array([lots[c] for c in self._heads] + self._switch_values(lots), dtype=np.float64)
        if (fixed < self._lower[self._columns]).any() or (fixed > self._upper[self._columns]).any():
            return None
        self._apply(_Node(-inf, 0, fixed, fixed))
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
        run = _Run(self, limits, key, start, cutoff)
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
        run = _Run(self, limits, None, None, cutoff)
        return run.cheapest_first(self._root(None, None), most, heard)

    def in_order(self, limits: Limits, *, worth: Worth | None = None, cutoff: float = inf) -> InOrder:
        """Whole crews of objective < cutoff one by one, cheapest first.

        `worth(lower, upper)` may drop a box of the integer columns (see `box`) in which nothing is wanted.
        """
        return InOrder(_Run(self, limits, None, None, cutoff), self._root(None, None), worth)

    # ---- machinery ---------------------------------------------------------------------------

    def _root(self, lower: Floats | None, upper: Floats | None) -> _Node:
        low, high = self.box()
        return _Node(-inf, 0, low if lower is None else lower, high if upper is None else upper)

    def _switch_values(self, lots: Sequence[int]) -> list[int]:
        return [int(any(lots[h] for h in heads)) for heads in self.program.switches.values()]

    def _apply(self, node: _Node) -> None:
        now = self._now
        changed = np.nonzero((node.lower != now.lower) | (node.upper != now.upper))[0]
        for i in changed.tolist():
            self.relaxation.set_bounds(int(self._columns[i]), float(node.lower[i]), float(node.upper[i]))
        self._now = node

    def _child(self, node: _Node, bound: float, i: int, lower: float, upper: float) -> _Node:
        low, high = node.lower.copy(), node.upper.copy()
        low[i], high[i] = max(low[i], lower), min(high[i], upper)
        self._number += 1
        return _Node(bound, self._number, low, high)

    def _bound(self, node: _Node) -> float:
        """A bound on every whole crew of the node just solved, safe against the LP code's rounding."""
        lower, upper = self._lower.copy(), self._upper.copy()
        lower[self._columns], upper[self._columns] = node.lower, node.upper
        return self.rounded(self._dual_bound.value(self.relaxation.prices, lower, upper))

    def rounded(self, bound: float) -> float:
        """The least objective a whole crew can have that is not below `bound`."""
        if not self.grain or not np.isfinite(bound):
            return bound
        return ceil(bound / self.grain - 1e-6) * self.grain


class InOrder:
    """Crews cheapest first, to be iterated once."""

    def __init__(self, run: _Run, root: _Node, worth: Worth | None) -> None:
        self._run = run
        self._crews = run.in_order(root, worth)

    def __iter__(self) -> Iterator[Found]:
        return self._crews

    @property
    def bound(self) -> float:
        """No crew still to come costs less; infinite when there is none."""
        return inf if self._run.exhausted else self._run.reached


class _Run:
    """One search: its incumbent, its limits, its count of nodes."""

    def __init__(
        self,
        search: Search,
        limits: Limits,
        key: Callable[[Lots], Any] | None,
        start: Found | None,
        cutoff: float,
    ) -> None:
        self.search = search
        self.key = key
        self.best = start
        self.best_key = key(start.lots) if key and start else None
        self.least = start.objective if start else inf
        self.cutoff = cutoff
        self.nodes = 0
        self.reached = -inf
        self.exhausted = False
        self._most_nodes = limits.nodes
        self._until = monotonic() + limits.seconds

    def _spent(self) -> bool:
        return self.nodes >= self._most_nodes or (self.nodes & 31 == 0 and monotonic() > self._until)

    # ---- depth first -------------------------------------------------------------------------

    def depth_first(self, root: _Node) -> Outcome:
        """Until nothing is open or the limits are spent."""
        stack = [root]
        while stack:
            if self._spent():
                bound = min(self.least, min(node.bound for node in stack))
                return Outcome(self.best, bound, False, self.nodes)
            stack.extend(self._children(stack.pop()))
        return Outcome(self.best, self.least, True, self.nodes)

    def _cut(self, bound: float) -> bool:
        """Nothing worth having at `bound` or above it."""
        if self.best is None:
            return bound >= self.cutoff
        tie = tie_width(self.least)
        return bound > (self.least + tie if self.key else self.least - tie)

    def _children(self, node: _Node) -> list[_Node]:
        solved = self._solve(node)
        if solved is None:
            return []
        bound, x = solved
        i = self._fractional(x)
        if i is not None:
            return self._split(node, bound, i, float(x[i]))
        lots, objective = self._at_whole(node, x)
        if objective is not None:
            self._offer(Found(lots, objective))
        return self._after_leaf(node, bound, x, objective)

    def _solve(self, node: _Node) -> tuple[float, Floats] | None:
        """Bound and integer columns of the node's relaxation, None if it is empty or cut."""
        if self._cut(node.bound):
            return None
        search = self.search
        self.nodes += 1
        search._apply(node)
        if search.relaxation.solve() is not LpStatus.OPTIMAL:
            return None
        bound = max(node.bound, search._bound(node))
        if self._cut(bound):
            return None
        return bound, search.relaxation.x[search._columns]

    def _fractional(self, x: Floats) -> int | None:
        """The head count furthest from a whole lot, None if all are whole."""
        heads = x[: len(self.search._heads)]
        if not len(heads):
            return None
        distance = np.abs(heads - np.rint(heads))
        i = int(distance.argmax())
        return i if distance[i] > INTEGRAL else None

    def _split(self, node: _Node, bound: float, i: int, value: float) -> list[_Node]:
        down = self.search._child(node, bound, i, -inf, np.floor(value))
        up = self.search._child(node, bound, i, np.ceil(value), inf)
        return [down, up] if value - np.floor(value) > 0.3 else [up, down]  # the last is looked at first

    def _at_whole(self, node: _Node, x: Floats) -> tuple[Lots, float | None]:
        """The crew at whole lots and its objective, None if it is not workable as it stands."""
        search = self.search
        heads = len(search._heads)
        if search._whole:
            lots = tuple(int(v) for v in np.rint(x[:heads]))
            return lots, search.evaluate(lots)
        lower, upper = node.lower.copy(), node.upper.copy()
        lower[:heads] = upper[:heads] = np.rint(x[:heads])
        search._apply(_Node(-inf, 0, lower, upper))
        if search.relaxation.solve() is not LpStatus.OPTIMAL:
            return (), None
        switches = search.relaxation.x[search._columns][heads:]
        whole = bool((np.abs(switches - np.rint(switches)) <= SWITCHED).all())
        return (), search.relaxation.objective if whole else None

    def _after_leaf(self, node: _Node, bound: float, x: Floats, objective: float | None) -> list[_Node]:
        """What the node holds besides the crew at x."""
        if objective is not None and objective <= bound + tie_width(bound):
            return self._around(node, bound, x) if self.key else []
        return self._switched(node, bound, x) or self._around(node, bound, x)

    def _switched(self, node: _Node, bound: float, x: Floats) -> list[_Node]:
        """Both sides of the first switch that is neither on nor off; empty if there is none."""
        for i in range(len(self.search._heads), len(x)):
            if node.lower[i] < node.upper[i] and abs(x[i] - np.rint(x[i])) > SWITCHED:
                return [self.search._child(node, bound, i, v, v) for v in (0.0, 1.0)]
        return []

    def _around(self, node: _Node, bound: float, x: Floats) -> list[_Node]:
        """The node without the head counts x: below and above each, those before it held."""
        children, rest, child = [], node, self.search._child
        for i in range(len(self.search._heads)):
            if rest.lower[i] == rest.upper[i]:
                continue
            value = np.rint(x[i])
            if value > rest.lower[i]:
                children.append(child(rest, bound, i, -inf, value - 1))
            if value < rest.upper[i]:
                children.append(child(rest, bound, i, value + 1, inf))
            rest = child(rest, bound, i, value, value)
        return children

    def _offer(self, found: Found) -> None:
        """Keep a workable crew if it is cheaper, or as cheap and of lesser key."""
        if found.objective >= self.cutoff:
            return
        tie = tie_width(found.objective)
        if self.best is None or found.objective < self.least - tie:
            self._take(found, self.key(found.lots) if self.key else None)
        elif self.key and found.objective <= self.least + tie:
            key = self.key(found.lots)
            if key < self.best_key:
                self._take(found, key)

    def _take(self, found: Found, key: Any) -> None:
        self.best, self.best_key = found, key
        self.least = min(self.least, found.objective)

    # ---- cheapest first ----------------------------------------------------------------------

    def cheapest_first(
        self, root: _Node, most: int, heard: Callable[[int], None] | None
    ) -> tuple[list[Found], bool]:
        """Crews in order of objective; crews wait in the heap beside the nodes that may beat them."""
        found: list[Found] = []
        for one in self.in_order(root, None):
            if len(found) == most:
                return found, False
            found.append(one)
            if heard:
                heard(len(found))
        return found, self.exhausted

    def in_order(self, root: _Node, worth: Worth | None) -> Iterator[Found]:
        """Crews one by one; afterwards `exhausted` tells whether these were all."""
        met: set[Lots] = set()
        heap: list[tuple[float, int, _Node | Found]] = [(-inf, 0, root)]
        pushed = 0
        while heap and not self._spent():
            self.reached, _, top = heapq.heappop(heap)
            if isinstance(top, Found):
                if top.lots not in met:  # where a switch is on for nobody, its crew is elsewhere too
                    met.add(top.lots)
                    yield top
            elif worth is None or worth(top.lower, top.upper):
                for item in self._expanded(top):
                    pushed += 1
                    at = item.objective if isinstance(item, Found) else item.bound
                    heapq.heappush(heap, (at, pushed, item))
        self.exhausted = not heap

    def _expanded(self, node: _Node) -> list[_Node | Found]:
        solved = self._solve(node)
        if solved is None:
            return []
        bound, x = solved
        i = self._fractional(x)
        if i is not None:
            return list(self._split(node, bound, i, float(x[i])))
        lots, objective = self._at_whole(node, x)
        if objective is None or objective > bound + tie_width(bound):
            switched = self._switched(node, bound, x)  # the crew itself comes up again below
            if switched:
                return list(switched)
        items: list[_Node | Found] = list(self._around(node, bound, x))
        if objective is not None and objective < self.cutoff:
            items.append(Found(lots, objective))
        return items


def tie_width(objective: float) -> float:
    """Objectives closer than this are equal: a tenth of a cent, or what doubles can tell apart."""
    return max(TIE, 1e-10 * abs(objective))
