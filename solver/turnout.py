"""Who turns up: the patterns of attendance of a day with their chances, all of them or drawn.

A pattern is the number of heads present per category. Heads of one category are present independently
with the same chance, so their number is binomial.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import comb, exp, lgamma, log, log1p

import numpy as np
import numpy.typing as npt

from solver.day import Day
from solver.matrix import Floats, Ints

# each category's rarest numbers, together rarer than this, are left out of an enumeration
RARE = 1e-13
SEED = 20_011
# beyond this many heads the ways to choose some outgrow floats
MOST_WAYS = 500


@dataclass(frozen=True)
class Turnout:
    """Patterns (one a row, heads per category) with their weights. `drawn` 0: all there are."""

    patterns: Ints
    weights: Floats
    drawn: int


def binomial(heads: int, away: float) -> Floats:
    """Chances of 0, 1, ..., `heads` present, each away with chance `away`."""
    if heads == 0 or away <= 0.0:
        sure: Floats = np.zeros(heads + 1)
        sure[heads] = 1.0
        return sure
    if heads <= MOST_WAYS:
        return np.array([comb(heads, i) * (1 - away) ** i * away ** (heads - i) for i in range(heads + 1)])
    ways = [lgamma(heads + 1) - lgamma(i + 1) - lgamma(heads - i + 1) for i in range(heads + 1)]
    present, absent = log1p(-away), log(away)
    chances = np.array([exp(w + i * present + (heads - i) * absent) for i, w in enumerate(ways)])
    total: Floats = chances / chances.sum()
    return total


class Turnouts:
    """Turnouts of days. Draws are common to all crews: a larger crew meets the same days, plus more heads."""

    def __init__(self, most_patterns: int, draws: int, rare: float = RARE) -> None:
        self.rare = rare
        self.most_patterns = most_patterns
        self.draws = draws
        self._binomials: dict[tuple[int, float], tuple[int, Floats]] = {}
        self._present: dict[tuple[int, float], list[npt.NDArray[np.int32]]] = {}

    def of(self, day: Day, relevant: Sequence[int]) -> Turnout:
        """All patterns of the `relevant` categories if they are few enough, else drawn ones."""
        ends = [self._binomial(int(day.heads[j]), float(day.away[j])) for j in relevant]
        count = 1
        for _, chances in ends:
            count *= len(chances)
        if count > self.most_patterns:
            return self._drawn(day, relevant)
        return _product(day, relevant, ends)

    def _binomial(self, heads: int, away: float) -> tuple[int, Floats]:
        """The smallest number worth looking at, and the chances from there on."""
        key = (heads, away)
        if key not in self._binomials:
            chances = binomial(heads, away)
            first = int(np.searchsorted(np.cumsum(chances), self.rare))
            rest = np.cumsum(chances[::-1])[::-1]
            last = int(np.nonzero(rest > self.rare)[0][-1])
            self._binomials[key] = first, chances[first : last + 1]
        return self._binomials[key]

    def _drawn(self, day: Day, relevant: Sequence[int]) -> Turnout:
        patterns = np.zeros((self.draws, len(day.heads)), dtype=np.intp)
        for j in relevant:
            patterns[:, j] = self._drawn_present(j, int(day.heads[j]), float(day.away[j]))
        return Turnout(patterns, np.full(self.draws, 1.0 / self.draws), self.draws)

    def _drawn_present(self, j: int, heads: int, away: float) -> npt.NDArray[np.int32]:
        """How many of the first `heads` heads of category j are present in each draw."""
        totals = self._present.setdefault((j, away), [np.zeros(self.draws, dtype=np.int32)])
        while len(totals) <= heads:
            luck = np.random.default_rng([SEED, j, len(totals)]).random(self.draws)
            totals.append(totals[-1] + (luck >= away))
        return totals[heads]


def _product(day: Day, relevant: Sequence[int], ends: Sequence[tuple[int, Floats]]) -> Turnout:
    """The grid of all patterns, in lexicographic order."""
    shape = [len(chances) for _, chances in ends]
    size = int(np.prod(shape, dtype=np.int64))
    patterns = np.zeros((size, len(day.heads)), dtype=np.intp)
    weights = np.ones(1)
    for j, (first, chances), index in zip(relevant, ends, np.indices(shape), strict=True):
        patterns[:, j] = index.ravel() + first
        weights = np.multiply.outer(weights, chances).ravel()
    return Turnout(patterns, weights, 0)
