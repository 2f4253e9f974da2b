"""The page of the crew map: every whole crew of two categories, and where the named crews are."""

from __future__ import annotations

from decimal import Decimal
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QElapsedTimer, QTimer
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QLabel, QWidget

from desktop import question_words as say
from desktop.answers import Answers
from desktop.document import Document
from desktop.pages.page_parts import label
from desktop.pages.question_page import QuestionPage
from desktop.pictures.crew_spots import CrewSpots, NamedSpot, Spot, SpotKind
from desktop.tables.own_crew import own_started, with_own
from desktop.theme import current
from solver.answer import Answer, Policy
from solver.mapanswer import CrewMap as MapAnswer
from solver.plan import Plan

if TYPE_CHECKING:
    from desktop.pictures.crew_map import CrewMap

_KINDS = {
    Policy.EXACT: SpotKind.EXACT,
    Policy.PATCHED: SpotKind.PATCHED,
    Policy.OWN: SpotKind.OWN,
}
_SAME = 1e-6
_AWAY_AFTER = 400  # ms the last map stays while another one is worked out
_ASK_AFTER = 30  # ms without another choice of axes
_PATIENCE = 300  # ms a map may still be worked on after other axes were chosen


def named_spots(plan: Plan, answer: Answer, across: str, up: str, at: int) -> tuple[NamedSpot, ...]:
    """Where every crew stands in phase `at`; those on one point share it, the exact crew's shape first."""
    found: list[tuple[SpotKind, str, float, float]] = []
    if answer.fractional is not None:
        x, y = answer.fractional[across][at], answer.fractional[up][at]
        found.append((SpotKind.FRACTIONAL, say.FRACTIONAL, x, y))
    for report in answer.crews:
        if report.crew is not None and report.policy is not Policy.OWN:
            kind = _KINDS.get(report.policy, SpotKind.ROUNDED)
            found.append((kind, str(report.policy), report.crew[across][at], report.crew[up][at]))
    if across in plan.own and up in plan.own:
        x, y = float(plan.own[across][at]), float(plan.own[up][at])
        found.append((SpotKind.OWN, str(Policy.OWN), x, y))
    return _shared(found)


def _shared(found: list[tuple[SpotKind, str, float, float]]) -> tuple[NamedSpot, ...]:
    rank = list(SpotKind)[::-1]
    rank.sort(key=lambda kind: kind is not SpotKind.EXACT)
    spots: list[NamedSpot] = []
    for kind, name, x, y in found:
        there = next((s for s in spots if abs(s.x - x) < _SAME and abs(s.y - y) < _SAME), None)
        if there is None:
            spots.append(NamedSpot(kind, (name,), x, y))
            continue
        best = min(kind, there.kind, key=rank.index)
        names = (name, *there.names) if kind is SpotKind.EXACT else (*there.names, name)
        spots[spots.index(there)] = NamedSpot(best, names, there.x, there.y)
    return tuple(spots)


def spots_of(plan: Plan, answer: Answer, detail: MapAnswer, across: str, up: str, at: int) -> CrewSpots:
    """The map as the picture shows it."""
    lattice = tuple(Spot(p.x, p.y, p.workable, p.cost, tuple(p.breaks)) for p in detail.points)
    named = named_spots(plan, answer, across, up, at)
    polygon = tuple((x, y) for x, y in detail.polygon)
    equal_cost = tuple((x, y) for x, y in detail.equal_cost) if detail.equal_cost else None
    return CrewSpots(across, up, plan.currency, polygon, lattice, named, equal_cost)


