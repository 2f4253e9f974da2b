"""Head counts over several phases: a step per phase and category, fractional line over exact area.

Widths follow the lengths of the phases, half of the room being shared equally so that short ones stay
readable. Each category has its own height; the numbers stand above each step.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QPainter, QPen, QPolygonF

from desktop import crew_words as say
from desktop import figures
from desktop.pictures.brush import LEFT, rule, text_width, write
from desktop.pictures.figure import SHAPE, Figure, Mark, paint_figure
from desktop.pictures.key import paint_entry, paint_key
from desktop.pictures.tally_layout import Tally, TallyPhase, TallyRow
from desktop.theme import Size, Theme

_HEADER = 40.0
_NUMBERS = 28.0
_STEP, _STEP_OF_FEW = 28.0, 44.0
_FEW = 4
_GAP = 12.0
_LEGEND = 24.0
_NAME_SHARE = 0.25


def phases_height(tally: Tally, theme: Theme) -> float:
    """Height `paint_phases` needs, in the painter's units."""
    legend = _LEGEND if tally.rows else 0
    return theme.zoom * (_HEADER + len(tally.rows) * (_NUMBERS + _step(tally) + _GAP) + legend)


def _step(tally: Tally) -> float:
    return _STEP_OF_FEW if len(tally.rows) <= _FEW else _STEP


def phase_edges(phases: Sequence[TallyPhase], left: float, right: float) -> list[float]:
    """Left edge of each phase and the right edge of the last."""
    total = sum(p.periods for p in phases) or 1
    edges = [left]
    for phase in phases:
        share = 0.5 / len(phases) + 0.5 * phase.periods / total
        edges.append(edges[-1] + share * (right - left))
    return edges


def step_points(counts: Sequence[float], edges: Sequence[float], base: float, unit: float) -> list[QPointF]:
    """The corners of the step line of `counts` at `unit` of height per person, left to right."""
    points = []
    for at, count in enumerate(counts):
        y = base - count * unit
        points += [QPointF(edges[at], y), QPointF(edges[at + 1], y)]
    return points


@dataclass(frozen=True)
class _Frame:
    """Where one category is drawn."""

    row: TallyRow
    top: float
    edges: list[float]
    theme: Theme
    step: float

    def cell(self, at: int) -> QRectF:
        """The line of numbers of phase `at`."""
        left = self.edges[at] + 4 * self.theme.zoom
        width = self.edges[at + 1] - self.edges[at] - 8 * self.theme.zoom
        return QRectF(left, self.top, width, _NUMBERS * self.theme.zoom)


def paint_phases(
    painter: QPainter, rect: QRectF, tally: Tally, theme: Theme, seen: QRectF | None = None
) -> None:
    """Draw the stepped head counts of `tally` into `rect`; only what touches `seen` where that is given."""
    seen = rect if seen is None else seen
    unit = theme.zoom
    name_width = _name_width(tally, rect.width() * _NAME_SHARE, theme)
    edges = phase_edges(tally.phases, rect.left() + name_width + 16 * unit, rect.right())
    _paint_header(painter, rect.top(), tally, edges, theme)
    top = rect.top() + _HEADER * unit
    for row in tally.rows:
        rule(painter, rect.left(), top - 4 * unit, rect.right(), top - 4 * unit, theme)
        frame = _Frame(row, top, edges, theme, _step(tally) * unit)
        high = (_NUMBERS + _GAP) * unit + frame.step
        if top - _GAP * unit <= seen.bottom() and top + high >= seen.top():
            _paint_name(painter, QRectF(rect.left(), top + 3 * unit, name_width, 20 * unit), row, theme)
            _paint_steps(painter, frame)
            for at in range(len(tally.phases)):
                if edges[at] <= seen.right() and edges[at + 1] >= seen.left():
                    _paint_cell(painter, frame, at)
        top += high
    if tally.rows:
        whole = say.LEGEND_EXACT if tally.proved else say.LEGEND_BEST_FOUND
        _paint_key(painter, QRectF(edges[0], top, rect.right() - edges[0], 20 * unit), whole, theme)


