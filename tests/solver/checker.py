"""A checker of crews that knows only the plan: exact fractions for people, HiGHS for how they spend hours.

Written from the meaning of a plan, not from `solver.program`; of `solver` it uses the plan's classes only.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import pairwise, product
from math import ceil, floor

import numpy as np
from scipy.optimize import Bounds, LinearConstraint, milp
from scipy.sparse import csr_matrix

from solver.plan import Budget, Category, Plan, Presence, Ratio, Sense, Share

SECOND = Fraction(1, 3600)  # hours; the tolerance of hours lines
SHORT = 1e-6  # hours; less is what floating point leaves

Crew = Mapping[str, Sequence[float | int | Fraction]]


def number(value: object) -> Fraction:
    """The number as it is written: 0.3 is three tenths."""
    return value if isinstance(value, Fraction) else Fraction(str(value))


@dataclass(frozen=True)
class Miss:
    """A line that a crew misses, by how much in the line's own unit."""

    line: str
    phase: str | None
    by: Fraction


# ---- people --------------------------------------------------------------------------------------


def missed_by_heads(plan: Plan, crew: Crew) -> list[Miss]:
    """Bounds, lots, least-if-any, presence, ratio and share lines that the head counts miss, exactly."""
    misses: list[Miss] = []
    for category in plan.categories:
        for t, phase in enumerate(plan.phases):
            misses += _missed_bounds(category, number(crew[category.name][t]), phase.name)
            lack = lacking_to_settle(plan, category, crew, t)
            if lack > 0:
                misses.append(Miss(f"{category.name}: settling in", phase.name, lack))
    for rule in plan.rules:
        if not isinstance(rule, Budget):
            misses += _missed_rule(plan, rule, crew)
    return misses


def _missed_bounds(c: Category, n: Fraction, phase: str) -> Iterator[Miss]:
    lot = Fraction(c.lot)
    if n < 0 or (n / lot).denominator != 1:
        yield Miss(f"{c.name}: lot", phase, n % lot)
    if n < Fraction(c.at_least):
        yield Miss(f"{c.name}: at least", phase, ceil(Fraction(c.at_least) / lot) * lot - n)
    if c.at_most is not None and n > Fraction(c.at_most):
        yield Miss(f"{c.name}: at most", phase, n - floor(Fraction(c.at_most) / lot) * lot)
    if 0 < n < Fraction(c.least_if_any):
        yield Miss(f"{c.name}: least if any", phase, ceil(Fraction(c.least_if_any) / lot) * lot - n)


def lacking_to_settle(plan: Plan, c: Category, crew: Crew, t: int) -> Fraction:
    """Hours that settling in needs beyond all hours the category has in phase t, overtime included."""
    each = Fraction(c.hours) * (1 - Fraction(c.absence)) + Fraction(c.overtime_hours)
    there = Fraction(plan.phases[t].periods) * each * number(crew[c.name][t])
    return max(Fraction(c.settling_hours) * max(_changes(c, crew)[t], Fraction(0)) - there, Fraction(0))


def _missed_rule(plan: Plan, rule: Presence | Ratio | Share, crew: Crew) -> Iterator[Miss]:
    for t, phase in enumerate(plan.phases):
        if rule.phases is not None and phase.name not in rule.phases:
            continue
        left, sense, right = _sides(rule, {name: number(counts[t]) for name, counts in crew.items()})
        room = {
            Sense.AT_LEAST: left - right,
            Sense.AT_MOST: right - left,
            Sense.EXACTLY: -abs(left - right),
        }
        if room[sense] < 0:
            yield Miss(rule.name, phase.name, -room[sense])


def _sides(rule: Presence | Ratio | Share, there: Mapping[str, Fraction]) -> tuple[Fraction, Sense, Fraction]:
    if isinstance(rule, Presence):
        weighed = sum((Fraction(w) * there[name] for name, w in rule.weights.items()), Fraction(0))
        return weighed, rule.sense, Fraction(rule.bound)
    of = sum((there[name] for name in rule.of), Fraction(0))
    if isinstance(rule, Ratio):
        per = sum((there[name] for name in rule.per), Fraction(0))
        return of, Sense.AT_MOST, Fraction(rule.at_most) * per
    within = sum((there[name] for name in rule.within), Fraction(0))
    return of, rule.sense, Fraction(rule.fraction) * within


