"""The crew map: two categories of one phase on the axes, everybody else as in the exact crew."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from fractions import Fraction
from math import ceil, floor

from solver.answer import Policy
from solver.engine import LpStatus, Relaxation
from solver.exactcrew import exact_crew
from solver.found import Lots
from solver.levelline import level_line
from solver.mapanswer import CrewMap, MapName, MapPoint
from solver.outline import Point, outline
from solver.plan import Category, Plan
from solver.solve import Case

# lots of the window beyond the named crews, its least and its greatest number of lots along one axis
BEYOND = 3
LEAST = 10
MOST = 24


def crew_map(plan: Plan, across: str, up: str, phase: str) -> CrewMap:
    """The map of categories `across` and `up` in `phase`.

    Raises NoExactCrew, KeyError for names that are not there, ValueError where both are one category, and
    EngineFailure if an engine breaks.
    """
    if across == up:
        raise ValueError("a map needs two different categories")
    case = Case(plan)
    exact = case.proved.best or exact_crew(case)[0]
    names = [category.name for category in plan.categories]
    t = [p.name for p in plan.phases].index(phase) if phase in [p.name for p in plan.phases] else None
    if t is None or across not in names or up not in names:
        raise KeyError(phase if t is None else across if across not in names else up)
    return _Map(case, exact.lots, names.index(across), names.index(up), t).answer()


@dataclass(frozen=True)
class _Axis:
    """One category: its head count's column and the window in lots."""

    category: Category
    column: int
    lot: Fraction
    low: int
    high: int

    @property
    def people(self) -> tuple[float, float]:
        return float(self.low * self.lot), float(self.high * self.lot)


class _Map:
    def __init__(self, case: Case, exact: Lots, x: int, y: int, t: int) -> None:
        self.case = case
        self.exact = exact
        self.t = t
        self._named = list(self._crews())
        self.x, self.y = self._axis(x), self._axis(y)

    def answer(self) -> CrewMap:
        phase = self.case.plan.phases[self.t].name
        lots = (float(self.x.lot), float(self.y.lot))
        named = tuple(
            MapName(name, float(counts[self.x.column] * lots[0]), float(counts[self.y.column] * lots[1]))
            for name, counts in self._named
        )
        return CrewMap(
            self.x.category.name, self.y.category.name, phase, self._polygon(), tuple(self._points()), named,
            self._equal_cost(),
        )  # fmt: skip

    # ---- window ------------------------------------------------------------------------------

    def _crews(self) -> Iterator[tuple[str, Sequence[float]]]:
        """The named crews in lots."""
        if self.case.relaxed is not None:
            yield "fractional", self.case.relaxed.lots
        for report in self.case.crews():
            if report.crew is not None:
                counts = [n for who in report.crew.values() for n in who]
                sizes = [float(lot) for lot in self.case.program.lots for _ in self.case.plan.phases]
                yield report.policy.value, [n / size for n, size in zip(counts, sizes, strict=True)]

    def _axis(self, j: int) -> _Axis:
        """The window holds the named crews, but not those that are far off, and some room around."""
        column = self.case.program.head(j, self.t)
        here = self.exact[column]
        there = [counts[column] for name, counts in self._named if abs(counts[column] - here) <= MOST / 2]
        low, high = floor(min(there, default=here)) - BEYOND, ceil(max(there, default=here)) + BEYOND
        low = max(low, high - MOST, 0) if here - low <= MOST else here - MOST // 2
        high = min(max(high, low + LEAST), low + MOST)
        return _Axis(self.case.plan.categories[j], column, self.case.program.lots[j], low, high)

    # ---- lattice -----------------------------------------------------------------------------

    def _points(self) -> Iterator[MapPoint]:
        for up in range(self.y.low, self.y.high + 1):
            for across in range(self.x.low, self.x.high + 1):
                yield self._point(across, up)

    def _point(self, across: int, up: int) -> MapPoint:
        lots = list(self.exact)
        lots[self.x.column], lots[self.y.column] = across, up
        x, y = float(across * self.x.lot), float(up * self.y.lot)
        cost = self.case.search.evaluate(lots)
        if cost is not None:
            return MapPoint(x, y, True, cost, ())
        report = self.case.appraiser.appraise(Policy.OWN, lots)
        broken = dict.fromkeys(line.line for line in report.lines if line.margin < 0)
        return MapPoint(x, y, report.workable, report.cost, tuple(broken))

    # ---- polygon -----------------------------------------------------------------------------

    def _polygon(self) -> tuple[Point, ...]:
        """By support programs: the farthest workable point of the window in a direction."""
        program, matrix = self.case.program, self.case.program.matrix
        relaxation = Relaxation(matrix)
        for column, cost in enumerate(matrix.cost):
            if cost:
                relaxation.set_cost(column, 0.0)
        axes = (self.x, self.y)
        for column, n in enumerate(self.exact):
            relaxation.set_bounds(column, float(n), float(n))
        for axis in axes:
            low, high = max(matrix.lower[axis.column], axis.low), min(matrix.upper[axis.column], axis.high)
            if low > high:
                return ()
            relaxation.set_bounds(axis.column, low, high)
        for switch, served in program.switches.items():
            if not any(axis.column in served for axis in axes):
                on = float(any(self.exact[i] for i in served))
                relaxation.set_bounds(switch, on, on)
            elif program.columns[switch].letter == "o":  # counted as paid wherever there may be anyone
                relaxation.set_bounds(switch, 1.0, 1.0)

        def farthest(across: float, up: float) -> Point | None:
            relaxation.set_cost(self.x.column, -across)
            relaxation.set_cost(self.y.column, -up)
            if relaxation.solve() is not LpStatus.OPTIMAL:
                return None
            found = relaxation.x
            return float(found[self.x.column]), float(found[self.y.column])

        lots = float(self.x.lot), float(self.y.lot)
        corners = outline(farthest)
        return tuple((round(x * lots[0], 9), round(y * lots[1], 9)) for x, y in corners)

    # ---- line of equal cost ------------------------------------------------------------------

    def _equal_cost(self) -> tuple[Point, ...] | None:
        """Pay, joining and leaving of the two categories together as in the exact crew."""
        level = sum(self._money(a, float(self.exact[a.column] * a.lot)) for a in (self.x, self.y))
        line = level_line(
            lambda n: self._money(self.x, n),
            lambda n: self._money(self.y, n),
            self._bends(self.x),
            self._bends(self.y),
            level,
        )
        return None if line is None else tuple(line)

    def _beside(self, axis: _Axis) -> tuple[float, float | None]:
        """People of the category before and after the phase."""
        before = float(axis.category.on_books)
        if self.t:
            before = float(self.exact[axis.column - 1] * axis.lot)
        last = self.t + 1 == len(self.case.plan.phases)
        return before, None if last else float(self.exact[axis.column + 1] * axis.lot)

    def _bends(self, axis: _Axis) -> list[float]:
        low, high = axis.people
        inside = [n for n in self._beside(axis) if n is not None and low < n < high]
        return sorted({low, high, *inside})

    def _money(self, axis: _Axis, people: float) -> float:
        category = axis.category
        before, after = self._beside(axis)
        pay = float(category.pay * self.case.plan.phases[self.t].periods) * people
        steps = [people - before] + ([] if after is None else [after - people])
        join, leave = float(category.join_cost), float(category.leave_cost)
        return pay + sum(step * join if step > 0 else -step * leave for step in steps)
