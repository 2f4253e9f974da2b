"""The exact outline of a convex region of the plane that is only known by asking for its farthest points."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from math import hypot

Point = tuple[float, float]
Farthest = Callable[[float, float], Point | None]
"""The point of the region farthest in a direction; None if the region is empty."""

SAME = 1e-7
MOST = 400


def outline(farthest: Farthest) -> list[Point]:
    """The corners, anticlockwise; one or two points where the region is no wider.

    Between two known corners the farthest point outwards is either on their line, which is then an edge, or
    a new corner (the support programs of projecting a polyhedron onto a plane).
    """
    first = farthest(1.0, 0.0)
    if first is None:
        return []
    corners = [first]
    for direction in ((0.0, 1.0), (-1.0, 0.0), (0.0, -1.0)):
        _append(corners, farthest(*direction))
    found: list[Point] = []
    for a, b in zip(corners, [*corners[1:], corners[0]], strict=True):
        found += [a, *_between(farthest, a, b, MOST)]
    return without_straight(found)


def _append(corners: list[Point], point: Point | None) -> None:
    if point is not None and not _same(point, corners[-1]) and not _same(point, corners[0]):
        corners.append(point)


def _between(farthest: Farthest, a: Point, b: Point, left: int) -> list[Point]:
    along = (b[0] - a[0], b[1] - a[1])
    length = hypot(*along)
    if left == 0 or length <= SAME:
        return []
    outwards = (along[1] / length, -along[0] / length)
    point = farthest(*outwards)
    if point is None or (point[0] - a[0]) * outwards[0] + (point[1] - a[1]) * outwards[1] <= SAME:
        return []
    return [*_between(farthest, a, point, left - 1), point, *_between(farthest, point, b, left - 1)]


def without_straight(points: Sequence[Point]) -> list[Point]:
    """Without points that repeat or lie on the line between their neighbours."""
    kept = [p for i, p in enumerate(points) if not _same(p, points[i - 1])] or list(points[:1])
    corners = [
        p for i, p in enumerate(kept) if len(kept) < 3 or _turns(kept[i - 1], p, kept[(i + 1) % len(kept)])
    ]
    return corners or kept[:1]


def _turns(a: Point, b: Point, c: Point) -> bool:
    area = (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
    return abs(area) > SAME * max(hypot(c[0] - a[0], c[1] - a[1]), SAME)


def _same(a: Point, b: Point) -> bool:
    return abs(a[0] - b[0]) <= SAME and abs(a[1] - b[1]) <= SAME
