"""What tables that show rows under columns, both as data, have in common."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, Generic, TypeVar

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt

Index = QModelIndex | QPersistentModelIndex
_NOWHERE = QModelIndex()
R = TypeVar("R")
C = TypeVar("C")


class ShownModel(QAbstractTableModel, Generic[R, C]):
    """Rows under columns; subclasses say what their cells and titles show."""

    def __init__(self, columns: Sequence[C] = (), parent: Any = None) -> None:
        super().__init__(parent)
        self._columns = tuple(columns)
        self._rows: tuple[R, ...] = ()

    @property
    def columns(self) -> tuple[C, ...]:
        """What stands across."""
        return self._columns

    @property
    def rows(self) -> tuple[R, ...]:
        """What stands down the left."""
        return self._rows

    def has(self, index: Index) -> bool:
        """Whether there is such a cell."""
        return index.isValid() and index.row() < len(self._rows) and index.column() < len(self._columns)

    def rowCount(self, parent: Index = _NOWHERE) -> int:
        """Number of rows."""
        return 0 if parent.isValid() else len(self._rows)

    def columnCount(self, parent: Index = _NOWHERE) -> int:
        """Number of columns."""
        return 0 if parent.isValid() else len(self._columns)


def row_title_side() -> int:
    """Titles of rows stand at the left and take several lines where they are long."""
    return side(left=True).value | Qt.TextFlag.TextWordWrap.value


def side(*, left: bool) -> Qt.AlignmentFlag:
    """Where a text stands in its cell: at the left or, as numbers do, at the right."""
    return Qt.AlignmentFlag.AlignVCenter | (
        Qt.AlignmentFlag.AlignLeft if left else Qt.AlignmentFlag.AlignRight
    )
