"""Where every figure of the people tally stands: pure data, no painting.

A count is told like coins: figures of 1 person, and where one line would not hold them, larger figures
of 10, 100, ... people before the single ones. The largest figure needed is the `scale` of the tally.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from desktop.pictures.figure import SHAPE, Figure, Mark
from solver.answer import Crew
from solver.plan import Plan

_NOBODY = 1e-6


@dataclass(frozen=True)
class TallyPhase:
    """A phase as the tally shows it."""

    name: str
    periods: float


@dataclass(frozen=True)
class TallyRow:
    """One category: head counts per phase, who is on the books before, and the lot people come in.

    `fractional` or `exact` is None where there is no such crew.
    """

    name: str
    fractional: tuple[float, ...] | None
    exact: tuple[float, ...] | None
    before: float = 0
    lot: float = 1

    def joiners(self, at: int = 0) -> float:
        """People of the exact crew who join at the start of phase `at`."""
        return max(0.0, self._change(at))

    def leavers(self, at: int = 0) -> float:
        """People who leave at the start of phase `at`."""
        return max(0.0, -self._change(at))

    def _change(self, at: int) -> float:
        if self.exact is None:
            return 0.0
        return self.exact[at] - (self.exact[at - 1] if at else self.before)


@dataclass(frozen=True)
class Tally:
    """Everything the people tally shows. `proved` False: the whole crew is only the best found."""

    phases: tuple[TallyPhase, ...]
    rows: tuple[TallyRow, ...]
    period: str = ""
    proved: bool = True


def tally_of(plan: Plan, fractional: Crew | None, exact: Crew | None, *, proved: bool = True) -> Tally:
    """The tally of two crews of `plan`; a crew may be missing, or a category in it."""
    phases = tuple(TallyPhase(p.name, float(p.periods)) for p in plan.phases)
    rows = tuple(
        TallyRow(
            c.name,
            (fractional or {}).get(c.name),
            (exact or {}).get(c.name),
            float(c.on_books),
            float(c.lot),
        )
        for c in plan.categories
    )
    return Tally(phases, rows, plan.period, proved)


@dataclass(frozen=True)
class TallyMetrics:
    """Sizes in the painter's units. `figures_width` is what one line of figures may take."""

    figures_width: float
    height: float = 18
    gap: float = 3
    line: float = 26
    row_gap: float = 10

    def width(self, people: float) -> float:
        """Width of a figure standing for `people`."""
        digits = len(f"{people:.0f}")
        return self.height * SHAPE if people == 1 else self.coin_height * (0.5 + 0.28 * (digits - 1))

    @property
    def coin_height(self) -> float:
        """Height of a figure that stands for several people."""
        return self.height * 1.12


@dataclass(frozen=True)
class RowLayout:
    """The figures of one row, where it begins, and where the rightmost exact figure ends."""

    top: float
    figures: tuple[Figure, ...]
    right: float


@dataclass(frozen=True)
class TallyLayout:
    """All rows; `scale` is the number of people the largest figure stands for (1: one each)."""

    rows: tuple[RowLayout, ...]
    scale: int
    height: float


def tally_layout(rows: Sequence[TallyRow], metrics: TallyMetrics) -> TallyLayout:
    """Place the figures of one phase. The origin is the top left of the figures' column."""
    scale, squeeze = _scale(rows, metrics)
    placed: list[RowLayout] = []
    top = 0.0
    for row in rows:
        placed.append(_row(row, top, scale, squeeze, metrics))
        top += 2 * metrics.line + metrics.row_gap
    return TallyLayout(tuple(placed), scale, max(0.0, top - metrics.row_gap))


def _row(row: TallyRow, top: float, scale: int, squeeze: float, metrics: TallyMetrics) -> RowLayout:
    upper, lower = top + metrics.line - 4, top + 2 * metrics.line - 2
    fractional = _line(_fractional_parts(row), upper, scale, row.lot, metrics)
    exact = _line(_exact_parts(row), lower, scale, row.lot, metrics)
    figures = tuple(replace(f, x=f.x * squeeze, width=f.width * squeeze) for f in fractional + exact)
    right = max((f.x + f.width for f in figures if f.mark is not Mark.FRACTIONAL), default=0.0)
    return RowLayout(top, figures, right)


def _fractional_parts(row: TallyRow) -> list[tuple[Mark, float]]:
    return [(Mark.FRACTIONAL, row.fractional[0])] if row.fractional else []


def _exact_parts(row: TallyRow) -> list[tuple[Mark, float]]:
    """Who stays, joins and leaves, in this order."""
    if row.exact is None:
        return []
    stays = min(row.exact[0], row.before)
    return [(Mark.STAYS, stays), (Mark.JOINS, row.joiners()), (Mark.LEAVES, row.leavers())]


def _line(
    parts: list[tuple[Mark, float]], base: float, scale: int, lot: float, metrics: TallyMetrics
) -> list[Figure]:
    """One line of figures standing on `base`, with a wider gap after each whole lot of several people."""
    grouped = lot if lot > 1 and scale == 1 and lot == int(lot) else 0
    made: list[Figure] = []
    x, told = 0.0, 0.0
    for mark, count in parts:
        for people, filled in coins(count, scale):
            width = metrics.width(people)
            height = metrics.height if people == 1 else metrics.coin_height
            made.append(Figure(x, base - height, width, height, mark, people, filled))
            x += width + metrics.gap
            told += filled
            if grouped and told % grouped < _NOBODY:
                x += 2 * metrics.gap
    return made


def coins(count: float, scale: int) -> list[tuple[int, float]]:
    """`count` as (people, filled) figures, largest first, the last one partly filled where need be.

    Counts of 100 and more are told to two leading digits; what is left fills part of one figure.
    """
    parts: list[tuple[int, float]] = []
    left = count if count > _NOBODY else 0.0
    finest = min(scale, 10 ** max(0, len(str(int(left + _NOBODY))) - 2))
    value = scale
    while value >= finest:
        whole = int((left + _NOBODY) // value)
        parts += [(value, 1.0)] * whole
        left -= whole * value
        value //= 10
    return [*parts, (finest, left / finest)] if left > _NOBODY else parts


def _scale(rows: Sequence[TallyRow], metrics: TallyMetrics) -> tuple[int, float]:
    """The smallest scale at which every line fits its width, and 1; else the largest, and how to squeeze."""
    peak = max((count for _, parts in _every(rows) for _, count in parts), default=0)
    widest, scale = metrics.figures_width, 1
    for scale in _scales(peak, metrics):
        laid = (_line(parts, 0, scale, row.lot, metrics) for row, parts in _every(rows))
        widest = max((f.x + f.width for line in laid for f in line), default=0.0)
        if widest <= metrics.figures_width:
            return scale, 1.0
    return scale, metrics.figures_width / widest


def _every(rows: Sequence[TallyRow]) -> list[tuple[TallyRow, list[tuple[Mark, float]]]]:
    return [(row, parts(row)) for row in rows for parts in (_fractional_parts, _exact_parts)]


def _scales(peak: float, metrics: TallyMetrics) -> list[int]:
    """1, 10, 100, ... up to `peak`, without those that would need more figures than fit at any size."""
    every = [10**k for k in range(len(str(int(peak))))]
    return [s for s in every if peak / s <= metrics.figures_width / metrics.gap] or every[-1:]
