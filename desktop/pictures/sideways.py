"""A picture that may be wider than the page: it scrolls sideways by itself, the page never does."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QScrollArea, QSizePolicy, QWidget

from desktop.pictures.picture import Picture


class Sideways(QScrollArea):
    """As high as its picture, with a scroll bar below where the picture is wider."""

    def __init__(self, picture: Picture, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._picture = picture
        self.setWidget(picture)
        self.setWidgetResizable(True)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        # what stands still in the picture while it scrolls is painted anew
        self.horizontalScrollBar().valueChanged.connect(picture.update)
        self.fit()

    def fit(self) -> None:
        """Take the height of the picture, after it shows something else."""
        bar = self.horizontalScrollBar()
        wide = self._picture.minimumSizeHint().width() > self.width()
        self.setFixedHeight(self._picture.sizeHint().height() + (bar.sizeHint().height() if wide else 0))

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The bar comes and goes with the width."""
        super().resizeEvent(event)
        self.fit()
