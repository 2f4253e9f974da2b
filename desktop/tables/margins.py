"""Lines by crews as a Qt model over `margin_rows`, and the delegate that paints a margin about zero."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from PySide6.QtCore import QModelIndex, QRectF, Qt
from PySide6.QtGui import QPainter, QPen
from PySide6.QtWidgets import QStyle, QStyledItemDelegate, QStyleOptionViewItem

from desktop import crew_words as say
from desktop import figures
from desktop.pictures.brush import RIGHT, rule, write
from desktop.pictures.copyable import plain_tip
from desktop.pictures.margin_bars import is_broken, paint_absent, paint_margin
from desktop.tables.crew_rows import crew_heading
from desktop.tables.margin_rows import MarginRow, margin_columns, margin_rows
from desktop.tables.shown_model import Index, ShownModel, row_title_side, side
from desktop.theme import Size, current
from solver.answer import Answer, CrewReport
from solver.plan import Plan


class MarginTable(ShownModel[MarginRow, CrewReport]):
    """The grid of margins for a view: crews across, lines and totals down."""

    def __init__(self, parent: Any = None) -> None:
        super().__init__((), parent)
        self._headings: tuple[tuple[str, str], ...] = ()

    def show(self, plan: Plan, answer: Answer) -> None:
        """Show the margins of every crew of `answer`."""
        columns, rows = margin_columns(answer), margin_rows(plan, answer)
        same = [r.title for r in rows] == [r.title for r in self._rows]
        same = same and [c.policy for c in columns] == [c.policy for c in self._columns]
        if not same:
            self.beginResetModel()
        headings = tuple(crew_heading(report.policy, answer) for report in columns)
        titled = headings == self._headings
        self._columns, self._rows, self._headings = columns, rows, headings
        if not same:
            self.endResetModel()
        elif rows and columns:
            self.dataChanged.emit(self.index(0, 0), self.index(len(rows) - 1, len(columns) - 1))
            if not titled:
                self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, len(columns) - 1)

    def margin(self, index: Index) -> float | None:
        """The margin in a cell; None in totals and where there is no crew."""
        return self._rows[index.row()].margins.get(self._columns[index.column()].policy)

    def first_broken(self) -> QModelIndex:
        """The first broken cell, column by column; invalid when every crew is workable."""
        for j in range(len(self._columns)):
            for i in range(len(self._rows)):
                margin = self.margin(self.index(i, j))
                if margin is not None and is_broken(margin):
                    return self.index(i, j)
        return QModelIndex()

    def words(self, index: Index) -> str:
        """A cell as a sentence."""
        row, report = self._rows[index.row()], self._columns[index.column()]
        margin = self.margin(index)
        if report.crew is None:
            return report.why_none
        if margin is None:
            text = row.in_full.get(report.policy) or row.texts.get(report.policy, "")
            return say.cell_tip(row.title, str(report.policy), text)
        if is_broken(margin):
            return say.line_short(row.line, str(report.policy), figures.quantity(-margin, row.unit))
        room = figures.quantity(margin, row.unit)
        return say.line_holds(row.line, str(report.policy), "" if room == figures.NIL else room)

    def _text(self, index: Index) -> str:
        row, report = self._rows[index.row()], self._columns[index.column()]
        margin = self.margin(index)
        return figures.signed(margin) if margin is not None else row.texts.get(report.policy, "")

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """What Qt asks of a cell."""
        if not self.has(index):
            return None
        answer = _ROLES.get(role)
        return answer(self, index) if answer else None

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:
        """Crews across, lines down."""
        across = orientation == Qt.Orientation.Horizontal
        if not 0 <= section < (len(self._columns) if across else len(self._rows)):
            return None
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return side(left=False) if across else row_title_side()
        if across:
            title, means = self._headings[section]
            tip = "\n".join(part for part in (means, self._columns[section].why_none) if part)
            texts = {
                Qt.ItemDataRole.DisplayRole: title,
                Qt.ItemDataRole.ToolTipRole: plain_tip(tip),
            }
        else:
            row = self._rows[section]
            texts = {
                Qt.ItemDataRole.DisplayRole: row.title,
                Qt.ItemDataRole.ToolTipRole: plain_tip(f"{row.title}\n{row.tip}"),
            }
        return texts.get(Qt.ItemDataRole(role))


_ROLES: dict[int, Callable[[MarginTable, Index], Any]] = {
    Qt.ItemDataRole.DisplayRole: MarginTable._text,
    Qt.ItemDataRole.ToolTipRole: lambda m, i: plain_tip(m.words(i)),
    Qt.ItemDataRole.AccessibleTextRole: MarginTable.words,
    Qt.ItemDataRole.TextAlignmentRole: lambda _m, _i: side(left=False),
}


class MarginDelegate(QStyledItemDelegate):
    """Paints margins as numbers over bars, totals as small text, and where the cursor is."""

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        """Draw one cell."""
        model = index.model()
        if not isinstance(model, MarginTable):
            return
        theme, cell = current(), QRectF(option.rect)
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if option.state & QStyle.StateFlag.State_Selected:
            painter.fillRect(cell, theme.selected)
        rule(painter, cell.left(), cell.bottom() - 0.5, cell.right(), cell.bottom() - 0.5, theme)
        row, report = model.rows[index.row()], model.columns[index.column()]
        margin = model.margin(index)
        if margin is not None:
            paint_margin(painter, cell, margin, row.reach, theme)
        elif row.line:
            paint_absent(painter, cell, say.NO_CREW if report.crew is None else "", theme)
        else:
            inner = cell.adjusted(4, 0, -8 * theme.zoom, 0)
            text = row.texts.get(report.policy, "")
            write(painter, inner, text, theme.picture_font(Size.SMALL), theme.ink, RIGHT)
        if option.state & QStyle.StateFlag.State_HasFocus:
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.setPen(QPen(theme.focus, 2))
            painter.drawRect(cell.adjusted(1, 1, -1, -2))
        painter.restore()
