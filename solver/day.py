"""What a working day of one phase asks of those who are present, and the program that decides it.

Everything is stated per period: a day has its share of the phase's work, and so have the hours of those
present, so the number of days cancels out. With m_j people of category j present:

    minimise  HEAVY sum_g short_g + sum_k short_k
    hours        sum_k e_jk + sum_g s_jg <= H_j m_j
    work         sum_j (output_jk / best_k) e_jk + short_k >= (amount_k / L - bought_k / L) / best_k
    supervision  sum_{j in g} s_jg + short_g >= sum_{i charge of g} supervision_hours_i m_i

H_j are the *paid* hours of one person present (absence is what decides m, it must not be taken off again),
less the settling-in of the phase's joiners spread over the days they attend, plus allowed overtime. An hour
of supervision can free at most an hour at best output, so with HEAVY > 1 supervision is short as little as
possible first, and only then work. Head counts stand on the right only: dual prices give inequalities in
the people present that hold for every day and crew of the plan.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from math import ceil, inf

import numpy as np

from solver import heads
from solver.answer import LineKind
from solver.lines import HeadLine, Line
from solver.matrix import Floats, Ints, RowSense
from solver.plan import Ratio, Share
from solver.program import Program
from solver.shortfall import Shortfall

HEAVY = 10.0
# of equally short ways the one that serves what stands first in the plan is taken
FIRST_SERVED = 1e-6


@dataclass(frozen=True)
class DayRule:
    """sum each[j] m_j {>=, <=, =} rhs, asked of those present (people)."""

    line: Line
    each: Floats
    sense: RowSense
    rhs: float


@dataclass(frozen=True)
class Day:
    """A working day of phase `t` for one crew: `heads[j]` of `size[j]` people each, away with chance `away`.

    `hours` are per person present and period, `demand` hours at best output per work and period.
    """

    t: int
    heads: Ints
    size: Floats
    away: Floats
    hours: Floats
    demand: Floats
    rules: tuple[DayRule, ...]

    def without_one(self, j: int) -> Day:
        """The same day when it is known that one head of category j is away."""
        fewer = self.heads.copy()
        fewer[j] -= 1
        return replace(self, heads=fewer)


class Days:
    """The days of a program's phases, for any crew in whole lots."""

    def __init__(self, program: Program) -> None:
        self.program = program
        self.per_lot = np.array([ceil(lot) for lot in program.lots], dtype=np.intp)
        self.size = np.array([float(lot / ceil(lot)) for lot in program.lots])
        self.away = np.array(
            [float(c.absence if c.day_absence is None else c.day_absence) for c in program.categories]
        )
        self.rules = [self._rules(t) for t in range(len(program.phases))]
        self._contracts = [_Contract(program, t) for t in range(len(program.phases))]
        self._paid = np.array([float(c.hours + c.overtime_hours) for c in program.categories])
        self._settling = any(c.settling_hours > 0 for c in program.categories)
        self._amounts = [self._per_period(t) for t in range(len(program.phases))]

    def of(self, t: int, lots: Sequence[int]) -> Day:
        """The day of phase t for the crew `lots`, with the units its cheapest plan buys in."""
        program = self.program
        mine = np.array([lots[program.head(j, t)] for j in range(len(program.categories))], dtype=np.intp)
        bought = self._contracts[t].bought(lots)
        return Day(
            t, mine * self.per_lot, self.size, self.away, self._hours(t, lots),
            np.maximum(self._amounts[t] - bought, 0.0), self.rules[t],
        )  # fmt: skip

    def easiest(self, t: int, lots: Sequence[int], spent: float) -> Day:
        """A day no crew of at most `lots` has it easier on: no settling-in, and as much bought in as
        `spent` money pays for."""
        program = self.program
        mine = np.array([lots[program.head(j, t)] for j in range(len(program.categories))], dtype=np.intp)
        bought = self._contracts[t].most(spent)
        demand = np.maximum(self._amounts[t] - bought, 0.0)
        return Day(t, mine * self.per_lot, self.size, self.away, self._paid, demand, self.rules[t])

    def _per_period(self, t: int) -> Floats:
        """Hours at best output per period that each work asks for."""
        program, length = self.program, self.program.periods(t)
        return np.array(
            [float(Fraction(w.amounts[t]) / length / program.best_output(k))
             for k, w in enumerate(program.plan.works)]
        )  # fmt: skip

    def _hours(self, t: int, lots: Sequence[int]) -> Floats:
        """Paid and overtime hours per person present; joiners settle in on the days they attend."""
        if not self._settling:
            return self._paid
        hours = self._paid.copy()
        counts = heads.people(self.program, lots)
        for j, category in enumerate(self.program.categories):
            now = counts[j][t]
            before = counts[j][t - 1] if t else Fraction(category.on_books)
            if category.settling_hours > 0 and now > before:
                lost = Fraction(category.settling_hours) * (now - before) / now / self.program.periods(t)
                left = self.program.attended[j] - lost  # on average; overtime makes up for less than none
                left = left / (1 - Fraction(category.absence)) if left > 0 else left
                hours[j] = max(float(left + Fraction(category.overtime_hours)), 0.0)
        return hours

    def _rules(self, t: int) -> tuple[DayRule, ...]:
        by_day = {r.name for r in self.program.plan.rules if isinstance(r, (Ratio, Share)) and r.by_day}
        phase = self.program.phases[t].name
        return tuple(
            self._rule(head)
            for head in self.program.head_lines
            if head.line.phase == phase
            and (head.line.kind is LineKind.PRESENCE or (_is_mix(head.line) and head.line.name in by_day))
        )

    def _rule(self, head: HeadLine) -> DayRule:
        span = len(self.program.phases)
        each = np.zeros(len(self.program.categories))
        for i, coef in head.terms:
            each[i // span] += float(Fraction(coef, head.divisor) / self.program.lots[i // span])
        return DayRule(head.line, each, head.sense, head.rhs / head.divisor)


def _is_mix(line: Line) -> bool:
    return line.kind in (LineKind.RATIO, LineKind.SHARE)


class _Contract:
    """How many units a crew's cheapest plan buys in; of equally cheap plans the one that buys most."""

    def __init__(self, program: Program, t: int) -> None:
        works = range(len(program.plan.works))
        self._program = program
        self._t = t
        self._phase = phase = Shortfall(program, t)
        self._sold = phase.bought
        self._hour = np.array([float(program.best_output(k)) for k in works])
        self._length = float(program.periods(t))
        self._costs = {column: phase.price(column) for column in phase.overtime.values()}
        for k, column in self._sold.items():
            nudge = FIRST_SERVED / self._hour[k] * (1 + 0.1 / (k + 1))
            self._costs[column] = phase.price(column) - nudge
        shorts = [*phase.work_short, *phase.group_short]
        phase.allow(shorts, [0.0] * len(shorts))

    def bought(self, lots: Sequence[int]) -> Floats:
        """Hours at best output per period that need not be done by the crew; a crew that is short in any
        case buys all it may."""
        if not self._sold:
            return np.zeros(len(self._hour))
        self._phase.set_heads(self._people(lots, self._t), self._people(lots, self._t - 1))
        if self._phase.minimise_costs(self._costs) is None:
            return self.most(inf)
        x = self._phase.x
        return self._in_hours({k: float(x[column]) for k, column in self._sold.items()})

    def most(self, spent: float) -> Floats:
        """The same where `spent` money goes into each work that is for sale."""
        units = {}
        for k, column in self._sold.items():
            price, most = self._phase.price(column), self._phase.most(column)
            units[k] = min(most, max(spent, 0.0) / price) if price > 0 else most
        return self._in_hours(units)

    def _in_hours(self, units: Mapping[int, float]) -> Floats:
        hours = np.zeros(len(self._hour))
        for k, amount in units.items():
            hours[k] = amount / self._hour[k] / self._length
        return hours

    def _people(self, lots: Sequence[int], t: int) -> list[float]:
        program = self._program
        if t < 0:
            return [float(c.on_books) for c in program.categories]
        return [float(lots[program.head(j, t)] * lot) for j, lot in enumerate(program.lots)]
