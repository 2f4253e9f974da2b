"""The printed page on the screen: the sheet itself, as wide as there is room."""

from __future__ import annotations

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QPainter, QPaintEvent, QPen, QPixmap, QResizeEvent
from PySide6.QtWidgets import QSizePolicy, QWidget

from desktop import page_words as say
from desktop.page.layout import Sheet
from desktop.page.marks import TextMark
from desktop.page.paint import paint_sheet
from desktop.theme import current, print_theme

_WIDEST = 1.5  # pixels of a 96 dpi screen per point at zoom 1: a third larger than on paper


class PaperView(QWidget):
    """Shows one sheet. What it says is its accessible description."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._sheet: Sheet | None = None
        self._grey = False
        self._drawn: QPixmap | None = None
        self.setAccessibleName(say.PAGE)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        policy = QSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        policy.setHeightForWidth(True)
        self.setSizePolicy(policy)

    def show_sheet(self, sheet: Sheet | None, grey: bool = False) -> None:
        """Show `sheet` in colour or grey; None for none."""
        self._sheet, self._grey, self._drawn = sheet, grey, None
        self.setAccessibleDescription(" ".join(words_of(sheet)) if sheet else "")
        self.updateGeometry()
        self.update()

    @property
    def sheet(self) -> Sheet | None:
        """What is shown."""
        return self._sheet

    def _scale(self, width: int) -> float:
        """Pixels per point for a widget of `width` pixels."""
        if self._sheet is None:
            return 1.0
        return min(width / self._sheet.paper.width, _WIDEST * current().zoom)

    def _page(self) -> QRectF:
        """Where the paper lies, in whole pixels, so that its edge is sharp: centred, at the top."""
        assert self._sheet is not None
        scale = self._scale(self.width())
        wide, high = self._sheet.paper.width * scale, self._sheet.paper.height * scale
        return QRectF((self.width() - round(wide)) // 2, 0.0, round(wide), round(high))

    def _draw(self, page: QRectF) -> QPixmap:
        """The sheet at the screen's own resolution, drawn once per size."""
        assert self._sheet is not None
        ratio = self.devicePixelRatioF()
        image = QPixmap((page.size() * ratio).toSize())
        image.fill(Qt.GlobalColor.white)
        painter = QPainter(image)
        try:
            scale = page.width() * ratio / self._sheet.paper.width
            painter.scale(scale, scale)
            paint_sheet(painter, self._sheet, print_theme(self._grey))
        finally:
            painter.end()
        image.setDevicePixelRatio(ratio)
        return image

    def hasHeightForWidth(self) -> bool:
        """True: the sheet keeps its proportions."""
        return True

    def heightForWidth(self, width: int) -> int:
        """Height of the whole sheet at `width`."""
        if self._sheet is None:
            return 0
        return round(self._sheet.paper.height * self._scale(width)) + 2

    def sizeHint(self) -> QSize:
        """The sheet at its widest."""
        wide = round(_WIDEST * current().zoom * (self._sheet.paper.width if self._sheet else 595))
        return QSize(wide, self.heightForWidth(wide))

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Draw anew at the new size."""
        self._drawn = None
        super().resizeEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The sheet with a thin line around it; a thicker one shows the focus."""
        if self._sheet is None:
            return
        page = self._page()
        if self._drawn is None:
            self._drawn = self._draw(page)
        painter = QPainter(self)
        try:
            painter.drawPixmap(page.topLeft(), self._drawn)
            focus = self.hasFocus()
            painter.setPen(QPen(current().focus if focus else current().rule, 2 if focus else 1))
            painter.drawRect(page.adjusted(0.5, 0.5, -0.5, -0.5))
        finally:
            painter.end()


def words_of(sheet: Sheet) -> list[str]:
    """Every paragraph of the sheet, in the order it was laid out."""
    return [mark.text.words for mark in sheet.marks if isinstance(mark, TextMark) and mark.text.words]
