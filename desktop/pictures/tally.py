"""The people tally: the fractional crew in part-filled figures above, the exact crew in whole ones below.

`paint_tally` draws on anything a QPainter can draw on, in units of a 96 dpi screen, and keeps to vector
strokes. Plans of several phases are drawn as stepped head counts (`phase_tally`).
"""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QPainter, QPaintEvent
from PySide6.QtWidgets import QWidget

from desktop import crew_words as say
from desktop import figures
from desktop.pictures.brush import RIGHT, rule, text_width, write
from desktop.pictures.figure import Mark, paint_figure
from desktop.pictures.key import key_width, paint_key
from desktop.pictures.phase_tally import paint_names, paint_phases, phases_height
from desktop.pictures.picture import Picture
from desktop.pictures.tally_layout import RowLayout, Tally, TallyMetrics, TallyRow, tally_layout
from desktop.theme import Size, Theme, current

_LEGEND_HEIGHT = 28.0
_NAME_SHARE = 0.3
_FEW = 5
_NAMES, _PHASE = 17, 8.5  # least width of the names and of each of several phases, in steps of the grid


class Columns:
    """Where names, counts, figures and notes of a tally stand between left and right."""

    def __init__(self, tally: Tally, rect: QRectF, theme: Theme) -> None:
        unit = theme.zoom
        names = max((text_width(theme.picture_font(), r.name) for r in tally.rows), default=0)
        lots = max((text_width(theme.picture_font(Size.SMALL), _lot(r)) for r in tally.rows), default=0)
        counts = max((_count_width(r, theme) for r in tally.rows), default=0)
        notes = max((text_width(theme.picture_font(Size.SMALL), _moves(r)) for r in tally.rows), default=0)
        self.name = rect.left()
        self.name_width = min(max(names, lots), rect.width() * _NAME_SHARE)
        self.count = self.name + self.name_width + 12 * unit
        self.count_width = counts
        self.figures = self.count + counts + 16 * unit
        self.note_width = notes
        room = rect.right() - self.figures - (notes + 12 * unit if notes else 0)
        self.metrics = _metrics(max(room, 40.0), len(tally.rows), unit)


def _metrics(figures_width: float, rows: int, unit: float) -> TallyMetrics:
    """Larger figures for few categories."""
    if rows <= _FEW:
        return TallyMetrics(figures_width, 22 * unit, 4 * unit, 29 * unit, 10 * unit)
    return TallyMetrics(figures_width, 18 * unit, 3 * unit, 25 * unit, 8 * unit)


def _lot(row: TallyRow) -> str:
    return say.in_lots(figures.people(row.lot)) if row.lot != 1 else ""


def _count_width(row: TallyRow, theme: Theme) -> float:
    exact = text_width(theme.picture_font(Size.LARGE, bold=True), _exact_text(row))
    return max(exact, text_width(theme.picture_font(), _fractional_text(row)))


def _exact_text(row: TallyRow) -> str:
    return figures.people(row.exact[0]) if row.exact else ""


def _fractional_text(row: TallyRow) -> str:
    return figures.people(row.fractional[0]) if row.fractional else ""


def _moves(row: TallyRow, at: int = 0) -> str:
    joins, leaves = row.joiners(at), row.leavers(at)
    if joins > 0:
        return say.joining(figures.people(joins))
    return say.leaving(figures.people(leaves)) if leaves > 0 else ""


def tally_height(tally: Tally, theme: Theme, *, legend: bool = True) -> float:
    """Height `paint_tally` needs, in the painter's units."""
    if len(tally.phases) > 1:
        return phases_height(tally, theme)
    rows = len(tally.rows)
    sizes = _metrics(0, rows, theme.zoom)
    foot = _LEGEND_HEIGHT * theme.zoom if legend else 0
    return rows * (2 * sizes.line + sizes.row_gap) - sizes.row_gap + foot if rows else 0.0


