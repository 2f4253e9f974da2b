"""Small strokes every picture uses: text that is cut with an ellipsis, hatching, thin rules."""

from __future__ import annotations

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPen, QPolygonF

from desktop.theme import Theme

LEFT = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
RIGHT = Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
CENTRE = Qt.AlignmentFlag.AlignHCenter | Qt.AlignmentFlag.AlignVCenter
_HATCH = 5.0  # distance of hatching lines


def text_width(font: QFont, text: str) -> float:
    """Width of `text`, rounded up to be safe against cutting."""
    return QFontMetricsF(font).horizontalAdvance(text) + 2


def write(
    painter: QPainter,
    box: QRectF,
    text: str,
    font: QFont,
    colour: QColor,
    align: Qt.AlignmentFlag = LEFT,
) -> None:
    """One line of text in `box`, cut with an ellipsis where it does not fit."""
    painter.setFont(font)
    painter.setPen(colour)
    shown = QFontMetricsF(font).elidedText(text, Qt.TextElideMode.ElideRight, box.width())
    painter.drawText(box, align | Qt.TextFlag.TextSingleLine, shown)


def rule(painter: QPainter, x1: float, y1: float, x2: float, y2: float, theme: Theme) -> None:
    """A thin line."""
    painter.setPen(QPen(theme.rule, 1))
    painter.drawLine(QPointF(x1, y1), QPointF(x2, y2))


def hatch(painter: QPainter, box: QRectF, colour: QColor, zoom: float = 1.0) -> None:
    """Slanted lines across `box`, cut at its edges by arithmetic (a clip would turn print into pixels)."""
    painter.setPen(QPen(colour, zoom))
    start, apart = box.left() - box.height(), _HATCH * zoom
    steps = int((box.width() + box.height()) / apart) + 1
    lines = [_slanted(box, start + k * apart) for k in range(1, steps)]
    painter.drawLines([line for line in lines if line is not None])


def _slanted(box: QRectF, x: float) -> QLineF | None:
    """The part inside `box` of the line that rises from (x, bottom) at 45 degrees."""
    left, right = max(x, box.left()), min(x + box.height(), box.right())
    if right <= left:
        return None
    return QLineF(left, box.bottom() - (left - x), right, box.bottom() - (right - x))


def paint_bar(painter: QPainter, box: QRectF, theme: Theme, *, short: bool) -> None:
    """A bar of room (plain slate) or of what is short (hatched brick with an outline)."""
    if box.width() < 1:
        return
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(theme.short_soft if short else theme.room_soft)
    painter.drawRect(box)
    colour = theme.short if short else theme.room
    if short:
        hatch(painter, box, colour, theme.zoom)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(colour, theme.zoom))
    painter.drawRect(box)


def paint_point(painter: QPainter, tip: QPointF, size: float, colour: QColor, *, to_left: bool) -> None:
    """A small arrow head: the end of a bar that is short points away from zero."""
    back = size if to_left else -size
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(colour)
    corners = [tip, tip + QPointF(back, -size), tip + QPointF(back, size)]
    painter.drawPolygon(QPolygonF(corners))
