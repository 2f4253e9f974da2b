"""Where the names of points stand, so that they keep out of each other's way and of all marks.

Greedy, the first name first: of twelve places around its point each name takes the one that covers least.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from PySide6.QtCore import QPointF, QRectF, QSizeF

# the corner or side of the text that touches its point, in shares of width and height, best place first
_PLACES = (
    *((0.0, 1.0), (0.0, 0.0), (0.0, 0.75), (0.0, 0.25), (0.0, 0.5)),  # right of the point, where one reads on
    *((1.0, 1.0), (1.0, 0.0), (1.0, 0.75), (1.0, 0.25), (1.0, 0.5)),
    *((0.5, 1.0), (0.5, 0.0)),
)
_OUTSIDE = 4.0  # a name that is cut by the edge is worse than one that covers another


@dataclass(frozen=True)
class Name:
    """A text of `size` beside a point of the picture, in pixels; `gap` keeps it off the point's mark."""

    point: QPointF
    size: QSizeF
    gap: float


def placed(names: Sequence[Name], room: QRectF, others: Iterable[QRectF] = ()) -> list[QRectF]:
    """The rectangle of each text, inside `room` where possible; `others` are marks without a name."""
    marks = [*(_around(name) for name in names), *others]
    taken: list[QRectF] = []
    for name in names:
        best = min(_candidates(name), key=lambda rect: _covered(rect, [*taken, *marks], room))
        taken.append(best)
    return taken


def _candidates(name: Name) -> Iterable[QRectF]:
    for across, down in _PLACES:
        dx, dy = (1 - 2 * across) * name.gap, (1 - 2 * down) * name.gap
        left = name.point.x() + dx - across * name.size.width()
        top = name.point.y() + dy - down * name.size.height()
        yield QRectF(left, top, name.size.width(), name.size.height())


def _around(name: Name) -> QRectF:
    reach = name.gap
    return QRectF(name.point.x() - reach, name.point.y() - reach, 2 * reach, 2 * reach)


def _covered(rect: QRectF, others: Iterable[QRectF], room: QRectF) -> float:
    outside = _area(rect) - _area(rect.intersected(room))
    return _OUTSIDE * outside + sum(_area(rect.intersected(other)) for other in others)


def _area(rect: QRectF) -> float:
    return max(0.0, rect.width()) * max(0.0, rect.height())
