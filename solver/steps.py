"""Workload steps: the exact staircase of cheapest cost over the workload of one work, or of all.

Alternately the largest workload that the crew of a step serves, and the cheapest crew just above it. Where
overtime or bought-in work makes a crew's cost slope, another crew may be cheaper before the first one's
hours end. A crew's cost is piecewise linear, and on each piece cost = a + s w an integer program over
crews *and* workloads, min cost - s w, finds a crew that is cheaper anywhere on it, or proves that there is
none; what it finds is cut off at the exact crossing, and the rest of the piece is asked again.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from decimal import Decimal
from itertools import pairwise

from solver.answer import FloorPoint, Step, Steps
from solver.corners import Corner
from solver.found import Found, Lots, tie_width
from solver.heads import crew_of
from solver.inquiry import Heard, Inquiry, unheard
from solver.plan import Plan
from solver.roundedup import rounded_up
from solver.solve import Case
from solver.tiebreak import cheapest_preferred
from solver.unanswered import Unanswered
from solver.workload import CrewRuns, Relaxed, Workload, caps_for, scaled

# the next crew must serve this much more, as a share of the heavier end: more than the engine's rounding
JUST_ABOVE = 1e-6
# crossings nearer than this, as a share of the heavier end, are the same
SAME = 1e-9
MOST_STEPS = 600
SECONDS = 60.0
ALL = Decimal(100)


class NothingToScale(Unanswered):
    """The work has no amount, or the plan no work."""


class NoRange(Unanswered):
    """The smaller workload is not smaller than the larger one."""

    def __init__(self, low: Decimal, high: Decimal) -> None:
        says = f"The workloads from {low.normalize():f} to {high.normalize():f} are no range."
        super().__init__(says, {"unscaled": says})


@dataclass(frozen=True)
class _Tread:
    """Part of the staircase in shares of the heavier end."""

    low: float
    high: float
    lots: Lots
    corners: tuple[Corner, ...]


def steps(
    plan: Plan,
    work: str | None,
    low: Decimal | None = None,
    high: Decimal | None = None,
    *,
    seconds: float | None = None,
    heard: Heard = unheard,
) -> Steps:
    """The staircase between two workloads, 0 <= low < high: units in all phases of `work`, or % of today
    for all works (`work` None). Left out, they are 50 % and 200 % of today.

    `seconds` (None: 60) limits everything. Raises NothingToScale, NoRange, KeyError for a work that is not
    there, and EngineFailure if an engine breaks.
    """
    today = _today(plan, work)
    low, high = today / 2 if low is None else low, today * 2 if high is None else high
    if low >= high:
        raise NoRange(low, high)
    heavy = scaled(plan, work, high / today)
    stairs = _Stairs(heavy, work, float(low / high), Inquiry(SECONDS if seconds is None else seconds, heard))
    unit = "%" if work is None else next(w.unit for w in plan.works if w.name == work)
    return stairs.answer(work, unit, float(today), float(high))


def _today(plan: Plan, work: str | None) -> Decimal:
    """Today's workload on the axis."""
    amounts = [sum(w.amounts, Decimal(0)) for w in plan.works if work in (None, w.name)]
    if work is not None and not amounts:
        raise KeyError(work)
    if not any(amounts):
        says = "There is no work to scale." if work is None else f"{work} has no amount to scale."
        raise NothingToScale(says, {"unscaled": says})
    return ALL if work is None else amounts[0]