def paint_tally(
    painter: QPainter,
    rect: QRectF,
    tally: Tally,
    theme: Theme,
    *,
    legend: bool = True,
    shrink: float = 1.0,
    seen: QRectF | None = None,
) -> None:
    """Draw `tally` into `rect`; `shrink` < 1 draws everything smaller (for a crowded printed page).

    `seen`: the part that will be looked at, where that is not all of it.
    """
    painter.save()
    painter.translate(rect.topLeft())
    painter.scale(shrink, shrink)
    inner = QRectF(0, 0, rect.width() / shrink, rect.height() / shrink)
    if len(tally.phases) > 1:
        paint_phases(painter, inner, tally, theme, seen and seen.translated(-rect.topLeft()))
    else:
        _paint_one_phase(painter, inner, tally, theme, legend)
    painter.restore()


def _paint_one_phase(painter: QPainter, rect: QRectF, tally: Tally, theme: Theme, legend: bool) -> None:
    columns = Columns(tally, rect, theme)
    layout = tally_layout(tally.rows, columns.metrics)
    for number, (row, placed) in enumerate(zip(tally.rows, layout.rows, strict=True)):
        if number:
            y = rect.top() + placed.top - columns.metrics.row_gap / 2
            rule(painter, rect.left(), y, rect.right(), y, theme)
        _paint_words(painter, rect, row, placed, columns, theme)
        _paint_figures(painter, rect, placed, columns, theme)
    if legend and tally.rows:
        top = rect.top() + layout.height + 8 * theme.zoom
        entries = _legend(tally, layout.scale)
        wide = sum(key_width(mark, text, theme) + 14 * theme.zoom for mark, text in entries)
        left = columns.figures if columns.figures + wide <= rect.right() else rect.left()
        box = QRectF(left, top, rect.right() - left, 20 * theme.zoom)
        paint_key(painter, box, entries, theme)


def _paint_words(
    painter: QPainter, rect: QRectF, row: TallyRow, placed: RowLayout, columns: Columns, theme: Theme
) -> None:
    """Name, both counts and who joins or leaves."""
    line = columns.metrics.line
    upper = QRectF(columns.count, rect.top() + placed.top, columns.count_width, line)
    lower = upper.translated(0, line)
    name = QRectF(columns.name, lower.top(), columns.name_width, line)
    lot = name.translated(0, -line)
    if not row.exact:  # the name stands beside the only line of figures
        name, lot = lot, name
    write(painter, name, row.name, theme.picture_font(), theme.ink)
    small = theme.picture_font(Size.SMALL)
    write(painter, lot, _lot(row), small, theme.faint)
    write(painter, upper, _fractional_text(row), theme.picture_font(), theme.fractional, RIGHT)
    large = theme.picture_font(Size.LARGE, bold=True)
    write(painter, lower, _exact_text(row), large, theme.exact, RIGHT)
    left = columns.figures + placed.right + 12 * theme.zoom
    note = QRectF(left, lower.top(), columns.note_width, line)
    write(painter, note, _moves(row), small, theme.ink)


def _paint_figures(
    painter: QPainter, rect: QRectF, placed: RowLayout, columns: Columns, theme: Theme
) -> None:
    painter.save()
    painter.translate(columns.figures, rect.top())
    for figure in placed.figures:
        label = figures.people(figure.people) if figure.people > 1 else ""
        paint_figure(painter, figure, theme, label)
    painter.restore()


def _legend(tally: Tally, scale: int) -> list[tuple[Mark | None, str]]:
    rows = tally.rows
    shown = [(Mark.FRACTIONAL, say.LEGEND_FRACTIONAL, any(r.fractional for r in rows))]
    stays = say.LEGEND_STAYS if tally.proved else say.LEGEND_BEST_FOUND_STAYS
    shown.append((Mark.STAYS, stays, any(r.exact and min(r.exact[0], r.before) > 0 for r in rows)))
    shown.append((Mark.JOINS, say.LEGEND_JOINS, any(r.joiners() > 0 for r in rows)))
    shown.append((Mark.LEAVES, say.LEGEND_LEAVES, any(r.leavers() > 0 for r in rows)))
    made: list[tuple[Mark | None, str]] = [(mark, text) for mark, text, there in shown if there]
    if scale > 1:
        made.append((None, say.legend_scale(figures.people(scale))))
    return made


