"""One walk of a search through its boxes of crews: its best crew so far, its limits, its count of nodes."""

from __future__ import annotations

import heapq
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from math import floor, inf
from time import monotonic
from typing import TYPE_CHECKING, Any

import numpy as np

from solver.branching import DOWN, UP, Branching, Split
from solver.engine import LpStatus
from solver.found import Found, Limits, Lots, Outcome, tie_width
from solver.matrix import Floats

if TYPE_CHECKING:
    from solver.search import Search

# a switch of a head count without limit is on by no more than a millionth per lot
SWITCHED = 1e-9
# reduced costs below this are noise
_FREE = 1e-9

Worth = Callable[[Floats, Floats], bool]


@dataclass(order=True)
class Node:
    """A box of head counts and switches, with a bound inherited from its parent."""

    bound: float
    number: int
    lower: Floats
    upper: Floats
    split: Split | None = None


class InOrder:
    """Crews cheapest first, to be iterated once."""

    def __init__(self, run: Walk, root: Node, worth: Worth | None) -> None:
        self._run = run
        self._crews = run.in_order(root, worth)

    def __iter__(self) -> Iterator[Found]:
        return self._crews

    @property
    def bound(self) -> float:
        """No crew still to come costs less; infinite when there is none."""
        return inf if self._run.exhausted else self._run.reached


