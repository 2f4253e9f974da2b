"""What whole people cost, and where the cost comes from.

The integrality gap is exact cost - floor. A category's part in it is seen by letting it alone be
fractional (shared with another site, part-time), or come in half lots, and solving again.
"""

from __future__ import annotations

from dataclasses import replace

from solver.answer import CategorySaving, CrewReport, Policy, Rung, WholePeopleDetail
from solver.exactcrew import exact_crew
from solver.found import Found, tie_width
from solver.grain import whole_grain
from solver.inquiry import Heard, Inquiry, unheard
from solver.loosened import paid_caps
from solver.plan import Plan
from solver.program import Program
from solver.search import Search
from solver.solve import Case, whole_people_cost
from solver.unanswered import Unsettled


def whole_cost(plan: Plan, *, seconds: float | None = None, heard: Heard = unheard) -> WholePeopleDetail:
    """The whole-people cost, each category's part in it, and the ladder of costs.

    Raises NoExactCrew where the plan has no exact crew, or none that is proved; Unsettled where `seconds`
    (None: 60) are not enough for every category.
    """
    inquiry = Inquiry(seconds, heard)
    case = Case(plan, seconds)
    best, exact = exact_crew(case)
    assert exact.cost is not None
    assert case.relaxed is not None
    savings = _Savings(case, best, inquiry).all()
    gap = whole_people_cost(exact.cost, case.relaxed.floor)
    return WholePeopleDetail(
        case.relaxed.floor, exact.cost, gap.absolute, gap.percent, tuple(savings), _ladder(case, exact)
    )


class _Savings:
    """Each category's saving, were it not bound to whole lots."""

    def __init__(self, case: Case, best: Found, inquiry: Inquiry) -> None:
        self._case, self._best, self._inquiry = case, best, inquiry

    def all(self) -> list[CategorySaving]:
        """One entry per category, in the order of the plan."""
        found = []
        for j, category in enumerate(self._case.plan.categories):
            self._inquiry.tell(category.name, j / len(self._case.plan.categories))
            found.append(CategorySaving(category.name, self._if_fractional(j), self._if_half_lot(j)))
        return found

    def _if_fractional(self, j: int) -> float:
        plan, span = self._case.plan, len(self._case.plan.phases)
        mine = range(j * span, (j + 1) * span)
        caps = paid_caps(plan, self._best.objective)
        for column in mine:
            caps[column] += 1  # the part of a lot that the money still pays for
        program = Program(plan, caps)
        matrix = program.matrix.copy()
        for column in mine:
            matrix.integer[column] = False
        return self._saving(Search(program, matrix, fractional=mine), self._best)

    def _if_half_lot(self, j: int) -> float:
        plan = self._case.plan
        category = replace(plan.categories[j], lot=plan.categories[j].lot / 2)
        halved = replace(plan, categories=(*plan.categories[:j], category, *plan.categories[j + 1 :]))
        program = Program(halved, paid_caps(halved, self._best.objective))
        span = len(plan.phases)
        lots = tuple(n * 2 if i // span == j else n for i, n in enumerate(self._best.lots))
        start = Found(lots, self._best.objective)
        return self._saving(Search(program, grain=whole_grain(program)), start)

    def _saving(self, search: Search, start: Found) -> float:
        """What is saved against the exact crew, which may stay as it is."""
        outcome = self._inquiry.cheapest(search, start=start)
        if not outcome.complete:
            raise Unsettled("What each category costs for coming whole was not settled in the time given.")
        cost = start.objective if outcome.best is None else outcome.best.objective
        saved = self._best.objective - cost
        return saved if saved > tie_width(cost) else 0.0


def _ladder(case: Case, exact: CrewReport) -> tuple[Rung, ...]:
    assert case.relaxed is not None
    up = case.appraiser.appraise(Policy.UP, case.rounding(Policy.UP), case.relaxed.lots)
    crews = [("best corner", case.best_corner()), ("patched", case.patched()), ("up", up)]
    floor = Rung("floor", case.relaxed.floor, ())
    return (floor, Rung("exact", exact.cost, ()), *(_rung(name, report) for name, report in crews))


def _rung(name: str, report: CrewReport) -> Rung:
    """A crew's cost, or what is broken, or why there is no crew."""
    if report.crew is None:
        return Rung(name, None, (report.why_none,))
    broken = tuple(dict.fromkeys(line.line for line in report.lines if line.margin < 0))
    return Rung(name, report.cost, broken)