def joiners_and_leavers(plan: Plan, crew: Crew) -> tuple[Fraction, Fraction]:
    """People who join and people who leave, over all categories and phases."""
    steps = [step for c in plan.categories for step in _changes(c, crew)]
    return sum((s for s in steps if s > 0), Fraction(0)), sum((-s for s in steps if s < 0), Fraction(0))


def _changes(c: Category, crew: Crew) -> list[Fraction]:
    counts = [Fraction(c.on_books), *(number(n) for n in crew[c.name])]
    return [after - before for before, after in pairwise(counts)]


def cost_of_heads(plan: Plan, crew: Crew) -> Fraction:
    """Pay, joining, leaving and opening costs, exact."""
    total = Fraction(0)
    for c in plan.categories:
        counts = [number(n) for n in crew[c.name]]
        paid = sum((Fraction(p.periods) * n for p, n in zip(plan.phases, counts, strict=True)), Fraction(0))
        total += Fraction(c.pay) * paid
        for step in _changes(c, crew):
            total += step * Fraction(c.join_cost) if step > 0 else -step * Fraction(c.leave_cost)
        if any(counts):
            total += Fraction(c.open_cost)
    return total


# ---- hours ---------------------------------------------------------------------------------------


@dataclass(frozen=True)
class Hours:
    """How a crew spends a plan: (category, work, t), (category, group, t), (category, t), (work, t)."""

    effort: Mapping[tuple[str, str, int], float]
    guidance: Mapping[tuple[str, frozenset[str], int], float]
    overtime: Mapping[tuple[str, int], float]
    bought: Mapping[tuple[str, int], float]


def groups_of(plan: Plan) -> list[frozenset[str]]:
    """The distinct sets of supervising categories, first asked for first."""
    asked = (frozenset(c.supervision.by) for c in plan.categories if c.supervision.hours > 0)
    return list(dict.fromkeys(g for g in asked if g))


def missed_by_hours(plan: Plan, crew: Crew, hours: Hours) -> list[Miss]:
    """Hours, work and supervision lines missed by more than a second of work, in fractions."""
    misses: list[Miss] = []
    for t, phase in enumerate(plan.phases):
        length = Fraction(phase.periods)
        there = {c.name: number(crew[c.name][t]) for c in plan.categories}
        for c in plan.categories:
            misses += _missed_day(plan, c, crew, hours, t)
        for w in plan.works:
            done = Fraction(hours.bought.get((w.name, t), 0.0))
            for c in plan.categories:
                spent = Fraction(hours.effort.get((c.name, w.name, t), 0.0))
                done += Fraction(c.output.get(w.name, 0)) * spent
            if done < Fraction(w.amounts[t]) - SECOND * best_output(plan, w.name):
                misses.append(Miss(w.name, phase.name, Fraction(w.amounts[t]) - done))
        for group in groups_of(plan):
            drawn = sum((length * Fraction(c.supervision.hours) * there[c.name]
                         for c in plan.categories if draws_from(c, group)), Fraction(0))  # fmt: skip
            given = sum((Fraction(hours.guidance[name, group, t]) for name in group), Fraction(0))
            if given < drawn - SECOND:
                misses.append(Miss(_group_line(plan, group), phase.name, drawn - given))
    return misses


