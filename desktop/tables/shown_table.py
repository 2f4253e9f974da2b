"""A table that is only read: rows of any kind, columns as data."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any, Generic, TypeVar

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt

from desktop.pictures.copyable import plain_tip
from desktop.theme import current

Index = QModelIndex | QPersistentModelIndex
_NOWHERE = QModelIndex()
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


class ShownTable(QAbstractTableModel, Generic[R]):
    """Rows under `columns`; `title(row, at)` names a row at its left."""

    def __init__(
        self,
        columns: Sequence[ShownColumn[R]] = (),
        title: Callable[[R, int], str] = lambda _row, at: str(at + 1),
        parent: Any = None,
    ) -> None:
        super().__init__(parent)
        self._columns = tuple(columns)
        self._title = title
        self._rows: tuple[R, ...] = ()

    @property
    def rows(self) -> tuple[R, ...]:
        """What is shown."""
        return self._rows

    @property
    def columns(self) -> tuple[ShownColumn[R], ...]:
        """How it is shown."""
        return self._columns

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

    def rowCount(self, parent: Index = _NOWHERE) -> int:
        """Number of rows."""
        return 0 if parent.isValid() else len(self._rows)

    def columnCount(self, parent: Index = _NOWHERE) -> int:
        """Number of columns."""
        return 0 if parent.isValid() else len(self._columns)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """What Qt asks of a cell."""
        if not index.isValid() or index.row() >= len(self._rows) or index.column() >= len(self._columns):
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
        return _side(column.left) if role == Qt.ItemDataRole.TextAlignmentRole else None

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:
        """Titles of columns and rows."""
        across = orientation == Qt.Orientation.Horizontal
        if not 0 <= section < (len(self._columns) if across else len(self._rows)):
            return None
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _side(not across or self._columns[section].left)
        if role not in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.ToolTipRole):
            return None
        if not across:
            text = self._title(self._rows[section], section)
            return text if role == Qt.ItemDataRole.DisplayRole else plain_tip(text)
        column = self._columns[section]
        return column.title if role == Qt.ItemDataRole.DisplayRole else plain_tip(column.tip)


def _side(left: bool) -> Qt.AlignmentFlag:
    side = Qt.AlignmentFlag.AlignLeft if left else Qt.AlignmentFlag.AlignRight
    return side | Qt.AlignmentFlag.AlignVCenter
