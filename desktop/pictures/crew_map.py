"""The crew map: workable whole crews as dots, others as crosses, the polygon of workable ones behind them."""

from __future__ import annotations

from typing import Any

import pyqtgraph as pg
from PySide6.QtCore import QPointF, Qt, Signal
from PySide6.QtGui import QKeyEvent, QPolygonF
from PySide6.QtWidgets import QGraphicsPolygonItem, QWidget

from desktop import figures
from desktop import question_words as say
from desktop.pictures.crew_spots import (
    CrewSpots,
    NamedSpot,
    Spot,
    SpotKind,
    nearest_spot,
    next_spot,
    spot_sentence,
)
from desktop.pictures.plot_picture import PlotPicture, cosmetic
from desktop.theme import Theme

# shape and size of a named point; its colour is looked up by `_tone`
_SHAPES: dict[SpotKind, tuple[str, int]] = {
    SpotKind.FRACTIONAL: ("d", 13),
    SpotKind.ROUNDED: ("t", 12),
    SpotKind.PATCHED: ("p", 13),
    SpotKind.EXACT: ("o", 15),
    SpotKind.OWN: ("s", 13),
}
_DOT, _CROSS = 7, 8  # sizes of the lattice's marks
_STEPS = {
    Qt.Key.Key_Left: (-1, 0),
    Qt.Key.Key_Right: (1, 0),
    Qt.Key.Key_Up: (0, 1),
    Qt.Key.Key_Down: (0, -1),
}


