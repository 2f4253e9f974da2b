"""All crews side by side, as a Qt model over `crew_rows`.

The last column is the planner's own crew: typing there edits `plan.own` as one undo step. A refused
entry stays in its cell with the reason until it is mended.
"""

from __future__ import annotations

from collections.abc import Callable
from decimal import Decimal
from typing import Any

from PySide6.QtCore import QObject, Qt, Signal

from desktop import crew_words as say
from desktop.document import Document
from desktop.pictures.copyable import plain_tip
from desktop.tables.crew_rows import CrewColumn, CrewRow, RowKind, count_rows, crew_columns, total_rows
from desktop.tables.numbers import Refused
from desktop.tables.own_crew import own_count, own_started, with_own
from desktop.tables.shown_model import Index, ShownModel, row_title_side, side
from desktop.theme import Size, current
from solver.answer import Answer, Policy
from solver.plan import Plan


class CrewTable(ShownModel[CrewRow, CrewColumn]):
    """The table of all crews for a view.

    `told(text)` says why an entry was refused; it is empty when one was taken.
    """

    told = Signal(str)

    def __init__(self, document: Document, parent: QObject | None = None) -> None:
        super().__init__((), parent)
        self._document = document
        self._answer: Answer | None = None
        self._counted: tuple[Plan, list[CrewRow]] | None = None
        self._refused: dict[tuple[str, int], tuple[str, str]] = {}

    def show(self, answer: Answer | None) -> None:
        """Show the crews of `answer` and the own crew of the document."""
        plan = self._document.plan
        columns = crew_columns(plan, answer)
        cost = answer.exact.cost if answer and answer.exact else None
        rows = (*self._counts_of(plan), *total_rows(plan, cost))
        same = [r.title for r in rows] == [r.title for r in self._rows] and len(columns) == len(self._columns)
        if not same:
            self.beginResetModel()
        titled = [c.title for c in columns] == [c.title for c in self._columns]
        self._answer, self._columns, self._rows = answer, columns, rows
        names = {c.name for c in plan.categories}
        kept = {k: v for k, v in self._refused.items() if k[0] in names and k[1] < len(plan.phases)}
        self._refused = kept
        if same:
            self.dataChanged.emit(self.index(0, 0), self.index(len(rows) - 1, len(columns) - 1))
            if not titled:
                self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, len(columns) - 1)
        else:
            self.endResetModel()

    def _counts_of(self, plan: Plan) -> list[CrewRow]:
        """The rows of head counts, made once for a plan: of a large one there are a thousand."""
        if self._counted is None or self._counted[0] is not plan:
            self._counted = (plan, count_rows(plan))
        return self._counted[1]

    def start_from_exact(self) -> None:
        """Make the exact crew the own crew."""
        plan = self._document.plan
        self._refused.clear()
        started = own_started(with_own(plan, {}), self._answer)
        self._document.edit(say.EDIT_FROM_EXACT, with_own(plan, started))

    def clear_own(self) -> None:
        """Have no own crew."""
        self._refused.clear()
        self._document.edit(say.EDIT_CLEAR_OWN, with_own(self._document.plan, {}))
        self.show(self._answer)

    def refusal(self, index: Index) -> tuple[str, str] | None:
        """Text and reason of a refused entry."""
        row, column = self._rows[index.row()], self._columns[index.column()]
        if not column.own or row.category is None:
            return None
        return self._refused.get((row.category.name, row.at))

    def _text(self, index: Index) -> str:
        refused = self.refusal(index)
        return refused[0] if refused else self._rows[index.row()].text(self._columns[index.column()])

    def _tip(self, index: Index) -> str:
        refused = self.refusal(index)
        if refused:
            return refused[1]
        row, column = self._rows[index.row()], self._columns[index.column()]
        if column.report and column.report.crew is None:
            return column.report.why_none
        text = row.text(column)
        return say.cell_tip(row.title, column.name, text) if text else row.tip

    def _colour(self, index: Index) -> Any:
        theme, column = current(), self._columns[index.column()]
        if self.refusal(index):
            return theme.short
        broken = column.report is not None and column.report.crew is not None and not column.report.workable
        if self._rows[index.row()].title == say.VERDICT and broken:
            return theme.short
        if column.policy is None:
            return theme.fractional
        return theme.exact if column.policy is Policy.EXACT else theme.ink

    def _ground(self, index: Index) -> Any:
        theme = current()
        if self.refusal(index):
            return theme.refused
        typed = self._columns[index.column()].own and self._rows[index.row()].kind is RowKind.COUNT
        return theme.cell if typed else theme.paper

    def flags(self, index: Index) -> Qt.ItemFlag:
        """What can be done with a cell."""
        if not index.isValid():
            return Qt.ItemFlag.NoItemFlags
        usual = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable
        typed = self._columns[index.column()].own and self._rows[index.row()].kind is RowKind.COUNT
        return usual | Qt.ItemFlag.ItemIsEditable if typed else usual

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """What Qt asks of a cell."""
        if not self.has(index):
            return None
        answer = _ROLES.get(Qt.ItemDataRole(role)) if role < Qt.ItemDataRole.UserRole else None
        return answer(self, index) if answer else None

    def setData(self, index: Index, value: Any, role: int = Qt.ItemDataRole.EditRole) -> bool:
        """Take what was typed."""
        if role != Qt.ItemDataRole.EditRole or not self.flags(index) & Qt.ItemFlag.ItemIsEditable:
            return False
        row, text = self._rows[index.row()], str(value)
        category = row.category
        assert category is not None
        try:
            count = own_count(text, category)
        except Refused as refusal:
            self._refused[category.name, row.at] = (text, refusal.reason)
            self.dataChanged.emit(index, index)
            self.told.emit(refusal.reason)
            return False
        self._refused.pop((category.name, row.at), None)
        self._take(category.name, row.at, count)
        self.dataChanged.emit(index, index)
        self.told.emit("")
        return True

    def _take(self, name: str, at: int, count: Decimal) -> None:
        plan = self._document.plan
        own = own_started(plan, self._answer)
        own[name] = (*own[name][:at], count, *own[name][at + 1 :])
        self._document.edit(say.edit_own(name), with_own(plan, own))

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:
        """Titles."""
        across = orientation == Qt.Orientation.Horizontal
        entries: tuple[CrewColumn, ...] | tuple[CrewRow, ...] = self._columns if across else self._rows
        if not 0 <= section < len(entries):
            return None
        entry = entries[section]
        if role == Qt.ItemDataRole.DisplayRole:
            return entry.title
        if role == Qt.ItemDataRole.ToolTipRole:
            return plain_tip(entry.tip)
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return side(left=False) if across else row_title_side()
        return None


def _font(model: CrewTable, index: Index) -> Any:
    bold = model.columns[index.column()].policy is Policy.EXACT
    small = model.rows[index.row()].title == say.VERDICT
    return current().font(Size.SMALL if small else Size.BODY, bold and not small)


_ROLES: dict[Qt.ItemDataRole, Callable[[CrewTable, Index], Any]] = {
    Qt.ItemDataRole.DisplayRole: CrewTable._text,
    Qt.ItemDataRole.EditRole: CrewTable._text,
    Qt.ItemDataRole.ToolTipRole: lambda m, i: plain_tip(m._tip(i)),
    Qt.ItemDataRole.AccessibleTextRole: lambda m, i: say.cell_tip(
        m.rows[i.row()].title, m.columns[i.column()].name, m._text(i)
    ),
    Qt.ItemDataRole.AccessibleDescriptionRole: CrewTable._tip,
    Qt.ItemDataRole.ForegroundRole: CrewTable._colour,
    Qt.ItemDataRole.BackgroundRole: CrewTable._ground,
    Qt.ItemDataRole.FontRole: _font,
    Qt.ItemDataRole.TextAlignmentRole: lambda _m, _i: side(left=False),
}
