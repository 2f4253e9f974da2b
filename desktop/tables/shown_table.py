"""A table that is only read: rows of any kind, columns as data."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any, Generic, TypeVar

from PySide6.QtCore import Qt

from desktop.pictures.copyable import plain_tip
from desktop.tables.shown_model import Index as Index
from desktop.tables.shown_model import ShownModel, row_title_side, side
from desktop.theme import current

R = TypeVar("R")


@dataclass(frozen=True)
class ShownColumn(Generic[R]):
    """A title, what it means with its unit, and the text of a row. Texts (`left`) stand at the left."""

    title: str
    tip: str
    text: Callable[[R], str]
    left: bool = False
    tone: str = "ink"
    bold: bool = False


class ShownTable(ShownModel[R, ShownColumn[R]]):
    """Rows under `columns`; `title(row, at)` names a row at its left."""

    def __init__(
        self,
        columns: Sequence[ShownColumn[R]] = (),
        title: Callable[[R, int], str] = lambda _row, at: str(at + 1),
        parent: Any = None,
    ) -> None:
        super().__init__(columns, parent)
        self._title = title

    def show(self, rows: Sequence[R], columns: Sequence[ShownColumn[R]] | None = None) -> None:
        """Show other rows, perhaps under other columns."""
        self.beginResetModel()
        self._rows = tuple(rows)
        if columns is not None:
            self._columns = tuple(columns)
        self.endResetModel()

    def words(self, index: Index) -> str:
        """A cell with its titles."""
        row, column = self._rows[index.row()], self._columns[index.column()]
        return f"{self._title(row, index.row())}, {column.title}: {column.text(row)}".replace("\n", " ")

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """What Qt asks of a cell."""
        if not self.has(index):
            return None
        row, column = self._rows[index.row()], self._columns[index.column()]
        if role == Qt.ItemDataRole.DisplayRole:
            return column.text(row)
        if role == Qt.ItemDataRole.ToolTipRole:
            return plain_tip(column.text(row))
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return self.words(index)
        if role == Qt.ItemDataRole.ForegroundRole:
            return getattr(current(), column.tone)
        if role == Qt.ItemDataRole.FontRole:
            return current().font(bold=column.bold)
        return side(left=column.left) if role == Qt.ItemDataRole.TextAlignmentRole else None

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:
        """Titles of columns and rows."""
        across = orientation == Qt.Orientation.Horizontal
        if not 0 <= section < (len(self._columns) if across else len(self._rows)):
            return None
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return side(left=self._columns[section].left) if across else row_title_side()
        if role not in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.ToolTipRole):
            return None
        if not across:
            text = self._title(self._rows[section], section)
            return text if role == Qt.ItemDataRole.DisplayRole else plain_tip(text)
        column = self._columns[section]
        return column.title if role == Qt.ItemDataRole.DisplayRole else plain_tip(column.tip)
