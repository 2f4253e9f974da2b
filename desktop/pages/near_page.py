"""The page of near-best crews: every whole crew within a limit, cheapest first, and taking one as own."""

from __future__ import annotations

from decimal import Decimal
from typing import Any

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import (
    QAbstractItemView,
    QDoubleSpinBox,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QSpinBox,
    QWidget,
)

from desktop import crew_words, figures
from desktop import question_words as say
from desktop.answers import Answers
from desktop.document import Document
from desktop.pages.page_parts import label
from desktop.pages.question_page import QuestionPage
from desktop.tables.crew_text import counts_text
from desktop.tables.own_crew import with_own
from desktop.tables.quiet_view import QuietView
from desktop.tables.shown_table import ShownColumn, ShownTable
from desktop.theme import current
from solver.answer import Crew, NearBest, NearCrew
from solver.plan import Plan

_ASK_AFTER = 400  # ms without another change of the limits
_FEW_CENTS = 0.005


def near_columns(plan: Plan) -> list[ShownColumn[NearCrew]]:
    """Costs, a column of head counts per category, who comes and goes, and the tightest line."""
    money = plan.currency
    made: list[ShownColumn[NearCrew]] = [
        ShownColumn(say.in_unit(say.COST, money), say.TIP_NEAR_COST, lambda c: figures.money(c.cost)),
        ShownColumn(say.in_unit(say.OVER, money), say.TIP_OVER, lambda c: figures.money(c.over), bold=True),
    ]
    for category in plan.categories:
        made.append(
            ShownColumn(category.name, say.count_of(category.name), _counts(category.name), tone="exact")
        )
    return [
        *made,
        ShownColumn(say.PEOPLE, say.TIP_PEOPLE, lambda c: figures.people(c.people)),
        ShownColumn(say.JOINERS, crew_words.TIP_JOINERS, lambda c: figures.people(c.joiners)),
        ShownColumn(say.LEAVERS, crew_words.TIP_LEAVERS, lambda c: figures.people(c.leavers)),
        ShownColumn(say.TIGHTEST, say.TIP_TIGHTEST, lambda c: c.tightest, left=True),
    ]


def _counts(name: str) -> Any:
    """Head counts of a category, per phase where they differ."""

    def text(crew: NearCrew) -> str:
        counts = crew.crew.get(name, ())
        return counts_text(counts) if counts else ""

    return text


def own_of(crew: Crew) -> dict[str, tuple[Decimal, ...]]:
    """`crew` as the planner's own."""
    return {name: tuple(Decimal(f"{n:.12g}") for n in counts) for name, counts in crew.items()}


class NearPage(QuestionPage):
    """Your other good crews."""

    question = "near"

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(document, answers, parent)
        self.within, self.most = QDoubleSpinBox(), QSpinBox()
        self.take = QPushButton(say.TAKE_THIS)
        self.take.setToolTip(say.TIP_TAKE_THIS)
        self.told = label(tone="faint")
        self.table: ShownTable[NearCrew] = ShownTable(parent=self)
        self.view = QuietView(say.TAKE_THIS, wrapped=True)
        self._asked_soon = QTimer(self, singleShot=True, interval=_ASK_AFTER)
        self._set_up()
        self.body.addLayout(self._limits())
        for widget in (self.view, self.told):
            self.body.addWidget(widget)
        self.body.addStretch(1)

    def _set_up(self) -> None:
        self.within.setRange(0, 100)
        self.within.setValue(2)
        self.within.setSingleStep(0.5)
        self.within.setSuffix(f"{figures.NBSP}%")
        self.within.setToolTip(say.WITHIN_TIP)
        self.most.setRange(1, 200)
        self.most.setValue(20)
        self.most.setSuffix(say.CREWS_UNIT)
        self.most.setToolTip(say.MOST_TIP)
        for box, name in ((self.within, say.WITHIN), (self.most, say.MOST)):
            box.setAccessibleName(name)
            box.valueChanged.connect(lambda _: self._asked_soon.start())
        self._asked_soon.timeout.connect(self.ask)
        self.view.setModel(self.table)
        self.view.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.view.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.view.activated.connect(lambda _index: self.take_chosen())
        self.take.clicked.connect(self.take_chosen)

    def _limits(self) -> QHBoxLayout:
        line = QHBoxLayout()
        line.setSpacing(current().px(1))
        for name, box, after in ((say.WITHIN, self.within, say.OF_EXACT), (say.MOST, self.most, "")):
            line.addWidget(QLabel(name))
            line.addWidget(box)
            if after:
                line.addWidget(QLabel(after))
                line.addSpacing(current().px(1))
        line.addStretch(1)
        line.addWidget(self.take)
        return line

    def options(self) -> dict[str, Any]:
        """The limits set on the page."""
        return {"within": self.within.value(), "most": self.most.value()}

    def show_detail(self, detail: NearBest | None) -> None:
        """Fill the table."""
        plan = self.answers.plan
        there = detail is not None and plan is not None
        self.view.setVisible(there)
        self.told.setVisible(there)
        self.take.setEnabled(there and detail is not None and bool(detail.crews))
        if detail is None or plan is None:
            return
        if self.table.rows != detail.crews or not self.table.columns:
            self.table.show(detail.crews, near_columns(plan))
            self.view.share_width([len(self.table.columns) - 1])
            if detail.crews:
                self.view.setCurrentIndex(self.table.index(0, 0))
            self.told.setText(_completeness(detail))

    def chosen(self) -> NearCrew | None:
        """The crew under the cursor."""
        index = self.view.currentIndex()
        return self.table.rows[index.row()] if index.isValid() else None

    def take_chosen(self) -> None:
        """Copy the chosen crew into the own crew."""
        crew = self.chosen()
        if crew is None:
            return
        self.document.edit(say.EDIT_TAKE, with_own(self.document.plan, own_of(crew.crew)))
        over = figures.money(crew.over, self.document.plan.currency)
        self.told.setText(say.taken(over) if crew.over > _FEW_CENTS else say.TAKEN_FREE)

    def retouch(self) -> None:
        """Follow a change of theme or zoom."""
        super().retouch()
        self.view.refit()


def _completeness(detail: NearBest) -> str:
    if not detail.complete:
        return say.NOT_COMPLETE
    return say.NO_OTHER if len(detail.crews) < 2 else say.COMPLETE
