"""Attendance worked out a second time: every pattern of attendance, all of them in one program for HiGHS.

Written from the meaning of a plan, not from `solver.day`; of `solver` it uses the plan's classes only.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from itertools import product
from math import ceil, prod

import numpy as np
from scipy.optimize import linprog
from scipy.sparse import csr_matrix
from scipy.stats import binom

from solver.plan import Budget, Category, Plan, Presence, Ratio, Rule, Sense
from tests.solver import checker

Heads = tuple[int, ...]
SHORT = 1e-6  # hours; less is what floating point leaves


@dataclass(frozen=True)
class DayCheck:
    """What comes of all patterns of one day: chance covered, and hours expected to be short per period."""

    covered: float
    supervision_short: float
    work_short: float


@dataclass(frozen=True)
class Ask:
    """One day of a crew: heads per category, hours per person present, work left to the crew per period."""

    t: int
    heads: Heads
    hours: tuple[float, ...]
    work: tuple[float, ...]


def heads_of(plan: Plan, crew: Mapping[str, tuple[Fraction, ...]], t: int) -> Heads:
    """How many heads the crew has of each category: people, or parts of them where the lot is smaller."""
    return tuple(int(checker.number(crew[c.name][t]) / _size(c)) for c in plan.categories)


def _size(c: Category) -> Fraction:
    return Fraction(c.lot) / ceil(Fraction(c.lot))


def away(c: Category) -> float:
    """The chance that one head is away on a day."""
    return float(c.absence if c.day_absence is None else c.day_absence)


def ask(plan: Plan, crew: Mapping[str, tuple[Fraction, ...]], t: int) -> Ask:
    """The day of phase t."""
    length = float(plan.phases[t].periods)
    bought = units_bought(plan, crew, t)
    hours = tuple(_hours(plan, c, crew, t) for c in plan.categories)
    work = tuple(max(float(w.amounts[t]) - bought.get(w.name, 0.0), 0.0) / length for w in plan.works)
    return Ask(t, heads_of(plan, crew, t), hours, work)


def _hours(plan: Plan, c: Category, crew: Mapping[str, tuple[Fraction, ...]], t: int) -> float:
    """Hours one person present has a period: paid hours and overtime, less the settling-in of joiners."""
    now = checker.number(crew[c.name][t])
    before = checker.number(crew[c.name][t - 1]) if t else Fraction(c.on_books)
    kept = Fraction(c.hours)
    if now > before and c.settling_hours:
        lost = Fraction(c.settling_hours) * (now - before) / now / Fraction(plan.phases[t].periods)
        present = 1 - Fraction(c.absence)
        kept = kept - lost / present if kept * present > lost else kept * present - lost
    return max(float(kept + Fraction(c.overtime_hours)), 0.0)


def units_bought(plan: Plan, crew: Mapping[str, tuple[Fraction, ...]], t: int) -> dict[str, float]:
    """Units of each work the crew's cheapest plan buys in phase t, the most where several are as cheap."""
    sold = [w for w in plan.works if w.buy_in_price is not None]
    if not sold:
        return {}
    single = checker.Running(plan, crew)
    found = single._optimum(single.prices(), single._free)
    if found.status != 0:
        return {w.name: float(w.amounts[t] if w.buy_in_most is None else min(w.amounts[t], w.buy_in_most))
                for w in sold}  # fmt: skip
    wish = np.zeros(len(single._names))
    for k, w in enumerate(plan.works):
        if w.buy_in_price is not None:
            for at in range(len(plan.phases)):
                weight = (1 + 0.1 / (k + 1)) / float(checker.best_output(plan, w.name))
                wish[single._index["b", w.name, at]] = -weight
    best = single._optimum(wish, single._free, [(single.prices(), float(found.fun) + 1e-9)])
    return {w.name: float(best.x[single._index["b", w.name, t]]) for w in sold}


def checked(plan: Plan, crew: Mapping[str, tuple[Fraction, ...]], t: int) -> DayCheck:
    """Everything about the days of phase t, by looking at each pattern of attendance."""
    return judged(plan, ask(plan, crew, t))


def patterns_of(heads: Heads) -> list[Heads]:
    """Every number of heads present per category."""
    return list(product(*(range(n + 1) for n in heads)))


def judged(plan: Plan, asked: Ask) -> DayCheck:
    """All patterns of one day weighed by SciPy's binomial chances."""
    patterns = patterns_of(asked.heads)
    weights = np.array([_weight(plan, asked.heads, pattern) for pattern in patterns])
    shorts = np.array(shortages(plan, asked.t, tuple(patterns), asked.hours, asked.work))
    kept = np.array([rules_kept(plan, asked.t, pattern) for pattern in patterns])
    fine = kept & (shorts.sum(axis=1) <= SHORT)
    return DayCheck(float(weights @ fine), float(weights @ shorts[:, 0]), float(weights @ shorts[:, 1]))