class TallyPicture(Picture):
    """The people tally as a widget."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(say.TALLY, parent)
        self._tally = Tally((), ())
        self._seen: QRectF | None = None
        self.least = TallyPicture.least

    def content_height(self, theme: Theme) -> float:
        """Height of the tally."""
        return tally_height(self._tally, theme)

    @property
    def tally(self) -> Tally:
        """What is shown."""
        return self._tally

    def show_tally(self, tally: Tally) -> None:
        """Show `tally`; many phases need their width."""
        if tally == self._tally:
            return
        self._tally = tally
        self.least = max(TallyPicture.least, _NAMES + len(tally.phases) * _PHASE)
        self.setAccessibleDescription(". ".join(self._sentences()))
        self.updateGeometry()
        self.update()

    def _sentences(self) -> list[str]:
        return [self._sentence(row) for row in self._tally.rows]

    def _sentence(self, row: TallyRow) -> str:
        def counts(crew: tuple[float, ...] | None) -> str:
            return ", ".join(figures.people(n) for n in crew) if crew else say.NO_CREW

        moves = "; ".join(
            f"{self._tally.phases[at].name}: {text}" if len(self._tally.phases) > 1 else text
            for at in range(len(self._tally.phases))
            if (text := _moves(row, at))
        )
        return say.tally_row(row.name, counts(row.fractional), counts(row.exact), moves and f" ({moves})")

    def draw(self, painter: QPainter, rect: QRectF, theme: Theme) -> None:
        """Paint the tally."""
        paint_tally(painter, rect, self._tally, theme, seen=self._seen)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The picture; where it is scrolled sideways the names stay."""
        self._seen = QRectF(event.rect())
        super().paintEvent(event)
        self._seen = None
        left, inner = self.visibleRegion().boundingRect().left(), self.inner()
        if left <= 0 or len(self._tally.phases) < 2:
            return
        painter = QPainter(self)
        try:
            painter.setRenderHint(QPainter.RenderHint.Antialiasing)
            paint_names(painter, inner.translated(left, 0), self._tally, current())
        finally:
            painter.end()

    def rows(self) -> list[list[str]]:
        """Category, phase, fractional, exact, joiners, leavers."""
        return tally_table(self._tally)

    def hint_at(self, position: QPointF) -> str:
        """The category under the pointer in words."""
        count = len(self._tally.rows)
        if not count:
            return ""
        header = phases_height(Tally(self._tally.phases, ()), current()) if len(self._tally.phases) > 1 else 0
        body = self.content_height(current()) - header
        at = int((position.y() - header) / max(body, 1) * count)
        return self._sentence(self._tally.rows[at]) if 0 <= at < count else ""


def tally_table(tally: Tally) -> list[list[str]]:
    """The table behind the tally."""
    several = len(tally.phases) > 1
    head = [say.CATEGORY, *([say.PHASE] if several else []), say.FRACTIONAL, say.EXACT, say.JOIN, say.LEAVE]
    made = [head]
    for row in tally.rows:
        for at, phase in enumerate(tally.phases):
            where = [row.name, phase.name] if several else [row.name]
            made.append(where + _numbers(row, at))
    return made


def _numbers(row: TallyRow, at: int) -> list[str]:
    fractional = figures.people(row.fractional[at]) if row.fractional else ""
    exact = figures.people(row.exact[at]) if row.exact else ""
    return [fractional, exact, figures.people(row.joiners(at)), figures.people(row.leavers(at))]