def _missed_day(plan: Plan, c: Category, crew: Crew, hours: Hours, t: int) -> Iterator[Miss]:
    """The hours and overtime lines of one category in one phase."""
    length, there = Fraction(plan.phases[t].periods), number(crew[c.name][t])
    over = Fraction(hours.overtime.get((c.name, t), 0.0))
    joined = max(_changes(c, crew)[t], Fraction(0))
    attended = length * Fraction(c.hours) * (1 - Fraction(c.absence)) * there
    used = sum((Fraction(h) for (name, _, at), h in hours.effort.items() if (name, at) == (c.name, t)),
               Fraction(0))  # fmt: skip
    used += sum((Fraction(h) for (name, _, at), h in hours.guidance.items() if (name, at) == (c.name, t)),
                Fraction(0))  # fmt: skip
    if used > attended + over - Fraction(c.settling_hours) * joined + SECOND:
        yield Miss(
            f"{c.name}: hours",
            plan.phases[t].name,
            used + Fraction(c.settling_hours) * joined - attended - over,
        )
    if over > length * Fraction(c.overtime_hours) * there + SECOND:
        yield Miss(f"{c.name}: overtime", plan.phases[t].name, over)


def draws_from(c: Category, group: frozenset[str]) -> bool:
    """Whether a person of c draws supervision from this group."""
    return c.supervision.hours > 0 and frozenset(c.supervision.by) == group


def best_output(plan: Plan, work: str) -> Fraction:
    """The best output of anyone on a work, units per hour; 1 where nobody can do it."""
    return max((Fraction(c.output[work]) for c in plan.categories if c.output.get(work)), default=Fraction(1))


def _group_line(plan: Plan, group: frozenset[str]) -> str:
    return "Supervision by " + " or ".join(c.name for c in plan.categories if c.name in group)


