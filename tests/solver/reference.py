"""The plan written out a second time, for SciPy's HiGHS; shares only the plan's classes with solver/."""

from __future__ import annotations

from dataclasses import dataclass, field
from math import ceil, floor

import numpy as np
from scipy.optimize import Bounds, LinearConstraint, milp
from scipy.sparse import csr_matrix

from solver.plan import Budget, Plan, Presence, Ratio, Sense

CAP = 2_000  # lots; enough for every random plan of the tests


@dataclass
class Model:
    """Rows and columns as they come; names are tuples."""

    cost: list[float] = field(default_factory=list)
    lower: list[float] = field(default_factory=list)
    upper: list[float] = field(default_factory=list)
    whole: list[int] = field(default_factory=list)
    index: dict[tuple, int] = field(default_factory=dict)
    rows: list[tuple[dict[tuple, float], float, float]] = field(default_factory=list)
    relax: bool = False

    def column(self, name: tuple, cost=0.0, lower=0.0, upper=np.inf, whole=False) -> tuple:
        self.index[name] = len(self.cost)
        self.cost.append(float(cost))
        self.lower.append(lower)
        self.upper.append(upper)
        self.whole.append(int(whole))
        return name

    def row(self, terms: dict[tuple, float], low=-np.inf, high=np.inf) -> None:
        self.rows.append((terms, float(low), float(high)))

    def solve(self):
        values, columns, starts = [], [], [0]
        for terms, _, _ in self.rows:
            columns += [self.index[name] for name in terms]
            values += [float(v) for v in terms.values()]
            starts.append(len(values))
        shape = (len(self.rows), len(self.cost))
        matrix = csr_matrix((values, columns, starts), shape=shape)
        low, high = (np.array([row[i] for row in self.rows]) for i in (1, 2))
        return milp(
            self.cost,
            constraints=LinearConstraint(matrix, low, high) if self.rows else (),
            bounds=Bounds(self.lower, self.upper),
            integrality=np.zeros(len(self.cost)) if self.relax else np.array(self.whole),
            options={"mip_rel_gap": 0.0},
        )


def written_out(plan: Plan, relax: bool) -> Model:
    """Every column and row of the formulation, none left out as unneeded.

    In the relaxation a 0/1 column that opens an unlimited head count is free: its limit is no number.
    """
    m = Model()
    m.relax = relax
    for c in plan.categories:
        _category(m, plan, c)
    for t, phase in enumerate(plan.phases):
        for w in plan.works:
            _work(m, plan, w, t)
        for c in plan.categories:
            _hours(m, plan, c, t, float(phase.periods))
        for group in {frozenset(c.supervision.by) for c in plan.categories if c.supervision.by}:
            _group(m, plan, group, t, float(phase.periods))
    for rule in plan.rules:
        _rule(m, plan, rule)
    return m


def _category(m, plan, c) -> None:
    lot = float(c.lot)
    low = ceil(float(c.at_least) / lot - 1e-9)
    high = CAP if c.at_most is None else floor(float(c.at_most) / lot + 1e-9)
    if low > high:
        low, high = 0, 0
        m.row({}, 1, 1)
    if c.open_cost:
        m.column(("o", c.name), c.open_cost, 0, 1, True)
    for t, phase in enumerate(plan.phases):
        n = m.column(("n", c.name, t), float(phase.periods * c.pay) * lot, low, high, True)
        u = m.column(("u", c.name, t), 0, 0, 1, True)
        m.column(("p", c.name, t), c.join_cost)
        m.column(("q", c.name, t), c.leave_cost)
        m.column(("v", c.name, t), c.overtime_rate)
        flow = {n: lot, ("p", c.name, t): -1.0, ("q", c.name, t): 1.0}
        if t:
            flow["n", c.name, t - 1] = -lot
        m.row(flow, 0 if t else c.on_books, 0 if t else c.on_books)
        if c.least_if_any:
            m.row({n: 1.0, u: -ceil(float(c.least_if_any) / lot - 1e-9)}, low=0)
            m.row({n: 1.0, u: -float(high)}, high=0)
        if c.open_cost and not (m.relax and c.at_most is None):
            m.row({n: 1.0, ("o", c.name): -float(high)}, high=0)
        m.row({("v", c.name, t): 1.0, n: -lot * float(phase.periods * c.overtime_hours)}, high=0)


def _work(m, plan, w, t) -> None:
    terms = {}
    for c in plan.categories:
        if c.output.get(w.name):
            terms[m.column(("e", c.name, w.name, t))] = float(c.output[w.name])
    if w.buy_in_price is not None:
        most = np.inf if w.buy_in_most is None else float(w.buy_in_most)
        terms[m.column(("b", w.name, t), w.buy_in_price, 0, most)] = 1.0
    m.row(terms, low=w.amounts[t])


def _hours(m, plan, c, t, length) -> None:
    terms = {
        ("n", c.name, t): -length * float(c.lot * c.hours * (1 - c.absence)),
        ("v", c.name, t): -1.0,
        ("p", c.name, t): float(c.settling_hours),
    }
    for w in plan.works:
        if c.output.get(w.name):
            terms["e", c.name, w.name, t] = 1.0
    for group in {frozenset(x.supervision.by) for x in plan.categories if x.supervision.by}:
        if c.name in group:
            terms[m.column(("s", c.name, group, t))] = 1.0
    m.row(terms, high=0)


def _group(m, plan, group, t, length) -> None:
    terms = {("s", name, group, t): 1.0 for name in group}
    for c in plan.categories:
        if frozenset(c.supervision.by) == group:
            terms["n", c.name, t] = -length * float(c.supervision.hours * c.lot)
    m.row(terms, low=0)


def _rule(m, plan, rule) -> None:
    if isinstance(rule, Budget):
        m.row({name: m.cost[i] for name, i in m.index.items() if m.cost[i]}, high=rule.at_most)
        return
    lots = {c.name: float(c.lot) for c in plan.categories}
    for t, phase in enumerate(plan.phases):
        if rule.phases is not None and phase.name not in rule.phases:
            continue
        terms = {}
        if isinstance(rule, Presence):
            pairs, bound, sense = [(n, float(w)) for n, w in rule.weights.items()], rule.bound, rule.sense
        elif isinstance(rule, Ratio):
            pairs = [(n, 1.0) for n in set(rule.of)] + [(n, -float(rule.at_most)) for n in set(rule.per)]
            bound, sense = 0, Sense.AT_MOST
        else:
            pairs = [(n, 1.0) for n in set(rule.of)] + [(n, -float(rule.fraction)) for n in set(rule.within)]
            bound, sense = 0, rule.sense
        for name, weight in pairs:
            terms["n", name, t] = terms.get(("n", name, t), 0.0) + weight * lots[name]
        low = bound if sense in (Sense.AT_LEAST, Sense.EXACTLY) else -np.inf
        high = bound if sense in (Sense.AT_MOST, Sense.EXACTLY) else np.inf
        m.row(terms, low, high)


def reference_costs(plan: Plan) -> tuple[float | None, float | None]:
    """Floor and exact cost by SciPy's HiGHS, None where it finds none."""
    results = (written_out(plan, relax=True).solve(), written_out(plan, relax=False).solve())
    floor_cost, exact = (float(r.fun) if r.status == 0 else None for r in results)
    return floor_cost, exact
