"""One figure of the people tally: filled, partly filled, outlined or struck."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from functools import lru_cache

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QColor, QLinearGradient, QPainter, QPainterPath, QPen

from desktop.theme import FAMILY, Theme

SHAPE = 0.62  # width of a figure as a share of its height
_SOFT_EDGE = 0.12  # share of the height over which a fractional fill fades out


class Mark(StrEnum):
    """What a figure says: a fractional person, or one of the exact crew who stays, joins or leaves."""

    FRACTIONAL = "fractional"
    STAYS = "stays"
    JOINS = "joins"
    LEAVES = "leaves"


@dataclass(frozen=True)
class Figure:
    """One drawn figure standing for `people` x `filled` persons, in the box (x, y, width, height)."""

    x: float
    y: float
    width: float
    height: float
    mark: Mark
    people: float = 1
    filled: float = 1


@lru_cache(maxsize=64)
def _outline(width: float, height: float) -> QPainterPath:
    """Head and shoulders in a box at the origin."""
    path = QPainterPath()
    head = height * 0.2
    path.addEllipse(QPointF(width / 2, head), head, head)
    top, shoulder = height * 0.45, min(width * 0.45, height * 0.28)
    path.moveTo(0, height)
    path.lineTo(0, top + shoulder)
    path.quadTo(0, top, shoulder, top)
    path.lineTo(width - shoulder, top)
    path.quadTo(width, top, width, top + shoulder)
    path.lineTo(width, height)
    path.closeSubpath()
    return path


def paint_figure(painter: QPainter, figure: Figure, theme: Theme, label: str = "") -> None:
    """Draw `figure`; `label` is written on figures that stand for several people."""
    painter.save()
    painter.translate(figure.x, figure.y)
    path = _outline(round(figure.width, 2), round(figure.height, 2))
    _PAINTERS[figure.mark](painter, path, figure, theme)
    if label:
        _paint_label(painter, figure, theme, label)
    painter.restore()


def _paint_stays(painter: QPainter, path: QPainterPath, figure: Figure, theme: Theme) -> None:
    if figure.filled < 1:
        _fill(painter, path, theme.exact_soft)
        _fill_up_to(painter, path, figure, QBrush(theme.exact))
        _stroke(painter, path, theme.exact, 1.0)
    else:
        _fill(painter, path, theme.exact)


def _paint_joins(painter: QPainter, path: QPainterPath, figure: Figure, theme: Theme) -> None:
    if figure.filled < 1:
        _fill_up_to(painter, path, figure, QBrush(theme.exact_soft))
    _stroke(painter, path, theme.exact, 1.4)


def _paint_leaves(painter: QPainter, path: QPainterPath, figure: Figure, theme: Theme) -> None:
    if figure.filled < 1:
        _fill_up_to(painter, path, figure, QBrush(theme.rule))
    _stroke(painter, path, theme.faint, 1.0)
    pen = QPen(theme.ink, 1.6)
    pen.setCapStyle(Qt.PenCapStyle.RoundCap)
    painter.setPen(pen)
    painter.drawLine(QPointF(-1, figure.height), QPointF(figure.width + 1, 0))


def _paint_fractional(painter: QPainter, path: QPainterPath, figure: Figure, theme: Theme) -> None:
    if figure.filled < 1:
        _fill(painter, path, theme.fractional_soft)
        _fill_up_to(painter, path, figure, _soft_edged(figure, theme.fractional))
        _stroke(painter, path, theme.fractional, 0.8)
    else:
        _fill(painter, path, theme.fractional)


_PAINTERS = {
    Mark.STAYS: _paint_stays,
    Mark.JOINS: _paint_joins,
    Mark.LEAVES: _paint_leaves,
    Mark.FRACTIONAL: _paint_fractional,
}


def _soft_edged(figure: Figure, colour: QColor) -> QBrush:
    """`colour` up to the fill level, fading out just below it."""
    level = figure.height * (1 - figure.filled)
    fade = QLinearGradient(0, level, 0, min(figure.height, level + figure.height * _SOFT_EDGE))
    clear = QColor(colour)
    clear.setAlpha(90)
    fade.setColorAt(0, clear)
    fade.setColorAt(1, colour)
    return QBrush(fade)


def _fill(painter: QPainter, path: QPainterPath, colour: QColor) -> None:
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(colour)
    painter.drawPath(path)


def _fill_up_to(painter: QPainter, path: QPainterPath, figure: Figure, brush: QBrush) -> None:
    """Fill the lower `figure.filled` of the path; intersected, not clipped, so that print stays vector."""
    level = QPainterPath()
    level.addRect(QRectF(0, figure.height * (1 - figure.filled), figure.width, figure.height * figure.filled))
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(brush)
    painter.drawPath(path.intersected(level))


def _stroke(painter: QPainter, path: QPainterPath, colour: QColor, width: float) -> None:
    painter.setBrush(Qt.BrushStyle.NoBrush)
    pen = QPen(colour, width)
    pen.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    painter.setPen(pen)
    painter.drawPath(path)


def _paint_label(painter: QPainter, figure: Figure, theme: Theme, label: str) -> None:
    font = theme.font()
    font.setFamily(FAMILY)
    font.setPixelSize(max(6, round(figure.height * 0.36)))
    painter.setFont(font)
    filled = figure.mark in (Mark.STAYS, Mark.FRACTIONAL) and figure.filled == 1
    painter.setPen(theme.paper if filled else theme.ink)
    body = QRectF(0, figure.height * 0.48, figure.width, figure.height * 0.5)
    painter.drawText(body, Qt.AlignmentFlag.AlignCenter, label)
