"""A table view as high as its rows: it stands in a page that scrolls, and copies what is selected."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from PySide6.QtCore import (
    QAbstractItemModel,
    QEvent,
    QModelIndex,
    QPersistentModelIndex,
    QRect,
    QSize,
    Qt,
    QTimer,
)
from PySide6.QtGui import (
    QAction,
    QColor,
    QFontMetrics,
    QGuiApplication,
    QKeySequence,
    QPainter,
    QResizeEvent,
    QShowEvent,
)
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
_TITLE_SHARE = 0.24
_LEAST_ROWS = 5
_LEAST_TEXT = 24  # width of a column of texts, in steps of the grid


def _lines_high(text: str, room: int, metrics: QFontMetrics) -> int:
    """Height that `text` takes with some air, in lines of `room` pixels; 0 for a single one."""
    if metrics.horizontalAdvance(text) <= room:
        return 0
    lines = metrics.boundingRect(QRect(0, 0, room, 10_000), Qt.TextFlag.TextWordWrap.value, text)
    return lines.height() + current().px(1) + 2


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
        self,
        name: str,
        row_steps: float = 3.25,
        parent: QWidget | None = None,
        *,
        fitted: bool = True,
        wrapped: bool = False,
    ) -> None:
        """`fitted`: as high as its rows, for pages that scroll; otherwise it scrolls itself.

        `wrapped`: texts take as many lines as they need; titles of rows always do.
        """
        super().__init__(parent)
        self._row_steps = row_steps
        self._fitted = fitted
        self._wide: set[int] = set()
        self._refit_soon = QTimer(self, singleShot=True, interval=0)
        self._refit_soon.timeout.connect(self.refit)
        self.setObjectName("quiet")
        self.setItemDelegate(GroundDelegate(self))
        self.setAccessibleName(name)
        self.setTabKeyNavigation(False)
        self.setWordWrap(wrapped)
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
        down.setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        down.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        down.setMaximumWidth(current().px(_MOST_TITLE))

    def share_width(self, wide: Iterable[int]) -> None:
        """Columns as narrow as their content, but those in `wide`, which share what is left."""
        header = self.horizontalHeader()
        self._wide = set(wide)
        for column in range(header.count()):
            if column not in self._wide:
                header.setSectionResizeMode(column, header.ResizeMode.ResizeToContents)
        self._fit_texts()
        self._refit_soon.start()

    def _fit_texts(self) -> None:
        """Texts share what is left; where that is too little to read, the table scrolls sideways."""
        header = self.horizontalHeader()
        wide = [column for column in sorted(self._wide) if column < header.count()]
        if not wide:
            return
        others = sum(header.sectionSize(c) for c in range(header.count()) if c not in self._wide)
        most = current().px(_LEAST_TEXT)
        least = [min(most, self.sizeHintForColumn(column)) for column in wide]
        narrow = self.viewport().width() - others < max(least) * len(wide)
        mode = header.ResizeMode.Fixed if narrow else header.ResizeMode.Stretch
        for column, width in zip(wide, least, strict=True):
            header.setSectionResizeMode(column, mode)
            if narrow:
                header.resizeSection(column, width)

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
        self._limit_titles()
        self.horizontalHeader().setMinimumSectionSize(current().px(8))
        self._fit_texts()
        rows = self._fit_rows()
        header = self.horizontalHeader().sizeHint().height()
        scroll = self.horizontalScrollBar()
        bar = scroll.sizeHint().height() if scroll.maximum() > 0 else 0
        height = header + rows + bar + 2
        if self._fitted:
            self.setFixedHeight(height)
        else:
            self.setMaximumHeight(height)
            self.setMinimumHeight(min(height, header + _LEAST_ROWS * current().px(self._row_steps)))

    def _fit_rows(self) -> int:
        """Rows as high as the grid says, higher where texts take several lines; the sum of them."""
        down, least = self.verticalHeader(), current().px(self._row_steps)
        down.setDefaultSectionSize(least)
        total = 0
        for row in range(self.model().rowCount() if self.model() is not None else 0):
            high = max(
                least, *(_lines_high(text, room, self.fontMetrics()) for text, room in self._texts(row))
            )
            if down.sectionSize(row) != high:
                down.resizeSection(row, high)
            total += high
        return total

    def _texts(self, row: int) -> Iterator[tuple[str, int]]:
        """What may take several lines in a row, with the width it has."""
        step, down = current().px(1), self.verticalHeader()
        title = "" if down.isHidden() else str(self.model().headerData(row, Qt.Orientation.Vertical) or "")
        yield title, down.maximumWidth() - 2 * step
        for column in self._wide if self.wordWrap() else ():
            text = str(self.model().index(row, column).data() or "")
            yield text, self.horizontalHeader().sectionSize(column) - step

    def _limit_titles(self) -> None:
        """Row titles take at most their part of the width; longer ones take several lines."""
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
        if event.size().width() != event.oldSize().width():
            self._refit_soon.start()

    def showEvent(self, event: QShowEvent) -> None:
        """Follow a zoom that was changed while nobody saw the table."""
        super().showEvent(event)
        self._refit_soon.start()

    def changeEvent(self, event: QEvent) -> None:
        """Follow the zoom, when the headers have the font as well."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "_refit_soon"):
            self._refit_soon.start()

    def minimumSizeHint(self) -> QSize:
        """As high as the content needs, narrower."""
        return QSize(current().px(40), self.height() if self._fitted else current().px(16))
