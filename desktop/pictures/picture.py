"""The base of every picture: reached by keyboard, described in words, copied as image and as data."""

from __future__ import annotations

import html
from collections.abc import Sequence

from PySide6.QtCore import QEvent, QMimeData, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import (
    QAction,
    QFocusEvent,
    QGuiApplication,
    QHelpEvent,
    QKeySequence,
    QPainter,
    QPaintEvent,
    QPen,
    QPixmap,
)
from PySide6.QtWidgets import QSizePolicy, QToolTip, QWidget

from desktop import crew_words as say
from desktop.pictures.table_behind import TableBehind
from desktop.theme import Theme, current

Rows = Sequence[Sequence[str]]


def plain_tip(text: str) -> str:
    """`text` for a tooltip, every character of it shown as typed."""
    return f"<span>{html.escape(text).replace(chr(10), '<br>')}</span>" if text else ""


def data_text(rows: Rows) -> str:
    """`rows` as tab-separated lines, the form spreadsheets take from the clipboard."""
    return "\n".join("\t".join(cell.replace("\t", " ") for cell in row) for row in rows) + "\n"


class Picture(QWidget):
    """A painted widget with a table behind it.

    Subclasses give `draw`, `rows`, `content_height` and `hint_at`; a margin around keeps the focus clear of
    what is drawn. `least` is the narrowest width, in steps of the grid.
    """

    least = 40.0

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName(name)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)
        self._add_action(say.COPY_IMAGE, self.copy_image, QKeySequence.StandardKey.Copy)
        self._add_action(say.COPY_DATA, self.copy_data, QKeySequence("Ctrl+Shift+C"))
        self._add_action(say.SHOW_TABLE, self.show_table, QKeySequence("Return"))

    def _add_action(self, text: str, slot: object, keys: QKeySequence | QKeySequence.StandardKey) -> None:
        action = QAction(text, self)
        action.setShortcut(keys)
        action.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        action.triggered.connect(slot)
        self.addAction(action)

    def draw(self, painter: QPainter, rect: QRectF, theme: Theme) -> None:
        """Paint the picture into `rect`."""
        raise NotImplementedError

    def rows(self) -> Rows:
        """The table behind the picture, header first."""
        raise NotImplementedError

    def content_height(self, theme: Theme) -> float:
        """Height that `draw` needs."""
        raise NotImplementedError

    def hint_at(self, position: QPointF) -> str:
        """What the tooltip says at `position` within the drawing; empty for nothing."""
        return ""

    def inner(self) -> QRectF:
        """Where the drawing stands."""
        margin = current().px(1)
        return QRectF(self.rect()).adjusted(margin, margin, -margin, -margin)

    def pixmap(self, theme: Theme | None = None, ratio: float = 2.0) -> QPixmap:
        """The picture alone, on paper, `ratio` pixels to one of the screen."""
        chosen = theme or current()
        image = QPixmap(self.size() * ratio)
        image.setDevicePixelRatio(ratio)
        image.fill(chosen.paper)
        painter = QPainter(image)
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            self.draw(painter, self.inner(), chosen)
        finally:
            painter.end()
        return image

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

    def event(self, event: QEvent) -> bool:
        """Tooltips as plain text."""
        if event.type() == QEvent.Type.ToolTip and isinstance(event, QHelpEvent):
            QToolTip.showText(
                event.globalPos(),
                plain_tip(self.hint_at(QPointF(event.pos()) - self.inner().topLeft())),
                self,
            )
            return True
        return super().event(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        """Show the focus."""
        super().focusInEvent(event)
        self.update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Hide the focus."""
        super().focusOutEvent(event)
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        """The picture, and the focus around it."""
        painter = QPainter(self)
        theme = current()
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            self.draw(painter, self.inner(), theme)
            if self.hasFocus():
                painter.setBrush(Qt.BrushStyle.NoBrush)
                painter.setPen(QPen(theme.focus, 2))
                painter.drawRect(QRectF(self.rect()).adjusted(1, 1, -1, -1))
        finally:
            painter.end()

    def sizeHint(self) -> QSize:
        """As high as the drawing and its margin."""
        theme = current()
        return QSize(theme.px(2 * self.least), round(self.content_height(theme)) + 2 * theme.px(1) + 1)

    def minimumSizeHint(self) -> QSize:
        """As high as the drawing and its margin, narrower."""
        return QSize(current().px(self.least), self.sizeHint().height())
