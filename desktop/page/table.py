"""The printed table: a name column that wraps, number columns as wide as their numbers, thin rules.

Columns that do not fit beside each other go into a second band below, under the same names.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from desktop.page.marks import Mark, Piece, RuleMark, TextMark, stacked
from desktop.page.text import (
    LEADING,
    Side,
    Text,
    height,
    line_count,
    natural_width,
    shortened,
    text,
    widest_word,
)

_GUTTER = 9.0
_PAD = 1.6
_NARROWEST_NAME = 96.0
_NAME_SHARE = 0.25  # names wrap before columns need a second band
_WIDEST_HEADER = 62.0
_WIDER = 14.0


@dataclass(frozen=True)
class Column:
    """Numbers under a title and a unit; `feet` are the cells of the rows below the sum rule.

    `strong`: the numbers that count; `narrow`: the title wraps rather than widen the column.
    """

    title: str
    unit: str
    cells: tuple[str, ...]
    feet: tuple[str, ...]
    strong: bool = False
    narrow: bool = False


@dataclass(frozen=True)
class Grid:
    """Names of rows and foot rows with their columns."""

    title: str
    names: tuple[str, ...]
    foot_names: tuple[str, ...]
    columns: tuple[Column, ...]


@dataclass(frozen=True)
class _Set:
    """A column with its measured width."""

    column: Column
    width: float


def table(grid: Grid, width: float, points: float, name_lines: int) -> Piece:
    """`grid` in one band, or in as many as its columns need; titles wrap before a second band is made."""
    names = _name_floor(grid, width, points)
    bands = _bands([_Set(c, _width(c, points)) for c in grid.columns], width, names)
    if len(bands) > 1:
        tight = [replace(c, narrow=True) for c in grid.columns]
        bands = _bands([_Set(c, _width(c, points)) for c in tight], width, names)
    pieces = [_band(grid, band, width, points, name_lines) for band in bands]
    return stacked(pieces, points)


def _name_floor(grid: Grid, width: float, points: float) -> float:
    natural = max((natural_width(text(n, points)) for n in (*grid.names, *grid.foot_names)), default=0.0)
    return min(max(natural, _NARROWEST_NAME), width * _NAME_SHARE)


def _width(column: Column, points: float) -> float:
    """As wide as its widest number; titles wrap, but no word of theirs is broken."""
    cells = max((natural_width(t) for t in _cells(column, points)), default=0.0)
    titles = max(widest_word(t) for t in _titles(column, points))
    whole = max(natural_width(t) for t in _titles(column, points))
    return max(cells, titles, 0.0 if column.narrow else min(whole, _WIDEST_HEADER))


def _cells(column: Column, points: float) -> list[Text]:
    strong = [_cell(words, points, column.strong) for words in (*column.cells, *column.feet[:1])]
    return strong + [_cell(words, points) for words in column.feet[1:]]


def _cell(words: str, points: float, strong: bool = False) -> Text:
    return text(words, points, bold=strong, role="exact" if strong else "ink", side=Side.RIGHT)


def _titles(column: Column, points: float) -> list[Text]:
    title = text(column.title, max(8.0, points - 0.5), role="ink", side=Side.RIGHT)
    unit = text(column.unit, max(8.0, points - 0.5), role="faint", side=Side.RIGHT)
    return [title, unit] if column.unit else [title]


def _bands(columns: Sequence[_Set], width: float, names: float) -> list[list[_Set]]:
    """As few bands as possible, columns in order, bands of about equal width."""
    room = width - names
    needed = sum(c.width + _GUTTER for c in columns)
    count = max(1, int(-(-needed // room)))
    while True:
        bands = _filled(columns, min(room, needed / count + 40.0))
        if len(bands) <= count or count > len(columns):
            return bands
        count += 1


def _filled(columns: Sequence[_Set], room: float) -> list[list[_Set]]:
    bands: list[list[_Set]] = [[]]
    used = 0.0
    for column in columns:
        wide = column.width + _GUTTER
        if bands[-1] and used + wide > room:
            bands.append([])
            used = 0.0
        bands[-1].append(column)
        used += wide
    return bands


def _band(grid: Grid, band: list[_Set], width: float, points: float, name_lines: int) -> Piece:
    band, names = _spread(grid, band, width, points)
    lefts = _lefts(band, names)
    rows = [_header(grid.title, band, names, lefts, points)]
    rows.append(Piece(3.0, (RuleMark(0.0, 1.2, width, 0.7, "ink"),)))
    for at, name in enumerate(grid.names):
        cells = [_cell(c.column.cells[at], points, c.column.strong) for c in band]
        rows.append(_row(name, cells, band, names, lefts, name_lines))
        last = at == len(grid.names) - 1
        line = RuleMark(0.0, 0.9, width, 0.6 if last else 0.25, "ink" if last else "rule")
        rows.append(Piece(1.8, (line,)))
    for at, name in enumerate(grid.foot_names):
        cells = [_cell(c.column.feet[at], points, c.column.strong and at == 0) for c in band]
        if any(cell.words for cell in cells):
            rows.append(_row(name, cells, band, names, lefts, 1))
    return stacked(rows)


def _spread(grid: Grid, band: list[_Set], width: float, points: float) -> tuple[list[_Set], float]:
    """Room the names do not need is shared among the columns, up to a limit; and the names' width."""
    names = max((natural_width(text(n, points)) for n in (*grid.names, *grid.foot_names)), default=0.0)
    spare = width - max(names + 4.0, _NARROWEST_NAME) - sum(c.width + _GUTTER for c in band)
    more = min(_WIDER, max(0.0, spare / len(band)))
    wider = [replace(c, width=c.width + more) for c in band]
    return wider, width - sum(c.width + _GUTTER for c in wider)


def _lefts(band: list[_Set], names: float) -> list[float]:
    lefts, x = [], names
    for column in band:
        lefts.append(x + _GUTTER)
        x += column.width + _GUTTER
    return lefts


def _header(title: str, band: list[_Set], names: float, lefts: list[float], points: float) -> Piece:
    """Titles and units stand on the line below."""
    small = max(8.0, points - 0.5)
    stacks = [_title_stack(c, points) for c in band]
    high = max((s.height for s in stacks), default=small * LEADING)
    marks: list[Mark] = []
    for left, stack in zip(lefts, stacks, strict=True):
        marks += stack.at(left, high - stack.height)
    head = text(title, small, role="faint")
    marks.append(TextMark(0.0, high - small * LEADING, names, head))
    return Piece(high, tuple(marks))


def _title_stack(column: _Set, points: float) -> Piece:
    pieces = [
        Piece(height(t, column.width), (TextMark(0.0, 0.0, column.width, t),))
        for t in _titles(column.column, points)
    ]
    return stacked(pieces)


def _row(
    name: str, cells: list[Text], band: list[_Set], names: float, lefts: list[float], lines: int
) -> Piece:
    points = cells[0].points
    label = shortened(text(name, points), names - 2.0, lines)
    high = line_count(label, names - 2.0) * LEADING * points
    marks: list[Mark] = [TextMark(0.0, _PAD, names - 2.0, label)]
    marks += [
        TextMark(left, _PAD, column.width, cell)
        for left, cell, column in zip(lefts, cells, band, strict=True)
        if cell.words
    ]
    return Piece(high + 2 * _PAD - 1.0, tuple(marks))
