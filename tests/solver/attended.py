"""Random plans for attendance: small enough that every pattern of attendance can be looked at."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from functools import cache
from math import prod

import numpy as np

from solver import heads
from solver.found import Found
from solver.plan import Plan, Ratio, Share
from solver.solve import Case
from tests.solver import daycheck
from tests.solver.random_plans import FEATURES, random_plan

MOST_PATTERNS = 250


def with_days(rng: np.random.Generator, plan: Plan) -> Plan:
    """`plan` with day absences of some categories and some rules asked by day."""
    categories = tuple(
        replace(c, day_absence=Decimal(str(rng.choice(["0.02", "0.1", "0.3"])))) if rng.random() < 0.5 else c
        for c in plan.categories
    )
    rules = tuple(
        replace(r, by_day=True) if isinstance(r, (Ratio, Share)) and rng.random() < 0.5 else r
        for r in plan.rules
    )
    return replace(plan, categories=categories, rules=rules)


def _drawn(seed: int, boxed: bool) -> Plan:
    rng = np.random.default_rng(7_000_000 + seed)
    shape = (
        {"max_categories": 2, "max_phases": 2} if seed % 3 == 0 else {"max_categories": 3, "max_phases": 1}
    )
    features = FEATURES - {"unreachable", "budget"} if seed % 2 else FEATURES - {"unreachable"}
    return with_days(rng, random_plan(rng, boxed=boxed, features=features, **shape))


@cache
def solved(seed: int, boxed: bool = False) -> tuple[Case, Found] | None:
    """A plan with its exact crew; None where it has none or too many patterns of attendance."""
    plan = _drawn(seed, boxed)
    case = Case(plan)
    best = case.proved.best
    if best is None:
        return None
    crew = heads.crew_of(case.program, best.lots)
    for t in range(len(plan.phases)):
        if prod(n + 1 for n in daycheck.heads_of(plan, crew, t)) > MOST_PATTERNS:
            return None
    return case, best


def many(count: int, boxed: bool = False) -> list[tuple[Case, Found]]:
    """The first `count` plans that have an exact crew."""
    found: list[tuple[Case, Found]] = []
    seed = 0
    while len(found) < count:
        one = solved(seed, boxed)
        seed += 1
        if one is not None:
            found.append(one)
    return found
