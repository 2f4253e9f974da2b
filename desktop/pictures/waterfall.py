"""The waterfall of one broken line: from the fractional crew's margin to what is short, bar by bar."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QPainter, QPen
from PySide6.QtWidgets import QWidget

from desktop import crew_words as say
from desktop import figures
from desktop.pictures.brush import CENTRE, LEFT, RIGHT, hatch, paint_point, rule, text_width, write
from desktop.pictures.picture import Picture
from desktop.pictures.waterfall_bars import Bar, BarKind, Miss, waterfall_bars, waterfall_sentence
from desktop.theme import Size, Theme, current

_LINE = 23.0
_BAR = 13.0
_HEADER = 22.0
_NAME_SHARE = 0.34


def waterfall_height(miss: Miss, theme: Theme) -> float:
    """Height `paint_waterfall` needs, in the painter's units."""
    return theme.zoom * (_HEADER + _LINE * len(waterfall_bars(miss)))


@dataclass(frozen=True)
class Axis:
    """Units of the line to horizontal positions; zero is always within."""

    left: float
    right: float
    low: float
    high: float

    def x(self, value: float) -> float:
        """Where `value` stands."""
        span = (self.high - self.low) or 1.0
        return self.left + (value - self.low) / span * (self.right - self.left)


def waterfall_axis(bars: tuple[Bar, ...], left: float, right: float) -> Axis:
    """An axis that holds every bar."""
    ends = [0.0, *(b.start for b in bars), *(b.end for b in bars)]
    return Axis(left, right, min(ends), max(ends))


def bar_title(bar: Bar) -> str:
    """What stands before a bar."""
    if bar.kind is BarKind.MOVE and bar.was is not None and bar.now is not None:
        was, now = (figures.people(n) if n else "0" for n in (bar.was, bar.now))
        return say.move_title(bar.name, was, now)
    if bar.kind is BarKind.GIVEN_UP:
        return say.given_up_title(bar.name)
    return say.end_title(bar.name) if bar.kind is BarKind.END else bar.name


def paint_waterfall(painter: QPainter, rect: QRectF, miss: Miss, theme: Theme) -> None:
    """Draw the waterfall of `miss` into `rect`."""
    bars = waterfall_bars(miss)
    unit = theme.zoom
    titles = max(text_width(_font(bar, theme), bar_title(bar)) for bar in bars)
    name_width = min(titles, rect.width() * _NAME_SHARE)
    number_width = max(text_width(theme.picture_font(bold=True), figures.signed(b.size)) for b in bars)
    left = rect.left() + name_width + number_width + 36 * unit
    axis = waterfall_axis(bars, left, rect.right() - 8 * unit)
    number = QRectF(rect.left() + name_width + 8 * unit, rect.top(), number_width, _HEADER * unit)
    unit_box = QRectF(rect.left(), rect.top(), number.right() - rect.left(), _HEADER * unit)
    write(painter, unit_box, miss.broken.unit, theme.picture_font(Size.SMALL), theme.faint, RIGHT)
    _paint_zero(painter, rect, axis, theme)
    top = rect.top() + _HEADER * unit
    for at, bar in enumerate(bars):
        line = QRectF(rect.left(), top + at * _LINE * unit, rect.width(), _LINE * unit)
        if bar.kind is BarKind.END:
            rule(painter, rect.left(), line.top(), rect.right(), line.top(), theme)
        _paint_words(painter, line, bar, name_width, number, theme)
        _paint_bar(painter, line, bar, axis, theme)
        if at + 2 < len(bars):
            _paint_link(painter, line, axis.x(bar.end), theme)


def _font(bar: Bar, theme: Theme) -> QFont:
    return theme.picture_font(bold=bar.kind is BarKind.END)


def _paint_words(
    painter: QPainter, line: QRectF, bar: Bar, name_width: float, number: QRectF, theme: Theme
) -> None:
    font = _font(bar, theme)
    name = QRectF(line.left(), line.top(), name_width, line.height())
    write(painter, name, bar_title(bar), font, theme.ink, LEFT)
    box = QRectF(number.left(), line.top(), number.width(), line.height())
    colour = theme.short if bar.size < 0 else theme.ink
    write(painter, box, figures.signed(bar.size), font, colour, RIGHT)


