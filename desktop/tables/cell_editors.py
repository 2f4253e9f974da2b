"""How a cell is painted and edited: a line of text, or a list of names to tick."""

from __future__ import annotations

from PySide6.QtCore import QAbstractItemModel, QEvent, QModelIndex, QObject, QPersistentModelIndex, QRect, Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import (
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QWidget,
)

from desktop import theme
from desktop.tables.column import Column, Kind
from desktop.tables.grid_model import GridModel

Index = QModelIndex | QPersistentModelIndex

_RETURN = (Qt.Key.Key_Return, Qt.Key.Key_Enter)
_TABS = (Qt.Key.Key_Tab, Qt.Key.Key_Backtab)


class NameList(QListWidget):
    """Names to tick, with the space bar or by typing them with a comma between; Return takes them."""

    def __init__(self, names: tuple[str, ...], parent: QWidget) -> None:
        super().__init__(parent)
        for name in names:
            item = QListWidgetItem(name, self)
            item.setFlags(item.flags() | Qt.ItemFlag.ItemIsUserCheckable)
            item.setCheckState(Qt.CheckState.Unchecked)
        self.setCurrentRow(0)
        self._typed = ""

    def tick(self, names: tuple[str, ...]) -> None:
        """Tick `names`, and nobody else."""
        for item in self._items():
            ticked = item.text() in names
            item.setCheckState(Qt.CheckState.Checked if ticked else Qt.CheckState.Unchecked)

    def ticked(self) -> tuple[str, ...]:
        """The names that are ticked, in their order."""
        return tuple(i.text() for i in self._items() if i.checkState() == Qt.CheckState.Checked)

    def tick_typed(self) -> None:
        """Tick the name that was typed, in whole or in part; nobody where no name begins that way."""
        item = self._beginning(self._typed)
        if item is not None:
            item.setCheckState(Qt.CheckState.Checked)
        self._typed = ""

    def _beginning(self, typed: str) -> QListWidgetItem | None:
        """The first name that begins with what was typed."""
        names = (i for i in self._items() if i.text().casefold().startswith(typed.casefold()))
        return next(names, None) if typed else None

    def _items(self) -> list[QListWidgetItem]:
        return [self.item(row) for row in range(self.count())]

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Letters look for a name, a comma ticks it; a space within what is typed belongs to it."""
        text = event.text()
        if event.key() == Qt.Key.Key_Backspace:
            self._typed = self._typed[:-1]
        elif text in (",", ";") and text:
            self.tick_typed()
            self._typed = " "  # the space that follows ticks nobody
        elif text.isprintable() and text and (text != " " or self._typed):
            self._typed = (self._typed + text).lstrip()
        else:
            self._typed = ""
            super().keyPressEvent(event)
        item = self._beginning(self._typed)
        if item is not None:
            self.setCurrentItem(item)


class CellDelegate(QStyledItemDelegate):
    """Editors and sizes of the cells of a Grid."""

    def __init__(self, model: GridModel, parent: QObject) -> None:
        super().__init__(parent)
        self._model = model

    def _column(self, index: Index) -> Column:
        return self._model.columns[index.column()]

    def createEditor(self, parent: QWidget, option: QStyleOptionViewItem, index: Index) -> QWidget:
        """A list to tick for names, a line of text for everything else."""
        column = self._column(index)
        if column.kind is Kind.NAMES and column.choices is not None:
            names = NameList(column.choices(self._model.document.plan), parent)
            names.setAccessibleName(column.title)
            return names
        line = QLineEdit(parent)
        line.setAccessibleName(f"{column.title} {column.unit}")
        if column.is_number:
            line.setAlignment(Qt.AlignmentFlag.AlignRight)
        return line

    def setEditorData(self, editor: QWidget, index: Index) -> None:
        """Show what is in the cell."""
        text = str(index.data(Qt.ItemDataRole.EditRole))
        if isinstance(editor, NameList):
            editor.tick(tuple(text.split("; ")))
        elif isinstance(editor, QLineEdit):
            editor.setText(text)

    def setModelData(self, editor: QWidget, model: QAbstractItemModel, index: Index) -> None:
        """Type what was edited."""
        text = "; ".join(editor.ticked()) if isinstance(editor, NameList) else ""
        if isinstance(editor, QLineEdit):
            text = editor.text()
        model.setData(index, text)

    def updateEditorGeometry(self, editor: QWidget, option: QStyleOptionViewItem, index: Index) -> None:
        """A list is higher than its cell and stays within the grid."""
        rect = QRect(option.rect)
        if isinstance(editor, NameList):
            around = editor.parentWidget()
            room = around.rect() if around else rect
            height = min(room.height(), editor.sizeHintForRow(0) * editor.count() + theme.current().px(1))
            rect.setHeight(max(height, rect.height()))
            rect.setWidth(max(rect.width(), editor.sizeHintForColumn(0) + theme.current().px(3)))
            rect.moveBottom(min(rect.bottom(), room.bottom()))
            rect.moveRight(min(rect.right(), room.right()))
        editor.setGeometry(rect)

    def eventFilter(self, editor: QObject, event: QEvent) -> bool:
        """Return takes the ticks of a list, as it takes a line of text."""
        if isinstance(editor, NameList) and _pressed(event, (*_RETURN, *_TABS)):
            editor.tick_typed()
        if isinstance(editor, NameList) and _pressed(event, _RETURN):
            self.commitData.emit(editor)
            self.closeEditor.emit(editor, QStyledItemDelegate.EndEditHint.SubmitModelCache)
            return True
        return super().eventFilter(editor, event)


def _pressed(event: QEvent, keys: tuple[Qt.Key, ...]) -> bool:
    return isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress and event.key() in keys
