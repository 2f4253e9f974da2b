"""The corners of a convex piecewise linear function of one variable, from its values and slopes."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise

# values closer than this, per unit of their size, lie on one line
FLAT = 1e-9
MOST = 60


@dataclass(frozen=True)
class Corner:
    """A point of the function; `slope` is that of some line through it that stays below."""

    at: float
    value: float
    slope: float


Function = Callable[[float], Corner]


def corners(function: Function, low: float, high: float) -> list[Corner]:
    """`low`, every corner between, and `high`, where the function is finite everywhere.

    Lines that touch at two points either meet on the function, which is then a corner or a piece, or
    below it, and the search goes on at both sides (Eisner & Severance, Mathematical techniques for
    efficient record segmentation in large shared databases, Journal of the ACM 23 (1976) 619-635).
    """
    first, last = function(low), function(high)
    if high <= low:
        return [first]
    found = [first, *_between(function, first, last, MOST), last]
    return _without_straight(found)


def _between(function: Function, a: Corner, b: Corner, left: int) -> list[Corner]:
    parallel = b.slope - a.slope <= FLAT * max(1.0, abs(a.slope))
    if left == 0 or parallel or _reaches(a, b) or _reaches(b, a):
        return []
    at = (b.value - a.value - b.slope * b.at + a.slope * a.at) / (a.slope - b.slope)
    near = 1e-9 * (b.at - a.at)
    if not a.at + near < at < b.at - near:
        at = (a.at + b.at) / 2
    middle = function(at)
    if _reaches(a, middle) and _reaches(b, middle):
        return [middle]
    return [
        *_between(function, a, middle, left - 1),
        middle,
        *_between(function, middle, b, left - 1),
    ]


def _reaches(a: Corner, b: Corner) -> bool:
    """Whether the line at `a` goes through `b`: the function is straight in between."""
    gap = abs(a.value + a.slope * (b.at - a.at) - b.value)
    return gap <= FLAT * max(1.0, abs(a.value), abs(b.value))


def _without_straight(points: list[Corner]) -> list[Corner]:
    """Points on the line between their neighbours left out."""
    kept = [points[0]]
    for point, following in pairwise(points[1:]):
        last = kept[-1]
        share = (point.at - last.at) / (following.at - last.at)
        straight = last.value + share * (following.value - last.value)
        if abs(straight - point.value) > 10 * FLAT * max(1.0, abs(point.value)):
            kept.append(point)
    return [*kept, points[-1]]
