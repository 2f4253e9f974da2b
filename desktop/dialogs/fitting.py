"""How large a dialog opens."""

from __future__ import annotations

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QDialog

from desktop.theme import current


def fit(dialog: QDialog, wide: float, high: float) -> None:
    """Open `dialog` that large, in steps of the grid, but not larger than the window it belongs to."""
    size = QSize(current().px(wide), current().px(high))
    around = dialog.parentWidget()
    dialog.resize(size if around is None else size.boundedTo(around.window().size()))
