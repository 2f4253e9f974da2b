"""Near-best crews: every distinct whole crew within some per cent of the cheapest, cheapest first."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from solver import heads
from solver.answer import NearBest, NearCrew, Policy
from solver.exactcrew import exact_crew
from solver.found import Found, Limits, tie_width
from solver.grain import whole_grain
from solver.inquiry import Heard, Inquiry, unheard
from solver.loosened import paid_caps
from solver.plan import Plan
from solver.program import Program
from solver.search import Search
from solver.solve import Case
from solver.tightest import tightest

NODES = Limits(nodes=1_000_000)
# crews as cheap as the last one shown, looked at so that the same ones are shown on every machine
MOST_TIED = 500


def near_best(
    plan: Plan,
    *,
    within: float = 2.0,
    most: int = 20,
    seconds: float | None = None,
    heard: Heard = unheard,
) -> NearBest:
    """At most `most` crews costing at most `within` % more than the exact crew, which is the first.

    Of equally cheap crews the preferred one stands first. `complete` False: there are more than `most`,
    or `seconds` (None: 60) were not enough. Raises NoExactCrew where the plan has no exact crew, or none
    that is proved.
    """
    inquiry = Inquiry(seconds, heard)
    case = Case(plan, seconds)
    best, exact = exact_crew(case)
    found, complete = _Near(case, best, inquiry).crews(within, most)
    assert exact.cost is not None
    return NearBest(tuple(_near_crew(case, one, exact.cost) for one in found), complete)


class _Near:
    """The crews near one plan's exact crew `best`."""

    def __init__(self, case: Case, best: Found, inquiry: Inquiry) -> None:
        self._case, self._best, self._inquiry = case, best, inquiry

    def crews(self, within: float, most: int) -> tuple[list[Found], bool]:
        """In order, with whether there are no more."""
        limit = self._best.objective * (1 + within / 100)
        found, complete = self._listed(limit, most + 1)
        if len(found) > most:
            complete = False
            last = found[most - 1].objective
            if found[most].objective <= last + tie_width(last):  # not all of those as cheap are there
                found, _ = self._listed(last, most + MOST_TIED)
        found.sort(key=self._order)
        return self._with_best_first(found)[:most], complete

    def _listed(self, limit: float, most: int) -> tuple[list[Found], bool]:
        plan = self._case.plan
        program = Program(plan, paid_caps(plan, limit))
        search = Search(program, grain=whole_grain(program))
        limits = replace(NODES, seconds=self._inquiry.left)
        self._inquiry.programs += 1
        cutoff = limit + tie_width(limit)
        return search.within(cutoff, most, limits, lambda n: self._inquiry.tell(f"{n} crews found", n / most))

    def _order(self, one: Found) -> tuple[Fraction | int | float, ...]:
        """By cost, exact where it is; then as the exact crew is chosen among its equals."""
        program = self._case.program
        if program.costs_hours:
            return (round(one.objective, 3), *heads.preference(program, one.lots))
        return (program.ledger.paper_cost(one.lots), *heads.preference(program, one.lots))

    def _with_best_first(self, found: list[Found]) -> list[Found]:
        """The exact crew leads, also where the time did not suffice to meet it again."""
        return [self._best, *(one for one in found if one.lots != self._best.lots)]


def _near_crew(case: Case, one: Found, exact_cost: float) -> NearCrew:
    report = case.appraiser.appraise(Policy.EXACT, one.lots)
    if report.crew is None or report.cost is None:
        raise AssertionError(f"the crew {report.crew} did not stand its appraisal")
    return NearCrew(
        report.crew, report.cost, max(report.cost - exact_cost, 0.0), report.joiners, report.leavers,
        report.people, tightest(case.program, one.lots, report),
    )  # fmt: skip
