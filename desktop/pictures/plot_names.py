"""Names beside points of a plot, which keep out of each other's way and of the marks at every size."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import pyqtgraph as pg
from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QColor

from desktop.pictures.name_places import Name, placed
from desktop.theme import Size, current

_GAP = 8  # pixels at zoom 1 between a point and its name
_GROUND = 225  # of 255: how much the ground of a name hides of what is under it


@dataclass(frozen=True)
class _Named:
    """A name and its point, in units of the axes."""

    point: QPointF
    text: pg.TextItem


class PlotNames:
    """The names of one plot. They are placed anew whenever its axes or its size change."""

    def __init__(self, plot: pg.PlotWidget) -> None:
        self._plot = plot
        self._named: list[_Named] = []
        self._marks: list[tuple[QPointF, float]] = []
        plot.getPlotItem().getViewBox().sigTransformChanged.connect(self.place)

    def clear(self) -> None:
        """Forget all; the plot itself was emptied before."""
        self._named, self._marks = [], []

    def add(self, name: str, x: float, y: float, colour: QColor, *, bold: bool = False) -> None:
        """Name a point; the first name has the first choice."""
        ground = QColor(current().paper)
        ground.setAlpha(_GROUND)
        text = pg.TextItem(name, color=colour, fill=ground)
        text.setFont(current().font(Size.SMALL, bold=bold))
        text.setPos(x, y)
        self._plot.addItem(text)
        self._named.append(_Named(QPointF(x, y), text))

    def avoid(self, points: Iterable[tuple[float, float]], size: float) -> None:
        """Marks of `size` pixels at zoom 1 that names should leave free."""
        self._marks += [(QPointF(x, y), size) for x, y in points]

    def place(self) -> None:
        """Put every name beside its point, at the present size of the plot."""
        box = self._plot.getPlotItem().getViewBox()
        zoom = current().zoom
        names = [
            Name(box.mapViewToScene(named.point), named.text.textItem.boundingRect().size(), _GAP * zoom)
            for named in self._named
        ]
        marks = [_around(box.mapViewToScene(point), size * zoom) for point, size in self._marks]
        rects = placed(names, box.sceneBoundingRect(), marks)
        for named, name, rect in zip(self._named, names, rects, strict=True):
            off = name.point - rect.topLeft()
            named.text.setAnchor((off.x() / rect.width(), off.y() / rect.height()))


def _around(centre: QPointF, size: float) -> QRectF:
    return QRectF(centre.x() - size / 2, centre.y() - size / 2, size, size)
