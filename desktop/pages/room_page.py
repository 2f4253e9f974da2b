"""The page on room to move: how far lines can tighten, and which loosening makes a cheaper crew possible."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QModelIndex
from PySide6.QtWidgets import QAbstractItemView, QWidget

from desktop import crew_words, figures
from desktop import question_words as say
from desktop.answers import Answers
from desktop.document import Document
from desktop.pages.page_parts import heading, label
from desktop.pages.question_page import QuestionPage
from desktop.tables.crew_text import changes_text
from desktop.tables.quiet_view import QuietView
from desktop.tables.shown_table import ShownColumn, ShownTable
from solver.answer import Crew, LineRoom, PayRange, Room
from solver.plan import Plan


def line_columns(plan: Plan, exact: Crew) -> list[ShownColumn[LineRoom]]:
    """What is told of each line: exact room first, the price for fractional people last and apart."""
    return [
        ShownColumn(say.TIGHTEN, say.TIP_TIGHTEN, lambda r: figures.quantity(r.tighten, r.unit)),
        ShownColumn(say.LOOSEN, say.TIP_LOOSEN, _loosen),
        ShownColumn(
            say.in_unit(say.WOULD_SAVE, plan.currency),
            say.TIP_WOULD_SAVE,
            lambda r: figures.money(r.saving) if r.saving else "",
            bold=True,
        ),
        ShownColumn(
            say.NEXT_CREW, say.TIP_NEXT_CREW, lambda r: _next_crew(plan, exact, r), left=True, tone="exact"
        ),
        ShownColumn(
            say.in_unit(say.DUAL, plan.currency),
            say.TIP_DUAL,
            lambda r: figures.number(r.dual_price),
            tone="fractional",
        ),
        ShownColumn(say.DUAL_RANGE, say.TIP_DUAL_RANGE, _dual_range, tone="fractional"),
    ]


def _loosen(room: LineRoom) -> str:
    return figures.quantity(room.loosen, room.unit) if room.loosen is not None else say.NOT_BY_LOOSENING


def _next_crew(plan: Plan, exact: Crew, room: LineRoom) -> str:
    return changes_text(plan, exact, room.next_crew) if room.next_crew else ""


def _dual_range(room: LineRoom) -> str:
    if not room.dual_price:
        return ""
    return say.from_to(_limit(room.dual_from), _limit(room.dual_to))


def _limit(x: float | None) -> str:
    """One end of a range; here zero is a number, not nothing."""
    if x is None:
        return say.NO_LIMIT
    return figures.number(x) if x else "0"


def pay_columns(plan: Plan) -> list[ShownColumn[PayRange]]:
    """The pay of a category, and the range in which the exact crew stays cheapest."""

    def limit(x: float | None) -> str:
        return say.NO_LIMIT if x is None else figures.money(x)

    return [
        ShownColumn(
            say.in_unit(say.PAY_NOW, plan.currency),
            say.TIP_PAY_NOW,
            lambda r: figures.money(plan.category(r.category).pay),
        ),
        ShownColumn(say.PAY_FROM, say.TIP_PAY_FROM, lambda r: limit(r.from_)),
        ShownColumn(say.PAY_TO, say.TIP_PAY_TO, lambda r: limit(r.to)),
    ]


def by_saving(lines: Sequence[LineRoom]) -> list[LineRoom]:
    """What saves most first; lines whose loosening saves nothing in the order of the plan."""
    return sorted(lines, key=lambda r: -(r.saving or 0.0))


class RoomPage(QuestionPage):
    """Which rule to talk about, and by how much."""

    question = "room"

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(document, answers, parent)
        self.lines: ShownTable[LineRoom] = ShownTable(title=self._line_title, parent=self)
        self.pay: ShownTable[PayRange] = ShownTable(title=lambda r, _at: r.category, parent=self)
        self.line_view, self.pay_view = QuietView(say.ROOM_LINES, wrapped=True), QuietView(say.ROOM_PAY)
        self.sentence = label(say.CHOOSE_LINE)
        for view, model in ((self.line_view, self.lines), (self.pay_view, self.pay)):
            view.setModel(model)
            view.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
            view.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.line_view.selectionModel().currentRowChanged.connect(self._on_row)
        self._parts: tuple[QWidget, ...] = (
            *(label(say.ROOM_INTRO, tone="faint"), self.sentence, self.line_view),
            *(heading(say.ROOM_PAY), label(say.PAY_INTRO, tone="faint"), self.pay_view),
        )
        for widget in self._parts:
            self.body.addWidget(widget)
        self.body.addStretch(1)

    def _line_title(self, room: LineRoom, _at: int) -> str:
        plan = self.answers.plan
        several = plan is not None and len(plan.phases) > 1
        return crew_words.in_phase(room.line, room.phase) if room.phase and several else room.line

    def show_detail(self, detail: Room | None) -> None:
        """Fill both tables."""
        plan, answer = self.answers.plan, self.answers.answer
        exact = answer.exact if answer is not None else None
        for widget in self._parts:
            widget.setVisible(detail is not None and plan is not None)
        if (
            detail is None
            or plan is None
            or exact is None
            or self.lines.rows == tuple(by_saving(detail.lines))
        ):
            return
        self.lines.show(by_saving(detail.lines), line_columns(plan, exact.crew))
        self.pay.show(detail.pay, pay_columns(plan))
        self.line_view.share_width(i for i, column in enumerate(self.lines.columns) if column.left)
        self.line_view.setCurrentIndex(self.lines.index(0, 0))

    def _on_row(self, now: QModelIndex, _before: QModelIndex) -> None:
        self.sentence.setText(self.lines.rows[now.row()].says if now.isValid() else say.CHOOSE_LINE)

    def retouch(self) -> None:
        """Follow a change of theme or zoom."""
        super().retouch()
        for view in (self.line_view, self.pay_view):
            view.refit()
