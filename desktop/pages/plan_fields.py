"""The head of the Plan page: what the plan is called and in what it counts."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Any

from PySide6.QtCore import QEvent, Qt
from PySide6.QtGui import QKeyEvent, QKeySequence
from PySide6.QtWidgets import QGridLayout, QLabel, QLineEdit, QPlainTextEdit, QWidget

from desktop import messages, theme
from desktop.document import Document
from desktop.tables import numbers
from desktop.tables.numbers import Refused
from desktop.tables.phase_table import put_periods
from solver.plan import Plan
from solver.review import review


class PlanField(QLineEdit):
    """A line of text that leaves undo to the document."""

    def event(self, event: QEvent) -> bool:
        """Ctrl+Z belongs to the plan, also while a field has the focus."""
        if event.type() == QEvent.Type.ShortcutOverride and isinstance(event, QKeyEvent):
            undo = event.matches(QKeySequence.StandardKey.Undo)
            if undo or event.matches(QKeySequence.StandardKey.Redo):
                event.ignore()
                return False
        return super().event(event)


@dataclass(frozen=True)
class Field:
    """One text of the plan: its key, what it is called, what it is for, its share of the width."""

    key: str
    title: str
    tooltip: str
    width: int


FIELDS = (
    Field("title", "Title", "What the job is called; it heads the page that is signed.", 5),
    Field("site", "Site", "Where the work is.", 3),
    Field("prepared_by", "Prepared by", "Who answers for the plan; stands on the page.", 3),
    Field("currency", "Currency", "A code or sign for all money of the plan, for instance EUR.", 1),
    Field("period", "Period", "The unit of time for pay and hours: week, month, shift.", 1),
)


class PlanFields(QWidget):
    """Texts of the plan, each change merged with the ones before into one undo step."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._lines = {field.key: PlanField() for field in FIELDS}
        self.length = PlanField()
        self.length_label = _label("")
        self.notes = NotesField(document)
        self._lay_out()
        for field in FIELDS:
            self._lines[field.key].textEdited.connect(self._writer(field))
        self.length.editingFinished.connect(self._write_length)
        document.changed.connect(self._follow)
        self._follow()

    def line(self, key: str) -> QLineEdit:
        """The field of one text."""
        return self._lines[key]

    def show_place(self, place: str) -> bool:
        """Put the cursor where a problem is; False if it is not here."""
        line = self.length if place == "phases[0].periods" else self._lines.get(place)
        if line is None or not line.isVisible():
            return False
        line.setFocus(Qt.FocusReason.OtherFocusReason)
        line.selectAll()
        return True

    def _lay_out(self) -> None:
        grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(theme.current().px(2))
        grid.setVerticalSpacing(theme.current().px(0.25))
        for at, field in enumerate(FIELDS):
            line = self._lines[field.key]
            line.setToolTip(field.tooltip)
            line.setAccessibleName(field.title)
            line.setMaxLength(500)
            line.setMinimumWidth(theme.current().px(8))
            _place(grid, at, _label(field.title), line)
            grid.setColumnStretch(at, field.width)
        self.length.setToolTip(messages.LENGTH_TIP)
        self.length.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.length.setMinimumWidth(theme.current().px(6))
        _place(grid, len(FIELDS), self.length_label, self.length)
        grid.setColumnStretch(len(FIELDS), 1)
        grid.addWidget(self.notes, 2, 0, 1, len(FIELDS) + 1)

    def _writer(self, field: Field) -> Callable[[str], None]:
        def write(text: str) -> None:
            changed: dict[str, Any] = {field.key: text}
            plan = replace(self._document.plan, **changed)
            self._document.edit(messages.CHANGE.format(what=field.title.lower()), plan, merge=field.key)

        return write

    def _write_length(self) -> None:
        """The length of the only phase; what cannot be one is marked and stays in the field."""
        if self.length.text() == _length(self._document.plan):
            self._mark("")
            return
        try:
            plan = put_periods(self._document.plan, 0, numbers.parse(self.length.text()))
        except Refused as refused:
            self._mark(refused.reason)
            return
        wrong = [p.says for p in review(plan) if p.place == "phases[0].periods"]
        self._mark(wrong[0] if wrong else "")
        if not wrong:
            self._document.edit(messages.CHANGE.format(what="length"), plan)

    def _mark(self, reason: str) -> None:
        self.length.setToolTip(messages.REFUSED_CELL.format(reason=reason) if reason else messages.LENGTH_TIP)
        theme.dress(self.length, tone="short" if reason else "ink")
        prefix = "\u2717 " if reason else ""
        self.length_label.setText(prefix + messages.LENGTH.format(period=self._document.plan.period))
        self.length.setAccessibleDescription(reason)

    def _follow(self) -> None:
        plan = self._document.plan
        for key, line in self._lines.items():
            if line.text() != getattr(plan, key):
                line.setText(getattr(plan, key))
                line.setCursorPosition(0)
        one = len(plan.phases) == 1
        self.length.setVisible(one)
        self.length_label.setVisible(one)
        if one:
            self.length.setText(_length(plan))
            self.length.setAccessibleName(messages.LENGTH.format(period=plan.period))
            self._mark("")


class NotesField(QPlainTextEdit):
    """The notes of the plan, out of sight until they are wanted."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self.setAccessibleName(messages.NOTES)
        self.setPlaceholderText(messages.NOTES_HINT)
        self.setMaximumHeight(theme.current().px(10))
        self.setTabChangesFocus(True)
        self.hide()
        self.textChanged.connect(self._write)
        document.changed.connect(self._follow)
        self._follow()

    def _write(self) -> None:
        plan = replace(self._document.plan, notes=self.toPlainText())
        self._document.edit(messages.CHANGE.format(what="notes"), plan, merge="notes")

    def _follow(self) -> None:
        if self.toPlainText() != self._document.plan.notes:
            self.blockSignals(True)
            self.setPlainText(self._document.plan.notes)
            self.blockSignals(False)


def _length(plan: Plan) -> str:
    return numbers.plain(plan.phases[0].periods)


def _label(text: str) -> QLabel:
    made = QLabel(text)
    made.setTextFormat(Qt.TextFormat.PlainText)
    return theme.dress(made, theme.Size.SMALL, "faint")


def _place(grid: QGridLayout, column: int, label: QLabel, field: QLineEdit) -> None:
    label.setBuddy(field)
    grid.addWidget(label, 0, column)
    grid.addWidget(field, 1, column)
