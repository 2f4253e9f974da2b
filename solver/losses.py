"""What absences take from an inequality in people, with a wanted certainty.

A safe crew n keeps sum_j c_j m_j >= d with chance p, where m_j = n_j - z_j and z_j absences. So
c.n >= d + q_p(sum_j c_j z_j), and for all crews of a box the quantile q_p is at least the one of the
absences of the smallest crew where c_j > 0 and of the largest where c_j < 0: more heads, more absences.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

import numpy as np

from solver.matrix import Floats
from solver.turnout import binomial

BINS = 512
# numbers of absences rarer than this are left out and their chance given away
RARE = 1e-7
MOST_HEADS = 500


def sure_loss(each: Sequence[float], heads: Sequence[int], away: Sequence[float], chance: float) -> float:
    """A lower bound on the loss sum each[j] z_j that is not exceeded with chance `chance`.

    z_j are the absences of `heads[j]` heads. Values are counted in bins, each rounded down.
    """
    known = [(a, n, q) for a, n, q in zip(each, heads, away, strict=True) if a and n > 0 and q > 0]
    # of a crew that nothing limits yet nobody is away, or all are, whichever loses less
    least = sum(min(a, 0.0) * n for a, n, _ in known if n > MOST_HEADS)
    return least + _quantile([(a, _absences(n, q)) for a, n, q in known if n <= MOST_HEADS], chance)


def _quantile(parts: Sequence[tuple[float, Floats]], chance: float) -> float:
    span = sum(abs(a) * (len(chances) - 1) for a, chances in parts)
    if span == 0.0:
        return 0.0
    width = span / BINS
    lowest = sum(_bin(a, len(chances) - 1, width) for a, chances in parts if a < 0)
    loads = np.zeros(BINS + len(parts) + 1)
    loads[-lowest] = 1.0
    for a, chances in parts:
        loads = _added(loads, a, chances, width)
    left_out = 1.0 - float(loads.sum())
    reached = np.nonzero(np.cumsum(loads) >= chance - left_out - 1e-12)[0]
    return (int(reached[0]) + lowest) * width if len(reached) else 0.0


@lru_cache(maxsize=4096)
def _absences(heads: int, away: float) -> Floats:
    """Chances of 0, 1, 2, ... absences, as far as they are worth counting."""
    chances = binomial(heads, away)[::-1]
    rest = 1.0 - np.cumsum(chances)
    return chances[: int(np.argmax(rest < RARE)) + 1]


def _bin(each: float, absences: int, width: float) -> int:
    return int(np.floor(each * absences / width))


def _added(loads: Floats, each: float, chances: Floats, width: float) -> Floats:
    total = np.zeros_like(loads)
    for absences, chance in enumerate(chances):
        shift = _bin(each, absences, width)
        if shift >= 0:
            total[shift:] += chance * loads[: len(loads) - shift]
        else:
            total[:shift] += chance * loads[-shift:]
    return total
