"""Which head count a search splits next: the one whose two sides are expected to raise the bound most.

Pseudocosts (Benichou et al., Experiments in mixed-integer linear programming, Mathematical Programming 1
(1971) 76-94; the product rule after Achterberg, Koch & Martin, Branching rules revisited, Operations
Research Letters 33 (2005) 42-54): every split tells how much a lot up or down raised the bound. A column
not split before counts as the average of the others; people who cost nothing soon fall behind.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from solver.matrix import Floats

# nearer to a whole lot than this is whole
INTEGRAL = 1e-6
# a side that raises nothing still counts a little, so that the other side's rise is seen
_LITTLE = 1e-6
DOWN, UP = 0, 1


@dataclass(frozen=True)
class Split:
    """Where a node comes from: column `i` moved by `distance` lots to side DOWN or UP of a relaxation that
    cost `objective`."""

    i: int
    side: int
    distance: float
    objective: float


class Branching:
    """What the splits of one search have taught so far."""

    def __init__(self, count: int) -> None:
        """`count` head counts."""
        self._sum = ([0.0] * count, [0.0] * count)
        self._seen = ([0] * count, [0] * count)
        self._all = [0.0, 0.0]
        self._splits = [0, 0]

    def learn(self, split: Split, objective: float) -> None:
        """The child of `split` has a relaxation that costs `objective`."""
        rise = max(objective - split.objective, 0.0) / split.distance
        self._sum[split.side][split.i] += rise
        self._seen[split.side][split.i] += 1
        self._all[split.side] += rise
        self._splits[split.side] += 1

    def choose(self, x: Floats) -> int | None:
        """The head count to split in a relaxation with head counts `x`; None if all are whole."""
        below = x - np.floor(x)
        distance = np.minimum(below, 1 - below)
        columns = np.nonzero(distance > INTEGRAL)[0].tolist()
        if len(columns) < 2:
            return columns[0] if columns else None
        parts = [(self._rise(DOWN, i) * below[i], self._rise(UP, i) * (1 - below[i])) for i in columns]
        least = _LITTLE * max(max(part) for part in parts)
        # where nothing tells them apart: the one furthest from a whole lot
        return int(
            max(
                zip(columns, parts, strict=True),
                key=lambda each: (max(each[1][0], least) * max(each[1][1], least), distance[each[0]]),
            )[0]
        )

    def _rise(self, side: int, i: int) -> float:
        """Expected rise per lot on a side, the average where a column was not split yet."""
        if self._seen[side][i]:
            return self._sum[side][i] / self._seen[side][i]
        return self._all[side] / self._splits[side] if self._splits[side] else 1.0
