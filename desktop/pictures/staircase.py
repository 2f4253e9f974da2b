"""Cost over workload: the exact staircase, the relaxation's line below it, rounding up above it."""

from __future__ import annotations

import pyqtgraph as pg
from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QPen
from PySide6.QtWidgets import QWidget

from desktop import figures
from desktop import question_words as say
from desktop.pictures.plot_picture import PlotPicture, cosmetic
from desktop.pictures.stairs import amount_text, cost_at, point_path, stair_path, step_at
from desktop.tables.crew_text import crew_text
from desktop.theme import Theme
from solver.answer import Steps
from solver.plan import Plan

_KEY_SHARE = 0.01  # of the range, for one press of an arrow key


class Staircase(PlotPicture):
    """The staircase with a workload that is dragged or moved by the arrow keys.

    `moved(amount)` when the workload moved. Up and Down jump to the next and the last step.
    """

    moved = Signal(float)

    def __init__(self, parent: QWidget | None = None) -> None:
        self._steps: Steps | None = None
        self._plan: Plan | None = None
        self._amount = 0.0
        self._marker: pg.InfiniteLine | None = None
        self._dot: pg.ScatterPlotItem | None = None
        super().__init__(say.STAIRCASE, parent)

    @property
    def amount(self) -> float:
        """The workload looked at."""
        return self._amount

    def show_steps(self, plan: Plan, steps: Steps) -> None:
        """Show the staircase, at today's workload."""
        self._plan, self._steps = plan, steps
        self._amount = steps.today
        self.setAccessibleDescription(say.stairs_described(len(steps.steps), amount_text(steps, steps.today)))
        self.touch()

    def move_to(self, amount: float) -> None:
        """Look at another workload, within the staircase."""
        if self._steps is None or not self._steps.steps:
            return
        low, high = self._steps.steps[0].from_, self._steps.steps[-1].to
        inside = min(max(amount, low), high)
        if inside == self._amount:
            return
        self._amount = inside
        self._place_marker()
        self.moved.emit(inside)

    def redraw(self, theme: Theme) -> None:
        """Draw lines, marks and the workload."""
        steps, plan = self._steps, self._plan
        if steps is None or plan is None or not steps.steps:
            return
        self.title_axes(say.workload_axis(steps.work, steps.unit), say.in_unit(say.COST, plan.currency))
        dash, dot = Qt.PenStyle.DashLine, Qt.PenStyle.DotLine
        self.fresh_legend(above=True)
        self._line(point_path(steps.rounded_up), cosmetic(theme.faint, 1.5, dot), say.KEY_UP)
        self._line(stair_path(steps.steps), cosmetic(theme.exact, 2), say.KEY_EXACT)
        self._line(point_path(steps.floor), cosmetic(theme.fractional, 2, dash), say.KEY_FLOOR)
        ends = [(step.to, step.cost) for step in steps.steps]
        self.scatter(ends, "o", 6, theme.exact, theme.exact)
        self.upright(steps.today, cosmetic(theme.faint, 1), say.TODAY, 0.01)
        self._add_marker(theme)

    def _line(self, path: tuple[list[float], list[float]], pen: QPen, name: str) -> None:
        if path[0]:
            self.plot.plot(*path, pen=pen, antialias=True, name=name, connect="finite")

    def _add_marker(self, theme: Theme) -> None:
        self._marker = pg.InfiniteLine(self._amount, movable=True, pen=cosmetic(theme.ink, 2))
        self._marker.setHoverPen(cosmetic(theme.exact, 3))
        self._marker.sigPositionChanged.connect(self._on_dragged)
        self.plot.addItem(self._marker)
        self._dot = self.scatter([], "o", 11, theme.ink, theme.paper)
        self._place_marker()

    def _place_marker(self) -> None:
        if self._marker is None or self._dot is None or self._steps is None:
            return
        self._marker.blockSignals(True)
        self._marker.setValue(self._amount)
        self._marker.blockSignals(False)
        cost = cost_at(self._steps.steps, self._amount)
        self._dot.setData(pos=[(self._amount, cost)] if cost is not None else [])

    def _on_dragged(self, marker: pg.InfiniteLine) -> None:
        self.move_to(float(marker.value()))
        self._place_marker()

    def rows(self) -> list[list[str]]:
        """Every step: from, to, crew, cost."""
        head = [say.FROM, say.TO, say.CREW, say.COST]
        if self._steps is None or self._plan is None:
            return [head]
        steps, plan = self._steps, self._plan
        return [
            head,
            *(
                [
                    amount_text(steps, s.from_),
                    amount_text(steps, s.to),
                    crew_text(plan, s.crew),
                    figures.money(s.cost, plan.currency),
                ]
                for s in steps.steps
            ),
        ]

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Arrow keys move the workload."""
        if self._steps is None or not self._steps.steps:
            super().keyPressEvent(event)
            return
        steps = self._steps.steps
        little = (steps[-1].to - steps[0].from_) * _KEY_SHARE
        at = step_at(steps, self._amount) or 0
        targets = {
            Qt.Key.Key_Left: self._amount - little,
            Qt.Key.Key_Right: self._amount + little,
            Qt.Key.Key_Up: steps[at].to
            if self._amount < steps[at].to
            else steps[min(at + 1, len(steps) - 1)].to,
            Qt.Key.Key_Down: steps[max(at - 1, 0)].to,
            Qt.Key.Key_Home: steps[0].from_,
            Qt.Key.Key_End: steps[-1].to,
        }
        target = targets.get(Qt.Key(event.key()))
        if target is None:
            super().keyPressEvent(event)
        else:
            self.move_to(target)
