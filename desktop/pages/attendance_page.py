"""The page about attendance: how often enough people are there, who is missed, what a safer crew costs."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QModelIndex, QTimer
from PySide6.QtWidgets import (
    QAbstractItemView,
    QComboBox,
    QDoubleSpinBox,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from desktop import attendance_words as say
from desktop import figures
from desktop.answers import Answers
from desktop.document import Document
from desktop.pages.near_page import own_of
from desktop.pages.page_parts import heading, label
from desktop.pages.question_page import QuestionPage
from desktop.pictures.chances import curve_of, safe_sentence, share
from desktop.tables.crew_text import crew_text
from desktop.tables.own_crew import with_own
from desktop.tables.quiet_view import QuietView
from desktop.tables.shown_table import ShownColumn, ShownTable
from desktop.theme import current
from solver.answer import Attendance, CrewChance, Critical, PhaseAttendance
from solver.plan import Plan

if TYPE_CHECKING:
    from desktop.pictures.attendance_curve import AttendanceCurve

_ASK_AFTER = 600  # ms without another change of the wanted chance
_OWN, _WANTED = "own", "safe"  # what the answer calls the own crew and the one for the wanted chance


def crew_columns(
    plan: Plan, exact: float, name: Callable[[CrewChance], str]
) -> list[ShownColumn[CrewChance]]:
    """Crews side by side: how often enough, what they cost, who."""

    def more(crew: CrewChance) -> str:
        return figures.NIL if crew.cost is None else figures.money(crew.cost - exact)

    def cost(crew: CrewChance) -> str:
        return say.NOT_WORKABLE if crew.cost is None else figures.money(crew.cost)

    return [
        ShownColumn(say.CREW, say.TIP_CREW, name, left=True),
        ShownColumn(say.COVERS, say.TIP_COVERS, lambda c: share(c.covered), bold=True, tone="exact"),
        ShownColumn(say.over_unit(say.COST, plan.currency), say.TIP_COST, cost),
        ShownColumn(say.over_unit(say.MORE, plan.currency), say.TIP_MORE, more),
    ]


Line = tuple[str, float, float | None]


def line_columns(plan: Plan) -> list[ShownColumn[Line]]:
    """Lines of a day: how often kept, how much short on average."""
    units = {work.name: work.unit for work in plan.works}

    def short(line: Line) -> str:
        if line[2] is None:
            return ""
        return figures.NIL if line[2] < 1e-6 else figures.quantity(line[2], units.get(line[0], "hours"))

    return [
        ShownColumn(say.LINE, say.TIP_LINE, lambda line: line[0], left=True),
        ShownColumn(say.KEPT, say.TIP_KEPT, lambda line: share(line[1]), bold=True),
        ShownColumn(say.SHORT.format(period=plan.period), say.TIP_SHORT, short),
    ]


def lines_of(phase: PhaseAttendance) -> list[Line]:
    """Lines of the phase, those short most often first."""
    found = [(name, kept, phase.expected_short.get(name)) for name, kept in phase.by_line.items()]
    return sorted(found, key=lambda line: line[1])


def missed_columns() -> list[ShownColumn[Critical]]:
    """Whose absence stops how many days."""
    return [
        ShownColumn(say.CATEGORY, say.TIP_CATEGORY, lambda c: c.category, left=True),
        ShownColumn(say.STOPS, say.TIP_STOPS, lambda c: share(c.stops), bold=True, tone="short"),
    ]


class AttendancePage(QuestionPage):
    """Will enough of them be there?"""

    question = "attend"

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(document, answers, parent)
        self.chance = QDoubleSpinBox()
        self.take = QPushButton(say.TAKE)
        self.sentence, self.wanted, self.looked = label(), label(), label()
        self.who = label()
        self.own_changed = label(say.OWN_CHANGED, tone="faint")
        self.hint = label(say.CURVE_HINT, tone="faint")
        self.picture: AttendanceCurve | None = None
        self.crews: ShownTable[CrewChance] = ShownTable(title=lambda crew, _at: self._name(crew), parent=self)
        self.lines: ShownTable[Line] = ShownTable(title=lambda line, _at: line[0], parent=self)
        self.missed: ShownTable[Critical] = ShownTable(title=lambda one, _at: one.category, parent=self)
        self.crews_view = QuietView(say.CREWS)
        self.lines_view = QuietView(say.LINES)
        self.missed_view = QuietView(say.WHO_IS_MISSED)
        self.phase = QComboBox()
        self.survives = label()
        self.method = label(tone="faint")
        self._asked_soon = QTimer(self, singleShot=True, interval=_ASK_AFTER)
        self._shown: Attendance | None = None
        self._asked_own: object = None
        self._wanted = 0.0
        self._set_up()
        self.body.addLayout(self._choices())
        self._parts = self._fill_body()

    def _set_up(self) -> None:
        self.chance.setRange(50.0, 99.9)
        self.chance.setDecimals(1)
        self.chance.setSingleStep(1.0)
        self.chance.setValue(95.0)
        self.chance.setSuffix(f"{figures.NBSP}%")
        self.chance.setToolTip(say.TIP_WANTED)
        self.chance.setAccessibleName(say.WANTED)
        self.chance.valueChanged.connect(lambda _: self._asked_soon.start())
        self._asked_soon.timeout.connect(self.ask)
        self.take.setToolTip(say.TIP_TAKE)
        self.take.clicked.connect(self.take_crew)
        self.phase.setAccessibleName(say.PHASE)
        self.phase.currentIndexChanged.connect(self._show_phase)
        for view, table in (
            (self.crews_view, self.crews),
            (self.lines_view, self.lines),
            (self.missed_view, self.missed),
        ):
            view.setModel(table)
        for view in (self.crews_view, self.lines_view, self.missed_view):
            view.verticalHeader().hide()
        self.crews_view.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.crews_view.selectionModel().currentRowChanged.connect(self._on_crew)

    def _choices(self) -> QHBoxLayout:
        line = QHBoxLayout()
        line.setSpacing(current().px(1))
        for widget in (QLabel(say.WANTED), self.chance, QLabel(say.OF_DAYS)):
            line.addWidget(widget)
        line.addStretch(1)
        line.addWidget(self.take)
        return line

    def _fill_body(self) -> tuple[QWidget, ...]:
        """Sentences; the picture with the crews beside it; lines with who is missed beside them."""
        crews, lines, missed = heading(say.CREWS), heading(say.LINES), heading(say.WHO_IS_MISSED)
        self._place = QVBoxLayout()
        self._place.addWidget(self.hint)
        self._place.addWidget(self.looked)
        upper, lower = QHBoxLayout(), QHBoxLayout()
        for row in (upper, lower):
            row.setSpacing(current().px(3))
        upper.addLayout(self._place, 1)
        upper.addLayout(_column(crews, self.crews_view, self.who, self.own_changed), 1)
        title = QHBoxLayout()
        title.addWidget(lines)
        title.addWidget(self.phase)
        title.addStretch(1)
        left = QVBoxLayout()
        left.addLayout(title)
        left.addWidget(self.lines_view)
        left.addStretch(1)
        lower.addLayout(left, 1)
        lower.addLayout(_column(missed, self.survives, self.missed_view), 1)
        for widget in (self.sentence, self.wanted):
            self.body.addWidget(widget)
        for layout in (upper, lower):
            self.body.addLayout(layout)
        self.body.addWidget(self.method)
        self.body.addStretch(1)
        return (
            *(self.sentence, self.wanted, self.hint, self.looked, crews, self.crews_view, self.who),
            *(lines, self.lines_view, missed, self.survives, self.missed_view, self.method),
        )

    # ---- asking ------------------------------------------------------------------------------

    def options(self) -> dict[str, Any]:
        """The wanted chance."""
        self._asked_own = self.document.plan.own
        return {"chance": round(self.chance.value() / 100, 6)}

    def take_crew(self) -> None:
        """Copy the crew under the cursor into the own crew."""
        crew = self.picture.crew if self.picture is not None else None
        if crew is None:
            return
        self.document.edit(say.EDIT_TAKE, with_own(self.document.plan, own_of(crew.crew)))
        self.looked.setText(say.taken(crew_text(self.document.plan, crew.crew)))

    # ---- showing -----------------------------------------------------------------------------

    def _picture(self) -> AttendanceCurve:
        """The picture, made when first needed: importing pyqtgraph takes its time."""
        if self.picture is None:
            from desktop.pictures.attendance_curve import AttendanceCurve

            self.picture = AttendanceCurve()
            self.picture.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
            self.picture.looked_at.connect(self._on_looked_at)
            self._place.insertWidget(0, self.picture, 1)
        return self.picture

    def show_detail(self, detail: Attendance | None) -> None:
        """Fill everything."""
        plan = self.answers.plan
        there = detail is not None and plan is not None
        for widget in (*self._parts, self.picture):
            if widget is not None:
                widget.setVisible(there)
        self.take.setEnabled(there)
        own_changed = there and self._asked_own != self.document.plan.own
        self.own_changed.setVisible(own_changed)
        self.phase.setVisible(there and plan is not None and len(plan.phases) > 1)
        if detail is None or plan is None:
            return
        if own_changed:
            self.ask_button.setVisible(True)
        self._wanted = detail.chance
        self._show_crews(plan, detail, own_changed)
        if detail is not self._shown:
            self._shown = detail
            self._show_new(plan, detail)

    def _show_new(self, plan: Plan, detail: Attendance) -> None:
        worst = min(range(len(detail.phases)), key=lambda t: detail.phases[t].covered)
        where = detail.phases[worst].phase if len(detail.phases) > 1 else ""
        self.sentence.setText(say.headline(share(detail.phases[worst].covered), where))
        self.wanted.setText(wanted_sentence(plan, detail))
        self._picture().show_curve(plan, curve_of(plan, detail))
        self._picture().show()
        self._tell_looked()
        self.method.setText(f"{say.MODEL} {_method(detail)}")
        self.phase.blockSignals(True)
        self.phase.clear()
        self.phase.addItems([phase.phase for phase in detail.phases])
        self.phase.setCurrentIndex(worst)
        self.phase.blockSignals(False)
        self._show_phase()

    def _show_crews(self, plan: Plan, detail: Attendance, own_changed: bool) -> None:
        shown = tuple(c for c in detail.compared if not (own_changed and c.name == _OWN))
        if self.crews.rows != shown or not self.crews.columns:
            self.crews.show(shown, crew_columns(plan, detail.compared[0].cost or 0.0, self._name))
            self.crews_view.share_width([0])
            self.crews_view.selectRow(0)

    def _name(self, crew: CrewChance) -> str:
        """What a crew is called: one that is enough on most days is not called safe."""
        return say.for_days(share(self._wanted)) if crew.name == _WANTED else crew.name

    def _show_phase(self) -> None:
        """Lines and people of the phase chosen."""
        plan, detail, at = self.answers.plan, self._shown, max(0, self.phase.currentIndex())
        if plan is None or detail is None or at >= len(detail.phases):
            return
        phase = detail.phases[at]
        self.lines.show(lines_of(phase), line_columns(plan))
        self.missed.show(phase.critical, missed_columns())
        for view in (self.lines_view, self.missed_view):
            view.share_width([0])
        missing = [f"{figures.people(n)}{figures.NBSP}{name}" for name, n in phase.first_miss.items()]
        self.survives.setText(say.survives(phase.survives, missing))

    def _on_crew(self, index: QModelIndex) -> None:
        """Who is in the crew of the chosen row."""
        plan = self.answers.plan
        if plan is not None and index.isValid():
            crew = self.crews.rows[index.row()]
            self.who.setText(say.who(self._name(crew), crew_text(plan, crew.crew)))

    def _on_looked_at(self, _at: int) -> None:
        self._tell_looked()

    def _tell_looked(self) -> None:
        """The crew of the chosen dot; nothing where the sentence at the top has told of it."""
        told = self._picture().sentence()
        self.looked.setText("" if told == self.wanted.text() else told)

    def retouch(self) -> None:
        """Follow a change of theme or zoom."""
        super().retouch()
        for view in (self.crews_view, self.lines_view, self.missed_view):
            view.refit()


def wanted_sentence(plan: Plan, detail: Attendance) -> str:
    """The crew for the wanted chance, or why there is none."""
    if detail.wanted is not None:
        return safe_sentence(plan, detail.wanted)
    if detail.beyond_budget is None:
        return detail.why_none
    return f"{detail.why_none} {say.without_budget(safe_sentence(plan, detail.beyond_budget))}"


def _method(detail: Attendance) -> str:
    drawn = next((phase for phase in detail.phases if phase.drawn), None)
    if drawn is None:
        return say.EXACT_CHANCES
    return say.drawn_chances(figures.number(drawn.drawn, 0), figures.percent(100 * drawn.error))


def _column(*widgets: QWidget) -> QVBoxLayout:
    """Widgets one above the other, the rest of the height below them."""
    made = QVBoxLayout()
    for widget in widgets:
        made.addWidget(widget)
    made.addStretch(1)
    return made
