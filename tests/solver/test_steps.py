from __future__ import annotations

from collections.abc import Iterator
from decimal import Decimal
from functools import cache
from itertools import pairwise
from pathlib import Path
from time import perf_counter

import numpy as np
import pytest

from solver.answer import FloorPoint, Policy, Step, Steps, from_json, to_json
from solver.corners import Corner, corners
from solver.plan import Category, Plan, Work
from solver.planfile import read_plan
from solver.solve import solve
from solver.steps import NoRange, NothingToScale, steps
from solver.workload import scaled
from tests.solver import checker, reference
from tests.solver.random_plans import FEATURES, random_plan

EXAMPLES = Path(__file__).parents[2] / "resources" / "examples"


def cost_at(points: tuple[FloorPoint, ...], amount: float) -> float:
    return float(np.interp(amount, [p.amount for p in points], [p.cost for p in points]))


def step_cost(step: Step, amount: float) -> float:
    ends = (FloorPoint(step.from_, step.cost_from), FloorPoint(step.to, step.cost))
    return cost_at(step.points or ends, amount)


def step_of(found: Steps, amount: float) -> Step | None:
    return next((s for s in found.steps if s.from_ <= amount <= s.to), None)


def at(plan: Plan, found: Steps, amount: float) -> Plan:
    return scaled(plan, found.work, Decimal(repr(amount)) / Decimal(repr(found.today)))


def least_cost(plan: Plan, relax: bool = False) -> float | None:
    """By SciPy's HiGHS, from the program written out a second time."""
    answer = reference.written_out(plan, relax).solve()
    return float(answer.fun) if answer.status == 0 else None


def drawn(seed: int) -> tuple[Plan, str | None] | None:
    rng = np.random.default_rng(5_000_000 + seed)
    features = FEATURES - {"unreachable", "zero_pay"}
    shape = {"max_categories": 3, "max_phases": 1 + (seed % 4 == 0)}
    plan = random_plan(rng, features=features, **shape)
    works = [w.name for w in plan.works if any(w.amounts)]
    if not works:
        return None
    return plan, None if seed % 3 == 0 else works[int(rng.integers(len(works)))]


@cache
def stepped(seed: int) -> tuple[int, Plan, Steps] | None:
    one = drawn(seed)
    return None if one is None else (seed, one[0], steps(*one))


def many(first: int, count: int) -> Iterator[tuple[int, Plan, Steps]]:
    return (one for seed in range(first, first + count) if (one := stepped(seed)) is not None)


def same(a: float, b: float) -> bool:
    return abs(a - b) <= 2e-3 + 1e-7 * max(abs(a), abs(b))


@pytest.mark.parametrize("first", range(0, 100, 20))
def test_every_step_is_what_a_new_solve_gives(first: int):
    for seed, plan, found in many(first, 20):
        assert found.exact, seed
        low, high = found.today / 2, found.today * 2
        rng = np.random.default_rng(seed)
        inside = [
            s.from_ + rng.random() * (s.to - s.from_) for s in found.steps if s.to - s.from_ > 1e-3 * high
        ]
        for amount in rng.permutation(inside)[:5].tolist():
            step = step_of(found, amount)
            expected = least_cost(at(plan, found, amount))
            assert step is not None
            assert expected is not None
            assert same(step_cost(step, amount), expected), (seed, amount)
        for amount in rng.uniform(low, high, 3).tolist():
            expected = least_cost(at(plan, found, amount))
            step = step_of(found, amount)
            assert (step is None) == (expected is None), (seed, amount, found.ends)
            if step is not None and expected is not None:
                assert same(step_cost(step, amount), expected), (seed, amount)


@pytest.mark.parametrize("first", range(0, 60, 20))
def test_steps_are_side_by_side_and_their_crews_stand(first: int):
    for seed, plan, found in many(first, 20):
        if found.steps:
            assert found.steps[0].from_ == pytest.approx(found.today / 2, rel=1e-8)
        if not found.ends:
            assert found.steps[-1].to == pytest.approx(found.today * 2, rel=1e-8)
        for a, b in pairwise(found.steps):
            assert b.from_ == pytest.approx(a.to, rel=1e-8), seed
            assert b.cost_from >= a.cost - 2e-3 - 1e-8 * a.cost
            assert a.crew != b.crew or a.cost != b.cost_from
        for step in found.steps[:8]:
            for amount in (step.from_ + (step.to - step.from_) * share for share in (0.1, 0.5, 0.999)):
                cost = checker.cost_if_workable(at(plan, found, amount), step.crew)
                assert cost is not None, (seed, step, amount)
                assert same(cost, step_cost(step, amount)), (seed, step, amount)


def test_a_border_is_where_the_crew_ends_or_another_gets_cheaper():
    borders = 0
    for seed, plan, found in many(0, 40):
        narrow = 1e-4 * found.today
        for a, b in pairwise(found.steps):
            if min(a.to - a.from_, b.to - b.from_) < 3 * narrow:
                continue
            borders += 1
            after = at(plan, found, a.to + narrow)
            still = checker.cost_if_workable(after, a.crew)
            now = least_cost(after)
            assert now is not None
            assert still is None or still > now + 1e-4 or a.cost == b.cost_from, (seed, a, b)
            before = checker.cost_if_workable(at(plan, found, a.to - narrow), b.crew)
            assert before is None or before >= step_cost(a, a.to - narrow) - 2e-3, (seed, a, b)
    assert borders > 60


