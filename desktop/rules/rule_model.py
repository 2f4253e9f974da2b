"""The rules of a plan as a Qt model: name and sentence."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt
from PySide6.QtGui import QBrush

from desktop import messages, theme
from desktop.document import Document
from desktop.pictures.copyable import plain_tip
from desktop.rules.kinds import sentence

Index = QModelIndex | QPersistentModelIndex
Role = Qt.ItemDataRole
_NOWHERE = QModelIndex()
_TITLES = (messages.RULE, messages.SAYS)


class RuleModel(QAbstractTableModel):
    """One row per rule; nothing is edited in place, a rule has a dialog."""

    def __init__(self, document: Document, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._rows: tuple[tuple[str, str], ...] = ()
        self._problems: Mapping[str, str] = {}
        self._follow()
        document.changed.connect(self._follow)

    def show_problems(self, problems: Mapping[str, str]) -> None:
        """Mark the rules at these places (place -> what is wrong)."""
        if problems != self._problems:
            self._problems = dict(problems)
            self._refresh()

    def row_of(self, place: str) -> int:
        """The row that a problem's place means, -1 for none."""
        rows = range(len(self._rows))
        return next((row for row in rows if place.split(".")[0] == f"rules[{row}]"), -1)

    def _follow(self) -> None:
        plan = self._document.plan
        rows = tuple((rule.name, sentence(rule, plan)) for rule in plan.rules)
        if rows == self._rows:
            return
        if len(rows) == len(self._rows):
            self._rows = rows
            self._refresh()
            return
        self.beginResetModel()
        self._rows = rows
        self.endResetModel()

    def _refresh(self) -> None:
        if self._rows:
            self.dataChanged.emit(self.index(0, 0), self.index(len(self._rows) - 1, 1))

    def _problem(self, row: int) -> str:
        found = (says for place, says in self._problems.items() if self.row_of(place) == row)
        return next(found, "")

    def rowCount(self, parent: Index = _NOWHERE) -> int:
        """The rules."""
        return 0 if parent.isValid() else len(self._rows)

    def columnCount(self, parent: Index = _NOWHERE) -> int:
        """Name and sentence."""
        return 0 if parent.isValid() else 2

    def data(self, index: Index, role: int = Role.DisplayRole) -> Any:
        """What a view asks about a cell."""
        if not index.isValid() or index.row() >= len(self._rows):
            return None
        text, problem = self._rows[index.row()][index.column()], self._problem(index.row())
        if role == Role.DisplayRole:
            return f"! {text}" if problem and index.column() == 0 else text
        if role == Role.ToolTipRole:
            wrong = messages.PROBLEM_CELL.format(says=problem) if problem else ""
            return plain_tip(wrong or ": ".join(self._rows[index.row()]))
        if role == Role.AccessibleTextRole:
            return f"{text}. {problem}" if problem else text
        if role == Role.ForegroundRole:
            return QBrush(theme.current().short if problem else theme.current().ink)
        return None

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Role.DisplayRole) -> Any:
        """The titles."""
        if orientation == Qt.Orientation.Vertical or not 0 <= section < 2:
            return None
        if role == Role.TextAlignmentRole:
            return int(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignBottom)
        return _TITLES[section] if role == Role.DisplayRole else None
