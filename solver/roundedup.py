"""What rounding up costs at every workload: the fractional crew with all head counts rounded up."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import pairwise
from math import ceil, floor, inf

from solver.answer import RoundedPoint
from solver.corners import Corner
from solver.rounding import snapped
from solver.workload import CrewRuns, Relaxed

# share of a piece at which its crew is read, clear of the corners
_INSIDE = 1e-7


def rounded_up(
    relaxed: Relaxed, runs: CrewRuns, corners: Sequence[Corner], high: float
) -> Iterator[RoundedPoint]:
    """Points of the cost, a jump being two at one workload; None where the crew is not workable.

    On a piece of the floor the crews between two cheapest fractional ones are cheapest as well, so head
    counts run straight from one to the other, and the rounded crew changes where one passes a whole lot.
    """
    last: RoundedPoint | None = None
    for a, b in pairwise(corners):
        for point in _on_piece(relaxed, runs, a, b, high):
            if point != last and not (last is not None and last.cost is None and point.cost is None):
                yield point
            last = point


def _on_piece(relaxed: Relaxed, runs: CrewRuns, a: Corner, b: Corner, high: float) -> Iterator[RoundedPoint]:
    inset = _INSIDE * (b.at - a.at)
    first, last = relaxed.lots(a.at + inset), relaxed.lots(b.at - inset)
    cuts = sorted({0.0, 1.0, *_passings(first, last)})
    for left, right in pairwise(cuts):
        middle = (left + right) / 2
        lots = tuple(ceil(snapped(n + middle * (m - n))) for n, m in zip(first, last, strict=True))
        low, up = (a.at + share * (b.at - a.at) for share in (left, right))
        reach = runs.reach(lots, low)
        if reach is None:
            yield RoundedPoint(low * high, None)
            continue
        for corner in runs.corners(lots, low, min(reach, up)):
            yield RoundedPoint(corner.at * high, corner.value if corner.value < inf else None)


def _passings(first: Sequence[float], last: Sequence[float]) -> Iterator[float]:
    """Where a head count running from `first` to `last` is a whole lot."""
    for n, m in zip(first, last, strict=True):
        low, high = min(n, m), max(n, m)
        for whole in range(ceil(low), floor(high) + 1):
            share = (whole - n) / (m - n) if m != n else 0.0
            if 0.0 < share < 1.0:
                yield share
