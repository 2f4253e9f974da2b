"""The number of a ratio or share rule nearest to the typed one with which a crew is workable.

At a ratio r the rule asks sum_of n_t - r sum_per n_t <= 0 in each of its phases, so the least r is the
least over workable crews of the largest sum_of / sum_per. It is found by Dinkelbach's method for the
largest of several ratios (Crouzeix, Ferland & Schaible, An algorithm for generalized fractional programs,
Journal of Optimization Theory and Applications 47 (1985) 35-49): minimise the largest sum_of - r sum_per;
where that is below 0, take the crew's own largest ratio as the next r. Shares likewise.

A category without limit could be taken on in thousands only to water a ratio down: no more of one are
looked at than twice the people of the cheapest crew without the rule.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction
from math import ceil

from solver.found import Lots
from solver.grain import whole_grain
from solver.inquiry import Inquiry
from solver.matrix import RowSense
from solver.plan import Plan, Ratio, Sense, Share
from solver.program import Program
from solver.search import Search

# a ratio rule looser than this is no rule
LOOSEST_RATIO = Fraction(1000)
PER_PERSON = 1000.0
ROUNDS = 50


class RuleNumber:
    """One ratio rule, or share rule that is not `exactly`, of a plan."""

    def __init__(self, plan: Plan, rule: Ratio | Share) -> None:
        self._plan = replace(plan, rules=tuple(r for r in plan.rules if r is not rule))
        self._program = Program(self._plan)
        self._rising = isinstance(rule, Ratio) or rule.sense is Sense.AT_MOST
        self._of = frozenset(rule.of)
        self._per = frozenset(rule.per if isinstance(rule, Ratio) else rule.within)
        self._loosest = LOOSEST_RATIO if isinstance(rule, Ratio) else Fraction(int(self._rising))
        names = None if rule.phases is None else set(rule.phases)
        self._phases = [t for t, p in enumerate(plan.phases) if names is None or p.name in names]

    def nearest(self, inquiry: Inquiry) -> Fraction | None:
        """The number, None where no number will do (or the time did not suffice to find one)."""
        cheapest = self._cheapest(inquiry)
        if cheapest is None:
            return None
        self._program = Program(self._plan, self._caps(cheapest))
        number, found = self._loosest, None
        for _ in range(ROUNDS):
            lots = self._best(number, inquiry)
            if lots is None or self._excess(lots, number) > 0:
                return found
            better = self._ratio(lots)
            if better is None or better == found:
                return found if better is None else better
            number = found = better
        return found

    def _cheapest(self, inquiry: Inquiry) -> Lots | None:
        """The cheapest crew without the rule."""
        outcome = inquiry.cheapest(Search(self._program, grain=whole_grain(self._program)))
        return None if outcome.best is None else outcome.best.lots

    def _caps(self, cheapest: Lots) -> list[int]:
        """Lots per head count worth looking at."""
        program, span = self._program, len(self._plan.phases)
        people = max(2 * program.ledger.most_people(cheapest), Fraction(2))
        caps = [int(upper) for upper in program.matrix.upper[: program.head_count]]
        for i in range(program.head_count):
            if self._plan.categories[i // span].at_most is None:
                most = ceil(people / program.lots[i // span])
                caps[i] = max(min(caps[i], most), int(program.matrix.lower[i]))
        return caps

    def _best(self, number: Fraction, inquiry: Inquiry) -> Lots | None:
        """The crew with the most to spare at `number` in the phase where it has least."""
        program = self._program
        matrix = program.matrix.copy()
        matrix.cost = [0.0] * matrix.width
        people = sum(float(lot) for lot in program.lots) * max(matrix.upper[: program.head_count])
        most = (1.0 + people) * max(float(number), 1.0)
        shift = matrix.add_column(PER_PERSON, -most, most)
        for t in self._phases:
            terms = self._terms(number, t)
            matrix.add_row([*terms, shift], [*map(float, terms.values()), -1.0], RowSense.AT_MOST, 0.0)
        outcome = inquiry.cheapest(Search(program, matrix))
        return None if outcome.best is None else outcome.best.lots

    def _terms(self, number: Fraction, t: int) -> dict[int, Fraction]:
        """By how much each lot brings the crew over the rule, per head count of phase t."""
        program, sign = self._program, 1 if self._rising else -1
        terms: dict[int, Fraction] = {}
        for j, category in enumerate(program.categories):
            coef = Fraction(category.name in self._of) - number * (category.name in self._per)
            if coef:
                terms[program.head(j, t)] = sign * coef * program.lots[j]
        return terms

    def _excess(self, lots: Sequence[int], number: Fraction) -> Fraction:
        sums = (
            sum((a * lots[i] for i, a in self._terms(number, t).items()), start=Fraction(0))
            for t in self._phases
        )
        return max(sums, default=Fraction(0))

    def _ratio(self, lots: Sequence[int]) -> Fraction | None:
        """The tightest number with which this crew is workable; None where any is."""
        ratios = []
        for t in self._phases:
            of, per = (self._people(lots, t, names) for names in (self._of, self._per))
            if per:
                ratios.append(of / per)
        if not ratios:
            return None
        return max(ratios) if self._rising else min(ratios)

    def _people(self, lots: Sequence[int], t: int, names: frozenset[str]) -> Fraction:
        program = self._program
        mine = (j for j, category in enumerate(program.categories) if category.name in names)
        return sum((lots[program.head(j, t)] * program.lots[j] for j in mine), start=Fraction(0))