class Running:
    """The linear program of how a crew is run, all phases at once, head counts given; built for HiGHS.

    `short` columns let work and supervision lines be missed; `extra` is one more on a line's other side.
    Work lines are in hours at the work's best output.
    """

    def __init__(self, plan: Plan, crew: Crew) -> None:
        self.plan, self.crew = plan, crew
        self._names: list[tuple] = []
        self._upper: list[float] = []
        self._rows: list[tuple[dict[tuple, float], float, float]] = []
        self._index: dict[tuple, int] = {}
        self.lines: list[tuple] = []
        for t in range(len(plan.phases)):
            self._phase(t)
        self._matrix = self._built()
        self._free = np.array(self._upper)
        self._low = np.array([low for _, low, _ in self._rows])
        self._high = np.array([high for _, _, high in self._rows])

    def _column(self, name: tuple, upper: float = np.inf) -> tuple:
        self._index[name] = len(self._names)
        self._names.append(name)
        self._upper.append(upper)
        return name

    def _phase(self, t: int) -> None:
        plan, length = self.plan, float(self.plan.phases[t].periods)
        there = {c.name: float(number(self.crew[c.name][t])) for c in plan.categories}
        for w in plan.works:
            self._work(w, t)
        for group in groups_of(plan):
            terms = {self._column(("s", name, group, t)): 1.0 for name in sorted(group)}
            drawn = sum(float(c.supervision.hours) * there[c.name] * length
                        for c in plan.categories if draws_from(c, group))  # fmt: skip
            self._line(("group", group, t), terms, drawn)
        for c in plan.categories:
            self._day(c, t, length, there[c.name])

    def _work(self, w, t: int) -> None:
        best = float(best_output(self.plan, w.name))
        terms = {}
        for c in self.plan.categories:
            if c.output.get(w.name):
                terms[self._column(("e", c.name, w.name, t))] = float(c.output[w.name]) / best
        if w.buy_in_price is not None:  # no one buys more than the plan asks for
            most = w.amounts[t] if w.buy_in_most is None else min(w.amounts[t], w.buy_in_most)
            terms[self._column(("b", w.name, t), float(most))] = 1.0 / best
        self._line(("work", w.name, t), terms, float(w.amounts[t]) / best)

    def _line(self, line: tuple, terms: dict[tuple, float], amount: float) -> None:
        self.lines.append(line)
        terms[self._column(("short", *line), 0.0)] = 1.0
        terms[self._column(("extra", *line), 0.0)] = -1.0
        self._rows.append((terms, amount, np.inf))

    def _day(self, c: Category, t: int, length: float, there: float) -> None:
        terms = {name: 1.0 for name in self._names
                 if name[0] in "es" and name[1] == c.name and name[-1] == t}  # fmt: skip
        if not terms and not c.settling_hours:
            return
        joined = float(max(_changes(c, self.crew)[t], Fraction(0)))
        attended = length * float(c.hours * (1 - c.absence)) * there - float(c.settling_hours) * joined
        attended += float(lacking_to_settle(self.plan, c, self.crew, t))  # a miss of its own, by heads
        terms[self._column(("v", c.name, t), length * float(c.overtime_hours) * there)] = -1.0
        self._rows.append((terms, -np.inf, attended))

    def _built(self) -> csr_matrix:
        values: list[float] = []
        columns: list[int] = []
        starts = [0]
        for terms, _, _ in self._rows:
            columns += [self._index[name] for name in terms]
            values += terms.values()
            starts.append(len(values))
        return csr_matrix((values, columns, starts), shape=(len(self._rows), len(self._names)))

    def _optimum(
        self, cost: np.ndarray, upper: np.ndarray, extra_rows: Sequence[tuple[np.ndarray, float]] = ()
    ):
        constraints = [LinearConstraint(row[None, :], -np.inf, high) for row, high in extra_rows]
        if self._rows:
            constraints.append(LinearConstraint(self._matrix, self._low, self._high))
        return milp(cost, constraints=constraints, bounds=Bounds(0.0, upper))

    # ---- what can be asked -------------------------------------------------------------------

    def prices(self) -> np.ndarray:
        """Money per unit of every column: overtime and bought-in units."""
        prices = np.zeros(len(self._names))
        for name, i in self._index.items():
            if name[0] == "v":
                prices[i] = float(self.plan.category(name[1]).overtime_rate)
            if name[0] == "b":
                work = next(w for w in self.plan.works if w.name == name[1])
                prices[i] = float(work.buy_in_price or 0)
        return prices

    def cheapest(self) -> tuple[float, Hours] | None:
        """The least cost of overtime and bought-in units and the hours behind it; None: cannot be run."""
        if not self._names:
            return (0.0, Hours({}, {}, {}, {})) if not self._rows else None
        found = self._optimum(self.prices(), self._free)
        if found.status != 0:
            return None
        return float(found.fun), self._hours(found.x)

    def _hours(self, x: np.ndarray) -> Hours:
        kept: dict[str, dict] = {letter: {} for letter in "esvb"}
        for name, value in zip(self._names, x, strict=True):
            if name[0] in kept:
                kept[name[0]][name[1:]] = float(value)
        return Hours(kept["e"], kept["s"], kept["v"], kept["b"])

    def most_extra(self, line: tuple, money: float = np.inf) -> float | None:
        """The most extra of one line with all lines kept and running costs within `money`, in its unit."""
        cost, upper = np.zeros(len(self._names)), self._free.copy()
        cost[self._index[("extra", *line)]] = -1.0
        upper[self._index[("extra", *line)]] = np.inf
        rows = [] if money == np.inf else [(self.prices(), money)]
        found = self._optimum(cost, upper, rows)
        return None if found.status != 0 else -float(found.fun) * self.scale(line)

    def shorts(self, t: int) -> tuple[float, float]:
        """Hours short in phase t: least supervision, then least work at best output with that held."""
        groups = [self._index[("short", *line)] for line in self.lines if line[0] == "group"]
        works = [self._index[("short", *line)] for line in self.lines if line[0] == "work"]
        mine = [[i for i in some if self._names[i][-1] == t] for some in (groups, works)]
        upper = self._free.copy()
        upper[[*groups, *works]] = np.inf
        least: list[float] = []
        held: list[tuple[np.ndarray, float]] = []
        for columns in mine:
            cost = np.zeros(len(self._names))
            cost[columns] = 1.0
            found = self._optimum(cost, upper, held)
            assert found.status == 0, found.message
            least.append(max(float(found.fun), 0.0))
            held.append((cost, least[-1] + 1e-9))
        return least[0], least[1]

    def scale(self, line: tuple) -> float:
        """Units of a line per hour."""
        return float(best_output(self.plan, line[1])) if line[0] == "work" else 1.0

    def title(self, line: tuple) -> tuple[str, str]:
        """The names the planner knows a line by: of the line, and of the phase."""
        name = line[1] if line[0] == "work" else _group_line(self.plan, line[1])
        return name, self.plan.phases[line[-1]].name


