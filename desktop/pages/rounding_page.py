"""The Rounding page: every line under every crew, and how a broken one came to be short."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex
from PySide6.QtWidgets import QAbstractItemView, QWidget

from desktop import crew_words as say
from desktop.answers import Answers
from desktop.document import Document
from desktop.pages.page_parts import AnswerPage, heading, label
from desktop.pictures.waterfall import WaterfallPicture
from desktop.pictures.waterfall_bars import waterfall_sentence
from desktop.tables.margin_rows import miss_of
from desktop.tables.margins import MarginDelegate, MarginTable
from desktop.tables.quiet_view import QuietView
from solver.answer import Policy

_ROW_STEPS = 4
_ALL_ROOM = 1000  # the grid takes what there is, up to its own height


class RoundingPage(AnswerPage):
    """What each way of rounding breaks, by how much and through whom."""

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(answers, parent)
        self._document = document
        self._chosen: tuple[str, str | None, Policy] | None = None
        self._placing = False
        self.table = MarginTable(self)
        self.view = QuietView(say.MARGINS, _ROW_STEPS, fitted=False)
        self.view.setItemDelegate(MarginDelegate(self.view))
        self.view.setModel(self.table)
        self.view.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.view.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.view.selectionModel().currentChanged.connect(self._on_current)
        self.title = heading("")
        self.sentence = label()
        self.waterfall = WaterfallPicture()
        for widget, stretch in (
            (self.view, _ALL_ROOM),
            (self.title, 0),
            (self.sentence, 0),
            (self.waterfall, 0),
        ):
            self.body.addWidget(widget, stretch)
        self.body.addStretch(1)

    def show_answer(self) -> None:
        """Fill the grid, and keep the chosen cell where it still is."""
        answer, plan = self.answers.answer, self.answers.plan
        if answer is None or plan is None:
            return
        self.table.show(plan, answer)
        self._placing = True
        self.view.setCurrentIndex(self._place_of_chosen())
        self._placing = False
        self._explain(self.view.currentIndex())

    def _place_of_chosen(self) -> QModelIndex:
        for i, row in enumerate(self.table.rows):
            for j, report in enumerate(self.table.columns):
                if (row.line, row.phase, report.policy) == self._chosen:
                    return self.table.index(i, j)
        return self.table.first_broken()

    def _on_current(self, now: QModelIndex, _before: QModelIndex) -> None:
        if not now.isValid():
            return
        row, report = self.table.rows[now.row()], self.table.columns[now.column()]
        if not self._placing:
            self._chosen = (row.line, row.phase, report.policy)
        self._explain(now)

    def _explain(self, index: QModelIndex) -> None:
        """Title, sentence and waterfall of one cell."""
        answer, plan = self.answers.answer, self.answers.plan
        if not index.isValid() or answer is None or plan is None:
            self.title.setText(say.NOTHING_BROKEN if self.table.rows else "")
            self.sentence.setText("")
            self.waterfall.show_miss(None)
            return
        row, report = self.table.rows[index.row()], self.table.columns[index.column()]
        miss = miss_of(plan, answer, report, row)
        self.title.setText(say.cell_title(row.title, str(report.policy)))
        self.sentence.setText(waterfall_sentence(miss) if miss else self.table.words(index))
        self.waterfall.show_miss(miss)

    def retouch(self) -> None:
        """Follow a change of theme or zoom."""
        super().retouch()
        self.view.refit()
        self.waterfall.updateGeometry()
