"""A table of the plan page as a Qt model: a thin adapter over the document's frozen plan."""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping, Sequence
from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QBrush

from desktop import messages, theme
from desktop.document import Document, Refusal
from desktop.pictures.copyable import plain_tip
from desktop.tables import numbers
from desktop.tables.column import Column
from desktop.tables.entries import Entry, enter, restored
from desktop.tables.table import Table
from solver.plan import Plan
from solver.review import quoted

Index = QModelIndex | QPersistentModelIndex
Role = Qt.ItemDataRole

MARK = Role.UserRole  # "refused", "problem" or None: the delegate's sign
_NOWHERE = QModelIndex()
_REFUSED_SIGN = "\u2717 "  # broken and workable are never told by colour alone
_PROBLEM_SIGN = "! "
# combined once: views ask for them thousands of times, and combining them is slow
_FLAGS = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemIsEditable
_LEFT, _RIGHT = (
    int(side | Qt.AlignmentFlag.AlignVCenter)
    for side in (Qt.AlignmentFlag.AlignLeft, Qt.AlignmentFlag.AlignRight)
)


class GridModel(QAbstractTableModel):
    """Rows and columns of `table` in the document's plan, and one row below to type a new one into.

    `remarked(sentence)` tells what a planner should know about an entry that was accepted.
    """

    remarked = Signal(str)

    def __init__(self, document: Document, table: Table, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._table = table
        self._groups: frozenset[str] = frozenset()
        self._plan = document.plan
        self._names = table.names(document.plan)
        self._columns = table.shown_columns(document.plan, self._groups)
        self._refused = document.refused
        self._open_end = True  # False only while rows at the end come or go
        self._problems: Mapping[str, str] = {}
        document.changed.connect(self._follow)

    @property
    def table(self) -> Table:
        """What is shown."""
        return self._table

    @property
    def columns(self) -> tuple[Column, ...]:
        """The columns that are shown."""
        return self._columns

    @property
    def row_names(self) -> tuple[str, ...]:
        """The names of the rows, without the row for a new one."""
        return self._names

    @property
    def document(self) -> Document:
        """Where changes go."""
        return self._document

    def show_groups(self, groups: Collection[str]) -> None:
        """Show the columns of `groups` besides those that are always there."""
        self._groups = frozenset(groups)
        self._follow()

    def show_problems(self, problems: Mapping[str, str]) -> None:
        """Mark the cells at these places (place -> what is wrong)."""
        if problems != self._problems:
            self._problems = dict(problems)
            self._refresh()

    def write(self, cells: Mapping[tuple[int, int], str], step: str) -> None:
        """Type texts into cells (row, column) as one undo step; rows beyond the last are added."""
        entries = [Entry(row, self._columns[column], text) for (row, column), text in cells.items()]
        outcome = enter(self._table, self._plan, self._document.refused, entries)
        self._document.edit(step, outcome.plan, refused=outcome.refused)

    def clear(self, cells: Collection[tuple[int, int]]) -> None:
        """Empty cells: a refused entry goes first, the value below it only when cleared again."""
        kept = [(r, c) for r, c in cells if r < len(self._names)]
        refused = [self._place(r, c) for r, c in kept if self._refusal(r, c)]
        if refused:
            left = restored(self._document.refused, refused)
            self._document.edit(messages.CLEAR_CELLS, self._plan, refused=left)
        else:
            named = {(r, c): "" for r, c in kept if self._columns[c].key != "name"}
            self.write(named, messages.CLEAR_CELLS)

    def change_rows(self, step: str, change: Callable[[Plan], Plan]) -> None:
        """Insert, duplicate, move or delete rows as one undo step."""
        self._document.edit(step, change(self._plan))

    def find(self, place: str) -> QModelIndex:
        """The cell that a problem's place means, invalid if it is not in this table."""
        for row in range(len(self._names)):
            for at, column in enumerate(self._columns):
                if place == column.place(row):
                    return self.index(row, at)
        row_places = (f"{self._table.key}[{row}]" for row in range(len(self._names)))
        rows = (row for row, name in enumerate(row_places) if place.startswith(name))
        return self.index(next(rows, -1), 0)

    def hidden_group_of(self, place: str) -> str:
        """The group of columns in which `place` would be shown, "" if none."""
        hidden = (c for c in self._table.columns(self._plan) if c.group and c.group not in self._groups)
        rows = range(len(self._names))
        return next((c.group for c in hidden if any(c.place(row) == place for row in rows)), "")

    def plain(self, row: int, column: int) -> str:
        """The text of a cell as it is copied: what was typed, or the value in plain notation."""
        if row >= len(self._names):
            return ""
        refusal = self._refusal(row, column)
        chosen = self._columns[column]
        return refusal.text if refusal else chosen.plain(chosen.get(self._plan, row))

    def is_refused(self, row: int, column: int) -> bool:
        """True where what was typed does not count."""
        return row < len(self._names) and self._refusal(row, column) is not None

    # following the document

    def _follow(self) -> None:
        """Take over the document's plan, telling views as little as possible."""
        plan, before, refused = self._document.plan, self._plan, self._refused
        columns = self._table.shown_columns(plan, self._groups)
        headers = [column.header for column in self._columns]
        self._follow_columns(columns)
        self._columns = columns
        names = self._table.names(plan)
        self._follow_rows(plan, names)
        self._plan, self._names, self._refused = plan, names, self._document.refused
        if [column.header for column in columns] != headers:
            self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, len(columns) - 1)
        if refused is not self._refused:
            self._refresh()
        else:
            self._refresh_rows(self._changed_rows(before, plan))

    def _follow_columns(self, columns: tuple[Column, ...]) -> None:
        old, new = [c.key for c in self._columns], [c.key for c in columns]
        start, gone, come = _difference(old, new)
        if gone:
            self.beginRemoveColumns(_NOWHERE, start, start + gone - 1)
            self._columns = (*self._columns[:start], *self._columns[start + gone :])
            self.endRemoveColumns()
        if come:
            self.beginInsertColumns(_NOWHERE, start, start + come - 1)
            self._columns = columns
            self.endInsertColumns()

    def _follow_rows(self, plan: Plan, names: tuple[str, ...]) -> None:
        start, gone, come = _difference(self._names, names)
        if gone == come:
            return  # renamed or moved: the same cells with other contents
        if gone and come:
            self.beginResetModel()
            self._plan, self._names = plan, names
            self.endResetModel()
        elif start + gone == len(self._names):
            self._follow_end(plan, names, start)
        elif gone:
            self.beginRemoveRows(_NOWHERE, start, start + gone - 1)
            self._plan, self._names = plan, names
            self.endRemoveRows()
        else:
            self.beginInsertRows(_NOWHERE, start, start + come - 1)
            self._plan, self._names = plan, names
            self.endInsertRows()

    def _follow_end(self, plan: Plan, names: tuple[str, ...], start: int) -> None:
        """At the end the line for a new row becomes the first new row: who typed into it stays there."""
        if len(names) > start:
            self._plan, self._names, self._open_end = plan, names[: start + 1], False
            self._refresh()
            self.beginInsertRows(_NOWHERE, start + 1, len(names))
            self._names, self._open_end = names, True
            self.endInsertRows()
        else:
            self.beginRemoveRows(_NOWHERE, start + 1, len(self._names))
            self._names, self._open_end = self._names[: start + 1], False
            self.endRemoveRows()
            self._plan, self._names, self._open_end = plan, names, True

    def _changed_rows(self, before: Plan, after: Plan) -> list[int]:
        """Rows whose entry is another one now; what did not change is the same object in both plans."""
        old, new = getattr(before, self._table.key), getattr(after, self._table.key)
        return [row for row, entry in enumerate(new) if row >= len(old) or entry is not old[row]]

    def _refresh_rows(self, rows: list[int]) -> None:
        if rows:
            last = self.columnCount() - 1
            self.dataChanged.emit(self.index(rows[0], 0), self.index(rows[-1], last))

    def _refresh(self) -> None:
        last = self.index(self.rowCount() - 1, self.columnCount() - 1)
        self.dataChanged.emit(self.index(0, 0), last)

    # cells

    def _place(self, row: int, column: int) -> tuple[str, str, str]:
        return (self._table.key, self._names[row], self._columns[column].key)

    def _refusal(self, row: int, column: int) -> Refusal | None:
        return self._document.refused.get(self._place(row, column))

    def _problem(self, row: int, column: int) -> str:
        return self._problems.get(self._columns[column].place(row), "")

    def _shown(self, row: int, column: int) -> str:
        refusal = self._refusal(row, column)
        if refusal:
            return _REFUSED_SIGN + refusal.text
        chosen = self._columns[column]
        text = chosen.shown(chosen.get(self._plan, row))
        return _PROBLEM_SIGN + text if self._problem(row, column) else text

    def _tip(self, row: int, column: int) -> str:
        refusal = self._refusal(row, column)
        if refusal:
            return plain_tip(messages.REFUSED_CELL.format(reason=refusal.reason))
        problem = self._problem(row, column)
        if problem:
            return plain_tip(messages.PROBLEM_CELL.format(says=problem))
        chosen = self._columns[column]
        note = chosen.note(self._plan, row) if chosen.note else ""
        return plain_tip(f"{note}\n{chosen.tooltip}" if note else chosen.tooltip)

    def _mark(self, row: int, column: int) -> str | None:
        if self._refusal(row, column):
            return "refused"
        return "problem" if self._problem(row, column) else None

    def _spoken(self, row: int, column: int) -> str:
        """The cell for screen readers: column, row, value, what is wrong with it."""
        chosen = self._columns[column]
        said = f"{chosen.title} {chosen.unit}, {self._names[row]}: {self._shown(row, column)}"
        refusal = self._refusal(row, column)
        wrong = refusal.reason if refusal else self._problem(row, column)
        return f"{said}. {wrong}" if wrong else said

    def _new_row(self, column: int, role: int) -> Any:
        if role == Role.DisplayRole and column == 0:
            return messages.NEW_ROW.format(noun=self._table.noun)
        if role == Role.AccessibleTextRole:
            return messages.NEW_ROW.format(noun=self._table.noun)
        if role == Role.EditRole:
            return ""
        return QBrush(theme.current().faint) if role == Role.ForegroundRole else None

    def _remark(self, row: int, column: int, text: str) -> None:
        """Tell what became of an entry where that may surprise."""
        chosen, refusal = self._columns[column], self._refusal(row, column)
        if refusal is not None:
            said = messages.REFUSED_AS_TYPED.format(text=quoted(text), reason=refusal.reason)
            self.remarked.emit(said)
        elif chosen.is_number and numbers.reads_two_ways(text):
            read = chosen.shown(chosen.get(self._plan, row))
            self.remarked.emit(messages.READ_AS.format(text=text, number=read))

    def rowCount(self, parent: Index = _NOWHERE) -> int:
        """The rows of the plan and the one for a new row."""
        return 0 if parent.isValid() else len(self._names) + self._open_end

    def columnCount(self, parent: Index = _NOWHERE) -> int:
        """The columns that are shown."""
        return 0 if parent.isValid() else len(self._columns)

    def flags(self, index: Index) -> Qt.ItemFlag:
        """Every cell can be edited."""
        return _FLAGS if index.isValid() else Qt.ItemFlag.NoItemFlags

    def data(self, index: Index, role: int = Role.DisplayRole) -> Any:
        """What a view asks about a cell."""
        row, column = index.row(), index.column()
        if not index.isValid() or row > len(self._names) or column >= len(self._columns):
            return None
        if role == Role.TextAlignmentRole:
            return _RIGHT if self._columns[column].is_number else _LEFT
        if row == len(self._names):
            return self._new_row(column, role)
        answer = _ROLES.get(role)
        return answer(self, row, column) if answer else None

    def setData(self, index: Index, value: Any, role: int = Role.EditRole) -> bool:
        """Type into one cell."""
        if not index.isValid() or role != Role.EditRole:
            return False
        row, column, text = index.row(), index.column(), str(value)
        if row == len(self._names) and not text.strip():
            return False
        if row < len(self._names) and text == self.plain(row, column):
            return False
        chosen = self._columns[column]
        self.write({(row, column): text}, messages.CHANGE.format(what=chosen.title.lower()))
        self._remark(row, column, text.strip())
        return True

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Role.DisplayRole) -> Any:
        """Titles with units, and what they mean."""
        if orientation == Qt.Orientation.Vertical or not 0 <= section < len(self._columns):
            return None
        column = self._columns[section]
        if role == Role.DisplayRole:
            return column.header
        if role == Role.ToolTipRole:
            return plain_tip(column.tooltip)
        if role == Role.TextAlignmentRole:
            side = Qt.AlignmentFlag.AlignRight if column.is_number else Qt.AlignmentFlag.AlignLeft
            return int(side | Qt.AlignmentFlag.AlignBottom)
        return f"{column.title} {column.unit}" if role == Role.AccessibleTextRole else None


def _difference(old: Sequence[str], new: Sequence[str]) -> tuple[int, int, int]:
    """(first index that differs, how many went there, how many came there)."""
    start = 0
    while start < min(len(old), len(new)) and old[start] == new[start]:
        start += 1
    end = 0
    while end < min(len(old), len(new)) - start and old[-1 - end] == new[-1 - end]:
        end += 1
    return start, len(old) - start - end, len(new) - start - end


def _foreground(model: GridModel, row: int, column: int) -> QBrush:
    colours = theme.current()
    return QBrush(colours.short if model._mark(row, column) else colours.ink)


def _background(model: GridModel, row: int, column: int) -> QBrush:
    colours = theme.current()
    return QBrush(colours.refused if model._mark(row, column) else colours.cell)


_ROLES: Mapping[int, Callable[[GridModel, int, int], Any]] = {
    Role.DisplayRole: GridModel._shown,
    Role.EditRole: GridModel.plain,
    Role.ToolTipRole: GridModel._tip,
    Role.AccessibleTextRole: GridModel._spoken,
    Role.AccessibleDescriptionRole: GridModel._tip,
    Role.ForegroundRole: _foreground,
    Role.BackgroundRole: _background,
    MARK: GridModel._mark,
}
