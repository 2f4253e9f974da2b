"""The dialog between a table and the plan: what was understood, what not, and nothing in by halves."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QCheckBox,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QSpinBox,
    QSplitter,
    QVBoxLayout,
    QWidget,
)

from desktop import import_words as say
from desktop import messages
from desktop.dialogs.fitting import fit
from desktop.document import Document
from desktop.intake import Intake
from desktop.pages.page_parts import heading, label
from desktop.tables.column_list import ColumnList
from desktop.tables.fate_table import FateTable
from desktop.tables.quiet_view import QuietView
from desktop.theme import current
from solver.tableimport import Fate, Sheet, What

_MOST_HEADER = 1000  # rows among which the header may be chosen


class ImportDialog(QDialog):
    """Choose the sheet and what its rows are, mend the meaning of columns, see every row's fate, accept.

    `told(sentence)` after a sheet came in.
    """

    told = Signal(str)

    def __init__(
        self,
        document: Document,
        sheets: Sequence[Sheet],
        source: str,
        what: What | None = None,
        parent: QWidget | None = None,
    ) -> None:
        """`source` is what the table is called; `what`: its rows are known to be that."""
        super().__init__(parent)
        self.intake = Intake(document, sheets, what)
        self._source = source
        self.setWindowTitle(f"{say.IMPORT}: {source}")
        self.sheet_box, self.what_box, self.header_box = QComboBox(), QComboBox(), QSpinBox()
        self.remarks, self.columns_said, self.rows_said = label(tone="faint"), label(), label()
        self.columns = ColumnList()
        self.rows = FateTable(self)
        self.row_view = QuietView(say.ROWS, fitted=False)
        self.leave_out = QCheckBox()
        self.accept_button = QPushButton(say.ACCEPT)
        self.next_button = QPushButton(say.ACCEPT_NEXT)
        self.cancel_button = QPushButton(messages.CANCEL)
        self._fill_choices()
        self._lay_out()
        self._connect()
        self._show_table()
        (self.sheet_box if len(self.intake.sheets) > 1 else self.what_box).setFocus()

    # parts

    def _fill_choices(self) -> None:
        for sheet in self.intake.sheets:
            self.sheet_box.addItem(sheet.name)
        for what, title in say.WHAT.items():
            self.what_box.addItem(title, what)
        self.header_box.setSpecialValueText(say.NO_HEADER_ROW)
        for box, name, tip in (
            (self.sheet_box, say.SHEET, ""),
            (self.what_box, say.ROWS_ARE, say.ROWS_ARE_TIP),
            (self.header_box, say.HEADER_ROW, say.HEADER_ROW_TIP),
        ):
            box.setAccessibleName(name)
            box.setToolTip(tip)
        self.row_view.setModel(self.rows)
        self.row_view.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.row_view.share_width([2])

    def _choices(self) -> QHBoxLayout:
        line = QHBoxLayout()
        line.setSpacing(current().px(1))
        several = len(self.intake.sheets) > 1
        parts = (
            (say.SHEET, self.sheet_box),
            (say.ROWS_ARE, self.what_box),
            (say.HEADER_ROW, self.header_box),
        )
        for name, box in parts:
            title = QLabel(name)
            title.setBuddy(box)
            line.addWidget(title)
            line.addWidget(box)
            line.addSpacing(current().px(1))
            if box is self.sheet_box:
                title.setVisible(several)
                box.setVisible(several)
        line.addStretch(1)
        return line

    def _lay_out(self) -> None:
        parts = QSplitter(Qt.Orientation.Vertical)
        parts.addWidget(_part(say.COLUMNS, self.columns_said, self.columns))
        parts.addWidget(_part(say.ROWS, self.rows_said, self.row_view))
        for at in (0, 1):
            parts.setCollapsible(at, False)
            parts.setStretchFactor(at, 1)
        buttons = QDialogButtonBox()
        buttons.addButton(self.cancel_button, QDialogButtonBox.ButtonRole.RejectRole)
        buttons.addButton(self.accept_button, QDialogButtonBox.ButtonRole.AcceptRole)
        buttons.addButton(self.next_button, QDialogButtonBox.ButtonRole.ActionRole)
        buttons.rejected.connect(self.reject)
        foot = QHBoxLayout()
        foot.addWidget(self.leave_out)
        foot.addStretch(1)
        foot.addWidget(buttons)
        layout = QVBoxLayout(self)
        layout.setSpacing(current().px(1))
        layout.addLayout(self._choices())
        layout.addWidget(self.remarks)
        layout.addWidget(parts, 1)
        layout.addLayout(foot)
        fit(self, 132, 84)

    def _connect(self) -> None:
        self.sheet_box.currentIndexChanged.connect(self._on_sheet)
        self.what_box.currentIndexChanged.connect(self._on_what)
        self.header_box.valueChanged.connect(self._on_header)
        self.columns.assigned.connect(self._on_assigned)
        self.leave_out.toggled.connect(self._show_buttons)
        self.accept_button.clicked.connect(self._import_and_close)
        self.next_button.clicked.connect(self._import_and_go_on)

    # choices

    def _on_sheet(self, at: int) -> None:
        self.intake.choose_sheet(at)
        self._show_table()

    def _on_what(self) -> None:
        self.intake.choose_what(What(self.what_box.currentData()))
        self._show_table()

    def _on_header(self, row: int) -> None:
        if row > 0:
            self.intake.choose_header(row - 1)
            self._show_table()

    def _on_assigned(self, column: int, key: str) -> None:
        meaning = next((m for m in self.intake.mapping.choices if m.key == key), None)
        self.intake.assign(column, meaning)
        self.columns.show_meanings(self.intake.mapping)
        self._show_outcome()

    # accepting

    def _import(self) -> None:
        result = self.intake.result
        assert result is not None
        self.intake.accept(without_refused=self.leave_out.isChecked())
        count, left = len(result.understood), len(result.refused)
        self.told.emit(say.imported(self.intake.what, count, left, self._source))

    def _import_and_close(self) -> None:
        self._import()
        self.accept()

    def _import_and_go_on(self) -> None:
        at = self.intake.next_sheet()
        self._import()
        if at is not None:
            self.intake.choose_sheet(at)
            self._show_table()
            self.what_box.setFocus()

    # showing

    def _show_table(self) -> None:
        """Everything, after another table or header was chosen."""
        intake = self.intake
        row = intake.mapping.header_row
        most = min(len(intake.sheet.rows), _MOST_HEADER)
        for box in (self.sheet_box, self.what_box, self.header_box):
            box.blockSignals(True)
        self.sheet_box.setCurrentIndex(intake.at)
        self.what_box.setCurrentIndex(self.what_box.findData(intake.what))
        self.header_box.setRange(0 if row is None else 1, most)
        self.header_box.setValue(0 if row is None else row + 1)
        for box in (self.sheet_box, self.what_box, self.header_box):
            box.blockSignals(False)
        self.remarks.setText(" ".join(intake.sheet.remarks))
        self.remarks.setVisible(bool(intake.sheet.remarks))
        self.columns.show_columns(intake.sheet, intake.mapping)
        self._order_tabs()
        self._show_outcome()

    def _order_tabs(self) -> None:
        """From top to bottom: new choices of columns would stand last."""
        buttons = (self.accept_button, self.next_button, self.cancel_button)
        parts = [self.header_box, *self.columns.boxes(), self.row_view, self.leave_out, *buttons]
        for before, after in pairwise(parts):
            self.setTabOrder(before, after)

    def _show_outcome(self) -> None:
        """What becomes of the rows under the present meanings."""
        intake, mapping = self.intake, self.intake.mapping
        lacking = say.missing(tuple(m.title for m in mapping.missing))
        said = say.columns_summary(mapping.understood, len(mapping.columns))
        self.columns_said.setText(f"{said} {lacking}".strip())
        self.rows.show(intake.rows)
        self.rows_said.setText(self._rows_sentence())
        refused = len(intake.result.refused) if intake.result else 0
        self.leave_out.setChecked(False)  # agreed to anew whenever the refused rows are others
        self.leave_out.setText(say.leave_out(refused))
        self.leave_out.setVisible(refused > 0 and bool(intake.result and intake.result.understood))
        self._show_buttons()

    def _rows_sentence(self) -> str:
        result = self.intake.result
        if result is None:
            return self.intake.refusal
        fates = [row.fate for row in result.rows]
        said = say.rows_summary(*(fates.count(fate) for fate in (Fate.NEW, Fate.CHANGED, Fate.REFUSED)))
        return f"{said} {say.REFUSED_FIRST}" if result.refused else said

    def _show_buttons(self) -> None:
        may = self.intake.may_go_in(self.leave_out.isChecked())
        self.accept_button.setEnabled(may)
        self.next_button.setEnabled(may)
        follows = self.intake.next_sheet() is not None
        self.next_button.setVisible(follows)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Return presses the button that has the focus; in a choice it must not import by accident."""
        focused = self.focusWidget()
        if event.key() not in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            super().keyPressEvent(event)
        elif isinstance(focused, QPushButton):
            focused.click()


def _part(title: str, said: QLabel, view: QWidget) -> QWidget:
    """A heading with its sentence over a view."""
    made = QWidget()
    head = QHBoxLayout()
    head.setSpacing(current().px(2))
    head.addWidget(heading(title))
    head.addWidget(said, 1)
    layout = QVBoxLayout(made)
    layout.setContentsMargins(0, 0, 0, 0)
    layout.setSpacing(current().px(0.5))
    layout.addLayout(head)
    layout.addWidget(view, 1)
    layout.addStretch(0)  # a short view stands at the top
    return made
