"""Head-count money and moves in whole numbers: exact, and quicker than fractions one by one."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from math import lcm

from solver.plan import Plan

Counts = Sequence[Fraction | int]
"""Lots per head count, category by category, phases within; fractions only in an own crew."""


@dataclass(frozen=True)
class Rates:
    """What one category costs, in coins: per unit of people and phase, per move, once."""

    lot: int
    books: int
    pay: tuple[int, ...]
    join: int
    leave: int
    opening: int


class Ledger:
    """People are counted in units of 1 / `unit`, money in coins of 1 / `coin`, so that all is whole."""

    def __init__(self, plan: Plan) -> None:
        self._plan = plan
        self.span = len(plan.phases)
        categories = plan.categories
        self.unit = _denominator(x for c in categories for x in (Fraction(c.lot), Fraction(c.on_books)))

    @cached_property
    def coin(self) -> int:
        """Coins per unit of money: every amount below is a whole number of them."""
        plan = self._plan
        lengths = [Fraction(phase.periods) for phase in plan.phases]
        amounts = [length * Fraction(c.pay) / self.unit for c in plan.categories for length in lengths]
        for c in plan.categories:
            amounts += [Fraction(c.join_cost) / self.unit, Fraction(c.leave_cost) / self.unit]
            amounts.append(Fraction(c.open_cost))
        return _denominator(amounts)

    @cached_property
    def rates(self) -> tuple[Rates, ...]:
        """One entry per category."""
        return tuple(self._rates(j) for j in range(len(self._plan.categories)))

    def _rates(self, j: int) -> Rates:
        c, per = self._plan.categories[j], Fraction(self.coin, self.unit)
        return Rates(
            lot=int(Fraction(c.lot) * self.unit),
            books=int(Fraction(c.on_books) * self.unit),
            pay=tuple(int(Fraction(p.periods) * Fraction(c.pay) * per) for p in self._plan.phases),
            join=int(Fraction(c.join_cost) * per),
            leave=int(Fraction(c.leave_cost) * per),
            opening=int(Fraction(c.open_cost) * self.coin),
        )

    def moves(self, lots: Counts) -> tuple[Fraction, Fraction]:
        """Joiners and leavers over all categories and phases, in people."""
        joiners: Fraction | int = 0
        leavers: Fraction | int = 0
        for j, rates in enumerate(self.rates):
            before: Fraction | int = rates.books
            for n in lots[j * self.span : (j + 1) * self.span]:
                change = n * rates.lot - before
                if change > 0:
                    joiners += change
                else:
                    leavers -= change
                before += change
        return Fraction(joiners) / self.unit, Fraction(leavers) / self.unit

    def people(self, lots: Counts) -> Fraction:
        """Head counts summed over categories and phases."""
        total = sum(n * self.rates[i // self.span].lot for i, n in enumerate(lots))
        return Fraction(total) / self.unit

    def most_people(self, lots: Counts) -> Fraction:
        """The largest number of people there in any one phase."""
        phases = (
            sum(n * rates.lot for n, rates in zip(lots[t :: self.span], self.rates, strict=True))
            for t in range(self.span)
        )
        return Fraction(max(phases, default=0)) / self.unit

    def paper_cost(self, lots: Counts) -> Fraction:
        """Pay, joining, leaving and opening costs of the head counts, exact."""
        total: Fraction | int = 0
        for j, rates in enumerate(self.rates):
            mine = lots[j * self.span : (j + 1) * self.span]
            before: Fraction | int = rates.books
            for n, pay in zip(mine, rates.pay, strict=True):
                now = n * rates.lot
                change = now - before
                total += pay * now + change * (rates.join if change > 0 else -rates.leave)
                before = now
            if any(mine):
                total += rates.opening
        return Fraction(total) / self.coin


def _denominator(values: Iterable[Fraction]) -> int:
    return lcm(1, *(value.denominator for value in values))
