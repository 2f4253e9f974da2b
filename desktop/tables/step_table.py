"""Hours and pay step by step; what goes into the plan is bold."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import Qt

from desktop import hours_words as say
from desktop.reckoning import Step
from desktop.tables.shown_table import Index, ShownColumn, ShownTable
from desktop.theme import current

STEP_COLUMNS: tuple[ShownColumn[Step], ...] = (
    ShownColumn(say.WHAT, say.TIP_WHAT, lambda step: step.what, left=True),
    ShownColumn(say.HOW, say.TIP_HOW, lambda step: step.how),
    ShownColumn(say.RESULT, say.TIP_RESULT, lambda step: step.result),
)


class StepTable(ShownTable[Step]):
    """One line per step."""

    def __init__(self, parent: Any = None) -> None:
        super().__init__(STEP_COLUMNS, lambda step, _at: step.what, parent)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """What Qt asks of a cell."""
        if role == Qt.ItemDataRole.FontRole and index.isValid() and index.row() < len(self.rows):
            return current().font(bold=self.rows[index.row()].taken)
        return super().data(index, role)
