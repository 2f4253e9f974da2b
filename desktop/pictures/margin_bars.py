"""The margin of one line under one crew: a number and a bar about zero.

Room is a plain slate bar to the right. What is short is a hatched brick bar to the left with an arrow head,
a minus sign and bold figures, so that it is told without colour as well. No room is a dash on the zero line.
"""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QPainter, QPen

from desktop import figures
from desktop.pictures.brush import CENTRE, RIGHT, paint_bar, paint_point, write
from desktop.theme import Size, Theme

BROKEN_BELOW = -1e-6
_BAR = 9.0
_PAD = 8.0
_LEAST = 2.0


def is_broken(margin: float) -> bool:
    """Whether a margin is a miss, and not the noise of a binary float."""
    return margin < BROKEN_BELOW


def bar_length(margin: float, reach: float, room: float) -> float:
    """Length of the bar of `margin` where `reach` fills `room`; what is not nothing stays visible."""
    if reach <= 0 or abs(margin) < -BROKEN_BELOW:
        return 0.0
    return max(_LEAST, room * min(1.0, abs(margin) / reach))


def paint_margin(painter: QPainter, cell: QRectF, margin: float, reach: float, theme: Theme) -> None:
    """Draw `margin` in `cell`; `reach` is the largest margin of the line under any crew shown."""
    unit = theme.zoom
    broken = is_broken(margin)
    text = QRectF(cell.left(), cell.top() + 2 * unit, cell.width() - _PAD * unit, cell.height() * 0.5)
    colour = theme.short if broken else theme.ink
    write(painter, text, figures.signed(margin), theme.picture_font(bold=broken), colour, RIGHT)
    band = QRectF(cell.left() + _PAD * unit, text.bottom(), cell.width() - 2 * _PAD * unit, _BAR * unit)
    middle = band.center().x()
    length = bar_length(margin, reach, band.width() / 2)
    _paint_about_zero(painter, band, middle, length, broken, theme)
    painter.setPen(QPen(theme.faint, unit))
    painter.drawLine(QPointF(middle, band.top()), QPointF(middle, band.bottom() + 2 * unit))


def _paint_about_zero(
    painter: QPainter, band: QRectF, middle: float, length: float, broken: bool, theme: Theme
) -> None:
    left = middle - length if broken else middle
    paint_bar(painter, QRectF(left, band.top(), length, band.height()), theme, short=broken)
    if broken:
        tip = QPointF(max(left - 4 * theme.zoom, band.left() - 4), band.center().y())
        paint_point(painter, tip, 5 * theme.zoom, theme.short, to_left=True)


def paint_absent(painter: QPainter, cell: QRectF, text: str, theme: Theme) -> None:
    """A cell of a crew that does not exist."""
    write(painter, cell, text, theme.picture_font(Size.SMALL), theme.faint, CENTRE)
