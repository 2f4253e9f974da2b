"""The rows of a table to be imported: what becomes of each, and why."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import Qt

from desktop import import_words as say
from desktop.tables.shown_table import Index, ShownColumn, ShownTable
from desktop.theme import current
from solver.tableimport import Fate, RowResult

_FATES = {Fate.NEW: say.NEW, Fate.CHANGED: say.CHANGED, Fate.REFUSED: say.REFUSED}
_SENTENCES = " \u00b7 "


def _why(row: RowResult) -> str:
    return _SENTENCES.join(row.reasons or row.remarks)


FATE_COLUMNS: tuple[ShownColumn[RowResult], ...] = (
    ShownColumn(say.NAME, say.TIP_NAME, lambda row: row.name, left=True),
    ShownColumn(say.FATE, say.TIP_FATE, lambda row: _FATES[row.fate], left=True),
    ShownColumn(say.WHY, say.TIP_WHY, _why, left=True),
)


class FateTable(ShownTable[RowResult]):
    """Refused rows in the colour of what is short, besides their sign."""

    def __init__(self, parent: Any = None) -> None:
        super().__init__(FATE_COLUMNS, lambda row, _at: str(row.row), parent)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """What Qt asks of a cell."""
        if role == Qt.ItemDataRole.ForegroundRole and index.isValid() and index.row() < len(self.rows):
            refused = self.rows[index.row()].fate is Fate.REFUSED
            return current().short if refused else current().ink
        return super().data(index, role)
