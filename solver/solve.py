"""The main question: the fractional crew, the exact crew with its proof, and every rounding appraised."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from time import monotonic
from typing import Any

import numpy as np

from solver import heads
from solver.answer import (
    Answer,
    Conflict,
    Crew,
    CrewReport,
    ExactCrew,
    Policy,
    Proof,
    State,
    WholePeopleCost,
)
from solver.appraisal import Appraiser
from solver.conflict import find_conflict
from solver.engine import EngineName, LpStatus, WholeStatus, whole
from solver.found import Found
from solver.grain import whole_grain
from solver.ledger import Counts
from solver.lines import Line
from solver.plan import Plan
from solver.program import Program
from solver.proof import SECONDS, Effort, Proved, Prover
from solver.rounding import largest_remainder, rounded, snapped
from solver.search import Search
from solver.tiebreak import cheapest_preferred, preferred
from solver.twoengines import two_engines

Heard = Callable[[str, Any], None]
# our own search has a little time for a crew between two others, then the engines
BOXED_SECONDS = 0.4
BOXED_SECONDS_OF_ENGINES = 1.0
QUICK_HEADS = 150  # so many head counts are appraised in a blink
SOON = 0.5  # after so many seconds people want to see the crew before its company is worked out
ROUNDINGS = (Policy.DOWN, Policy.NEAREST, Policy.UP, Policy.LARGEST_REMAINDER)


@dataclass(frozen=True)
class Relaxed:
    """The relaxation: its cost and crew in lots."""

    floor: float
    lots: tuple[float, ...]


class Case:
    """A plan being worked on: its program and what was found, each thing once. Later questions start here."""

    def __init__(self, plan: Plan, seconds: float | None = None, effort: Effort | None = None) -> None:
        """`seconds` limits the exact solve; `effort` says more about it."""
        self.plan = plan
        self._effort = effort or Effort(SECONDS if seconds is None else seconds)

    @cached_property
    def program(self) -> Program:
        """The plan's matrix program."""
        return Program(self.plan)

    @cached_property
    def search(self) -> Search:
        """The warm relaxation and our own search over it."""
        return Search(self.program, grain=whole_grain(self.program))

    @cached_property
    def appraiser(self) -> Appraiser:
        """Appraises crews of this plan."""
        return Appraiser(self.program)

    @cached_property
    def relaxed(self) -> Relaxed | None:
        """The fractional crew, None if not even fractional people can do it."""
        search = self.search
        if any(c.open_cost > 0 and c.at_most is None for c in self.plan.categories):
            search = Search(Program(self.plan, open_ended=True))
        if search.relax() is not LpStatus.OPTIMAL:
            return None
        relaxation = search.relaxation
        lots = relaxation.x[: self.program.head_count]
        return Relaxed(relaxation.objective, tuple(snapped(v) for v in lots.tolist()))

    @cached_property
    def proved(self) -> Proved:
        """The exact crew with its proof."""
        if self.relaxed is None:
            return self._impossible_even_in_fractions()
        return Prover(self.program, self.search).prove(self.relaxed.lots, self._effort)

    def _impossible_even_in_fractions(self) -> Proved:
        """CLP says so; HiGHS must agree before people are told."""
        matrix = replace(self.program.matrix, integer=[False] * self.program.matrix.width)
        agrees = whole(matrix, EngineName.HIGHS, seconds=10.0).status is WholeStatus.INFEASIBLE
        state = State.IMPOSSIBLE if agrees else State.BEST_FOUND
        return Proved(state, Proof.TWO_ENGINES if agrees else None, None, float("inf" if agrees else "-inf"))

    # ---- crews -------------------------------------------------------------------------------

    def rounding(self, policy: Policy) -> tuple[int, ...]:
        """The fractional crew after a rounding policy, in lots. Needs a fractional crew."""
        assert self.relaxed is not None
        sizes = [self.program.lots[i // len(self.plan.phases)] for i in range(self.program.head_count)]
        if policy is Policy.LARGEST_REMAINDER:
            return largest_remainder(self.relaxed.lots, sizes, len(self.plan.phases))
        return rounded(policy, self.relaxed.lots, sizes)

    def _within(self, lower: Sequence[float], upper: Sequence[float]) -> tuple[Found | None, bool]:
        """The cheapest workable crew between two crews; and whether that is proved."""
        low, high = self.search.box()
        count = self.program.head_count
        low[:count] = np.maximum(low[:count], lower)
        high[:count] = np.minimum(high[:count], upper)
        if (low > high).any():
            return None, True
        box = (low, high)
        outcome = cheapest_preferred(self.search, BOXED_SECONDS, box=box)
        if not outcome.complete:
            outcome = two_engines(self.search, outcome, seconds=BOXED_SECONDS_OF_ENGINES, box=box)
            if outcome.complete and outcome.best is not None:
                return preferred(self.program, outcome.best, BOXED_SECONDS, box), True
        return outcome.best, outcome.complete

    def best_corner(self) -> CrewReport:
        """The cheapest workable choice of down or up per category and phase."""
        best, complete = self._within(self.rounding(Policy.DOWN), self.rounding(Policy.UP))
        if best is None:
            why = "No choice of down or up per category is workable."
            return self.appraiser.none(
                Policy.BEST_CORNER, why if complete else "None found in the time given."
            )
        return replace(self._report(Policy.BEST_CORNER, best.lots), proved=complete)

    def patched(self) -> CrewReport:
        """The nearest rounding made workable by the cheapest additions of people."""
        nearest = self.rounding(Policy.NEAREST)
        best, complete = self._within(nearest, [np.inf] * len(nearest))
        if best is None:
            why = self._forbidden(nearest) if complete else "None found in the time given."
            return self.appraiser.none(Policy.PATCHED, why)
        return replace(self._report(Policy.PATCHED, best.lots), proved=complete)

    def _forbidden(self, nearest: Sequence[int]) -> str:
        """Which line forbids mending the nearest rounding by additions."""
        line = self._forbidding_line(nearest)
        if line is None:
            return "Adding people cannot mend it: several lines together forbid it."
        where = f" in {line.phase}" if line.phase and len(self.plan.phases) > 1 else ""
        return f"Adding people cannot mend it: \u201c{line.says}\u201d forbids it{where}."

    def _forbidding_line(self, nearest: Sequence[int]) -> Line | None:
        program = self.program
        over = [h for h in program.head_lines if h.line.row is None and h.margin(nearest) < 0]
        if over:
            return over[0].line
        lower, upper = self.search.box()
        lower[: len(nearest)] = np.maximum(lower[: len(nearest)], nearest)
        for line in program.lines:
            if line.row is None:
                continue
            without = Search(program, _without_row(program, line.row))
            if without.relax(lower, upper) is LpStatus.OPTIMAL:
                return line
        return None

    def _report(self, policy: Policy, lots: Counts) -> CrewReport:
        assert self.relaxed is not None
        return self.appraiser.appraise(policy, lots, self.relaxed.lots)

    @cached_property
    def roundings(self) -> tuple[CrewReport, ...]:
        """The plain roundings appraised. Needs a fractional crew."""
        return tuple(self._report(policy, self.rounding(policy)) for policy in ROUNDINGS)

    @cached_property
    def exact_report(self) -> CrewReport | None:
        """The exact crew appraised; None if there is none."""
        best = self.proved.best
        return None if best is None else self._report(Policy.EXACT, best.lots)

    def crews(self) -> list[CrewReport]:
        """Every policy's crew, and the planner's own where there is one."""
        if self.relaxed is None:
            return []
        reports = list(self.roundings)
        reports += [self.best_corner(), self.patched()]
        if self.exact_report is not None:
            reports.append(self.exact_report)
        if self.plan.own:
            reports.append(self._report(Policy.OWN, heads.lots_of(self.program, self.plan.own)))
        return reports

    @cached_property
    def conflict(self) -> Conflict | None:
        """Why no crew is workable, None unless that is proved."""
        return find_conflict(self.plan) if self.proved.state is State.IMPOSSIBLE else None

    # ---- answer ------------------------------------------------------------------------------

    def fractional(self) -> dict[str, Any]:
        """Floor and fractional crew, for those who do not wait."""
        if self.relaxed is None:
            return {"floor": None, "crew": None}
        return {"floor": self.relaxed.floor, "crew": heads.crew_of(self.program, self.relaxed.lots)}

    def answer(self, crews: Sequence[CrewReport], seconds: float) -> Answer:
        """Everything of the main question."""
        return replace(self._outline(self.proved, self.exact_report, crews, seconds), conflict=self.conflict)

    def so_far(self, proved: Proved, seconds: float) -> Answer:
        """What is known while the proof is still being sought: the crew so far and, where that is quick,
        the plain roundings."""
        best = proved.best
        report = None if best is None else self._report(Policy.EXACT, best.lots)
        crews = list(self.roundings) if self.program.head_count <= QUICK_HEADS else []
        crews += [] if report is None else [report]
        return self._outline(proved, report, crews, seconds)

    def _outline(
        self, proved: Proved, report: CrewReport | None, crews: Sequence[CrewReport], seconds: float
    ) -> Answer:
        relaxed, exact = self.relaxed, _exact(report)
        gap = None
        if relaxed is not None and exact is not None:
            gap = whole_people_cost(exact.cost, relaxed.floor)
        bound = proved.bound if np.isfinite(proved.bound) else None
        return Answer(
            proved.state,
            proved.proof,
            None if relaxed is None else relaxed.floor,
            None if relaxed is None else heads.crew_of(self.program, relaxed.lots),
            exact,
            bound if bound is not None else (relaxed.floor if relaxed and exact else None),
            gap,
            tuple(crews),
            None,
            seconds,
        )


def _exact(report: CrewReport | None) -> ExactCrew | None:
    if report is None or report.crew is None:
        return None
    if report.cost is None:
        raise AssertionError(f"the exact crew {report.crew} did not stand its appraisal")
    return ExactCrew(
        report.crew, report.cost, report.joiners, report.leavers, report.overtime, report.bought_in
    )


def whole_people_cost(cost: float, floor: float) -> WholePeopleCost:
    """The gap between an exact crew's cost and the floor; 0 where only floating point tells them apart."""
    absolute = max(cost - floor, 0.0)
    absolute = 0.0 if absolute < 1e-7 * max(1.0, abs(cost)) else absolute
    return WholePeopleCost(absolute, 100 * absolute / cost if cost else 0.0)


def _without_row(program: Program, row: int) -> Any:
    matrix = program.matrix.copy()
    gone = matrix.rows[row]
    matrix.rows[row] = replace(gone, columns=(), coefs=(), rhs=0.0)
    return matrix


def solve(
    plan: Plan,
    *,
    seconds: float | None = None,
    tolerance: float = 0.0,
    start: Crew | None = None,
    heard: Heard | None = None,
) -> Answer:
    """Answer the main question about a plan that review() has no objection to.

    `seconds` limits the exact solve (None: 60 s); a gap between crew and bound of at most `tolerance`, as a
    share of the cost, is good enough to stop; `start` is a crew to go on from. `heard(part, value)` hears
    of "fractional" at once, and of "better" crews and bounds (Answers so far) when the proof takes long.
    Raises EngineFailure if an engine breaks.
    """
    began = monotonic()
    hears = heard or (lambda part, value: None)
    reporter: list[Callable[[Proved], None]] = []
    case = Case(plan, effort=_effort(plan, seconds, tolerance, start, reporter))
    reporter.append(lambda proved: hears("better", case.so_far(proved, monotonic() - began)))
    hears("fractional", case.fractional())
    proved = case.proved
    if monotonic() - began > SOON and proved.best is not None:
        reporter[0](proved)
    crews = case.crews()
    return case.answer(crews, monotonic() - began)


def _effort(
    plan: Plan,
    seconds: float | None,
    tolerance: float,
    start: Crew | None,
    reporter: Sequence[Callable[[Proved], None]],
) -> Effort:
    lots = None
    if start is not None:
        exact = heads.lots_of(Program(plan), start)
        lots = tuple(int(n) for n in exact) if all(n.denominator == 1 for n in exact) else None
    limit = SECONDS if seconds is None else seconds
    return Effort(limit, tolerance, lots, lambda proved: reporter[0](proved))