class MapPage(QuestionPage):
    """Why the exact crew is where it is."""

    question = "map"

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(document, answers, parent)
        self.across, self.up, self.phase = QComboBox(), QComboBox(), QComboBox()
        self._phase_title = QLabel(say.PHASE)
        self.hint = label(say.MAP_HINT, tone="faint")
        self.sentence = label()
        self.picture: CrewMap | None = None
        self._away_soon = QTimer(self, singleShot=True, interval=_AWAY_AFTER)
        self._away_soon.timeout.connect(lambda: self._show_map(False))
        self._ask_soon = QTimer(self, singleShot=True)
        self._ask_soon.timeout.connect(self._ask_axes)
        self._asked = QElapsedTimer()
        self._place = QHBoxLayout()
        self.body.addLayout(self._choices())
        for widget in (self.hint, self.sentence):
            self.body.addWidget(widget)
        self.body.addLayout(self._place, 1)
        for box in (self.across, self.up, self.phase):
            box.currentIndexChanged.connect(self._on_axes)

    def _choices(self) -> QHBoxLayout:
        line = QHBoxLayout()
        line.setSpacing(current().px(1))
        parts = ((QLabel(say.ACROSS), self.across), (QLabel(say.UPWARDS), self.up))
        for title, box in (*parts, (self._phase_title, self.phase)):
            box.setAccessibleName(title.text())
            box.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToContents)
            line.addWidget(title)
            line.addWidget(box)
        line.addStretch(1)
        return line

    def options(self) -> dict[str, Any]:
        """The categories on the axes and the phase."""
        return {
            "x": self.across.currentText(),
            "y": self.up.currentText(),
            "phase": self.phase.currentText(),
        }

    def can_ask(self) -> bool:
        """Two different categories are needed as well."""
        chosen = self.across.currentText(), self.up.currentText()
        return super().can_ask() and chosen[0] != chosen[1]

    def _on_axes(self) -> None:
        same = self.across.currentText() == self.up.currentText()
        self.sentence.setText(say.SAME_TWICE if same else "")
        if not same:
            self._ask_soon.start(_ASK_AFTER)

    def _ask_axes(self) -> None:
        """Ask for the axes chosen, once the map being worked on had its time: ending a process costs more."""
        working = self.answers.progress(self.question) is not None
        if working and self._asked.isValid() and self._asked.elapsed() < _PATIENCE:
            self._ask_soon.start(_ASK_AFTER)
        else:
            self._asked.start()
            self.ask()

    def show_answer(self) -> None:
        """Offer the categories and phases of the plan, then ask or show."""
        plan = self.document.plan
        names = [category.name for category in plan.categories]
        first, second = self._most_told(names)
        _offer(self.across, names, first)
        _offer(self.up, names, second)
        _offer(self.phase, [phase.name for phase in plan.phases], 0)
        for widget in (self.phase, self._phase_title):
            widget.setVisible(len(plan.phases) > 1)
        super().show_answer()
        if len(names) < 2:
            self.sentence.setText(say.NEEDS_TWO)

    def _most_told(self, names: list[str]) -> tuple[int, int]:
        """The two categories with most people in the exact crew: there is most to see between them."""
        answer = self.answers.answer
        crew = answer.exact.crew if answer and answer.exact else {}
        order = sorted(range(len(names)), key=lambda i: -max(crew.get(names[i], ()), default=0.0))
        return (min(order[:2]), max(order[:2])) if len(order) > 1 else (0, 0)

    def _picture(self) -> CrewMap:
        """The picture, made when first needed: importing pyqtgraph takes its time."""
        if self.picture is None:
            from desktop.pictures.crew_map import CrewMap

            self.picture = CrewMap()
            self.picture.looked_at.connect(self._on_looked_at)
            self.picture.chosen.connect(self._on_chosen)
            self._place.addWidget(self.picture)
        return self.picture

    def show_detail(self, detail: MapAnswer | None) -> None:
        """Fill the map."""
        plan, answer = self.answers.plan, self.answers.answer
        there = detail is not None and plan is not None and answer is not None
        if detail is not None and (detail.across, detail.up, detail.phase) != tuple(self.options().values()):
            return  # other axes were chosen meanwhile and are asked for soon
        self._away_soon.stop()
        if not there and self.answers.progress(self.question) is not None:
            self._away_soon.start()  # other axes are mostly there before anybody misses the map
            return
        self._show_map(there)
        if detail is None or plan is None or answer is None:
            return
        at = max(0, self.phase.currentIndex())
        own_plan = with_own(plan, self.document.plan.own)
        spots = spots_of(own_plan, answer, detail, self.across.currentText(), self.up.currentText(), at)
        self._picture().show_spots(spots)
        self._picture().show()
        self.sentence.setText(self._picture().sentence())

    def _show_map(self, there: bool) -> None:
        for widget in (self.hint, self.picture):
            if widget is not None:
                widget.setVisible(there)
        if not there and self.across.currentText() != self.up.currentText():
            self.sentence.setText("")  # it was about a map that is gone

    def _on_looked_at(self, _x: float, _y: float) -> None:
        self.sentence.setText(self._picture().sentence())

    def _on_chosen(self, x: float, y: float) -> None:
        """Make the crew of the map the own crew: these two as chosen, the others as in the exact crew."""
        plan, at = self.document.plan, max(0, self.phase.currentIndex())
        own = own_started(with_own(plan, {}), self.answers.answer)
        for name, count in ((self.across.currentText(), x), (self.up.currentText(), y)):
            own[name] = (*own[name][:at], Decimal(f"{count:.12g}"), *own[name][at + 1 :])
        self.document.edit(say.EDIT_FROM_MAP, with_own(plan, own))


def _offer(box: QComboBox, names: list[str], first: int) -> None:
    """Fill a choice, keeping what was chosen where it still is."""
    if [box.itemText(i) for i in range(box.count())] == names:
        return
    kept = box.currentText()
    box.blockSignals(True)
    box.clear()
    box.addItems(names)
    box.setCurrentIndex(names.index(kept) if kept in names else first)
    box.blockSignals(False)
