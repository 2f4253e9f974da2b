"""The view of a table of the plan page: typing, copying, pasting and changing rows by keyboard."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QEvent, QModelIndex, Qt, QTimer, Signal
from PySide6.QtGui import QGuiApplication, QKeyEvent
from PySide6.QtWidgets import (
    QAbstractItemDelegate,
    QAbstractItemView,
    QHeaderView,
    QTableView,
    QWidget,
)

from desktop import messages, theme
from desktop.dialogs.question import Choice, Role, ask
from desktop.tables.cell_editors import CellDelegate
from desktop.tables.clipboard import TooLarge, block_of, settled, text_of
from desktop.tables.grid_model import GridModel
from solver.plan import Plan
from solver.tablecolumns import What

Cell = tuple[int, int]


class Grid(QTableView):
    """A grid in which several cells can be changed at once; each change is one undo step.

    `remarked(sentence)` tells what a planner should know about what was typed or pasted.
    """

    remarked = Signal(str)
    edits_rows = True  # the Edit menu works on it

    def __init__(self, model: GridModel, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._model = model
        self._wider: set[Cell] = set()
        self._growing = QTimer(self, singleShot=True, interval=0)
        self._growing.timeout.connect(self._grow_columns)
        self.setModel(model)
        self.setItemDelegate(CellDelegate(model, self))
        self.setAccessibleName(model.table.title)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ExtendedSelection)
        self.setEditTriggers(
            QAbstractItemView.EditTrigger.DoubleClicked
            | QAbstractItemView.EditTrigger.EditKeyPressed
            | QAbstractItemView.EditTrigger.AnyKeyPressed
        )
        self.setTabKeyNavigation(True)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setWordWrap(False)
        self.verticalHeader().hide()
        header = self.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.Interactive)
        header.setHighlightSections(False)
        model.remarked.connect(self.remarked)
        model.columnsInserted.connect(self.fit_columns)
        model.columnsRemoved.connect(self.fit_columns)
        model.dataChanged.connect(self._on_data)
        model.document.replaced.connect(self.fit_columns)
        self.fit_columns()

    def _on_data(self, first: QModelIndex, last: QModelIndex) -> None:
        """Make room for what became wider; nothing shrinks under the planner's hands."""
        self._wider |= {(r, c) for r in range(first.row(), last.row() + 1) for c in range(last.column() + 1)}
        self._growing.start()

    def _grow_columns(self) -> None:
        header, most = self.horizontalHeader(), 26 * theme.current().px(1)
        cells, self._wider = self._wider, set()
        metrics, air = self.fontMetrics(), theme.current().px(2)
        for row, column in cells:
            wanted = metrics.horizontalAdvance(str(self._model.index(row, column).data() or "")) + air
            if min(wanted, most) > header.sectionSize(column):
                header.resizeSection(column, min(wanted, most))

    def fit_columns(self) -> None:
        """Every column as wide as its widest text, the names a little wider."""
        step = theme.current().px(1)
        self.verticalHeader().setDefaultSectionSize(round(3.25 * step))
        self.resizeColumnsToContents()
        header = self.horizontalHeader()
        header.setStretchLastSection(not self._model.columns[-1].is_number)
        for at in range(self._model.columnCount()):
            least = 17 * step if at == 0 else 7 * step
            header.resizeSection(at, max(least, min(header.sectionSize(at) + step, 26 * step)))

    def whole_width(self) -> int:
        """Pixels that show every column without scrolling."""
        bar = self.verticalScrollBar().sizeHint().width()
        return self.horizontalHeader().length() + bar + 2 * self.frameWidth()

    def whole_height(self) -> int:
        """Pixels that show every row without scrolling."""
        head, bar = self.horizontalHeader().sizeHint(), self.horizontalScrollBar().sizeHint()
        return head.height() + self.verticalHeader().length() + bar.height() + theme.current().px(0.5)

    def show_place(self, place: str) -> bool:
        """Select the cell a problem's place means; False if it is in another table."""
        index = self._model.find(place)
        if not index.isValid():
            return False
        self.setCurrentIndex(index)
        self.scrollTo(index)
        self.setFocus(Qt.FocusReason.OtherFocusReason)
        return True

    # what the edit menu does

    def copy(self) -> None:
        """Put the selected block on the clipboard."""
        rows, columns = self._selected_rows(), self._selected_columns()
        block = [[self._model.plain(row, column) for column in columns] for row in rows]
        if block:
            QGuiApplication.clipboard().setText(text_of(block))

    def cut(self) -> None:
        """Copy, then clear."""
        self.copy()
        self.clear()

    def paste(self) -> None:
        """Type the clipboard's block into the cells from the first selected one on.

        A single cell is typed into every selected cell. Rows are added as needed.
        """
        text = QGuiApplication.clipboard().text()
        if self._mapped_instead(text):
            return
        try:
            block = settled(block_of(text))
        except TooLarge:
            self.remarked.emit(messages.PASTE_TOO_LARGE.format(most=self._model.table.most))
            return
        cells = self._selected_cells()
        if not cells or not block:
            return
        if len(block) == 1 and len(block[0]) == 1:
            self._write(dict.fromkeys(cells, block[0][0]), messages.PASTE_CELLS)
            return
        self._paste_block(block, min(r for r, _ in cells), min(c for _, c in cells))

    def _mapped_instead(self, text: str) -> bool:
        """Whether the clipboard held a whole table with headers, and the planner had it matched by them."""
        known = self._model.table.key
        if known not in list(What):
            return False
        from desktop.pasting import mapped_instead  # not before it is needed: the window starts sooner

        return mapped_instead(self, self._model.document, What(known), text, self.remarked.emit)

    def _paste_block(self, block: tuple[tuple[str, ...], ...], top: int, left: int) -> None:
        room = self._model.columnCount() - left
        cells = {
            (top + r, left + c): text
            for r, line in enumerate(block)
            for c, text in enumerate(line)
            if c < room
        }
        if top + len(block) > self._model.table.most:
            self.remarked.emit(messages.PASTE_TOO_LARGE.format(most=self._model.table.most))
            return
        self._write(cells, messages.PASTE_CELLS)
        cut_off = max(len(line) for line in block) - room
        if cut_off > 0:
            self.remarked.emit(messages.PASTE_TOO_WIDE.format(count=cut_off))

    def clear(self) -> None:
        """Empty the selected cells."""
        self._model.clear(self._selected_cells())

    def fill_down(self) -> None:
        """Type the topmost selected cell of each column into those below it."""
        rows, columns = self._selected_rows(), self._selected_columns()
        fillable = [c for c in columns if self._model.columns[c].key != "name"]
        cells = {(r, c): self._model.plain(rows[0], c) for c in fillable for r in rows[1:]}
        self._write(
            {cell: text for cell, text in cells.items() if cell[0] < self._count()}, messages.FILL_DOWN
        )

    def insert_row(self) -> None:
        """Insert a row above the current one."""
        at = min(max(self.currentIndex().row(), 0), self._count())
        table = self._model.table
        self._change(messages.INSERT_ROW, lambda plan: table.insert(plan, at, 1))
        self.setCurrentIndex(self._model.index(at, 0))

    def duplicate_rows(self) -> None:
        """Copy the selected rows below themselves."""
        rows = self._plan_rows()
        if rows:
            self._change(messages.DUPLICATE_ROWS, lambda plan: self._model.table.duplicate(plan, rows))

    def delete_rows(self) -> None:
        """Delete the selected rows; asks first where something else goes with them."""
        rows = self._plan_rows()
        loss = self._model.table.loss(self._model.document.plan, rows) if rows else ""
        if rows and (not loss or self._confirmed(rows, loss)):
            at = self.currentIndex()
            self._change(messages.DELETE_ROWS, lambda plan: self._model.table.delete(plan, rows))
            self.setCurrentIndex(self._model.index(min(rows[0], self._count()), max(at.column(), 0)))

    def move_rows(self, by: int) -> None:
        """Move the selected rows one place up (-1) or down (1); the selection moves along."""
        rows = self._plan_rows()
        if not rows or rows[0] + by < 0 or rows[-1] + by >= self._count():
            return
        current = self.currentIndex()
        columns = self._selected_columns()
        self._change(messages.MOVE_ROWS, lambda plan: self._model.table.move(plan, rows, by))
        self.setCurrentIndex(self._model.index(current.row() + by, current.column()))
        self._select([(row + by, column) for row in rows for column in columns])

    def _confirmed(self, rows: list[int], loss: str) -> bool:
        names = messages.listed(tuple(self._model.row_names[row] for row in rows))
        choices = (Choice("delete", messages.DELETE), Choice("cancel", messages.KEEP, Role.RejectRole))
        return ask(self, messages.DELETE_QUESTION.format(names=names), loss, choices) == "delete"

    def _change(self, step: str, change: Callable[[Plan], Plan]) -> None:
        self._model.change_rows(step.format(noun=self._model.table.noun), change)

    def _write(self, cells: dict[Cell, str], step: str) -> None:
        if cells:
            self._model.write(cells, step)

    def _drop_refused(self) -> None:
        cells = [cell for cell in self._selected_cells() if self._model.is_refused(*cell)]
        if cells:
            self._model.clear(cells)

    # the selection

    def _count(self) -> int:
        return len(self._model.row_names)

    def _selected_cells(self) -> list[Cell]:
        return sorted((i.row(), i.column()) for i in self.selectedIndexes())

    def _selected_rows(self) -> list[int]:
        return sorted({row for row, _ in self._selected_cells()})

    def _selected_columns(self) -> list[int]:
        return sorted({column for _, column in self._selected_cells()})

    def _plan_rows(self) -> list[int]:
        """The selected rows without the one for a new row."""
        return [row for row in self._selected_rows() if row < self._count()]

    def _at_end(self) -> bool:
        last = self._model.index(self._count(), self._model.columnCount() - 1)
        return self.currentIndex() == last

    def _select(self, cells: list[Cell]) -> None:
        flag = self.selectionModel().SelectionFlag
        self.selectionModel().clearSelection()
        for row, column in cells:
            self.selectionModel().select(self._model.index(row, column), flag.Select)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Return opens the cell; Escape drops a refused entry; Tab at the last cell leaves the grid."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            if self.state() != QAbstractItemView.State.EditingState:  # an open editor passes it on
                self.edit(self.currentIndex())
        elif event.key() == Qt.Key.Key_Escape:
            self._drop_refused()
        elif event.key() == Qt.Key.Key_Tab and self._at_end():
            self.focusNextChild()
        elif event.key() == Qt.Key.Key_Backtab and self.currentIndex() == self._model.index(0, 0):
            self.focusPreviousChild()
        else:
            super().keyPressEvent(event)

    def changeEvent(self, event: QEvent) -> None:
        """Rows and columns follow the zoom."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "_growing"):
            QTimer.singleShot(0, self, self.fit_columns)  # when the header has the font as well

    def closeEditor(self, editor: QWidget, hint: QAbstractItemDelegate.EndEditHint) -> None:
        """After Return the cell below is next, as in a column of figures."""
        super().closeEditor(editor, hint)
        if hint == QAbstractItemDelegate.EndEditHint.SubmitModelCache:
            current = self.currentIndex()
            below = self._model.index(min(current.row() + 1, self._count()), current.column())
            self.setCurrentIndex(below)
