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

from fractions import Fraction
from functools import cached_property

from solver.answer import PayRange
from solver.inquiry import Inquiry
from solver.loosened import common
from solver.matrix import RowSense
from solver.program import Program
from solver.search import Found, Search, tie_width, whole_grain


class PayRanges:
    """Pay ranges of one plan's exact crew `best`."""

    def __init__(self, program: Program, best: Found, inquiry: Inquiry) -> None:
        self.program = program
        self.best = best
        self.inquiry = inquiry

    def of(self, j: int) -> PayRange:
        """The range of category j's pay. Where the time runs out, no more than was proved: the typed pay."""
        category = self.program.categories[j]
        pay = Fraction(category.pay)
        less, more = _Side(self, j, -1).change(), _Side(self, j, +1).change()
        low = None if more is None else self._told(pay - more)
        high = None if less is None else self._told(pay + less)
        return PayRange(category.name, low or None, high)  # nobody is paid less than nothing

    def _told(self, pay: Fraction) -> float:
        """Without the digits that only floating point put there, where hours cost money too."""
        return round(float(pay), 6) if self.program.costs_hours else float(pay)

    def cost(self, found: Found, objective: float) -> Fraction:
        """The crew's cost: exact where hours cost nothing, else `objective`."""
        if self.program.costs_hours:
            return Fraction(objective)
        return self.program.ledger.paper_cost(found.lots)

    @cached_property
    def best_cost(self) -> Fraction:
        """The exact crew's cost."""
        return self.cost(self.best, self.best.objective)


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

        For crews with more it is told only as far as pay stays above 0.
        """
        if self._sign < 0 and not self._at_best:
            return None
        ratio = Fraction(0)
        outcome = self._ranges.inquiry.cheapest(self._search(ratio))
        if outcome.complete and outcome.best is None:
            return None
        while outcome.complete and outcome.best is not None:
            ratio = self._ratio(outcome.best, ratio)
            if ratio <= 0:
                return Fraction(0)
            value = float(self._ranges.best_cost - self._sign * ratio * self._at_best)
            outcome = self._ranges.inquiry.cheapest(self._search(ratio), cutoff=value - tie_width(value))
        return ratio if outcome.complete else Fraction(0)

    def _ratio(self, found: Found, ratio: Fraction) -> Fraction:
        """The change of pay at which `found`, the best crew at `ratio`, costs as much as the exact crew."""
        amount = self._amount(found)
        cost = self._ranges.cost(found, found.objective + float(self._sign * ratio * amount))
        extra = cost - self._ranges.best_cost
        if extra <= Fraction(tie_width(float(cost))):
            return Fraction(0)
        needed = extra / (self._sign * (amount - self._at_best))
        return min(needed, self._pay) if self._sign > 0 else needed

    def _amount(self, found: Found) -> Fraction:
        return sum((w * found.lots[i] for i, w in self._weights.items()), start=Fraction(0))

    def _search(self, ratio: Fraction) -> Search:
        """Whole crews on this side, at the pay changed by `ratio`."""
        program = self._ranges.program
        matrix = program.matrix.copy()
        for i, weight in self._weights.items():
            matrix.cost[i] -= float(self._sign * ratio * weight)
        least = self._at_best + self._sign * common(list(self._weights.values()))
        sense = RowSense.AT_MOST if self._sign < 0 else RowSense.AT_LEAST
        matrix.add_row(list(self._weights), [float(w) for w in self._weights.values()], sense, float(least))
        return Search(program, matrix, grain=0.0 if ratio else whole_grain(program))