def _weight(plan: Plan, heads: Heads, pattern: Heads) -> float:
    return prod(
        float(binom.pmf(m, n, 1 - away(c))) for c, n, m in zip(plan.categories, heads, pattern, strict=True)
    )


def rules_kept(plan: Plan, t: int, pattern: Heads) -> bool:
    """Presence rules, and ratio and share rules by day, asked of those present, exactly."""
    there = {c.name: m * _size(c) for c, m in zip(plan.categories, pattern, strict=True)}
    return all(_kept(rule, there) for rule in plan.rules if _asked(rule, plan.phases[t].name))


def _asked(rule: Rule, phase: str) -> bool:
    if isinstance(rule, Budget) or (rule.phases is not None and phase not in rule.phases):
        return False
    return isinstance(rule, Presence) or rule.by_day


def _kept(rule: Rule, there: Mapping[str, Fraction]) -> bool:
    if isinstance(rule, Presence):
        left = sum((Fraction(w) * there[name] for name, w in rule.weights.items()), Fraction(0))
        right, sense = Fraction(rule.bound), rule.sense
    elif isinstance(rule, Ratio):
        left = sum((there[name] for name in rule.of), Fraction(0))
        right = Fraction(rule.at_most) * sum((there[name] for name in rule.per), Fraction(0))
        sense = Sense.AT_MOST
    else:
        assert not isinstance(rule, Budget)
        left = sum((there[name] for name in rule.of), Fraction(0))
        right = Fraction(rule.fraction) * sum((there[name] for name in rule.within), Fraction(0))
        sense = rule.sense
    return {
        Sense.AT_LEAST: left >= right,
        Sense.AT_MOST: left <= right,
        Sense.EXACTLY: left == right,
    }[sense]


def shortages(
    plan: Plan, t: int, patterns: tuple[Heads, ...], hours: tuple[float, ...], work: tuple[float, ...]
) -> list[tuple[float, float]]:
    """Per pattern the supervision hours short, and with that least the work short (hours at best output)."""
    blocks = _Blocks(plan)
    for pattern in patterns:
        people = [float(m * _size(c)) for c, m in zip(plan.categories, pattern, strict=True)]
        blocks.add(people, hours, work)
    return blocks.solved()


class _Blocks:
    """One block of rows and columns per pattern; the least of the sum is the sum of the least."""

    def __init__(self, plan: Plan) -> None:
        self.plan = plan
        self.cost: list[float] = []
        self.rows: list[dict[int, float]] = []
        self.most: list[float] = []
        self.marks: list[tuple[list[int], list[int]]] = []

    def _column(self, cost: float = 0.0) -> int:
        self.cost.append(cost)
        return len(self.cost) - 1

    def add(self, people: list[float], hours: tuple[float, ...], work: tuple[float, ...]) -> None:
        """The program of one pattern."""
        plan = self.plan
        spent: list[list[int]] = [[] for _ in plan.categories]
        unled, undone = [], []
        for group in checker.groups_of(plan):
            row = {self._column(20.0): -1.0}
            unled += list(row)
            for j, c in enumerate(plan.categories):
                if c.name in group:
                    spent[j].append(self._column())
                    row[spent[j][-1]] = -1.0
            drawn = sum(float(c.supervision.hours) * people[j] for j, c in enumerate(plan.categories)
                        if checker.draws_from(c, group))  # fmt: skip
            self._row(row, -drawn)
        for k, w in enumerate(plan.works):
            best = float(checker.best_output(plan, w.name))
            row = {self._column(1.0): -1.0}
            undone += list(row)
            for j, c in enumerate(plan.categories):
                if c.output.get(w.name):
                    spent[j].append(self._column())
                    row[spent[j][-1]] = -float(c.output[w.name]) / best
            self._row(row, -work[k] / best)
        for j, columns in enumerate(spent):
            if columns:
                self._row(dict.fromkeys(columns, 1.0), hours[j] * people[j])
        self.marks.append((unled, undone))

    def _row(self, row: dict[int, float], most: float) -> None:
        self.rows.append(row)
        self.most.append(most)

    def solved(self) -> list[tuple[float, float]]:
        """Shortages of every block."""
        if not self.rows:
            return [(0.0, 0.0)] * len(self.marks)
        values = [v for row in self.rows for v in row.values()]
        columns = [c for row in self.rows for c in row]
        starts = np.concatenate([[0], np.cumsum([len(row) for row in self.rows])])
        matrix = csr_matrix((values, columns, starts), shape=(len(self.rows), len(self.cost)))
        found = linprog(self.cost, A_ub=matrix, b_ub=self.most, method="highs")
        assert found.status == 0, found.message
        return [(float(found.x[a].sum()), float(found.x[b].sum())) for a, b in self.marks]
