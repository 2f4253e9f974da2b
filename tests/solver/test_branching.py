"""Which head count is split next, and what is left out of a box."""

from __future__ import annotations

from decimal import Decimal

import numpy as np

from solver.branching import DOWN, UP, Branching, Split
from solver.found import Limits
from solver.plan import Category, Phase, Plan, Work
from solver.program import Program
from solver.search import Search
from tests.solver.random_plans import random_plan

X = np.array([1.5, 2.4, 3.0])


class TestBranching:
    def test_whole_crews_are_not_split(self) -> None:
        assert Branching(3).choose(np.array([1.0, 2.0, 3.0 - 1e-9])) is None
        assert Branching(0).choose(np.zeros(0)) is None

    def test_at_first_the_count_furthest_from_a_whole_lot(self) -> None:
        assert Branching(3).choose(X) == 0

    def test_a_count_that_raised_nothing_falls_behind(self) -> None:
        branching = Branching(3)
        for side in (DOWN, UP):
            branching.learn(Split(0, side, 0.5, 100.0), 100.0)
            branching.learn(Split(1, side, 0.5, 100.0), 110.0)
        assert branching.choose(X) == 1

    def test_a_cheaper_child_counts_as_no_rise(self) -> None:
        branching = Branching(2)
        branching.learn(Split(0, DOWN, 0.5, 100.0), 100.0 - 1e-9)
        assert branching.choose(X[:2]) in (0, 1)
        assert branching._rise(DOWN, 0) == 0.0


def test_people_without_pay_do_not_hold_up_the_list_of_crews() -> None:
    """A million free hands are a plain of equals: crews of it come at once, not after a million nodes."""
    free = Category("Volunteers", Decimal(0), Decimal(20), output={"Raking": Decimal(3)})
    paid = Category("Keepers", Decimal("308.82"), Decimal(38), lot=Decimal("0.5"), at_least=Decimal("0.5"))
    plan = Plan(
        phases=(Phase("Week", Decimal(1)),),
        categories=(free, paid),
        works=(Work("Raking", "beds", (Decimal(200),)),),
        rules=(),
    )
    found, complete = Search(Program(plan, [10**6, 3])).within(157.0, 21, Limits(nodes=500))
    assert len(found) == 21
    assert not complete
    assert len({one.lots for one in found}) == 21
    assert {one.lots[1] for one in found} == {1}


def test_narrowed_boxes_lose_no_crew_worth_having() -> None:
    """Against the whole list of crews of the same search, which narrows by its cutoff only."""
    compared = 0
    for seed in range(60):
        plan = random_plan(np.random.default_rng(seed), max_categories=4, max_works=2, max_phases=1)
        program = Program(plan, [6] * len(plan.categories))
        outcome = Search(program).cheapest(Limits())
        if outcome.best is None:
            continue
        box = np.array(program.matrix.upper[: program.head_count])
        box_size = int(np.prod(box - program.matrix.lower[: program.head_count] + 1))
        if box_size > 2_500:
            continue
        search = Search(program)
        costs = [search.evaluate(tuple(int(n) for n in lots)) for lots in np.ndindex(*(box + 1).astype(int))]
        least = min(cost for cost in costs if cost is not None)
        assert abs(outcome.best.objective - least) < 0.001
        near, complete = search.within(least * 1.05 + 0.001, 5_000, Limits())
        assert complete
        assert len(near) == sum(cost is not None and cost <= least * 1.05 + 0.001 for cost in costs)
        compared += 1
    assert compared >= 20
