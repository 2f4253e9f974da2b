"""A table view as high as its rows: it stands in a page that scrolls, and copies what is selected."""

from __future__ import annotations

from collections.abc import Iterable

from PySide6.QtCore import QAbstractItemModel, QModelIndex, QPersistentModelIndex, QSize, Qt
from PySide6.QtGui import QAction, QColor, QGuiApplication, QKeySequence, QPainter, QResizeEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QHeaderView,
    QSizePolicy,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QTableView,
    QWidget,
)

from desktop import crew_words as say
from desktop.pictures.copyable import data_text
from desktop.theme import current

_MOST_TITLE, _LEAST_TITLE = 34, 14  # width of row titles, in steps of the grid
_TITLE_SHARE = 0.27
_LEAST_ROWS = 5


class GroundDelegate(QStyledItemDelegate):
    """Fills the background a model asks for, which a styled item would leave out."""

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """Ground, then the cell."""
        ground = index.data(Qt.ItemDataRole.BackgroundRole)
        if isinstance(ground, QColor):
            painter.fillRect(option.rect.adjusted(0, 0, 0, -1), ground)
        super().paint(painter, option, index)


class QuietView(QTableView):
    """Rows and columns without frames; Ctrl+C copies the selection with its titles."""

    def __init__(
        self, name: str, row_steps: float = 3.25, parent: QWidget | None = None, *, fitted: bool = True
    ) -> None:
        """`fitted`: as high as its rows, for pages that scroll; otherwise it scrolls itself."""
        super().__init__(parent)
        self._row_steps = row_steps
        self._fitted = fitted
        self.setObjectName("quiet")
        self.setItemDelegate(GroundDelegate(self))
        self.setAccessibleName(name)
        self.setTabKeyNavigation(False)
        self.setWordWrap(False)
        self.setShowGrid(False)
        self.setCornerButtonEnabled(False)
        if fitted:
            self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
            self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self._set_up_headers()
        copy = QAction(say.COPY_DATA, self)
        copy.setShortcut(QKeySequence.StandardKey.Copy)
        copy.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        copy.triggered.connect(self.copy_selection)
        self.addAction(copy)
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)

    def _set_up_headers(self) -> None:
        across, down = self.horizontalHeader(), self.verticalHeader()
        across.setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        across.setHighlightSections(False)
        across.setMinimumSectionSize(current().px(8))
        down.setHighlightSections(False)
        down.setTextElideMode(Qt.TextElideMode.ElideRight)
        down.setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        down.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        down.setMaximumWidth(current().px(_MOST_TITLE))

    def share_width(self, wide: Iterable[int]) -> None:
        """Columns as narrow as their content, but those in `wide`, which share what is left."""
        header, chosen = self.horizontalHeader(), set(wide)
        for column in range(header.count()):
            mode = header.ResizeMode.Stretch if column in chosen else header.ResizeMode.ResizeToContents
            header.setSectionResizeMode(column, mode)

    def copy_selection(self) -> None:
        """Put the selected cells, or all where nothing is selected, on the clipboard with their titles."""
        QGuiApplication.clipboard().setText(data_text(self._selected()))

    def _selected(self) -> list[list[str]]:
        model, title = self.model(), self.model().headerData
        chosen = self.selectionModel().selectedIndexes()
        every = len(chosen) < 2
        rows = range(model.rowCount()) if every else sorted({i.row() for i in chosen})
        columns = range(model.columnCount()) if every else sorted({i.column() for i in chosen})
        head = ["", *(str(title(j, Qt.Orientation.Horizontal)) for j in columns)]
        body = [
            [str(title(i, Qt.Orientation.Vertical)), *(str(model.index(i, j).data() or "") for j in columns)]
            for i in rows
        ]
        return [head, *body]

    def refit(self) -> None:
        """Take the height of the rows, after rows or zoom changed."""
        self.verticalHeader().setDefaultSectionSize(current().px(self._row_steps))
        self._limit_titles()
        self.horizontalHeader().setMinimumSectionSize(current().px(8))
        rows = self.model().rowCount() if self.model() is not None else 0
        header = self.horizontalHeader().sizeHint().height()
        scroll = self.horizontalScrollBar()
        bar = scroll.sizeHint().height() if scroll.maximum() > 0 else 0
        height = header + rows * current().px(self._row_steps) + bar + 2
        if self._fitted:
            self.setFixedHeight(height)
        else:
            self.setMaximumHeight(height)
            self.setMinimumHeight(min(height, header + _LEAST_ROWS * current().px(self._row_steps)))

    def _limit_titles(self) -> None:
        """Row titles take at most their part of the width; longer ones are cut, with a tooltip."""
        theme = current()
        most = max(theme.px(_LEAST_TITLE), min(theme.px(_MOST_TITLE), round(self.width() * _TITLE_SHARE)))
        self.verticalHeader().setMaximumWidth(most)

    def setModel(self, model: QAbstractItemModel | None) -> None:
        """Keep the height of the rows of `model`."""
        super().setModel(model)
        if model is not None:
            model.modelReset.connect(self.refit)
            self.refit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Follow the width."""
        self._limit_titles()
        super().resizeEvent(event)

    def minimumSizeHint(self) -> QSize:
        """As high as the content needs, narrower."""
        return QSize(current().px(40), self.height() if self._fitted else current().px(16))