def paint_names(painter: QPainter, rect: QRectF, tally: Tally, theme: Theme) -> None:
    """The names again, on paper of their own at the left of `rect`: for when the picture is scrolled."""
    unit = theme.zoom
    name_width = _name_width(tally, rect.width() * _NAME_SHARE, theme)
    margin = 12 * unit
    ground = QRectF(rect.left() - margin, rect.top(), name_width + 2 * margin, rect.height())
    painter.fillRect(ground, theme.paper)
    top = rect.top() + _HEADER * unit
    for row in tally.rows:
        rule(painter, rect.left(), top - 4 * unit, rect.left() + name_width, top - 4 * unit, theme)
        _paint_name(painter, QRectF(rect.left(), top + 3 * unit, name_width, 20 * unit), row, theme)
        top += (_NUMBERS + _GAP + _step(tally)) * unit


def _paint_name(painter: QPainter, box: QRectF, row: TallyRow, theme: Theme) -> None:
    write(painter, box, row.name, theme.picture_font(), theme.ink)
    below = box.translated(0, 18 * theme.zoom)
    write(painter, below, _name_note(row), theme.picture_font(Size.SMALL), theme.faint)


def _name_width(tally: Tally, most: float, theme: Theme) -> float:
    names = [text_width(theme.picture_font(), row.name) for row in tally.rows]
    notes = [text_width(theme.picture_font(Size.SMALL), _name_note(row)) for row in tally.rows]
    return min(max(names + notes, default=0), most)


def _name_note(row: TallyRow) -> str:
    if row.before > 0:
        return say.on_the_books(figures.people(row.before))
    return say.in_lots(figures.people(row.lot)) if row.lot != 1 else ""


def _paint_header(painter: QPainter, top: float, tally: Tally, edges: list[float], theme: Theme) -> None:
    unit, small, font = theme.zoom, theme.picture_font(Size.SMALL), theme.picture_font()
    widths = [right - left - 8 * unit for left, right in pairwise(edges)]
    if any(text_width(font, p.name) > wide for p, wide in zip(tally.phases, widths, strict=True)):
        font = small  # rather than a name that is cut
    for at, phase in enumerate(tally.phases):
        box = QRectF(edges[at] + 4 * unit, top, widths[at], 18 * unit)
        write(painter, box, phase.name, font, theme.ink)
        length = say.periods(figures.number(phase.periods), tally.period)
        write(painter, box.translated(0, 16 * unit), length, small, theme.faint)


def _paint_steps(painter: QPainter, frame: _Frame) -> None:
    """Exact as a filled area, fractional as a broken line, leavers and joiners as its jumps."""
    theme, row = frame.theme, frame.row
    base = frame.top + _NUMBERS * theme.zoom + frame.step
    peak = max((n for crew in (row.fractional, row.exact) if crew for n in crew), default=0) or 1
    unit = (frame.step - 4 * theme.zoom) / peak
    if row.exact:
        top = step_points(row.exact, frame.edges, base, unit)
        area = [QPointF(frame.edges[0], base), *top, QPointF(frame.edges[-1], base)]
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(theme.exact_soft)
        painter.drawPolygon(QPolygonF(area))
        painter.setPen(QPen(theme.exact, 2 * theme.zoom))
        painter.drawPolyline(QPolygonF(top))
    if row.fractional:
        pen = QPen(theme.fractional, 2 * theme.zoom)
        pen.setDashPattern([3, 2])
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        painter.setPen(pen)
        painter.drawPolyline(QPolygonF(step_points(row.fractional, frame.edges, base, unit)))
    rule(painter, frame.edges[0], base, frame.edges[-1], base, theme)
    for edge in frame.edges[1:-1]:
        rule(painter, edge, frame.top, edge, base, theme)


