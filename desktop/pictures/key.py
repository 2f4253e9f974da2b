"""The line under a tally that says what each kind of figure means."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QRectF
from PySide6.QtGui import QPainter

from desktop.pictures.brush import text_width, write
from desktop.pictures.figure import SHAPE, Figure, Mark, paint_figure
from desktop.theme import Size, Theme

_HEIGHT, _NEAR, _APART = 13.0, 5.0, 14.0


def paint_key(
    painter: QPainter, box: QRectF, entries: Sequence[tuple[Mark | None, str]], theme: Theme
) -> None:
    """A line that says what each kind of figure means; what does not fit is left out, last first."""
    x = box.left()
    for mark, text in entries:
        if x + key_width(mark, text, theme) > box.right():
            return
        x = paint_entry(painter, box, x, mark, text, theme)


def key_width(mark: Mark | None, text: str, theme: Theme) -> float:
    """Width of one entry without the space after it."""
    figure = _HEIGHT * SHAPE + _NEAR if mark is not None else 0
    return figure * theme.zoom + text_width(theme.picture_font(Size.SMALL), text)


def paint_entry(
    painter: QPainter, box: QRectF, x: float, mark: Mark | None, text: str, theme: Theme
) -> float:
    """One entry at `x`; returns where the next one starts."""
    font, unit = theme.picture_font(Size.SMALL), theme.zoom
    if mark is not None:
        high = _HEIGHT * unit
        filled = 0.4 if mark is Mark.FRACTIONAL else 1.0
        top = box.center().y() - high / 2
        paint_figure(painter, Figure(x, top, high * SHAPE, high, mark, 1, filled), theme)
        x += high * SHAPE + _NEAR * unit
    wide = text_width(font, text)
    write(painter, QRectF(x, box.top(), wide, box.height()), text, font, theme.faint)
    return x + wide + _APART * unit