def _paint_bar(painter: QPainter, line: QRectF, bar: Bar, axis: Axis, theme: Theme) -> None:
    """What takes is hatched and points left; what gives is plain; the fractional margin is ochre."""
    x1, x2 = sorted((axis.x(bar.start), axis.x(bar.end)))
    high = _BAR * theme.zoom
    box = QRectF(x1, line.center().y() - high / 2, max(x2 - x1, 1.0), high)
    fill, edge = _colours(bar, theme)
    painter.fillRect(box, fill)
    if bar.size < 0:
        hatch(painter, box, edge, theme.zoom)
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(QPen(edge, theme.zoom * (2 if bar.kind is BarKind.END else 1)))
    painter.drawRect(box)
    if bar.size < 0:
        paint_point(
            painter, QPointF(x1 - 6 * theme.zoom, box.center().y()), 5 * theme.zoom, edge, to_left=True
        )


def _colours(bar: Bar, theme: Theme) -> tuple[QColor, QColor]:
    """Fill and edge: what takes in brick, what gives in slate, the fractional crew's room in ochre."""
    if bar.size < 0:
        return theme.short_soft, theme.short
    if bar.kind is BarKind.START:
        return theme.fractional_soft, theme.fractional
    return theme.room_soft, theme.room


def _paint_link(painter: QPainter, line: QRectF, x: float, theme: Theme) -> None:
    """A thin line from the end of a bar to the start of the next."""
    middle = line.center().y()
    half = _BAR * theme.zoom / 2
    rule(painter, x, middle + half, x, middle + _LINE * theme.zoom - half, theme)


def _paint_zero(painter: QPainter, rect: QRectF, axis: Axis, theme: Theme) -> None:
    painter.setPen(QPen(theme.ink, 1))
    x = axis.x(0)
    painter.drawLine(QPointF(x, rect.top() + _HEADER * theme.zoom), QPointF(x, rect.bottom()))
    box = QRectF(x - 30 * theme.zoom, rect.top(), 60 * theme.zoom, _HEADER * theme.zoom)
    write(painter, box, "0", theme.picture_font(Size.SMALL), theme.faint, CENTRE)


class WaterfallPicture(Picture):
    """The waterfall as a widget; empty until a miss is shown."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(say.WATERFALL, parent)
        self._miss: Miss | None = None

    def content_height(self, theme: Theme) -> float:
        """Height of the waterfall."""
        return waterfall_height(self._miss, theme) if self._miss else 0.0

    @property
    def miss(self) -> Miss | None:
        """What is shown."""
        return self._miss

    def show_miss(self, miss: Miss | None) -> None:
        """Show how `miss` came about, or nothing."""
        self._miss = miss
        self.setVisible(miss is not None)
        self.setAccessibleDescription(waterfall_sentence(miss) if miss else "")
        self.updateGeometry()
        self.update()

    def draw(self, painter: QPainter, rect: QRectF, theme: Theme) -> None:
        """Paint the waterfall."""
        if self._miss is not None:
            paint_waterfall(painter, rect, self._miss, theme)

    def rows(self) -> list[list[str]]:
        """Bar by bar: what, by how much, and the margin after it."""
        if self._miss is None:
            return [[say.BAR, say.BY, say.AFTER]]
        unit = self._miss.broken.unit
        head = [say.BAR, say.in_unit(say.BY, unit), say.in_unit(say.AFTER, unit)]
        bars = waterfall_bars(self._miss)
        return [head, *([bar_title(b), figures.signed(b.size), figures.signed(b.end)] for b in bars)]

    def hint_at(self, position: QPointF) -> str:
        """The bar under the pointer in words."""
        if self._miss is None:
            return ""
        zoom = current().zoom
        at = int((position.y() - _HEADER * zoom) // (_LINE * zoom))
        bars = waterfall_bars(self._miss)
        if not 0 <= at < len(bars):
            return ""
        return f"{bar_title(bars[at])}: {figures.signed(bars[at].size, self._miss.broken.unit)}"
