"""What every picture can do besides being seen: be copied as image and as data, and show its table."""

from __future__ import annotations

import html
from collections.abc import Callable, Sequence

from PySide6.QtCore import QMimeData, Qt
from PySide6.QtGui import QAction, QGuiApplication, QKeySequence, QPixmap
from PySide6.QtWidgets import QWidget

from desktop import crew_words as say
from desktop.pictures.table_behind import TableBehind

Rows = Sequence[Sequence[str]]


def plain_tip(text: str) -> str:
    """`text` for a tooltip, every character of it shown as typed."""
    return f"<span>{html.escape(text).replace(chr(10), '<br>')}</span>" if text else ""


def data_text(rows: Rows) -> str:
    """`rows` as tab-separated lines, the form spreadsheets take from the clipboard."""
    return "\n".join("\t".join(cell.replace("\t", " ") for cell in row) for row in rows) + "\n"


class Copyable(QWidget):
    """The actions of a picture, by menu and by key. Subclasses give `pixmap` and `rows`."""

    def offer_copies(self) -> None:
        """Put the actions in the context menu and on their keys."""
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)
        self._offer(say.COPY_IMAGE, self.copy_image, QKeySequence(QKeySequence.StandardKey.Copy))
        self._offer(say.COPY_DATA, self.copy_data, QKeySequence("Ctrl+Shift+C"))
        self._offer(say.SHOW_TABLE, self.show_table, QKeySequence("Return"))

    def _offer(self, text: str, slot: Callable[[], None], keys: QKeySequence) -> None:
        action = QAction(text, self)
        action.setShortcut(keys)
        action.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        action.triggered.connect(slot)
        self.addAction(action)

    def pixmap(self) -> QPixmap:
        """The picture alone, on paper."""
        raise NotImplementedError

    def rows(self) -> Rows:
        """The table behind the picture, header first."""
        raise NotImplementedError

    def copy_image(self) -> None:
        """Put the picture on the clipboard."""
        mime = QMimeData()
        mime.setImageData(self.pixmap().toImage())
        QGuiApplication.clipboard().setMimeData(mime)

    def copy_data(self) -> None:
        """Put the table behind on the clipboard."""
        QGuiApplication.clipboard().setText(data_text(self.rows()))

    def show_table(self) -> None:
        """Open the table behind the picture."""
        TableBehind(self.accessibleName(), self.rows(), self).show()
