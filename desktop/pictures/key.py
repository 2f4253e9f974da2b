"""The line under a tally that says what each kind of figure means."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QRectF
from PySide6.QtGui import QPainter

from desktop.pictures.brush import text_width, write
from desktop.pictures.figure import SHAPE, Figure, Mark, paint_figure
from desktop.theme import Size, Theme


def paint_key(
    painter: QPainter, box: QRectF, entries: Sequence[tuple[Mark | None, str]], theme: Theme
) -> None:
    """A line that says what each kind of figure means."""
    font, unit = theme.picture_font(Size.SMALL), theme.zoom
    height = 13 * unit
    x = box.left()
    for mark, text in entries:
        if mark is not None:
            filled = 0.4 if mark is Mark.FRACTIONAL else 1.0
            y = box.center().y() - height / 2
            paint_figure(painter, Figure(x, y, height * SHAPE, height, mark, 1, filled), theme)
            x += height * SHAPE + 5 * unit
        wide = text_width(font, text)
        write(painter, QRectF(x, box.top(), wide, box.height()), text, font, theme.faint)
        x += wide + 14 * unit
