"""Room to move: for each line how far it can tighten, and the least loosening that makes a cheaper crew.

Loosening a line by d > 0 units makes a cheaper whole crew possible when some whole crew keeps the line
loosened by d, and every other line, at a cost of at most the exact crew's minus one cent. The least such d
is an integer program (minimise d subject to that cost); the cheapest crew at that d is a second one. Dual
prices of the relaxation stand beside them, for fractional people only.
"""

from __future__ import annotations

from solver import heads, roomwords
from solver.answer import CrewReport, LineKind, LineMargin, LineRoom, Room
from solver.exactcrew import exact_crew
from solver.found import Found, Lots, tie_width
from solver.fractionalprice import FractionalPrices
from solver.grain import whole_grain
from solver.inquiry import Heard, Inquiry, unheard
from solver.lines import Line
from solver.loosened import GivingWay, Loosened, Negotiable, is_settling
from solver.loosening import NOTHING, OUT_OF_TIME, Grown, Loosening
from solver.payrange import PayRanges
from solver.plan import Plan
from solver.solve import Case

CENT = 0.01


def room(plan: Plan, *, seconds: float | None = None, heard: Heard = unheard) -> Room:
    """Room to move on every line and in every category's pay.

    `seconds` (None: 60) limits all integer programs together; lines that are not settled then say so, and
    pay that is not is left out. Raises NoExactCrew where the plan has no exact crew, or none that is proved.
    """
    inquiry = Inquiry(seconds, heard)
    case = Case(plan, seconds)
    best, report = exact_crew(case)
    lines = _Lines(case, best, report, inquiry).all()
    ranges = PayRanges(case.program, best, inquiry)
    pay = []
    for j, category in enumerate(plan.categories):
        inquiry.tell(f"Pay of {category.name}", 0.7 + 0.3 * j / len(plan.categories))
        found = ranges.of(j)
        pay += [] if found is None else [found]
    return Room(tuple(lines), tuple(pay), inquiry.programs)


class _Lines:
    """The lines of one plan, one after the other."""

    def __init__(self, case: Case, best: Found, report: CrewReport, inquiry: Inquiry) -> None:
        assert report.cost is not None
        self._case, self._best, self._report, self._inquiry = case, best, report, inquiry
        self._cost = report.cost
        self._negotiable = Negotiable(case.plan, best.objective)
        self._prices = FractionalPrices(case.plan)
        grain = whole_grain(case.program)
        tie = tie_width(best.objective)  # above a hundred millions a cent is no longer told
        rounding = tie / 2 if grain else 1e-6 + 1e-12 * abs(best.objective)
        self._cheaper = best.objective - max(CENT, grain, 3 * tie) + rounding

    def all(self) -> list[LineRoom]:
        """Every line's room, in the order of the program."""
        lines, found = self._negotiable.base.lines, []
        for i, line in enumerate(lines):
            self._inquiry.tell(line.says, 0.7 * i / len(lines))
            found.append(self._one(i, line, self._report.lines[i]))
        return found

    def _one(self, i: int, line: Line, margin: LineMargin) -> LineRoom:
        loosening = self._loosening(line)
        price = self._prices.priced(i)
        crew = None if loosening.lots is None else heads.crew_of(self._case.program, loosening.lots)
        says = roomwords.says(self._case.plan, line, margin.margin, loosening, crew, self._report.crew)
        return LineRoom(
            line.name, line.kind, line.phase, line.unit, margin.margin,
            None if loosening.by is None else float(loosening.by), loosening.saving, crew,
            price.price, price.low, price.high, says,
        )  # fmt: skip

    def _loosening(self, line: Line) -> Loosening:
        if line.kind is LineKind.BUDGET or is_settling(line):
            return NOTHING  # a cheaper crew keeps the budget anyway; settling in is no rule
        loosened = self._negotiable.loosened([line])
        cheaper, settled = loosened.cheapest(self._inquiry, None, cutoff=self._cheaper)
        if cheaper is None:
            return NOTHING if settled else OUT_OF_TIME
        least = loosened.least(self._inquiry, money=self._cheaper, known=cheaper.lots)
        return OUT_OF_TIME if least is None else self._at(loosened, least)

    def _at(self, loosened: Loosened, least: GivingWay) -> Loosening:
        """The cheapest crew once the line gives way by `least.by`."""
        found, settled = loosened.cheapest(self._inquiry, least.by, known=least.lots)
        if found is None:
            found = Found(least.lots, self._cheaper)
        slopes = self._case.program.costs_hours
        cost = found.objective if slopes else float(self._case.program.ledger.paper_cost(found.lots))
        grown = self._grown(loosened, found.lots) if slopes else None
        return Loosening(least.by, found.lots, self._cost - cost, least.proved and settled, grown)

    def _grown(self, loosened: Loosened, lots: Lots) -> Grown | None:
        """The most this crew can save by the line's giving way, and the least that brings it."""
        free = loosened.costing(None).evaluate(lots)
        if free is None:
            return None
        by = loosened.least_for(lots, free + CENT / 2)
        return None if by is None else Grown(by, self._cost - free)
