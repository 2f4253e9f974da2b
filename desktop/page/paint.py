"""Draws a laid-out page on anything a QPainter draws on. One unit of the painter is a point of paper."""

from __future__ import annotations

from functools import singledispatch

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QPainter, QPen, QPolygonF

from desktop.page.layout import Sheet
from desktop.page.marks import FiguresMark, FillMark, Mark, RuleMark, StepsMark, TextMark
from desktop.page.text import UNITS, shaped
from desktop.pictures.figure import paint_figure
from desktop.pictures.phase_tally import step_points
from desktop.theme import Theme


def paint_sheet(painter: QPainter, sheet: Sheet, theme: Theme) -> None:
    """All marks of `sheet`, each left as the painter was found."""
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    for mark in sheet.marks:
        painter.save()
        _paint(mark, painter, theme)
        painter.restore()


@singledispatch
def _paint(mark: Mark, painter: QPainter, theme: Theme) -> None:
    raise TypeError(f"no painter for {type(mark).__name__}")


@_paint.register
def _text(mark: TextMark, painter: QPainter, theme: Theme) -> None:
    painter.translate(mark.x, mark.y)
    painter.scale(1 / UNITS, 1 / UNITS)
    painter.setPen(getattr(theme, mark.text.role))
    shaped(mark.text, mark.width, theme).draw(painter, QPointF(0.0, 0.0))


@_paint.register
def _rule(mark: RuleMark, painter: QPainter, theme: Theme) -> None:
    painter.fillRect(QRectF(mark.x, mark.y, mark.width, mark.weight), getattr(theme, mark.role))


@_paint.register
def _fill(mark: FillMark, painter: QPainter, theme: Theme) -> None:
    painter.fillRect(QRectF(mark.x, mark.y, mark.width, mark.height), getattr(theme, mark.role))


@_paint.register
def _figures(mark: FiguresMark, painter: QPainter, theme: Theme) -> None:
    painter.translate(mark.x, mark.y)
    painter.scale(mark.scale, mark.scale)
    for figure in mark.figures:
        paint_figure(painter, figure, theme)


@_paint.register
def _steps(mark: StepsMark, painter: QPainter, theme: Theme) -> None:
    """The exact crew as an area, the fractional one as a broken line over it."""
    painter.translate(mark.x, mark.y)
    peak = max((*mark.exact, *mark.fractional), default=0.0) or 1.0
    unit = (mark.height - 1.0) / peak
    edges = mark.edges
    if mark.exact:
        top = step_points(mark.exact, edges, mark.height, unit)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(theme.exact_soft)
        painter.drawPolygon(
            QPolygonF([QPointF(edges[0], mark.height), *top, QPointF(edges[-1], mark.height)])
        )
        painter.setPen(QPen(theme.exact, 1.1))
        painter.drawPolyline(QPolygonF(top))
    if mark.fractional:
        pen = QPen(theme.fractional, 1.1)
        pen.setDashPattern([3, 2])
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        painter.setPen(pen)
        painter.drawPolyline(QPolygonF(step_points(mark.fractional, edges, mark.height, unit)))
    painter.setPen(QPen(theme.rule, 0.5))
    painter.drawLine(QPointF(edges[0], mark.height), QPointF(edges[-1], mark.height))
    for edge in edges[1:-1] if mark.dividers else ():
        painter.drawLine(QPointF(edge, 0.0), QPointF(edge, mark.height))
