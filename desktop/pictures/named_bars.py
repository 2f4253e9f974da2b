"""Bars with a name, a number and what is to be noted: one scale from zero for all of them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPen
from PySide6.QtWidgets import QWidget

from desktop.pictures.brush import LEFT, RIGHT, hatch, rule, text_width, write
from desktop.pictures.picture import Picture
from desktop.theme import Size, Theme, current

_LINE = 26.0
_BAR = 12.0
_HEADER = 22.0
_NAME_SHARE, _NOTE_SHARE = 0.28, 0.4
_LEAST = 2.0


class Tone(StrEnum):
    """What the colour of a bar says."""

    EXACT = "exact"
    FRACTIONAL = "fractional"
    ROOM = "room"
    PLAIN = "faint"
    SHORT = "short"


@dataclass(frozen=True)
class NamedBar:
    """One line: `length` from zero in the picture's unit (None: no bar), its number, and a note behind."""

    name: str
    number: str
    length: float | None
    tone: Tone = Tone.PLAIN
    note: str = ""
    strong: bool = False


@dataclass(frozen=True)
class NamedBars:
    """All lines; `titles` of names, numbers and bars stand above."""

    bars: tuple[NamedBar, ...] = ()
    titles: tuple[str, str, str] = ("", "", "")


def bars_height(shown: NamedBars, theme: Theme) -> float:
    """Height `paint_bars` needs, in the painter's units."""
    return theme.zoom * (_HEADER + _LINE * len(shown.bars))


def scale_of(bars: Sequence[NamedBar], width: float) -> float:
    """Width of one unit; zero where there is nothing to draw."""
    most = max((bar.length or 0.0 for bar in bars), default=0.0)
    return width / most if most > 0 else 0.0


def paint_bars(painter: QPainter, rect: QRectF, shown: NamedBars, theme: Theme) -> None:
    """Draw `shown` into `rect`."""
    unit = theme.zoom
    names, numbers, notes = _widths(shown, rect.width(), theme)
    number = QRectF(rect.left() + names + 12 * unit, rect.top(), numbers, _HEADER * unit)
    left = number.right() + 16 * unit
    right = rect.right() - (notes + 12 * unit if notes else 0)
    _paint_titles(painter, rect, number, left, shown, theme)
    scale = scale_of(shown.bars, max(right - left, 1.0))
    top = rect.top() + _HEADER * unit
    for at, bar in enumerate(shown.bars):
        line = QRectF(rect.left(), top + at * _LINE * unit, rect.width(), _LINE * unit)
        if bar.name:
            rule(painter, rect.left(), line.top(), rect.right(), line.top(), theme)
        font = theme.picture_font(bold=bar.strong)
        write(painter, QRectF(line.left(), line.top(), names, line.height()), bar.name, font, theme.ink)
        box = QRectF(number.left(), line.top(), numbers, line.height())
        write(painter, box, bar.number, font, _ink(bar, theme), RIGHT)
        end = _paint_bar(painter, line, left, bar, scale, theme)
        note = QRectF(end + 8 * unit, line.top(), rect.right() - end - 8 * unit, line.height())
        write(painter, note, bar.note, theme.picture_font(Size.SMALL), theme.faint, LEFT)


def _widths(shown: NamedBars, room: float, theme: Theme) -> tuple[float, float, float]:
    """Widths of names, numbers and notes."""
    bold, small = theme.picture_font(bold=True), theme.picture_font(Size.SMALL)
    names = [text_width(bold, b.name) for b in shown.bars] + [text_width(small, shown.titles[0])]
    numbers = [text_width(bold, b.number) for b in shown.bars] + [text_width(small, shown.titles[1])]
    notes = [text_width(small, b.note) for b in shown.bars if b.note and b.length is not None]
    return (
        min(max(names), room * _NAME_SHARE),
        max(numbers),
        min(max(notes, default=0.0), room * _NOTE_SHARE),
    )


def _paint_titles(
    painter: QPainter, rect: QRectF, number: QRectF, left: float, shown: NamedBars, theme: Theme
) -> None:
    font = theme.picture_font(Size.SMALL)
    name = QRectF(rect.left(), rect.top(), number.left() - rect.left(), number.height())
    write(painter, name, shown.titles[0], font, theme.faint)
    write(painter, number, shown.titles[1], font, theme.faint, RIGHT)
    bars = QRectF(left, rect.top(), rect.right() - left, number.height())
    write(painter, bars, shown.titles[2], font, theme.faint)


def _ink(bar: NamedBar, theme: Theme) -> QColor:
    return theme.ink if bar.tone is Tone.PLAIN else _edge(bar, theme)


def _edge(bar: NamedBar, theme: Theme) -> QColor:
    colour: QColor = getattr(theme, bar.tone.value)
    return colour


def _fill(bar: NamedBar, theme: Theme) -> QColor:
    if bar.tone is Tone.PLAIN:
        return theme.selected
    colour: QColor = getattr(theme, f"{bar.tone.value}_soft")
    return colour


def _paint_bar(
    painter: QPainter, line: QRectF, left: float, bar: NamedBar, scale: float, theme: Theme
) -> float:
    """Draw the bar; returns where it ends."""
    high = _BAR * theme.zoom
    top = line.center().y() - high / 2
    painter.setPen(QPen(theme.faint, 1))
    painter.drawLine(QPointF(left, top - 3), QPointF(left, top + high + 3))
    if bar.length is None:
        return left
    wide = max(_LEAST, bar.length * scale) if bar.length > 0 else 0.0
    if wide:
        box = QRectF(left, top, wide, high)
        painter.fillRect(box, _fill(bar, theme))
        if bar.tone is Tone.SHORT:
            hatch(painter, box, theme.short, theme.zoom)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(_edge(bar, theme), theme.zoom))
        painter.drawRect(box)
    return left + wide


class BarsPicture(Picture):
    """Named bars as a widget."""

    def __init__(self, name: str, parent: QWidget | None = None) -> None:
        super().__init__(name, parent)
        self._shown = NamedBars()

    @property
    def shown(self) -> NamedBars:
        """What is shown."""
        return self._shown

    def show_bars(self, shown: NamedBars) -> None:
        """Show `shown`."""
        self._shown = shown
        self.setAccessibleDescription(". ".join(_sentence(bar) for bar in shown.bars))
        self.updateGeometry()
        self.update()

    def content_height(self, theme: Theme) -> float:
        """Height of the bars."""
        return bars_height(self._shown, theme)

    def draw(self, painter: QPainter, rect: QRectF, theme: Theme) -> None:
        """Paint the bars."""
        if self._shown.bars:
            paint_bars(painter, rect, self._shown, theme)

    def rows(self) -> list[list[str]]:
        """Name, number and note of each bar."""
        made = [[self._shown.titles[0], self._shown.titles[1], ""]]
        name = ""
        for bar in self._shown.bars:
            name = bar.name or name
            made.append([name, bar.number, bar.note])
        return made

    def hint_at(self, position: QPointF) -> str:
        """The bar under the pointer in words."""
        zoom = current().zoom
        at = int((position.y() - _HEADER * zoom) // (_LINE * zoom))
        return _sentence(self._shown.bars[at]) if 0 <= at < len(self._shown.bars) else ""


def _sentence(bar: NamedBar) -> str:
    head = ": ".join(part for part in (bar.name, bar.number) if part)
    return ", ".join(part for part in (head, bar.note) if part)
