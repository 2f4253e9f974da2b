"""Cost against chance: the cheapest whole crew for rising shares of days, and where other crews stand."""

from __future__ import annotations

from collections.abc import Sequence

import pyqtgraph as pg
from PySide6.QtCore import QPointF, Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QWidget

from desktop import attendance_words as say
from desktop import figures
from desktop.pictures.chances import ChanceCurve, safe_sentence, share
from desktop.pictures.plot_picture import PlotPicture, cosmetic
from desktop.tables.crew_text import crew_text
from desktop.theme import Theme
from solver.answer import CrewChance, SafeCrew
from solver.plan import Plan

_STEPS = {Qt.Key.Key_Left: -1, Qt.Key.Key_Down: -1, Qt.Key.Key_Right: 1, Qt.Key.Key_Up: 1}
_DOT, _OTHER = 9, 10  # sizes of the marks of the curve and of other crews
_NAMED = ("exact", "patched", "up", "own")


class AttendanceCurve(PlotPicture):
    """The curve with a cursor on one of its crews, moved by mouse or arrow keys.

    `looked_at(at)` with the number of the crew when the cursor moved.
    """

    least = 34.0
    looked_at = Signal(int)

    def __init__(self, parent: QWidget | None = None) -> None:
        self._plan: Plan | None = None
        self._shown: ChanceCurve | None = None
        self._at = 0
        self._ring: pg.ScatterPlotItem | None = None
        super().__init__(say.CURVE, parent)
        self.plot.scene().sigMouseMoved.connect(self._on_hover)

    @property
    def crew(self) -> SafeCrew | None:
        """The crew under the cursor."""
        return self._shown.curve[self._at] if self._shown and self._shown.curve else None

    def show_curve(self, plan: Plan, shown: ChanceCurve) -> None:
        """Show another answer, with the cursor on the crew for the wanted chance."""
        self._plan, self._shown = plan, shown
        reached = [at for at, crew in enumerate(shown.curve) if crew.covered >= shown.wanted - 1e-9]
        self._at = reached[0] if reached else max(len(shown.curve) - 1, 0)
        if shown.curve:
            ends = share(shown.curve[0].covered), share(shown.curve[-1].covered)
            self.setAccessibleDescription(say.described(len(shown.curve), *ends))
        self.touch()

    def look_at(self, at: int) -> None:
        """Put the cursor on a crew of the curve."""
        if self._shown is None or not 0 <= at < len(self._shown.curve) or at == self._at:
            return
        self._at = at
        self._place_ring()
        self.looked_at.emit(at)

    def sentence(self) -> str:
        """The crew under the cursor in words."""
        return safe_sentence(self._plan, self.crew) if self._plan and self.crew else ""

    def redraw(self, theme: Theme) -> None:
        """Draw the curve, the other crews, what is wanted and the budget."""
        shown = self._shown
        if shown is None or not shown.curve:
            return
        self.title_axes(say.AXIS_CHANCE, say.in_unit(say.COST, shown.currency))
        self.fresh_legend()
        xs, ys = [100 * c.covered for c in shown.curve], [c.cost for c in shown.curve]
        self.plot.plot(xs, ys, pen=cosmetic(theme.exact, 2), antialias=True)
        proved = [(100 * c.covered, c.cost) for c in shown.curve if c.proved]
        self.scatter(proved, "o", _DOT, theme.exact, theme.exact, say.KEY_CURVE if proved else "")
        guessed = [(100 * c.covered, c.cost) for c in shown.curve if not c.proved]
        self.scatter(guessed, "o", _DOT, theme.exact, theme.paper, say.KEY_NOT_PROVED if guessed else "")
        others = [(100 * c.covered, float(c.cost or 0)) for c in shown.others]
        self.scatter(others, "t", _OTHER, theme.faint, theme.paper, say.KEY_OTHERS if others else "")
        self.names.avoid([*proved, *guessed, *others], _OTHER)
        self.names.add(_NAMED[0], xs[0], ys[0], theme.exact, bold=True)
        for crew in shown.others:
            if crew.name in _NAMED:
                self.names.add(crew.name, 100 * crew.covered, float(crew.cost or 0), theme.faint)
        self._add_marks(shown, theme)
        self._ring = self.scatter([], "o", 2 * _DOT, theme.focus, None)
        self._place_ring()
        self.names.place()

    def _add_marks(self, shown: ChanceCurve, theme: Theme) -> None:
        """What is wanted, named on the line; the budget, named in the key: its line crosses the curve."""
        dash, dot = Qt.PenStyle.DashLine, Qt.PenStyle.DotLine
        self.upright(100 * shown.wanted, cosmetic(theme.faint, 1, dash), say.WANTED_MARK, 0.01)
        costs = [crew.cost for crew in shown.curve]
        near = shown.budget is not None and shown.budget <= max(costs) + (max(costs) - min(costs)) / 4
        if near and shown.budget is not None:
            pen = cosmetic(theme.short, 1.5, dot)
            self.plot.plot([], [], pen=pen, name=say.BUDGET)
            self.plot.addItem(pg.InfiniteLine(shown.budget, angle=0, pen=pen))

    def _place_ring(self) -> None:
        if self._ring is not None:
            crew = self.crew
            self._ring.setData(pos=[(100 * crew.covered, crew.cost)] if crew else [])

    def _on_hover(self, position: QPointF) -> None:
        box = self.plot.getPlotItem().getViewBox()
        if self._shown is None or not self._shown.curve or not box.sceneBoundingRect().contains(position):
            return
        away = [
            (box.mapViewToScene(QPointF(100 * c.covered, c.cost)) - position).manhattanLength()
            for c in self._shown.curve
        ]
        self.look_at(away.index(min(away)))

    def rows(self) -> list[list[str]]:
        """The crews of the curve, then the others: days, cost, who."""
        shown, plan = self._shown, self._plan
        head = [say.CREW, say.AXIS_CHANCE, say.COST, say.WHO]
        if shown is None or plan is None:
            return [head]
        crews: Sequence[SafeCrew | CrewChance] = (*shown.curve, *shown.others)
        return [
            head,
            *(
                [
                    c.name if isinstance(c, CrewChance) else say.KEY_CURVE,
                    share(c.covered),
                    figures.money(c.cost or 0.0, shown.currency),
                    crew_text(plan, c.crew),
                ]
                for c in crews
            ),
        ]

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Arrow keys move the cursor along the curve."""
        step = _STEPS.get(Qt.Key(event.key()))
        if step is None or self._shown is None:
            super().keyPressEvent(event)
        else:
            self.look_at(self._at + step)