class _Stairs:
    """One staircase, in shares of its heavier end."""

    def __init__(self, heavy: Plan, work: str | None, low: float, inquiry: Inquiry) -> None:
        self._low = low
        self._inquiry = inquiry
        self._workload = Workload(heavy, work, self._caps(heavy))
        self._runs = CrewRuns(self._workload)
        self._floor_load = Workload(heavy, work, open_ended=True)
        self._relaxed = Relaxed(self._floor_load)
        self.exact = True
        self.ends = ""

    def _caps(self, heavy: Plan) -> list[int] | None:
        """Switches of head counts need close limits: what a crew for the heavier end pays for."""
        case = Case(heavy, self._inquiry.left / 4)
        if not case.program.switches or case.relaxed is None or case.proved.best is None:
            return None
        return caps_for(case.program, case.proved.best.objective)

    def answer(self, work: str | None, unit: str, today: float, high: float) -> Steps:
        """Everything, in amounts of the axis."""
        treads = list(self._treads())
        made = tuple(self._step(tread, high) for tread in treads)
        reach = self._relaxed.reach(self._low)
        corners = [] if reach is None else self._relaxed.corners(self._low, reach)
        floor = tuple(FloorPoint(c.at * high, c.value) for c in corners)
        up = tuple(rounded_up(self._relaxed, self._runs, corners, high))
        return Steps(work, unit, today, made, floor, up, self.exact, self.ends)

    def _step(self, tread: _Tread, high: float) -> Step:
        points = tuple(FloorPoint(c.at * high, c.value) for c in tread.corners)
        crew = crew_of(self._workload.program, tread.lots)
        return Step(
            tread.low * high, tread.high * high, crew, points[-1].cost, points[0].cost,
            points if len(points) > 2 else (),
        )  # fmt: skip

    # ---- treads ------------------------------------------------------------------------------

    def _treads(self) -> Iterator[_Tread]:
        at, crew, cheapest_from = self._low, self._cheapest(self._low), self._low
        if crew is None:
            self.ends = "No crew does even the smallest workload."
        for _ in range(MOST_STEPS):
            if crew is None:
                return
            self._inquiry.tell("Workload steps", (at - self._low) / (1 - self._low))
            reach = max(self._runs.reach(crew, self._low) or at, at)
            corners = tuple(self._runs.corners(crew, at, reach))
            end, rival = self._held_until(crew, corners, cheapest_from)
            if end - at > SAME:
                yield _Tread(at, end, crew, _cut(corners, end))
            if end >= 1 - SAME:
                return
            if not self._inquiry.left:
                self.exact, self.ends = False, "The time was not enough to go further."
                return
            at, cheapest_from = end, end if rival else min(end + JUST_ABOVE, 1.0)
            crew = rival or self._cheapest(cheapest_from)
            if crew is None:
                self.ends = "No crew does more: a rule or a limit stands against it."
        self.ends = "There are more steps than can be shown."

    def _cheapest(self, at: float) -> Lots | None:
        """The preferred of the cheapest crews at one workload."""
        self._inquiry.programs += 1
        search = self._workload.search(at, at)
        outcome = cheapest_preferred(search, self._inquiry.left)
        if not outcome.complete:
            outcome = self._inquiry.cheapest(search, start=outcome.best)
            self.exact = self.exact and outcome.complete
        return None if outcome.best is None else outcome.best.lots

    # ---- how long a crew stays cheapest ------------------------------------------------------

    def _held_until(
        self, lots: Lots, corners: tuple[Corner, ...], cheapest_from: float
    ) -> tuple[float, Lots | None]:
        """Up to which workload the crew stays cheapest, and the crew that takes over if that is before its
        hours end. It is known to be cheapest at `cheapest_from`, near the first corner."""
        for a, b in pairwise(corners):
            if b.value - a.value <= tie_width(b.value):  # a crew whose cost is level stays the cheapest
                continue
            slope = (b.value - a.value) / (b.at - a.at)
            first = max(a.at, cheapest_from)
            start = Corner(first, a.value + slope * (first - a.at), slope)
            end, rival = self._held_on_piece(lots, start, b.at)
            if rival is not None:
                return end, rival
        return corners[-1].at, None

    def _held_on_piece(self, lots: Lots, a: Corner, end: float) -> tuple[float, Lots | None]:
        rival = None
        while end - a.at > SAME:
            cheaper = self._cheaper_than(lots, a, end)
            if cheaper is None:
                break
            rival = cheaper
            end = self._crossing(cheaper, a, end)
        return end, rival

    def _cheaper_than(self, lots: Lots, a: Corner, end: float) -> Lots | None:
        """A crew that is cheaper than the line from `a` somewhere up to `end`."""
        least = a.value - a.slope * a.at
        search = self._workload.search(a.at, end, a.slope)
        outcome = self._inquiry.cheapest(search, start=Found(lots, least))
        self.exact = self.exact and outcome.complete
        best = outcome.best
        if best is None or best.lots == lots or best.objective >= least - tie_width(a.value):
            return None
        return best.lots

    def _crossing(self, cheaper: Lots, a: Corner, end: float) -> float:
        """The first workload from `a` on at which the crew costs no more than the line."""
        reach = min(self._runs.reach(cheaper, self._low) or a.at, end)
        theirs = self._runs.corners(cheaper, a.at, reach)
        above = [(c.at, c.value - (a.value + a.slope * (c.at - a.at))) for c in theirs]
        if above[0][1] <= 0:
            return a.at
        for (left, up), (right, down) in pairwise(above):
            if down <= 0:
                return left + (right - left) * up / (up - down)
        return above[-1][0]


def _cut(corners: tuple[Corner, ...], end: float) -> tuple[Corner, ...]:
    """The corners up to `end`, which becomes the last one."""
    kept = [c for c in corners if c.at < end - SAME]
    after = next((c for c in corners if c.at >= end - SAME), corners[-1])
    last = kept[-1]
    share = (end - last.at) / (after.at - last.at)
    return (*kept, Corner(end, last.value + share * (after.value - last.value), after.slope))
