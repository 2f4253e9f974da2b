"""The line on which the sum of two convex functions, one of each coordinate, has a given value."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from itertools import pairwise
from math import atan2, tau

Point = tuple[float, float]
Function = Callable[[float], float]


def level_line(
    f: Function, g: Function, xs: Sequence[float], ys: Sequence[float], level: float
) -> list[Point] | None:
    """f(x) + g(y) = level, from border to border of the window.

    `xs` and `ys` are ascending: the window's borders and every corner of the functions in between, which
    are straight elsewhere. None where the line does not cross the window. Where the value is lower is
    convex, so its border can be followed round a lowest point.
    """
    x0, y0 = min(xs, key=f), min(ys, key=g)
    if f(x0) + g(y0) >= level:
        return None
    found = {(x, y) for x in xs for y in _where(g, ys, level - f(x))}
    found |= {(x, y) for y in ys for x in _where(f, xs, level - g(y))}
    if len(found) < 2:
        return None
    turned = sorted(found, key=lambda p: atan2(p[1] - y0, p[0] - x0))
    angles = [atan2(y - y0, x - x0) for x, y in turned]
    gaps = [(b - a) % tau for a, b in pairwise([*angles, angles[0]])]
    widest = max(range(len(gaps)), key=gaps.__getitem__)
    return [*turned[widest + 1 :], *turned[: widest + 1]]


def _where(h: Function, ends: Sequence[float], value: float) -> list[float]:
    """Where a function that is straight between `ends` has the value."""
    found = []
    for a, b in pairwise(ends):
        low, high = h(a), h(b)
        if low != high and min(low, high) <= value <= max(low, high):
            found.append(a + (b - a) * (value - low) / (high - low))
    return found
