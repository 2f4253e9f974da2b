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
        self._sum = np.zeros((2, count))
        self._seen = np.zeros((2, count))

    def learn(self, split: Split, objective: float) -> None:
        """The child of `split` has a relaxation that costs `objective`."""
        self._sum[split.side, split.i] += max(objective - split.objective, 0.0) / split.distance
        self._seen[split.side, split.i] += 1

    def choose(self, x: Floats) -> int | None:
        """The head count to split in a relaxation with head counts `x`; None if all are whole."""
        if not len(x):
            return None
        down = x - np.floor(x)
        distance = np.minimum(down, 1 - down)
        open_columns = np.nonzero(distance > INTEGRAL)[0]
        if len(open_columns) < 2:
            return int(open_columns[0]) if len(open_columns) else None
        rise = self._rises()
        score = np.maximum(rise[DOWN] * down, _LITTLE) * np.maximum(rise[UP] * (1 - down), _LITTLE)
        score += _LITTLE**2 * distance  # where nothing is known: the one furthest from a whole lot
        return int(open_columns[score[open_columns].argmax()])

    def _rises(self) -> Floats:
        """Expected rise per lot on either side, the average where a column was not split yet; scaled to 1."""
        known = self._seen > 0
        rise = self._sum / np.maximum(self._seen, 1)
        count = known.sum(axis=1, keepdims=True)
        average = np.where(known, rise, 0.0).sum(axis=1, keepdims=True) / np.maximum(count, 1)
        rise = np.where(known, rise, np.where(count > 0, average, 1.0))
        largest = float(rise.max())
        return np.asarray(rise / largest if largest > 0 else rise)
