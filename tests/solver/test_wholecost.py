"""What whole people cost, by category, against an independent program for SciPy's HiGHS."""

from __future__ import annotations

from decimal import Decimal

import pytest

from solver.answer import Policy
from solver.plan import Budget, Category, Plan, Work
from solver.wholecost import whole_cost
from tests.solver import bruteforce, solved

BATCHES = [range(start, start + 85) for start in range(0, 340, 85)]


@pytest.mark.parametrize("seeds", BATCHES, ids=str)
def test_savings_by_category(seeds: range) -> None:
    for seed in seeds:
        plan, answer, _ = solved.boxed(seed)
        if answer.exact is None:
            continue
        found = whole_cost(plan)
        assert [one.category for one in found.by_category] == [c.name for c in plan.categories]
        for one in found.by_category:
            place = (seed, one.category)
            free = answer.exact.cost - bruteforce.cost_with_fractional(plan, one.category)
            assert one.if_fractional == pytest.approx(free, abs=3e-3), place
            halved = answer.exact.cost - bruteforce.cost_with_half_lot(plan, one.category)
            assert one.if_half_lot == pytest.approx(halved, abs=3e-3), place
            assert one.if_fractional >= 0
            assert one.if_half_lot >= 0


def test_the_ladder_and_the_gap_are_those_of_the_answer() -> None:
    for seed in range(80):
        plan, answer, _ = solved.boxed(seed)
        if answer.exact is None:
            continue
        found = whole_cost(plan)
        assert found.floor == pytest.approx(answer.floor)
        assert found.exact == pytest.approx(answer.exact.cost)
        assert found.absolute == pytest.approx(answer.whole_people_cost.absolute, abs=1e-6)
        assert found.percent == pytest.approx(answer.whole_people_cost.percent, abs=1e-6)
        assert [rung.name for rung in found.ladder] == ["floor", "exact", "best corner", "patched", "up"]
        for rung, policy in zip(
            found.ladder[2:], (Policy.BEST_CORNER, Policy.PATCHED, Policy.UP), strict=True
        ):
            report = answer.report(policy)
            assert rung.cost == (None if report.cost is None else pytest.approx(report.cost))
            if report.crew is None:
                assert rung.broken == (report.why_none,)
            else:
                missed = [line.line for line in report.lines if line.margin < 0]
                assert rung.broken == tuple(dict.fromkeys(missed))
            assert rung.cost is None or rung.broken == ()


def test_half_posts_and_sharing() -> None:
    hand = Category("Hand", Decimal(300), Decimal(40), output={"Digging": Decimal(1)})
    budget = Budget("Money", Decimal(700))
    found = whole_cost(
        Plan(categories=(hand,), works=(Work("Digging", "m", (Decimal(50),)),), rules=(budget,))
    )
    assert (found.floor, found.exact, found.absolute) == (375.0, 600.0, 225.0)
    assert found.percent == pytest.approx(37.5)
    only = found.by_category[0]
    assert (only.if_fractional, only.if_half_lot) == (pytest.approx(225), pytest.approx(150))
    up = found.ladder[-1]
    assert (up.name, up.cost) == ("up", 600.0)
