"""The columns of a table to be imported: what stands in each, what it is taken as, and why."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QComboBox,
    QHeaderView,
    QTableWidget,
    QTableWidgetItem,
    QWidget,
)

from desktop import import_words as say
from desktop.pictures.copyable import plain_tip
from desktop.theme import current
from solver.tableimport import MappedColumn, Mapping, Meaning, Sheet, column_letters

_EXAMPLES = 3  # entries of a column that are shown
_LONGEST = 60  # characters of them
_HEADERS = (say.COLUMN, say.FIRST_ENTRIES, say.TAKEN_AS, say.UNDERSTOOD)
_COMBO, _SAYS = 2, 3


class MeaningBox(QComboBox):
    """What one column means; the wheel scrolls the list of columns, never the choice."""

    def __init__(self, column: MappedColumn, choices: tuple[Meaning, ...]) -> None:
        super().__init__()
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setAccessibleName(say.MEANING_OF.format(column=column_name(column)))
        self.addItem(say.LEFT_OUT, None)
        for meaning in choices:
            self.addItem(meaning.title, meaning.key)
        self.show_meaning(column)

    def show_meaning(self, column: MappedColumn) -> None:
        """Show what the column is taken as, telling nobody."""
        self.blockSignals(True)
        self.setCurrentIndex(self.findData(column.meaning.key) if column.meaning else 0)
        self.blockSignals(False)

    def wheelEvent(self, event: QWheelEvent) -> None:
        """Left to the list."""
        event.ignore()


class ColumnList(QTableWidget):
    """One line per column; `assigned(column, key)` when one is given a meaning ("" leaves it out)."""

    assigned = Signal(int, str)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(0, len(_HEADERS), parent)
        self.setAccessibleName(say.COLUMNS)
        self.setHorizontalHeaderLabels(list(_HEADERS))
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionMode(QAbstractItemView.SelectionMode.NoSelection)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # its combo boxes have the focus
        self.setTabKeyNavigation(False)
        self.setWordWrap(False)
        self.setShowGrid(False)
        self.verticalHeader().hide()
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        header = self.horizontalHeader()
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignBottom)
        header.setHighlightSections(False)
        for at, share in enumerate((24, 24, 38)):
            header.resizeSection(at, current().px(share))
        header.setSectionResizeMode(_SAYS, QHeaderView.ResizeMode.Stretch)

    def show_columns(self, sheet: Sheet, mapping: Mapping) -> None:
        """Another table, or the same one under another header."""
        self.verticalHeader().setDefaultSectionSize(current().px(3.75))
        self.setRowCount(0)
        self.setRowCount(len(mapping.columns))
        for row, column in enumerate(mapping.columns):
            self._put(row, 0, column_name(column))
            self._put(row, 1, _examples(sheet, mapping, column))
            self._put(row, _SAYS, "")
            self.setCellWidget(row, _COMBO, self._box(column, mapping.choices))
        self.show_meanings(mapping)

    def show_meanings(self, mapping: Mapping) -> None:
        """What the columns mean now."""
        for row, column in enumerate(mapping.columns):
            self.box(row).show_meaning(column)
            sign, tone = _sign(column)
            item = self._put(row, _SAYS, f"{sign} {column.says}")
            item.setForeground(getattr(current(), tone))

    def box(self, row: int) -> MeaningBox:
        """The choice of one column."""
        found = self.cellWidget(row, _COMBO)
        assert isinstance(found, MeaningBox)
        return found

    def boxes(self) -> list[MeaningBox]:
        """All choices, from the first column to the last."""
        return [self.box(row) for row in range(self.rowCount())]

    def says(self, row: int) -> str:
        """How a column was understood."""
        item = self.item(row, _SAYS)
        return item.text() if item is not None else ""

    def _box(self, column: MappedColumn, choices: tuple[Meaning, ...]) -> MeaningBox:
        box = MeaningBox(column, choices)
        box.currentIndexChanged.connect(
            lambda _index, at=column.index: self.assigned.emit(at, box.currentData() or "")
        )
        return box

    def _put(self, row: int, column: int, text: str) -> QTableWidgetItem:
        item = QTableWidgetItem(text)
        item.setFlags(Qt.ItemFlag.ItemIsEnabled)
        item.setToolTip(plain_tip(text))
        self.setItem(row, column, item)
        return item


def column_name(column: MappedColumn) -> str:
    """`B  Pay`."""
    return f"{column_letters(column.index)}  {column.header or say.NO_HEADER}"


def _sign(column: MappedColumn) -> tuple[str, str]:
    if column.meaning is not None:
        return say.UNDERSTOOD_SIGN, "ink"
    if column.says.startswith("not understood") and column.header:
        return say.NOT_UNDERSTOOD_SIGN, "short"
    return say.LEFT_OUT_SIGN, "faint"


def _examples(sheet: Sheet, mapping: Mapping, column: MappedColumn) -> str:
    """The first entries below the header."""
    start = 0 if mapping.header_row is None else mapping.header_row + 1
    found: list[str] = []
    for row in range(start, len(sheet.rows)):
        text = str(sheet.cell(row, column.index)).strip()
        if text:
            found.append(text)
        if len(found) == _EXAMPLES:
            break
    shown = " \u00b7 ".join(found).replace("\n", " ")
    return shown if len(shown) <= _LONGEST else f"{shown[: _LONGEST - 1]}\u2026"
