"""The page of workload steps: what more or less work would take, read off the exact staircase."""

from __future__ import annotations

from decimal import Decimal
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QLabel, QLineEdit, QSpinBox, QWidget

from desktop import figures
from desktop import question_words as say
from desktop.answers import Answers
from desktop.document import Document
from desktop.pages.page_parts import label
from desktop.pages.question_page import QuestionPage
from desktop.pictures.stairs import amount_text, changes, cost_at, holds_sentence, step_at
from desktop.tables import numbers
from desktop.tables.crew_text import crew_text
from desktop.tables.numbers import Refused
from desktop.tables.quiet_view import QuietView
from desktop.tables.shown_table import ShownColumn, ShownTable
from desktop.theme import current
from solver.answer import Step, Steps
from solver.plan import Plan

if TYPE_CHECKING:
    from desktop.pictures.staircase import Staircase

_ASK_AFTER = 400  # ms without another change of the range
_ALL = 100.0  # today's workload where all works are scaled, in per cent


def step_columns(plan: Plan, steps: Steps) -> list[ShownColumn[Step]]:
    """Where a step begins and ends, who serves it, what it costs, and what changed."""
    before = {id(b): a for a, b in zip(steps.steps, steps.steps[1:], strict=False)}

    def change(step: Step) -> str:
        last = before.get(id(step))
        return ", ".join(changes(plan, last.crew, step.crew)) if last else ""

    money = say.in_unit(say.COST, plan.currency)
    return [
        ShownColumn(say.FROM, say.TIP_STEP_FROM, lambda s: amount_text(steps, s.from_)),
        ShownColumn(say.TO, say.TIP_STEP_TO, lambda s: amount_text(steps, s.to)),
        ShownColumn(money, say.TIP_STEP_COST, lambda s: figures.money(s.cost), bold=True),
        ShownColumn(say.CREW, say.TIP_STEP_CREW, lambda s: crew_text(plan, s.crew), left=True, tone="exact"),
        ShownColumn(say.CHANGE, say.TIP_CHANGE, change, left=True),
    ]


def typed_amount(text: str, steps: Steps) -> float:
    """The workload typed as `text`, with or without its unit. Raises Refused.

    52,000 is read as thousands where that lies on the staircase and 52 does not.
    """
    plain = text.strip().removesuffix("%").removesuffix(steps.unit).strip()
    if not steps.steps or not numbers.reads_two_ways(plain):
        return float(numbers.parse(plain))
    amount = float(numbers.decimal_reading(plain))
    low, high = steps.steps[0].from_, steps.steps[-1].to
    there = [number for number in (amount, 1000 * amount) if low <= number <= high]
    return there[0] if len(there) == 1 else float(numbers.parse(plain))


