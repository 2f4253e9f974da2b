"""The list of rules as sentences, with everything that can be done to them by keyboard."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QModelIndex, QPersistentModelIndex, QPoint, QSize, Qt, Signal
from PySide6.QtGui import QGuiApplication, QKeyEvent, QPainter, QPaintEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QDialog,
    QHeaderView,
    QMenu,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QTableView,
    QWidget,
)

from desktop import messages, theme
from desktop.document import Document
from desktop.edits import rules
from desktop.rules.kind import RuleKind
from desktop.rules.kinds import KINDS, kind_of
from desktop.rules.rule_dialog import RuleDialog
from desktop.rules.rule_model import RuleModel
from desktop.tables.clipboard import text_of
from solver.plan import Rule

_NAMES = 19  # width of the column of names, in steps of the grid


class AiryDelegate(QStyledItemDelegate):
    """Sentences of several lines with some air between them."""

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        """A little higher than the text."""
        return super().sizeHint(option, index) + QSize(0, theme.current().px(1))


class RuleList(QTableView):
    """Rules: Return edits one, Delete deletes, the edit menu copies, pastes, duplicates and moves.

    `remarked(sentence)` tells what a planner should know about what was pasted.
    """

    remarked = Signal(str)
    edits_rows = True  # the Edit menu works on it

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._model = RuleModel(document, self)
        self.setModel(self._model)
        self.setAccessibleName(messages.RULES)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setTabKeyNavigation(False)
        self.setShowGrid(False)
        self.setWordWrap(True)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.verticalHeader().hide()
        self.verticalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        self.setItemDelegate(AiryDelegate(self))
        header = self.horizontalHeader()
        header.setHighlightSections(False)
        header.setSectionResizeMode(1, QHeaderView.ResizeMode.Stretch)
        header.resizeSection(0, theme.current().px(_NAMES))
        self.doubleClicked.connect(self._edit_at)

    @property
    def rule_model(self) -> RuleModel:
        """What is shown."""
        return self._model

    def show_place(self, place: str) -> bool:
        """Select the rule a problem's place means; False if it means none."""
        row = self._model.row_of(place)
        if row < 0:
            return False
        self.selectRow(row)
        self.setFocus(Qt.FocusReason.OtherFocusReason)
        return True

    def whole_height(self) -> int:
        """Pixels that show every rule without scrolling."""
        rows = max(self.verticalHeader().length(), theme.current().px(4))
        return self.horizontalHeader().sizeHint().height() + rows

    def menu(self) -> QMenu:
        """One entry per kind of rule that can be added."""
        menu = QMenu(self)
        menu.setToolTipsVisible(True)
        for kind in KINDS:
            action = menu.addAction(kind.title)
            action.setToolTip(kind.tooltip)
            action.triggered.connect(lambda _checked=False, k=kind: self.add(k))
        return menu

    def add(self, kind: RuleKind) -> None:
        """Ask for a new rule of `kind`."""
        start = rules.named_apart(self._document.plan, kind.new(self._document.plan))
        made = self._asked(kind, start, None)
        if made is not None:
            self._document.edit(messages.INSERT_ROW.format(noun="rule"), rules.add(self._document.plan, made))
            self.selectRow(self._model.rowCount() - 1)

    def edit_current(self) -> None:
        """Open the current rule."""
        row = self.currentIndex().row()
        if 0 <= row < len(self._document.plan.rules):
            rule = self._document.plan.rules[row]
            made = self._asked(kind_of(rule), rule, row)
            if made is not None:
                plan = rules.put(self._document.plan, row, made)
                self._document.edit(messages.CHANGE.format(what="rule"), plan)

    def _asked(self, kind: RuleKind, rule: Rule, index: int | None) -> Rule | None:
        dialog = RuleDialog(self._document.plan, kind, rule, index, self.window())
        taken = dialog.exec() == QDialog.DialogCode.Accepted
        dialog.deleteLater()
        return dialog.rule if taken else None

    # what the edit menu does

    def copy(self) -> None:
        """Put the selected rules on the clipboard, as text."""
        texts = [[str(self._model.index(row, c).data()) for c in (0, 1)] for row in self._rows()]
        if texts:
            QGuiApplication.clipboard().setText(text_of(texts))

    def paste(self) -> None:
        """Show what was understood of a table of rules."""
        from desktop.pasting import map_pasted  # not before it is needed: the window starts sooner
        from solver.tableimport import UnreadableTable, What, pasted_table

        try:
            sheet = pasted_table(QGuiApplication.clipboard().text())
        except UnreadableTable as refused:
            self.remarked.emit(str(refused))
        else:
            map_pasted(self, self._document, What.RULES, sheet, self.remarked.emit)

    def insert_row(self) -> None:
        """Ask which kind of rule to add."""
        self.menu().popup(self.viewport().mapToGlobal(QPoint(0, 0)))

    def duplicate_rows(self) -> None:
        """Copy the selected rules below themselves."""
        if rows := self._rows():
            plan = rules.duplicate(self._document.plan, rows)
            self._document.edit(messages.DUPLICATE_ROWS.format(noun="rule"), plan)

    def delete_rows(self) -> None:
        """Delete the selected rules; undo brings them back."""
        if rows := self._rows():
            plan = rules.delete(self._document.plan, rows)
            self._document.edit(messages.DELETE_ROWS.format(noun="rule"), plan)
            self.selectRow(min(rows[0], self._model.rowCount() - 1))

    def clear(self) -> None:
        """The Delete key: a rule has no cells to empty, so it goes."""
        self.delete_rows()

    def move_rows(self, by: int) -> None:
        """Move the selected rules one place up (-1) or down (1)."""
        rows = self._rows()
        plan = rules.move(self._document.plan, rows, by)
        if plan.rules != self._document.plan.rules:
            self._document.edit(messages.MOVE_ROWS.format(noun="rule"), plan)
            self.clearSelection()
            for row in rows:
                self._select_also(row + by)

    def _select_also(self, row: int) -> None:
        flags = self.selectionModel().SelectionFlag
        index = self._model.index(row, 0)
        self.selectionModel().setCurrentIndex(index, flags.Select | flags.Rows)

    def _rows(self) -> list[int]:
        return sorted({i.row() for i in self.selectedIndexes()})

    def _edit_at(self, _index: QModelIndex) -> None:
        self.edit_current()

    def paintEvent(self, event: QPaintEvent) -> None:
        """Where there are no rules, say which there could be."""
        super().paintEvent(event)
        if self._model.rowCount() == 0:
            painter = QPainter(self.viewport())
            painter.setPen(theme.current().faint)
            step = theme.current().px(0.5)
            room = self.viewport().rect().adjusted(step, step, -step, -step)
            painter.drawText(room, int(Qt.TextFlag.TextWordWrap), messages.NO_RULES)
            painter.end()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Return and F2 open the rule."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_F2):
            self.edit_current()
        else:
            super().keyPressEvent(event)

    def changeEvent(self, event: QEvent) -> None:
        """The column of names follows the zoom."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "_model"):
            self.horizontalHeader().resizeSection(0, theme.current().px(_NAMES))
            self.resizeRowsToContents()
