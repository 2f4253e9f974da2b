"""The Crew page: the exact head counts and the people tally, what binds, and all crews side by side."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import (
    QAbstractItemView,
    QBoxLayout,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from desktop import crew_words as say
from desktop.answers import Answers, Status
from desktop.document import Document
from desktop.pages.crew_notes import binding_lines, run_lines
from desktop.pages.page_parts import AnswerPage, heading, label
from desktop.pictures.sideways import Sideways
from desktop.pictures.tally import TallyPicture
from desktop.pictures.tally_layout import tally_of
from desktop.tables.crews import CrewTable
from desktop.tables.quiet_view import QuietView
from desktop.theme import Size, current
from solver.answer import State

_PHASES_BESIDE_NOTES = 6  # more of them take the whole width, and the notes stand below


class CrewPage(AnswerPage):
    """What the plan comes to: who, how many, and what every other crew would be.

    `remarked(text)` when an entry was refused, for the foot of the window.
    """

    remarked = Signal(str)

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(answers, parent)
        self._document = document
        self.tally = TallyPicture()
        self.tally_view = Sideways(self.tally)
        self.binding = label()
        self.run = label()
        self.impossible = label()
        self.table = CrewTable(document, self)
        self.view = QuietView(say.ALL_CREWS)
        self.view.setModel(self.table)
        self.view.setSelectionMode(QAbstractItemView.SelectionMode.ContiguousSelection)
        self.refusal = label(size=Size.SMALL, tone="short")
        self.from_exact = QPushButton(say.FROM_EXACT)
        self.from_exact.setToolTip(say.TIP_FROM_EXACT)
        self.clear_own = QPushButton(say.CLEAR_OWN)
        self._connect()
        self._fill()

    def _connect(self) -> None:
        self.from_exact.clicked.connect(self.table.start_from_exact)
        self.clear_own.clicked.connect(self.table.clear_own)
        self.table.told.connect(self._on_told)
        self._document.changed.connect(self._show_table)
        self.answers.detail_changed.connect(self._on_detail)

    def _fill(self) -> None:
        self.body.addWidget(self.impossible)
        self._top = QHBoxLayout()
        self._top.setSpacing(current().px(4))
        self._top.addWidget(self.tally_view, 3, Qt.AlignmentFlag.AlignTop)
        self._top.addLayout(self._notes(), 1)
        self.body.addLayout(self._top)
        self.body.addLayout(self._table_bar())
        self.body.addWidget(self.view)
        self.body.addWidget(self.refusal)
        self.refusal.hide()
        self.body.addStretch(1)

    def _notes(self) -> QVBoxLayout:
        notes = QVBoxLayout()
        notes.setSpacing(current().px(0.5))
        notes.setContentsMargins(0, current().px(1), 0, 0)
        self._binding_title, self._run_title = heading(say.WHAT_BINDS), heading(say.HOW_IT_IS_RUN)
        for widget in (self._binding_title, self.binding, self._run_title, self.run):
            notes.addWidget(widget)
        notes.addStretch(1)
        return notes

    def _table_bar(self) -> QHBoxLayout:
        bar = QHBoxLayout()
        bar.addWidget(heading(say.ALL_CREWS))
        bar.addStretch(1)
        hint = QLabel(say.OWN_HINT)
        hint.setTextFormat(Qt.TextFormat.PlainText)
        bar.addWidget(hint)
        bar.addWidget(self.from_exact)
        bar.addWidget(self.clear_own)
        return bar

    def notice_text(self) -> str:
        """As on every page; and whether the crew is only the best one found."""
        answer = self.answers.answer
        said = super().notice_text()
        if said or answer is None or answer.exact is None or answer.state is not State.BEST_FOUND:
            return said
        return say.NOTICE_SO_FAR if self.answers.status is Status.SOLVING else say.NOTICE_BEST_FOUND

    def show_answer(self) -> None:
        """Fill tally, notes and table from the latest answer."""
        answer, plan = self.answers.answer, self.answers.plan
        if answer is None or plan is None:
            return
        possible = answer.exact is not None
        self.impossible.setVisible(answer.conflict is not None)
        if answer.conflict is not None:
            self.impossible.setText(say.conflict([c.says for c in answer.conflict.lines]))
        self.tally_view.setVisible(possible or answer.fractional is not None)
        exact = answer.exact.crew if answer.exact else None
        proved = answer.state is not State.BEST_FOUND
        self.tally.show_tally(tally_of(plan, answer.fractional, exact, proved=proved))
        self.tally_view.fit()
        many = len(plan.phases) > _PHASES_BESIDE_NOTES
        self._top.setDirection(QBoxLayout.Direction.TopToBottom if many else QBoxLayout.Direction.LeftToRight)
        self._top.setSpacing(current().px(1 if many else 4))
        self._show_notes()
        self._show_table()

    def _show_notes(self) -> None:
        answer, plan = self.answers.answer, self.answers.plan
        if answer is None or plan is None:
            return
        binding = binding_lines(plan, answer, self.answers.detail("room"))
        self.binding.setText(say.bulleted(binding))
        run = run_lines(plan, answer)
        self.run.setText(say.bulleted(run))
        for widget, there in ((self._binding_title, binding), (self._run_title, run)):
            widget.setVisible(bool(there))

    def _show_table(self) -> None:
        self.table.show(self.answers.answer)
        answer = self.answers.answer
        self.from_exact.setEnabled(answer is not None and answer.exact is not None)
        self.clear_own.setEnabled(bool(self._document.plan.own))

    def _on_detail(self, question: str) -> None:
        if question == "room":
            self._show_notes()

    def _on_told(self, text: str) -> None:
        self.refusal.setText(text)
        self.refusal.setVisible(bool(text))
        if text:
            self.remarked.emit(text)

    def retouch(self) -> None:
        """Follow a change of theme or zoom."""
        super().retouch()
        self.view.refit()
        self.tally.updateGeometry()
        self.tally_view.fit()