# ---- whole crews -----------------------------------------------------------------------------------


def budget_of(plan: Plan) -> Fraction | None:
    """The tightest budget."""
    return min((Fraction(r.at_most) for r in plan.rules if isinstance(r, Budget)), default=None)


def cost_if_workable(plan: Plan, crew: Crew) -> float | None:
    """What the crew costs, run as cheaply as can be; None if it breaks a line."""
    if missed_by_heads(plan, crew):
        return None
    run = Running(plan, crew).cheapest()
    if run is None:
        return None
    heads, budget = cost_of_heads(plan, crew), budget_of(plan)
    if budget is not None:
        over = float(heads - budget) + run[0]
        if over > 1e-6 if run[0] else heads > budget:
            return None
    return float(heads) + run[0]


def assert_stands(plan: Plan, crew: Crew, cost: float, overtime: Crew, bought: Crew) -> None:
    """The crew breaks no line, and costs what is claimed, also with the hours and units as claimed."""
    assert missed_by_heads(plan, crew) == []
    run = Running(plan, crew).cheapest()
    assert run is not None
    assert missed_by_hours(plan, crew, run[1]) == []
    heads = float(cost_of_heads(plan, crew))
    assert abs(heads + run[0] - cost) <= max(0.005, 1e-9 * abs(cost))
    claimed = Running(plan, crew)
    for letter, kept in (("v", overtime), ("b", bought)):
        for name, counts in kept.items():
            for t, value in enumerate(counts):
                i = claimed._index[letter, name, t]
                claimed._free[i] = min(claimed._free[i], value + 1e-7 * max(1.0, value))
    again = claimed.cheapest()
    assert again is not None, "the overtime and bought-in units of the answer do not do the work"
    assert abs(again[0] - run[0]) <= max(0.005, 1e-6 * abs(run[0]))
    money = budget_of(plan)
    assert money is None or cost <= float(money) + 0.005


def box(plan: Plan) -> Iterator[dict[str, tuple[Fraction, ...]]]:
    """Every crew in whole lots within the bounds of a plan whose categories all have an at_most."""
    span = len(plan.phases)
    ranges = []
    for c in plan.categories:
        assert c.at_most is not None
        lot = Fraction(c.lot)
        counts = range(ceil(Fraction(c.at_least) / lot), floor(Fraction(c.at_most) / lot) + 1)
        ranges += [[n * lot for n in counts]] * span
    for chosen in product(*ranges):
        yield {c.name: tuple(chosen[j * span : (j + 1) * span]) for j, c in enumerate(plan.categories)}


def workable_crews(plan: Plan) -> list[tuple[float, dict[str, tuple[Fraction, ...]]]]:
    """Every workable crew of a boxed plan with its cost."""
    costed = ((cost_if_workable(plan, crew), crew) for crew in box(plan))
    return [(cost, crew) for cost, crew in costed if cost is not None]


def preference(plan: Plan, crew: Crew) -> tuple[Fraction, ...]:
    """Of equally cheap crews the one with the least of this is taken."""
    counts = {c.name: [number(n) for n in crew[c.name]] for c in plan.categories}
    lots = {c.name: Fraction(c.lot) for c in plan.categories}
    people = sum((sum(ns, Fraction(0)) for ns in counts.values()), Fraction(0))
    totals = [-sum(ns, Fraction(0)) / lots[name] for name, ns in counts.items()]
    early = [-n / lots[name] for name, ns in counts.items() for n in ns]
    return (sum(joiners_and_leavers(plan, crew), Fraction(0)), people, *totals, *early)
