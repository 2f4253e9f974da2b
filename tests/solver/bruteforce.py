"""What `room`, `near`, `cost` and conflicts should say, by looking at every crew; for boxed plans.

Knows the plan's classes, the independent checker and the independent program for SciPy's HiGHS only.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from decimal import Decimal
from fractions import Fraction
from itertools import product
from math import ceil, floor

import numpy as np

from solver.plan import Budget, Category, Plan, Work
from tests.solver import checker, reference

Crew = Mapping[str, tuple[Fraction, ...]]
MOST_CREWS = 700


# ---- room ------------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Loosened:
    """The least loosening of a line, and the cost of the cheapest crew at it. None: no cheaper crew."""

    by: float | None
    cost: float | None


class Yielding(checker.Running):
    """How a crew is run when one work or supervision line may be missed."""

    def short_column(self, line: tuple) -> int:
        return self._index[("short", *line)]

    def least_short(self, line: tuple, money: float) -> float | None:
        """Least units short on the line, all others kept, running costs within `money`."""
        cost, upper = np.zeros(len(self._names)), self._free.copy()
        cost[self.short_column(line)] = 1.0
        upper[self.short_column(line)] = np.inf
        found = self._optimum(cost, upper, [(self.prices(), money)])
        return None if found.status != 0 else max(float(found.fun), 0.0) * self.scale(line)

    def cheapest_short(self, line: tuple, by: float) -> float | None:
        """Least running cost when the line may be `by` units short."""
        upper = self._free.copy()
        upper[self.short_column(line)] = by / self.scale(line) + 1e-9
        found = self._optimum(self.prices(), upper)
        return None if found.status != 0 else float(found.fun)


class Room:
    """Every crew of a plan that might be cheaper than `best`, and what it misses."""

    def __init__(self, plan: Plan, best: float) -> None:
        self.plan = plan
        self.best = best
        self.money = best - 0.01
        self._lines = {Yielding(plan, _nobody(plan)).title(x): x for x in Yielding(plan, _nobody(plan)).lines}
        self._in_box = [crew for crew in _crews(plan) if self._cheap(crew)]

    def _cheap(self, crew: Crew) -> bool:
        return checker.cost_of_heads(self.plan, crew) <= Fraction(self.money) + Fraction(1, 10**7)

    def loosened(self, line: str, phase: str) -> Loosened | None:
        """What loosening this line alone brings; None where there are too many crews to look at."""
        if (line, phase) in self._lines:
            return self._hours(self._lines[line, phase])
        crews = self._in_box
        if line.endswith(": at most"):
            more = list(self._beyond(line.removesuffix(": at most"), phase))
            if len(more) > MOST_CREWS:
                return None
            crews = [*crews, *(crew for crew in more if self._cheap(crew))]
        return self._heads(line, phase, crews)

    def _beyond(self, name: str, phase: str) -> Iterator[Crew]:
        """Crews with more of one category in one phase than its limit, as far as the money goes."""
        plan = self.plan
        t = next(i for i, p in enumerate(plan.phases) if p.name == phase)
        category = plan.category(name)
        paid = float(plan.phases[t].periods * category.pay * category.lot)
        most = floor(self.money / paid) if paid else MOST_CREWS
        yield from _crews(plan, {(name, t): range(_most_lots(category) + 1, most + 1)})

    def _heads(self, line: str, phase: str, crews: list[Crew]) -> Loosened:
        found: list[tuple[Fraction, float]] = []
        for crew in crews:
            misses = checker.missed_by_heads(self.plan, crew)
            if any((miss.line, miss.phase) != (line, phase) for miss in misses):
                continue
            run = checker.Running(self.plan, crew).cheapest()
            cost = None if run is None else float(checker.cost_of_heads(self.plan, crew)) + run[0]
            if cost is not None and cost <= self.money + 1e-6:
                found.append((max((miss.by for miss in misses), default=Fraction(0)), cost))
        if not found:
            return Loosened(None, None)
        by = min(by for by, _ in found)
        return Loosened(float(by), min(cost for way, cost in found if way <= by))

    def _hours(self, line: tuple) -> Loosened:
        found: list[tuple[float, float, Yielding]] = []
        for crew in self._in_box:
            if checker.missed_by_heads(self.plan, crew):
                continue
            heads = float(checker.cost_of_heads(self.plan, crew))
            running = Yielding(self.plan, crew)
            by = running.least_short(line, self.money - heads + 1e-9)
            if by is not None:
                found.append((by, heads, running))
        if not found:
            return Loosened(None, None)
        least = min(by for by, _, _ in found)
        costs = [heads + running.cheapest_short(line, least) for by, heads, running in found
                 if by <= least * (1 + 1e-7) + 1e-7]  # fmt: skip
        return Loosened(least, min(costs))


def _nobody(plan: Plan) -> Crew:
    return {c.name: (Fraction(0),) * len(plan.phases) for c in plan.categories}


def _most_lots(category: Category) -> int:
    return floor(Fraction(category.at_most) / Fraction(category.lot))


def _crews(plan: Plan, instead: Mapping[tuple[str, int], range] | None = None) -> Iterator[Crew]:
    """Every crew from nobody up to the limits; `instead` gives other counts of lots for some."""
    spans = range(len(plan.phases))
    places = [(c, t) for c in plan.categories for t in spans]
    ranges = [(instead or {}).get((c.name, t), range(_most_lots(c) + 1)) for c, t in places]
    for counts in product(*ranges):
        lots = iter(counts)
        yield {c.name: tuple(next(lots) * Fraction(c.lot) for _ in spans) for c in plan.categories}


# ---- cost ------------------------------------------------------------------------------------------


def cost_with_fractional(plan: Plan, name: str) -> float:
    """The least cost when one category may be fractional."""
    model = reference.written_out(plan, relax=False)
    for t in range(len(plan.phases)):
        model.whole[model.index["n", name, t]] = 0
    return float(model.solve().fun)


def cost_with_half_lot(plan: Plan, name: str) -> float:
    """The least cost when one category comes in half its lot."""
    halved = (replace(c, lot=c.lot / 2) if c.name == name else c for c in plan.categories)
    cost = reference.reference_costs(replace(plan, categories=tuple(halved)))[1]
    assert cost is not None
    return cost


# ---- conflicts -------------------------------------------------------------------------------------

Member = tuple[str, str, str | None]
"""Kind, name and phase of a line; kind "" stands for whole people."""


def can_hold(plan: Plan, members: set[Member], whole: bool = True) -> bool:
    """Whether some crew keeps the lines `members` and no other line. Counts up to reference.CAP lots."""
    kept = replace(plan, works=_kept_works(plan, members), rules=_kept_rules(plan, members))
    free = tuple(
        replace(c, at_least=Decimal(0), at_most=None, least_if_any=Decimal(0)) for c in kept.categories
    )
    model = reference.written_out(replace(kept, categories=free), relax=False)
    for c in plan.categories:
        for t, phase in enumerate(plan.phases):
            _keep_bounds(model, c, t, phase.name, members)
            if not whole:
                model.whole[model.index["n", c.name, t]] = 0
    _drop_supervision(model, plan, members)
    return bool(model.solve().status == 0)


def _kept_works(plan: Plan, members: set[Member]) -> tuple[Work, ...]:
    return tuple(
        replace(w, amounts=tuple(a if ("work", w.name, p.name) in members else Decimal(0)
                                 for a, p in zip(w.amounts, plan.phases, strict=True)))
        for w in plan.works
    )  # fmt: skip


def _kept_rules(plan: Plan, members: set[Member]) -> tuple:
    rules = []
    for rule in plan.rules:
        if isinstance(rule, Budget):
            rules += [rule] if ("budget", rule.name, None) in members else []
            continue
        names = [p.name for p in plan.phases if rule.phases is None or p.name in rule.phases]
        phases = tuple(name for name in names if (rule.kind, rule.name, name) in members)
        rules += [replace(rule, phases=phases)] if phases else []
    return tuple(rules)


def _keep_bounds(model: reference.Model, c: Category, t: int, phase: str, members: set[Member]) -> None:
    lot, n = Fraction(c.lot), model.index["n", c.name, t]
    if ("bound", f"{c.name}: at least", phase) in members:
        model.lower[n] = ceil(Fraction(c.at_least) / lot)
        model.upper[n] = max(model.upper[n], model.lower[n])
    if c.at_most is not None and ("bound", f"{c.name}: at most", phase) in members:
        most = floor(Fraction(c.at_most) / lot)
        model.row({("n", c.name, t): 1.0}, high=most)
    if ("bound", f"{c.name}: least if any", phase) in members:
        count, switch = ("n", c.name, t), ("u", c.name, t)
        model.row({count: 1.0, switch: -ceil(Fraction(c.least_if_any) / lot)}, low=0)
        model.row({count: 1.0, switch: -float(reference.CAP)}, high=0)


def _drop_supervision(model: reference.Model, plan: Plan, members: set[Member]) -> None:
    """Take away the rows of supervision groups that are no members."""
    for group in checker.groups_of(plan):
        name = "Supervision by " + " or ".join(c.name for c in plan.categories if c.name in group)
        for t, phase in enumerate(plan.phases):
            if ("supervision", name, phase.name) not in members:
                hours = {("s", one, group, t) for one in group}
                model.rows = [row for row in model.rows if not (row[1] == 0 and hours <= row[0].keys())]


def all_lines(plan: Plan) -> set[Member]:
    """Every line of a plan."""
    lines: set[Member] = {("budget", r.name, None) for r in plan.rules if isinstance(r, Budget)}
    for phase in plan.phases:
        lines |= {("work", w.name, phase.name) for w in plan.works}
        lines |= {(r.kind, r.name, phase.name) for r in plan.rules if not isinstance(r, Budget)}
        for group in checker.groups_of(plan):
            name = "Supervision by " + " or ".join(c.name for c in plan.categories if c.name in group)
            lines.add(("supervision", name, phase.name))
        for c in plan.categories:
            lines |= {
                ("bound", f"{c.name}: {asks}", phase.name) for asks in ("at least", "at most", "least if any")
            }
    return lines