@pytest.mark.parametrize("first", range(0, 40, 20))
def test_the_floor_is_the_relaxation(first: int):
    for seed, plan, found in many(first, 20):
        if any(c.open_cost or c.least_if_any for c in plan.categories):
            continue  # their floor leaves out switches of counts without limit, which the reference does not
        for amount in np.random.default_rng(seed).uniform(found.today / 2, found.today * 2, 4).tolist():
            expected = least_cost(at(plan, found, amount), relax=True)
            if expected is None:
                assert not found.floor or found.floor[-1].amount <= amount * (1 + 1e-6)
            else:
                assert same(cost_at(found.floor, amount), expected), (seed, amount)


def test_rounding_up_never_costs_less_than_the_exact_crew():
    compared = 0
    for seed, _, found in many(0, 40):
        for point in found.rounded_up:
            step = step_of(found, point.amount * (1 - 1e-9))  # at a border the step before still serves
            if step is not None and point.cost is not None:
                compared += 1
                assert point.cost >= step_cost(step, point.amount) - 2e-3 - 1e-7 * point.cost, seed
    assert compared > 100


def test_todays_step_is_the_exact_crew_of_the_plan():
    for name, work in (("hillside", None), ("hillside", "Planting"), ("museum-store", "Shelving")):
        plan = read_plan(EXAMPLES / f"{name}.crew.json")
        today = float(next((sum(w.amounts) for w in plan.works if w.name == work), 100))
        near = steps(plan, work, Decimal(today) * Decimal("0.98"), Decimal(today) * Decimal("1.02"))
        assert near.today == today
        answer = solve(plan)
        assert answer.exact is not None
        step = step_of(near, today)
        assert step is not None
        assert step.crew == answer.exact.crew
        assert step_cost(step, today) == pytest.approx(answer.exact.cost)


def test_rounding_up_of_today_is_the_policys():
    plan = read_plan(EXAMPLES / "hillside.crew.json")
    found, answer = steps(plan, "Planting"), solve(plan)
    up = answer.report(Policy.UP)
    known = [p for p in found.rounded_up if p.amount <= found.today]
    assert up is not None
    if up.cost is None:
        assert known[-1].cost is None
    else:
        assert cost_at(tuple(p for p in found.rounded_up if p.cost is not None), found.today) == (
            pytest.approx(up.cost)
        )


def dig(**more: Decimal) -> Plan:
    hand = Category("Hand", Decimal(100), Decimal(40), output={"Digging": Decimal(2)}, **more)
    return Plan(categories=(hand,), works=(Work("Digging", "m", (Decimal(200),)),))


def test_one_category_is_a_plain_staircase():
    found = steps(dig(), "Digging", Decimal(50), Decimal(400))
    assert [s.to for s in found.steps] == pytest.approx([80, 160, 240, 320, 400])
    assert [s.crew["Hand"] for s in found.steps] == [(1.0,), (2.0,), (3.0,), (4.0,), (5.0,)]
    assert [s.cost for s in found.steps] == pytest.approx([100, 200, 300, 400, 500])
    assert [(p.amount, p.cost) for p in found.floor] == [
        pytest.approx((50, 62.5)),
        pytest.approx((400, 500)),
    ]
    assert found.exact
    assert found.ends == ""


def test_a_limit_ends_the_staircase_and_says_so():
    plan = dig(at_most=Decimal(3))
    found = steps(plan, None)
    assert found.steps[-1].to == pytest.approx(120)
    assert found.floor[-1].amount == pytest.approx(120)
    assert found.ends
    nothing = steps(plan, None, Decimal(150), Decimal(300))
    assert nothing.steps == ()
    assert nothing.floor == ()
    assert nothing.ends


def test_what_cannot_be_scaled_is_told():
    plan = scaled(dig(), None, Decimal(0))
    for work in ("Digging", None):
        with pytest.raises(NothingToScale):
            steps(plan, work)
    with pytest.raises(NoRange, match="from 300 to 200"):
        steps(dig(), None, Decimal(300))
    with pytest.raises(KeyError):
        steps(plan, "Nobody knows")


def test_hillside_in_time_and_through_json():
    plan = read_plan(EXAMPLES / "hillside.crew.json")
    for work in (None, *(w.name for w in plan.works)):
        began = perf_counter()
        found = steps(plan, work)
        assert perf_counter() - began < 2.0
        assert from_json(to_json(found), Steps) == found


@pytest.mark.parametrize("seed", range(30))
def test_corners_of_a_convex_function(seed: int):
    rng = np.random.default_rng(seed)
    lines = [(float(s), float(rng.normal())) for s in rng.normal(size=int(rng.integers(1, 8)))]

    def function(x: float) -> Corner:
        value, slope = max((s * x + v, s) for s, v in lines)
        return Corner(x, value, slope)

    found = corners(function, -2.0, 3.0)
    xs, ys = [c.at for c in found], [c.value for c in found]
    for x in rng.uniform(-2, 3, 40):
        assert np.interp(x, xs, ys) == pytest.approx(function(float(x)).value, abs=1e-7)
    assert len(found) <= len(lines) + 1
