"""Head counts over phases on paper: a step per phase, fractional as a broken line over the recommended area.

Few categories: full width, every count over its step. Many: two columns with the counts of the fullest phase
only; the table has the others.
"""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QLocale

from desktop import figures
from desktop.page.marks import Mark, Piece, StepsMark, TextMark, beside, stacked
from desktop.page.text import LEADING, Side, Text, natural_width, shortened, text
from desktop.pictures.phase_tally import phase_edges
from desktop.pictures.tally_layout import Tally, TallyRow

_GUTTER = 22.0
_WIDE_ROWS = 5
_STEP = 15.0
_KEY = 8.0


def steps_piece(tally: Tally, width: float, locale: QLocale, *, compact: bool) -> Piece:
    """The steps of every category of `tally`; `compact` leaves the counts per phase to the table."""
    wide = _Wide(tally, width, locale)
    if not compact and len(tally.rows) <= _WIDE_ROWS and wide.fits:
        return stacked([wide.piece(), _key(width, "")], 4.0)
    each = (width - _GUTTER) / 2
    share = -(-len(tally.rows) // 2)
    columns = _Narrow(tally, each, locale)
    parts = [columns.piece(tally.rows[at : at + share]) for at in range(0, len(tally.rows), share)]
    body = beside(parts[0], parts[1], each + _GUTTER) if len(parts) > 1 else parts[0]
    return stacked([body, _key(width, "counts: the fullest phase")], 4.0)


def _name_text(row: TallyRow) -> Text:
    return text(row.name, 8.5)


def _exact(words: str) -> Text:
    return text(words, 9.0, bold=True, role="exact")


def _fractional(words: str) -> Text:
    return text(words, 8.0, role="fractional")


class _Wide:
    """One category below the other, with the count of every phase over its step."""

    def __init__(self, tally: Tally, width: float, locale: QLocale) -> None:
        self._tally = tally
        self._locale = locale
        names = max((natural_width(_name_text(r)) for r in tally.rows), default=0.0)
        self._name = min(names, width * 0.24)
        self._left = self._name + 12.0
        self._edges = phase_edges(tally.phases, 0.0, width - self._left)

    @property
    def fits(self) -> bool:
        """True where every count has room over its step."""
        return all(
            self._edges[at] + sum(natural_width(t) + 4.0 for t in self._counts(row, at))
            <= self._edges[at + 1]
            for row in self._tally.rows
            for at in range(len(self._tally.phases))
        )

    def piece(self) -> Piece:
        """Phase names, then one row per category."""
        rows = [self._row(row) for row in self._tally.rows]
        return stacked([self._header(), *rows], 4.0)

    def _header(self) -> Piece:
        marks: list[Mark] = []
        for at, phase in enumerate(self._tally.phases):
            room = self._edges[at + 1] - self._edges[at] - 4.0
            title = shortened(text(phase.name, 8.0, role="faint"), room, 1)
            marks.append(TextMark(self._left + self._edges[at], 0.0, room, title))
        return Piece(8.0 * LEADING, tuple(marks))

    def _counts(self, row: TallyRow, at: int) -> list[Text]:
        made = [_exact(figures.people(row.exact[at], self._locale))] if row.exact else []
        return (
            [*made, _fractional(figures.people(row.fractional[at], self._locale))] if row.fractional else made
        )

    def _row(self, row: TallyRow) -> Piece:
        top = 9.0 * LEADING
        label = shortened(_name_text(row), self._name + 0.5, 1)
        steps = StepsMark(
            self._left, top, _STEP, tuple(self._edges), row.exact or (), row.fractional or (), dividers=True
        )
        marks: list[Mark] = [TextMark(0.0, top + _STEP - 8.5 * LEADING, self._name + 0.5, label), steps]
        for at in range(len(self._tally.phases)):
            x = self._left + self._edges[at]
            for count in self._counts(row, at):
                marks.append(TextMark(x, 9.0 - count.points, natural_width(count), count))
                x += natural_width(count) + 4.0
        return Piece(top + _STEP, tuple(marks))


class _Narrow:
    """Name, fractional and recommended count of the fullest phase, and the steps, on one line."""

    def __init__(self, tally: Tally, width: float, locale: QLocale) -> None:
        self._tally = tally
        self._locale = locale
        rows = tally.rows
        self._name = min(max(natural_width(_name_text(r)) for r in rows), width * 0.36)
        self._less = max(natural_width(_fractional(self._peak(r.fractional))) for r in rows)
        self._more = max(natural_width(_exact(self._peak(r.exact))) for r in rows)
        self._left = self._name + self._less + self._more + 18.0
        self._edges = tuple(phase_edges(tally.phases, 0.0, max(30.0, width - self._left)))

    def piece(self, rows: Sequence[TallyRow]) -> Piece:
        """These rows below each other."""
        return stacked([self._row(row) for row in rows], 4.0)

    def _peak(self, counts: tuple[float, ...] | None) -> str:
        return figures.people(max(counts), self._locale) if counts else ""

    def _row(self, row: TallyRow) -> Piece:
        left = self._name + 6.0
        less = text(self._peak(row.fractional), 8.0, role="fractional", side=Side.RIGHT)
        more = text(self._peak(row.exact), 9.0, bold=True, role="exact", side=Side.RIGHT)
        label = shortened(_name_text(row), self._name + 0.5, 1)
        marks: tuple[Mark, ...] = (
            TextMark(0.0, _STEP - 8.4, self._name + 0.5, label),
            TextMark(left, _STEP - 7.9, self._less, less),
            TextMark(left + self._less + 5.0, _STEP - 8.9, self._more, more),
            StepsMark(self._left, 1.0, _STEP - 1.0, self._edges, row.exact or (), row.fractional or ()),
        )
        return Piece(_STEP + 2.0, marks)


def _key(width: float, note: str) -> Piece:
    """What line and area mean."""
    marks: list[Mark] = []
    x = 0.0
    samples: tuple[tuple[str, tuple[float, ...], tuple[float, ...]], ...] = (
        ("fractional crew", (), (1.0,)),
        ("recommended crew", (1.0,), ()),
    )
    for words, exact, fractional in samples:
        what = text(words, _KEY, role="faint")
        marks.append(StepsMark(x, 1.5, 6.5, (0.0, 18.0), exact, fractional))
        marks.append(TextMark(x + 22.0, 0.0, natural_width(what), what))
        x += 22.0 + natural_width(what) + 14.0
    rest = text(f"{note}; each category to its own height".lstrip("; "), _KEY, role="faint")
    marks.append(TextMark(x, 0.0, width - x, rest))
    return Piece(_KEY * LEADING + 1.0, tuple(marks))
