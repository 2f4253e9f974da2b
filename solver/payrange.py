"""The range of a category's pay in which the exact crew stays cheapest, exact over all whole crews.

Pay is charged on W(n) = sum_t L_t n_t people-periods. Raising it by r makes crew n cheaper than the exact
crew n* once r > (cost(n) - cost(n*)) / (W(n*) - W(n)), for W(n) < W(n*); lowering it likewise for the
crews of larger W. The least such ratio is found by Dinkelbach's method (On nonlinear fractional
programming, Management Science 13 (1967) 492-498): minimise cost(n) - cost(n*) - r D(n) over whole crews,
D the difference in W; where that is below 0 take the crew's own ratio as the next r, until it is not.

The other lines stay as they are, a budget too: it is kept at the pay that is typed, so that the same crews
are workable at every pay.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import ceil, floor

from solver.answer import PayRange
from solver.engine import LpStatus
from solver.found import Found, Lots, Outcome, tie_width
from solver.grain import whole_grain
from solver.inquiry import Inquiry
from solver.loosened import affordable, common
from solver.matrix import RowSense
from solver.program import Program
from solver.rounding import snapped
from solver.search import Search


@dataclass(frozen=True)
class _Crew:
    """A workable crew with its cost at typed pay."""

    lots: Lots
    cost: Fraction


class _OutOfTime(Exception):
    """A search was cut short."""


def _complete(outcome: Outcome) -> Outcome:
    if not outcome.complete:
        raise _OutOfTime
    return outcome


class PayRanges:
    """Pay ranges of one plan's exact crew `best`."""

    def __init__(self, program: Program, best: Found, inquiry: Inquiry) -> None:
        self.program = program
        self.inquiry = inquiry
        self.best = self.crew(best.lots, best.objective)
        self.known: list[_Crew] = []

    def of(self, j: int) -> PayRange | None:
        """The range of category j's pay; None where the time did not suffice."""
        category = self.program.categories[j]
        pay = Fraction(category.pay)
        try:
            less, more = _Side(self, j, -1).change(), _Side(self, j, +1).change()
        except _OutOfTime:
            return None
        low = None if more is None else self._told(pay - more)
        high = None if less is None else self._told(pay + less)
        return PayRange(category.name, low or None, high)  # nobody is paid less than nothing

    def _told(self, pay: Fraction) -> float:
        """Without the digits that only floating point put there, where hours cost money too."""
        return round(float(pay), 6) if self.program.costs_hours else float(pay)

    def crew(self, lots: Lots, objective: float) -> _Crew:
        """The crew with its cost: exact where hours cost nothing, else `objective`."""
        if self.program.costs_hours:
            return _Crew(lots, Fraction(objective))
        return _Crew(lots, self.program.ledger.paper_cost(lots))


class _Side:
    """Crews with less (`sign` -1) or more (+1) of category j than the exact crew, in people-periods."""

    def __init__(self, ranges: PayRanges, j: int, sign: int) -> None:
        self._ranges, self._sign = ranges, sign
        program = ranges.program
        self._pay = Fraction(program.categories[j].pay)
        self._weights = {
            program.head(j, t): program.periods(t) * program.lots[j] for t in range(len(program.phases))
        }
        self._at_best = self._amount(ranges.best)

    def change(self) -> Fraction | None:
        """The least change of pay that makes one of these crews cheaper than the exact one; None: none does.

        For crews with more it is told only as far as pay stays above 0. Raises _OutOfTime.
        """
        if self._sign < 0 and not self._at_best:
            return None
        inquiry = self._ranges.inquiry
        mine = [crew for crew in self._ranges.known if self._sign * (self._amount(crew) - self._at_best) > 0]
        mine = mine or self._rounded()
        if not mine:
            outcome = _complete(inquiry.cheapest(self._search(Fraction(0))))
            if outcome.best is None:
                return None
            mine = [self._met(outcome.best, Fraction(0))]
        ratio = min(self._ratio(crew) for crew in mine)
        while ratio > 0:
            value = self._value(ratio)
            cutoff = value - tie_width(value)
            outcome = _complete(inquiry.cheapest(self._search(ratio), cutoff=cutoff))
            if outcome.best is None:
                break
            ratio = self._ratio(self._met(outcome.best, ratio))
        return max(ratio, Fraction(0))

    def _rounded(self) -> list[_Crew]:
        """A crew of this side, if rounding the relaxation's gives one: category j inwards, the others up."""
        search = self._search(Fraction(0))
        if search.relax() is not LpStatus.OPTIMAL:
            return []
        inwards = floor if self._sign < 0 else ceil
        values = [snapped(v) for v in search.relaxation.x[: search.program.head_count]]
        lots = tuple((inwards if i in self._weights else ceil)(v) for i, v in enumerate(values))
        objective = search.evaluate(lots)
        return [] if objective is None else [self._met(Found(lots, objective), Fraction(0))]

    def _met(self, found: Found, ratio: Fraction) -> _Crew:
        """A crew found at the pay changed by `ratio`; crews once met serve other categories too."""
        amount = self._amount(_Crew(found.lots, Fraction(0)))
        crew = self._ranges.crew(found.lots, found.objective + float(self._sign * ratio * amount))
        self._ranges.known.append(crew)
        return crew

    def _ratio(self, crew: _Crew) -> Fraction:
        """The change of pay at which the crew costs as much as the exact crew; 0: they cost the same."""
        extra = crew.cost - self._ranges.best.cost
        if extra <= Fraction(tie_width(float(crew.cost))):
            return Fraction(0)
        needed = extra / (self._sign * (self._amount(crew) - self._at_best))
        return min(needed, self._pay) if self._sign > 0 else needed

    def _amount(self, crew: _Crew) -> Fraction:
        return sum((w * crew.lots[i] for i, w in self._weights.items()), start=Fraction(0))

    def _value(self, ratio: Fraction) -> float:
        """What the exact crew costs at the pay changed by `ratio`."""
        return float(self._ranges.best.cost - self._sign * ratio * self._at_best)

    def _search(self, ratio: Fraction) -> Search:
        """Whole crews on this side, at the pay changed by `ratio`; if changed, those worth having only."""
        program = self._ranges.program
        cost = self._costs(program, ratio)
        if ratio and program.switches:  # which need close limits on head counts
            program = Program(program.plan, affordable(program, cost, self._value(ratio)))
            cost = self._costs(program, ratio)
        matrix = program.matrix.copy()
        matrix.cost = cost
        least = self._at_best + self._sign * common(list(self._weights.values()))
        sense = RowSense.AT_MOST if self._sign < 0 else RowSense.AT_LEAST
        matrix.add_row(list(self._weights), [float(w) for w in self._weights.values()], sense, float(least))
        return Search(program, matrix, grain=0.0 if ratio else whole_grain(program))

    def _costs(self, program: Program, ratio: Fraction) -> list[float]:
        cost = program.matrix.cost[:]
        for i, weight in self._weights.items():
            cost[i] -= float(self._sign * ratio * weight)
        return cost
