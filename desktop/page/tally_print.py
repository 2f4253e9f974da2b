"""The people tally on paper: the same figures as on screen, small, in as many columns as fit.

One phase: fractional above, recommended below, per category. Several phases: see `steps_print`.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from PySide6.QtCore import QLocale

from desktop import figures
from desktop.page.detail import Detail
from desktop.page.fullest import fullest
from desktop.page.marks import NOTHING, FiguresMark, Mark, Piece, TextMark, beside, paragraph, stacked
from desktop.page.recommendation import Recommendation
from desktop.page.speech import count_of
from desktop.page.steps_print import steps_piece
from desktop.page.text import Side, natural_width, shortened, text
from desktop.pictures.figure import Figure
from desktop.pictures.figure import Mark as Meaning
from desktop.pictures.tally_layout import Tally, TallyMetrics, TallyRow, tally_layout

_SCALE = 0.6  # figures of 18 units become 10.8 pt high
_GUTTER = 22.0
_ONE_COLUMN = 4  # more rows stand in two columns; fewer only where every figure is one person
_KEY = 8.0


def tally_piece(what: Recommendation, width: float, detail: Detail) -> Piece:
    """The tally of as many categories as `detail` leaves; nothing where there is none."""
    if what.tally is None or not what.tally.rows or detail.tally <= 0:
        return NOTHING
    kept = fullest(what.tally.rows, [_weight(row) for row in what.tally.rows], detail.tally)
    tally = replace(what.tally, rows=tuple(kept))
    if len(tally.phases) == 1:
        picture = _figures_piece(tally, width, what.locale)
    else:
        picture = steps_piece(tally, width, what.locale, compact=detail.compact)
    more = len(what.tally.rows) - len(tally.rows)
    if not more:
        return picture
    rest = f"and {count_of(more, 'more category', 'more categories')} in the table"
    return stacked([picture, paragraph(text(rest, _KEY, role="faint"), width)])


def _weight(row: TallyRow) -> float:
    return max((*(row.fractional or ()), *(row.exact or ()), row.before), default=0.0)


def _figures_piece(tally: Tally, width: float, locale: QLocale) -> Piece:
    half = _Rows(tally.rows, (width - _GUTTER) / 2, locale)
    columns = 2 if len(tally.rows) > _ONE_COLUMN or (len(tally.rows) > 1 and not half.values) else 1
    each = (width - (columns - 1) * _GUTTER) / columns
    share = -(-len(tally.rows) // columns)
    rows = half if columns == 2 else _Rows(tally.rows, width, locale)
    parts = [rows.piece(tally.rows[at : at + share]) for at in range(0, len(tally.rows), share)]
    body = beside(parts[0], parts[1], each + _GUTTER) if len(parts) > 1 else parts[0]
    entries = _entries(tally) + [(Meaning.STAYS, _standing_for(v, locale), v) for v in rows.values]
    return stacked([body, _key(entries, width)], 5.0)


class _Rows:
    """Rows of one tally, all with the same widths and the same scale of figures."""

    def __init__(self, rows: Sequence[TallyRow], width: float, locale: QLocale) -> None:
        self._locale = locale
        names = max(natural_width(text(r.name, 8.5)) for r in rows)
        self._name = min(names, width * 0.34)
        self._count = max(self._count_width(r) for r in rows)
        self._left = self._name + self._count + 16.0
        self._metrics = self._fitting(rows, max(40.0, (width - self._left) / _SCALE))
        self._placed = self._place(rows)
        people = {f.people for placed in self._placed.values() for f in placed}
        self.values = tuple(sorted(people, reverse=True)) if people - {1} else ()

    def piece(self, rows: Sequence[TallyRow]) -> Piece:
        """These rows below each other."""
        return stacked([self._row(row) for row in rows], 7.0)

    @staticmethod
    def _fitting(rows: Sequence[TallyRow], room: float) -> TallyMetrics:
        """Lines are higher where figures that stand for several people are."""
        low = TallyMetrics(room, line=20, row_gap=0)
        return low if tally_layout(rows, low).scale == 1 else TallyMetrics(room, line=28, row_gap=0)

    def _place(self, rows: Sequence[TallyRow]) -> dict[str, tuple[Figure, ...]]:
        """The figures of every row from its own top, at the one scale at which all rows fit."""
        layout = tally_layout(rows, self._metrics)
        return {
            row.name: tuple(replace(f, y=f.y - placed.top) for f in placed.figures)
            for row, placed in zip(rows, layout.rows, strict=True)
        }

    def _counts(self, row: TallyRow) -> tuple[str, str]:
        fractional = figures.people(row.fractional[0], self._locale) if row.fractional else ""
        return fractional, figures.people(row.exact[0], self._locale) if row.exact else ""

    def _count_width(self, row: TallyRow) -> float:
        fractional, exact = self._counts(row)
        return max(natural_width(text(fractional, 8.0)), natural_width(text(exact, 10.0, bold=True)))

    def _row(self, row: TallyRow) -> Piece:
        line = self._metrics.line * _SCALE
        fractional, exact = self._counts(row)
        left, upper, lower = self._name + 6.0, line - 10.4, 2 * line - 11.4
        label = shortened(text(row.name, 8.5), self._name + 0.5, 1)
        above = text(fractional, 8.0, role="fractional", side=Side.RIGHT)
        below = text(exact, 10.0, bold=True, role="exact", side=Side.RIGHT)
        marks: tuple[Mark, ...] = (
            TextMark(0.0, lower + 1.5, self._name + 0.5, label),
            TextMark(left, upper, self._count, above),
            TextMark(left, lower, self._count, below),
            FiguresMark(self._left, 0.0, _SCALE, self._placed[row.name]),
        )
        return Piece(2 * line, marks)


def _standing_for(people: float, locale: QLocale) -> str:
    return "1 person" if people == 1 else f"{figures.people(people, locale)} people"


def _entries(tally: Tally) -> list[tuple[Meaning, str, float]]:
    rows = tally.rows
    stays = any(r.exact and min(r.exact[0], r.before) > 0 for r in rows)
    every = [
        (Meaning.FRACTIONAL, "fractional crew", any(r.fractional for r in rows)),
        (Meaning.STAYS, "recommended, on the books", stays),
        (Meaning.JOINS, "joins", any(r.joiners() > 0 for r in rows)),
        (Meaning.LEAVES, "leaves", any(r.leavers() > 0 for r in rows)),
    ]
    return [(mark, words, 1.0) for mark, words, there in every if there]


def _key(entries: Sequence[tuple[Meaning, str, float]], width: float) -> Piece:
    """What each kind of figure means, on one or two lines."""
    marks: list[Mark] = []
    x, y, line = 0.0, 0.0, 12.5
    for meaning, words, people in entries:
        metrics = TallyMetrics(100.0, height=13)
        high = 13.0 if people == 1 else metrics.coin_height
        wide = metrics.width(people)
        what = text(words, _KEY, role="faint")
        needed = wide * _SCALE + 4.0 + natural_width(what)
        if x and x + needed > width:
            x, y = 0.0, y + line
        figure = Figure(0.0, 18.0 - high, wide, high, meaning, 1, 0.4 if meaning is Meaning.FRACTIONAL else 1)
        marks.append(FiguresMark(x, y - 1.2, _SCALE, (figure,)))
        marks.append(TextMark(x + wide * _SCALE + 4.0, y, natural_width(what), what))
        x += needed + 14.0
    return Piece(y + line, tuple(marks))