def _paint_cell(painter: QPainter, frame: _Frame, at: int) -> None:
    """The exact count, the fractional one and the moves.

    Where a phase is too narrow the fractional count gives way to the moves: its line is drawn anyway.
    """
    theme, row, cell = frame.theme, frame.row, frame.cell(at)
    moves = text_width(theme.picture_font(Size.SMALL), _moves(row, at)) if _moves(row, at) else 0.0
    whole = figures.people(row.exact[at]) if row.exact else ""
    fractional = figures.people(row.fractional[at]) if row.fractional and row.fractional[at] else ""
    large = theme.picture_font(Size.LARGE, bold=True)
    room = _write_count(painter, cell, whole, large, theme.exact, 0.0, theme)
    if whole and room is cell:
        return
    room = _write_count(painter, room, fractional, theme.picture_font(), theme.fractional, moves, theme)
    _paint_moves(painter, room, frame, at)


def _write_count(
    painter: QPainter, room: QRectF, text: str, font: QFont, colour: QColor, keep: float, theme: Theme
) -> QRectF:
    """Write `text` at the left of `room` where `keep` is left beside it; returns what is left."""
    gap, wide = 8 * theme.zoom, text_width(font, text)
    needed = wide + gap + keep if keep else wide - gap / 2  # the padding of a cell may be written on
    if not text or needed > room.width():
        return room
    write(painter, QRectF(room.left(), room.top(), wide, room.height()), text, font, colour)
    return room.adjusted(wide + gap, 0, 0, 0)


def _moves(row: TallyRow, at: int) -> str:
    """How many join or leave at the start of phase `at`, with a sign; empty for nobody."""
    move = row.joiners(at) or -row.leavers(at)
    return figures.change(move) if move else ""


def _paint_moves(painter: QPainter, box: QRectF, frame: _Frame, at: int) -> None:
    """Who joins or leaves at the start of the phase: one outlined or struck figure and the number.

    Where both are too wide the number stands alone: its sign says it as well.
    """
    theme, unit, text = frame.theme, frame.theme.zoom, _moves(frame.row, at)
    font, high = theme.picture_font(Size.SMALL), 14 * unit
    room = box.width() - text_width(font, text)
    if not text or room < 0:
        return
    x = box.left() + min(4 * unit, room)
    if room >= high * SHAPE + 9 * unit:
        mark = Mark.JOINS if frame.row.joiners(at) else Mark.LEAVES
        paint_figure(painter, Figure(x, box.center().y() - high / 2, high * SHAPE, high, mark), theme)
        x += high * SHAPE + 5 * unit
    write(painter, QRectF(x, box.top(), box.width(), box.height()), text, font, theme.ink, LEFT)


def _paint_key(painter: QPainter, box: QRectF, whole: str, theme: Theme) -> None:
    """What the line, the area and the small figures mean."""
    unit = theme.zoom
    y = box.center().y()
    pen = QPen(theme.fractional, 2 * theme.zoom)
    pen.setDashPattern([3, 2])
    painter.setPen(pen)
    painter.drawLine(QPointF(box.left(), y), QPointF(box.left() + 24 * unit, y))
    x = paint_entry(painter, box, box.left() + 30 * unit, None, say.LEGEND_FRACTIONAL, theme)
    area = QRectF(x, y - 5 * unit, 24 * unit, 10 * unit)
    painter.fillRect(area, theme.exact_soft)
    painter.setPen(QPen(theme.exact, 2 * theme.zoom))
    painter.drawLine(area.topLeft(), area.topRight())
    x = paint_entry(painter, box, x + 30 * unit, None, whole, theme)
    rest = QRectF(x, box.top(), box.right() - x, box.height())
    moves = [(Mark.JOINS, say.LEGEND_JOINS), (Mark.LEAVES, say.LEGEND_LEAVES), (None, say.OWN_HEIGHT)]
    paint_key(painter, rest, moves, theme)