class StepsPage(QuestionPage):
    """What the crew would be at other workloads."""

    question = "steps"

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(document, answers, parent)
        self.work, self.low, self.high = QComboBox(), QSpinBox(), QSpinBox()
        self.amount = QLineEdit()
        self.sentence = label()
        self.accuracy = label(tone="faint")
        self.picture: Staircase | None = None
        self.table: ShownTable[Step] = ShownTable(parent=self)
        self.view = QuietView(say.STEPS, wrapped=True)
        self._asked_soon = QTimer(self, singleShot=True, interval=_ASK_AFTER)
        self._shown: Steps | None = None
        self._set_up()
        self.body.addLayout(self._choices())
        self.body.addWidget(self.sentence)
        self._place = QHBoxLayout()
        self.body.addLayout(self._place)
        self.view.setModel(self.table)
        for widget in (self.accuracy, self.view):
            self.body.addWidget(widget)
        self.body.addStretch(1)

    def _set_up(self) -> None:
        for box, value in ((self.low, 50), (self.high, 200)):
            box.setRange(1, 1000)
            box.setSingleStep(10)
            box.setValue(value)
            box.setSuffix(f"{figures.NBSP}%")
            box.setToolTip(say.RANGE_TIP)
            box.setAccessibleName(say.RANGE)
            box.valueChanged.connect(lambda _: self._asked_soon.start())
        self.work.setAccessibleName(say.WORK)
        self.work.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToContents)
        self.work.currentIndexChanged.connect(lambda _: self._ask_within())
        self.amount.setAccessibleName(say.WORKLOAD)
        self.amount.setToolTip(say.TIP_WORKLOAD)
        self.amount.setMaximumWidth(current().px(16))
        self.amount.editingFinished.connect(self._on_typed)
        self._asked_soon.timeout.connect(self._ask_within)

    def _choices(self) -> QHBoxLayout:
        line = QHBoxLayout()
        line.setSpacing(current().px(1))
        parts: tuple[tuple[str, QWidget], ...] = (
            (say.WORK, self.work),
            (say.RANGE, self.low),
            (say.RANGE_TO, self.high),
            (say.WORKLOAD, self.amount),
        )
        for name, widget in parts:
            line.addWidget(QLabel(name))
            line.addWidget(widget)
        line.addStretch(1)
        return line

    def options(self) -> dict[str, Any]:
        """The work chosen and the range around today's workload."""
        work = self.work.currentData()
        today = _ALL
        for candidate in self.document.plan.works:
            if candidate.name == work:
                today = float(sum(candidate.amounts))
        return {
            "work": work,
            "from": today * self.low.value() / 100,
            "to": today * self.high.value() / 100,
        }

    def _ask_within(self) -> None:
        if self.low.value() < self.high.value():
            self.ask()
        else:
            self.sentence.setText(say.NO_RANGE)

    def show_answer(self) -> None:
        """Offer the works of the plan, then ask or show."""
        self._offer_works()
        super().show_answer()

    def _offer_works(self) -> None:
        """Fill the choice of works, keeping the chosen one."""
        names = [work.name for work in self.document.plan.works]
        offered = [self.work.itemData(i) for i in range(1, self.work.count())]
        if self.work.count() and names == offered:
            return
        kept = self.work.currentData()
        self.work.blockSignals(True)
        self.work.clear()
        self.work.addItem(say.ALL_WORKS, None)
        for name in names:
            self.work.addItem(name, name)
        self.work.setCurrentIndex(max(0, self.work.findData(kept)) if kept else min(1, len(names)))
        self.work.blockSignals(False)

    def _picture(self) -> Staircase:
        """The picture, made when first needed: importing pyqtgraph would delay the start of the program."""
        if self.picture is None:
            from desktop.pictures.staircase import Staircase

            self.picture = Staircase()
            self.picture.moved.connect(self._on_moved)
            self._place.addWidget(self.picture)
        return self.picture

    def show_detail(self, detail: Steps | None) -> None:
        """Fill picture, sentence and table."""
        plan = self.answers.plan
        there = detail is not None and plan is not None
        for widget in (self.sentence, self.accuracy, self.view, self.picture):
            if widget is not None:
                widget.setVisible(there)
        if detail is None or plan is None or detail is self._shown:
            return
        self._shown = detail
        self._picture().show_steps(plan, detail)
        self._picture().show()
        self.table.show(detail.steps, step_columns(plan, detail))
        self.view.share_width([3, 4])
        accuracy = say.STEPS_EXACT if detail.exact else say.STEPS_UNPROVED
        self.accuracy.setText(f"{accuracy} {detail.ends}".strip())
        self._on_moved(detail.today)

    def _on_moved(self, amount: float) -> None:
        """Tell crew, cost and the next step at `amount`."""
        plan, steps = self.answers.plan, self._shown
        if plan is None or steps is None:
            return
        self.amount.setText(numbers.shown(Decimal(f"{amount:.9g}")))
        at, cost = step_at(steps.steps, amount), cost_at(steps.steps, amount)
        if at is None or cost is None:
            self.sentence.setText(say.BEYOND_STEPS)
            return
        crew = crew_text(plan, steps.steps[at].crew)
        told = say.crew_at(amount_text(steps, amount), crew, figures.money(cost, plan.currency))
        self.sentence.setText(f"{told} {holds_sentence(plan, steps, amount)}")
        self.view.selectRow(at)

    def _on_typed(self) -> None:
        """Go to the workload typed; what is no number is told and stays."""
        steps = self._shown
        if steps is None or self.picture is None:
            return
        try:
            self.picture.move_to(typed_amount(self.amount.text(), steps))
        except Refused as refusal:
            self.sentence.setText(refusal.reason)
            return
        self._on_moved(self.picture.amount)

    def retouch(self) -> None:
        """Follow a change of theme or zoom."""
        super().retouch()
        self.view.refit()
