"""The table behind a picture, in a window of its own."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QTableWidget, QTableWidgetItem, QVBoxLayout, QWidget

from desktop.theme import current


class TableBehind(QDialog):
    """Shows `rows` (header first), read only."""

    def __init__(self, title: str, rows: Sequence[Sequence[str]], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle(title)
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        header, *body = rows
        self.table = QTableWidget(len(body), len(header))
        self.table.setHorizontalHeaderLabels(list(header))
        self.table.verticalHeader().hide()
        self.table.setEditTriggers(QTableWidget.EditTrigger.NoEditTriggers)
        self.table.setAccessibleName(title)
        for i, row in enumerate(body):
            for j, text in enumerate(row):
                self.table.setItem(i, j, _item(text, j))
        self.table.resizeColumnsToContents()
        self._lay_out()

    def _lay_out(self) -> None:
        theme = current()
        layout = QVBoxLayout(self)
        layout.addWidget(self.table)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        buttons.rejected.connect(self.reject)
        layout.addWidget(buttons)
        wide = sum(self.table.columnWidth(j) for j in range(self.table.columnCount()))
        self.resize(min(theme.px(110), wide + theme.px(8)), theme.px(50))


def _item(text: str, column: int) -> QTableWidgetItem:
    item = QTableWidgetItem(text)
    side = Qt.AlignmentFlag.AlignLeft if column == 0 else Qt.AlignmentFlag.AlignRight
    item.setTextAlignment(side | Qt.AlignmentFlag.AlignVCenter)
    return item