class Walk:
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
        self._branching = Branching(len(search.heads))

    def _spent(self) -> bool:
        return self.nodes >= self._most_nodes or (self.nodes & 31 == 0 and monotonic() > self._until)

    # ---- depth first -------------------------------------------------------------------------

    def depth_first(self, root: Node) -> Outcome:
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

    def _children(self, node: Node) -> list[Node]:
        solved = self._solve(node)
        if solved is None:
            return []
        node, bound, x = solved
        i = self._fractional(x)
        if i is not None:
            return self._split(node, bound, i, float(x[i]))
        lots, objective = self._at_whole(node, x)
        if objective is not None:
            self._offer(Found(lots, objective))
        return self._after_leaf(node, bound, x, objective)

    def _solve(self, node: Node) -> tuple[Node, float, Floats] | None:
        """The node narrowed, its bound and its relaxation's integer columns; None if it is empty or cut."""
        if self._cut(node.bound):
            return None
        search = self.search
        self.nodes += 1
        search.apply(node)
        if search.relaxation.solve() is not LpStatus.OPTIMAL:
            return None
        if node.split is not None:
            self._branching.learn(node.split, search.relaxation.objective)
        raw, reduced = search.bound_and_reduced(node)
        bound = max(node.bound, search.rounded(raw))
        if self._cut(bound):
            return None
        x = search.relaxation.x[search.columns]
        return self._narrowed(node, raw, reduced, x), bound, x

    def _narrowed(self, node: Node, bound: float, reduced: Floats, x: Floats) -> Node:
        """Leave out what the reduced costs price beyond everything wanted; x itself stays in the box.

        Every lot away from the end that a column's reduced cost holds it to costs at least that much more
        than `bound` (reduced cost fixing; Dantzig, Fulkerson & Johnson 1954).
        """
        left = self._dearest() - bound
        if left == inf:
            return node
        lots = np.floor(left / np.maximum(np.abs(reduced), _FREE) * (1 + 1e-9) + 1e-6)
        far = lots < node.upper - node.lower
        if not far.any():
            return node
        upper, lower = node.upper.copy(), node.lower.copy()
        down, up = far & (reduced > _FREE), far & (reduced < -_FREE)
        upper[down] = np.maximum(node.lower + lots, np.ceil(x))[down]
        lower[up] = np.minimum(node.upper - lots, np.floor(x))[up]
        return replace(node, upper=np.minimum(upper, node.upper), lower=np.maximum(lower, node.lower))

    def _dearest(self) -> float:
        """The largest objective that is still wanted."""
        if self.best is None:
            return self.cutoff
        tie = tie_width(self.least)
        if self.key:
            return min(self.least + tie, self.cutoff)
        return min(self.least - max(tie, self.search.grain - tie), self.cutoff)

    def _fractional(self, x: Floats) -> int | None:
        """The head count to split, None if all are whole."""
        return self._branching.choose(x[: len(self.search.heads)])

    def _split(self, node: Node, bound: float, i: int, value: float) -> list[Node]:
        objective, below = self.search.relaxation.objective, value - np.floor(value)
        left = Split(i, DOWN, below, objective)
        right = Split(i, UP, 1 - below, objective)
        down = self.search.child(node, bound, i, -inf, np.floor(value), left)
        up = self.search.child(node, bound, i, np.ceil(value), inf, right)
        return [down, up] if below > 0.3 else [up, down]  # the last is looked at first

    def _at_whole(self, node: Node, x: Floats) -> tuple[Lots, float | None]:
        """The crew at whole lots and its objective, None if it is not workable as it stands."""
        search = self.search
        heads = len(search.heads)
        if search.all_whole:
            lots = tuple(int(v) for v in np.rint(x[:heads]))
            return lots, search.evaluate(lots)
        lower, upper = node.lower.copy(), node.upper.copy()
        lower[:heads] = upper[:heads] = np.rint(x[:heads])
        search.apply(Node(-inf, 0, lower, upper))
        if search.relaxation.solve() is not LpStatus.OPTIMAL:
            return (), None
        switches = search.relaxation.x[search.columns][heads:]
        whole = bool((np.abs(switches - np.rint(switches)) <= SWITCHED).all())
        return (), search.relaxation.objective if whole else None

    def _after_leaf(self, node: Node, bound: float, x: Floats, objective: float | None) -> list[Node]:
        """What the node holds besides the crew at x."""
        if objective is not None and objective <= bound + tie_width(bound):
            return self._around(node, bound, x) if self.key else []
        return self._switched(node, bound, x) or self._around(node, bound, x)

    def _switched(self, node: Node, bound: float, x: Floats) -> list[Node]:
        """Both sides of the first switch that is neither on nor off; empty if there is none."""
        for i in range(len(self.search.heads), len(x)):
            if node.lower[i] < node.upper[i] and abs(x[i] - np.rint(x[i])) > SWITCHED:
                return [self.search.child(node, bound, i, v, v) for v in (0.0, 1.0)]
        return []

    def _around(self, node: Node, bound: float, x: Floats) -> list[Node]:
        """The node without the head counts x: below and above each, those before it held."""
        children, rest, child = [], node, self.search.child
        for i in range(len(self.search.heads)):
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
        self, root: Node, most: int, heard: Callable[[int], None] | None
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

    def in_order(self, root: Node, worth: Worth | None) -> Iterator[Found]:
        """Crews one by one; afterwards `exhausted` tells whether these were all."""
        met: set[Lots] = set()
        heap: list[tuple[float, int, Node | Found]] = [(-inf, 0, root)]
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
                    # of equals the latest first: people who cost nothing make endless plains of equals
                    heapq.heappush(heap, (_level(item), -pushed, item))
        self.exhausted = not heap

    def _expanded(self, node: Node) -> list[Node | Found]:
        solved = self._solve(node)
        if solved is None:
            return []
        node, bound, x = solved
        i = self._fractional(x)
        if i is not None:
            return list(self._split(node, bound, i, float(x[i])))
        lots, objective = self._at_whole(node, x)
        if objective is None or objective > bound + tie_width(bound):
            switched = self._switched(node, bound, x)  # the crew itself comes up again below
            if switched:
                return list(switched)
        items: list[Node | Found] = list(self._around(node, bound, x))
        if objective is not None and objective < self.cutoff:
            items.append(Found(lots, objective))
        return items


def _level(item: Node | Found) -> float:
    """The bound or objective, equals brought to one number that is not above it."""
    at = item.objective if isinstance(item, Found) else item.bound
    width = tie_width(at)
    return (
        (floor(at / width + 0.5) - 0.5) * width if np.isfinite(at) else at
    )  # money is not cut at whole cents
