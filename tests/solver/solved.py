"""Seeded plans with their answers and, where they are boxed, every workable crew: each worked out once."""

from __future__ import annotations

from functools import cache

import numpy as np

from solver.answer import Answer
from solver.plan import Plan
from solver.solve import solve
from tests.solver import checker, full_plans, hostile_plans
from tests.solver.random_plans import FEATURES, random_plan

Workable = list[tuple[float, dict[str, tuple[checker.Fraction, ...]]]]

HARD = frozenset({"supervision", "budget", "unreachable", "zero_pay"})


@cache
def mixed(seed: int) -> tuple[Plan, Answer]:
    """A small random plan of any feature."""
    plan = random_plan(np.random.default_rng(seed))
    return plan, solve(plan)


@cache
def full(seed: int) -> tuple[Plan, Answer]:
    """A plan of two phases with every feature at once."""
    plan = full_plans.full_plan(np.random.default_rng(seed))
    return plan, solve(plan)


def boxed_plan(seed: int) -> Plan:
    """A plan whose categories all have a limit, every second one with tied categories."""
    rng = np.random.default_rng(seed)
    shape = (
        {"max_categories": 2, "max_phases": 2} if seed % 3 == 0 else {"max_categories": 3, "max_phases": 1}
    )
    features = FEATURES - HARD if seed % 2 else FEATURES
    plan = random_plan(rng, boxed=True, features=features, **shape)
    return hostile_plans.clones(rng, plan) if seed % 2 else plan


@cache
def boxed(seed: int) -> tuple[Plan, Answer, Workable]:
    """A boxed plan with its answer and all its workable crews."""
    plan = boxed_plan(seed)
    return plan, solve(plan), checker.workable_crews(plan)
