"""The base of pictures with axes. Only pictures import pyqtgraph's drawing widgets."""

from __future__ import annotations

from collections.abc import Sequence
from math import floor, log10
from typing import Any

import pyqtgraph as pg
from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtGui import QColor, QFocusEvent, QPen, QPixmap
from PySide6.QtWidgets import QVBoxLayout, QWidget

from desktop import figures
from desktop.pictures.copyable import Copyable
from desktop.pictures.plot_names import PlotNames
from desktop.theme import Size, Theme, current

_IN_A_LINE = 6  # names of a legend side by side
_OUTLINE = 1.5  # pixels


def cosmetic(colour: QColor, width: float, style: Qt.PenStyle = Qt.PenStyle.SolidLine) -> QPen:
    """A pen whose width is in pixels at zoom 1, not in units of the axes."""
    pen = QPen(colour, width * current().zoom, style)
    pen.setCosmetic(True)
    return pen


class PlainAxis(pg.AxisItem):  # type: ignore[misc] # pyqtgraph ships no types
    """An axis with numbers as everywhere else in the program."""

    def tickStrings(self, values: Sequence[float], scale: float, spacing: float) -> list[str]:
        """Numbers in the user's locale; on an axis zero is a number."""
        places = max(0, -floor(log10(spacing * scale))) if spacing * scale > 0 else 0
        return [figures.number(v * scale, places) if v else "0" for v in values]


class PlotPicture(Copyable):
    """A plot in the current theme. Subclasses give `redraw(theme)`, which fills the emptied plot.

    `least` is the lowest height, in steps of the grid.
    """

    least = 36.0

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        axes = {side: PlainAxis(side) for side in ("left", "bottom")}
        self.plot = pg.PlotWidget(self, axisItems=axes)
        self.plot.setMenuEnabled(False)
        self.plot.hideButtons()
        self.plot.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.plot.getPlotItem().getViewBox().setMouseEnabled(x=False, y=False)
        self.names = PlotNames(self.plot)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2, 2, 2, 2)
        layout.addWidget(self.plot)
        self.setAccessibleName(name)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.offer_copies()
        self.touch()

    def redraw(self, theme: Theme) -> None:
        """Draw everything into the emptied plot."""
        raise NotImplementedError

    def touch(self) -> None:
        """Draw anew in the current theme."""
        theme = current()
        self.setMinimumHeight(theme.px(self.least))
        self.plot.clear()
        self.names.clear()
        self.plot.setBackground(theme.paper)
        for side in ("left", "bottom"):
            axis = self.plot.getAxis(side)
            axis.setPen(pg.mkPen(theme.rule))
            axis.setTextPen(pg.mkPen(theme.faint))
            axis.setTickFont(theme.font(Size.SMALL))
            axis.enableAutoSIPrefix(False)
        below = theme.px(1)  # pyqtgraph lets the title hang over the edge
        self.plot.getPlotItem().layout.setContentsMargins(below, below, below, below)
        self._show_focus()
        self.redraw(theme)

    def title_axes(self, bottom: str, left: str) -> None:
        """Titles of both axes, as typed: pyqtgraph would read them as HTML."""
        theme = current()
        style: dict[str, Any] = {"color": theme.faint.name(), "font-size": f"{theme.points(Size.SMALL)}pt"}
        self.plot.setLabel("bottom", _escaped(bottom), **style)
        self.plot.setLabel("left", _escaped(left), **style)

    def scatter(
        self,
        points: Sequence[tuple[float, float]],
        symbol: str,
        size: float,
        edge: QColor,
        fill: QColor | None,
        name: str = "",
    ) -> pg.ScatterPlotItem:
        """Marks of `size` pixels at zoom 1; a `name` stands in the legend. pyqtgraph names the symbols."""
        zoom = current().zoom
        options: dict[str, Any] = {"name": name} if name else {}
        pen, brush = pg.mkPen(edge, width=_OUTLINE * zoom), pg.mkBrush(fill)
        item = pg.ScatterPlotItem(
            pos=points, symbol=symbol, size=size * zoom, pen=pen, brush=brush, **options
        )
        self.plot.addItem(item)
        return item

    def upright(self, x: float, pen: QPen, says: str, where: float) -> None:
        """An upright line with a small name at `where` (0 at the bottom, 1 at the top)."""
        theme = current()
        beside = [(0, 1), (1, 1)]  # left or right of the line, standing on `where`
        options = {"position": where, "color": theme.faint, "movable": False, "anchors": beside}
        line = pg.InfiniteLine(x, pen=pen, label=says, labelOpts=options)
        line.label.setFont(theme.font(Size.SMALL))
        self.plot.addItem(line)

    def fresh_legend(self, *, above: bool = False) -> None:
        """An empty legend at the top left, filled by the names of what is plotted next.

        `above`: in a line above the plot, where there is no free corner in it.
        """
        theme = current()
        legend = self._legend_above() if above else self.plot.addLegend(offset=(theme.px(1), theme.px(1)))
        legend.clear()
        legend.setBrush(theme.paper)
        legend.setPen(pg.mkPen(theme.paper if above else theme.rule))
        legend.setLabelTextColor(theme.ink)
        legend.setLabelTextSize(f"{theme.points(Size.SMALL)}pt")

    def _legend_above(self) -> pg.LegendItem:
        item = self.plot.getPlotItem()
        if item.legend is None:
            item.legend = pg.LegendItem(colCount=_IN_A_LINE)
            item.layout.removeItem(item.titleLabel)  # an empty title stands where the key goes
            item.layout.addItem(item.legend, 0, 1)
        return item.legend

    def pixmap(self) -> QPixmap:
        """The picture as on the screen."""
        return QPixmap(self.plot.grab())

    def _show_focus(self) -> None:
        theme = current()
        colour = theme.focus if self.hasFocus() else theme.paper
        self.plot.setStyleSheet(f"border: 2px solid {colour.name()};")

    def focusInEvent(self, event: QFocusEvent) -> None:
        """Show the focus."""
        super().focusInEvent(event)
        self._show_focus()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Hide the focus."""
        super().focusOutEvent(event)
        self._show_focus()

    def sizeHint(self) -> QSize:
        """The least size: pyqtgraph would ask for the size it has, and never become smaller again."""
        return QSize(current().px(2 * self.least), current().px(self.least))

    def changeEvent(self, event: QEvent) -> None:
        """Follow theme and zoom; Qt sends such changes before there is a plot."""
        super().changeEvent(event)
        touched = event.type() in (QEvent.Type.PaletteChange, QEvent.Type.FontChange)
        if touched and hasattr(self, "plot"):
            self.touch()


def _escaped(text: str) -> str:
    return text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
