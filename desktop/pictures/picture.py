"""The base of every picture: reached by keyboard, described in words, copied as image and as data."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QFocusEvent, QHelpEvent, QPainter, QPaintEvent, QPen, QPixmap
from PySide6.QtWidgets import QSizePolicy, QToolTip, QWidget

from desktop.pictures.copyable import Copyable, plain_tip
from desktop.theme import Theme, current

_SHARP = 2.0  # pixels of a copied image to one of the screen


class Picture(Copyable):
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
        self.offer_copies()

    def draw(self, painter: QPainter, rect: QRectF, theme: Theme) -> None:
        """Paint the picture into `rect`."""
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

    def pixmap(self) -> QPixmap:
        """The picture alone, on paper."""
        theme = current()
        image = QPixmap(self.size() * _SHARP)
        image.setDevicePixelRatio(_SHARP)
        image.fill(theme.paper)
        painter = QPainter(image)
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            self.draw(painter, self.inner(), theme)
        finally:
            painter.end()
        return image

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