class CrewMap(PlotPicture):
    """The map with a cursor on one whole crew, moved by mouse or arrow keys.

    `looked_at(x, y)` when the cursor moved; `chosen(x, y)` on a click, or Space.
    """

    least = 44.0
    looked_at = Signal(float, float)
    chosen = Signal(float, float)

    def __init__(self, parent: QWidget | None = None) -> None:
        self._shown: CrewSpots | None = None
        self._cursor: Spot | None = None
        self._ring: pg.ScatterPlotItem | None = None
        super().__init__(say.CREW_MAP, parent)
        scene = self.plot.scene()
        scene.sigMouseMoved.connect(self._on_hover)
        scene.sigMouseClicked.connect(self._on_click)

    @property
    def cursor_spot(self) -> Spot | None:
        """The whole crew looked at."""
        return self._cursor

    def show_spots(self, shown: CrewSpots) -> None:
        """Show another map, with the cursor on the exact crew."""
        self._shown = shown
        exact = next((n for n in shown.named if n.kind is SpotKind.EXACT), None)
        self._cursor = nearest_spot(shown.lattice, exact.x, exact.y) if exact else None
        workable = sum(spot.workable for spot in shown.lattice)
        self.setAccessibleDescription(say.map_described(workable, len(shown.lattice)))
        self.touch()

    def look_at(self, spot: Spot | None) -> None:
        """Put the cursor on `spot`."""
        if spot is None or spot == self._cursor:
            return
        self._cursor = spot
        self._place_ring()
        self.looked_at.emit(spot.x, spot.y)

    def sentence(self) -> str:
        """The crew under the cursor in words."""
        return spot_sentence(self._shown, self._cursor) if self._shown and self._cursor else ""

    def redraw(self, theme: Theme) -> None:
        """Draw polygon, lattice, line of equal cost, named crews and the cursor."""
        shown = self._shown
        if shown is None:
            return
        self.title_axes(say.people_axis(shown.across), say.people_axis(shown.up))
        self.fresh_legend(above=True)
        self._add_polygon(shown, theme)
        if shown.equal_cost is not None:
            xs, ys = zip(*shown.equal_cost, strict=True)
            pen = cosmetic(theme.ink, 1, Qt.PenStyle.DashLine)
            self.plot.plot(list(xs), list(ys), pen=pen, antialias=True, name=say.KEY_EQUAL_COST)
        self._add_lattice(shown, theme)
        for named in sorted(shown.named, key=lambda n: n.kind is not SpotKind.EXACT):
            self._add_named(named, theme)
        self._ring = self.scatter([], "o", 24, theme.focus, None)
        self._place_ring()
        self.names.place()

    def _add_polygon(self, shown: CrewSpots, theme: Theme) -> None:
        if len(shown.polygon) < 3:
            return
        item = QGraphicsPolygonItem(QPolygonF([QPointF(x, y) for x, y in shown.polygon]))
        item.setBrush(theme.exact_soft)
        item.setPen(cosmetic(theme.exact, 1))
        item.setZValue(-10)
        self.plot.addItem(item)

    def _add_lattice(self, shown: CrewSpots, theme: Theme) -> None:
        workable = [(s.x, s.y) for s in shown.lattice if s.workable]
        broken = [(s.x, s.y) for s in shown.lattice if not s.workable]
        self.scatter(workable, "o", _DOT, theme.exact, theme.exact, say.KEY_WORKABLE)
        self.scatter(broken, "x", _CROSS, theme.short, theme.short, say.KEY_NOT_WORKABLE)
        self.names.avoid(workable + broken, _CROSS)

    def _add_named(self, named: NamedSpot, theme: Theme) -> None:
        symbol, size = _SHAPES[named.kind]
        colour = _tone(named.kind, theme)
        fill = colour if named.kind in (SpotKind.EXACT, SpotKind.FRACTIONAL) else theme.paper
        self.scatter([(named.x, named.y)], symbol, size, colour, fill)
        exact = named.kind is SpotKind.EXACT
        self.names.add(", ".join(named.names), named.x, named.y, colour, bold=exact)

    def _place_ring(self) -> None:
        if self._ring is not None:
            self._ring.setData(pos=[(self._cursor.x, self._cursor.y)] if self._cursor else [])

    def _spot_under(self, scene_position: QPointF) -> Spot | None:
        box = self.plot.getPlotItem().getViewBox()
        if self._shown is None or not box.sceneBoundingRect().contains(scene_position):
            return None
        point = box.mapSceneToView(scene_position)
        return nearest_spot(self._shown.lattice, point.x(), point.y())

    def _on_hover(self, position: QPointF) -> None:
        self.look_at(self._spot_under(position))

    def _on_click(self, event: Any) -> None:
        spot = self._spot_under(event.scenePos())
        if spot is not None and event.button() == Qt.MouseButton.LeftButton:
            self.look_at(spot)
            self.chosen.emit(spot.x, spot.y)

    def rows(self) -> list[list[str]]:
        """Every whole crew: both counts, workable or not, cost, what it breaks."""
        shown = self._shown
        if shown is None:
            return [[say.COST]]
        head = [shown.across, shown.up, say.WORKABLE, say.in_unit(say.COST, shown.currency), say.BREAKS]
        return [head, *(_row(spot) for spot in shown.lattice)]

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Arrow keys move the cursor, Space takes the crew."""
        step = _STEPS.get(Qt.Key(event.key()))
        if self._shown is None or self._cursor is None:
            super().keyPressEvent(event)
        elif step is not None:
            self.look_at(next_spot(self._shown.lattice, self._cursor, *step))
        elif event.key() == Qt.Key.Key_Space:
            self.chosen.emit(self._cursor.x, self._cursor.y)
        else:
            super().keyPressEvent(event)


def _tone(kind: SpotKind, theme: Theme) -> Any:
    return {SpotKind.FRACTIONAL: theme.fractional, SpotKind.EXACT: theme.exact}.get(kind, theme.ink)


def _row(spot: Spot) -> list[str]:
    cost = figures.money(spot.cost) if spot.cost is not None else ""
    verdict = say.YES if spot.workable else say.NO
    return [figures.people(spot.x), figures.people(spot.y), verdict, cost, say.listed(spot.breaks)]
