"""Near-best crews against every crew of small boxed plans."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import pytest

from solver.answer import LineKind
from solver.nearbest import near_best
from solver.plan import Category, Plan, Ratio, Work
from solver.program import Program
from tests.solver import checker, solved

BATCHES = [range(start, start + 85) for start in range(0, 340, 85)]


def exactly(floats) -> tuple[tuple[str, tuple[Fraction, ...]], ...]:
    return tuple((name, tuple(Fraction(str(n)) for n in counts)) for name, counts in floats.items())


@pytest.mark.parametrize("seeds", BATCHES, ids=str)
def test_every_crew_within_the_limit_cheapest_first(seeds: range) -> None:
    for seed in seeds:
        plan, answer, workable = solved.boxed(seed)
        if answer.exact is None:
            continue
        limit = answer.exact.cost * 1.25
        expected = sorted(
            (round(cost, 3), checker.preference(plan, crew), exactly(crew))
            for cost, crew in workable
            if cost <= limit + 1e-6
        )
        found = near_best(plan, within=25, most=400)
        assert found.complete, seed
        crews = [exactly(one.crew) for one in found.crews]
        assert set(crews) == {crew for _, _, crew in expected}, seed
        assert crews[0] == exactly(answer.exact.crew)
        assert len(crews) == len(set(crews))
        costs = [one.cost for one in found.crews]
        assert costs == pytest.approx([cost for cost, _, _ in expected], abs=2e-3)
        for one in found.crews:
            check_numbers(plan, answer, one)


def check_numbers(plan: Plan, answer, one) -> None:
    crew = dict(exactly(one.crew))
    joiners, leavers = checker.joiners_and_leavers(plan, crew)
    assert (one.joiners, one.leavers) == (float(joiners), float(leavers))
    assert one.people == float(max(sum(ns) for ns in zip(*crew.values(), strict=True)))
    assert one.over == pytest.approx(max(one.cost - answer.exact.cost, 0.0), abs=1e-6)
    assert one.tightest in {""} | {
        f"{line.name} in {line.phase}" if len(plan.phases) > 1 and line.phase else line.name
        for line in Program(plan).lines
    }


def test_fewer_are_the_first_of_all_and_said_to_be_so() -> None:
    tried = 0
    for seed in range(120):
        plan, answer, _ = solved.boxed(seed)
        if answer.exact is None:
            continue
        every = near_best(plan, within=60, most=400)
        most = max(len(every.crews) // 2, 1)
        found = near_best(plan, within=60, most=most)
        tried += len(every.crews) > most
        assert found.crews == every.crews[:most], seed
        assert found.complete == (len(every.crews) == most)
    assert tried > 30


def test_equally_cheap_crews_stand_in_the_order_of_preference_on_every_cut() -> None:
    # five categories alike: ten ways to have two people
    categories = tuple(
        Category(f"C{i}", Decimal(100), Decimal(40), output={"W": Decimal(1)}, at_most=Decimal(1))
        for i in range(5)
    )
    plan = Plan(categories=categories, works=(Work("W", "u", (Decimal(80),)),))
    every = near_best(plan, within=0, most=50)
    assert every.complete
    assert len(every.crews) == 10
    for most in (1, 3, 9):
        cut = near_best(plan, within=0, most=most)
        assert cut.crews == every.crews[:most]
        assert not cut.complete


def test_the_tightest_line_has_the_smallest_share_of_room() -> None:
    lead = Category("Lead", Decimal(500), Decimal(40))
    hand = Category("Hand", Decimal(300), Decimal(40), output={"Digging": Decimal(1)})
    work = Work("Digging", "m", (Decimal(100),))
    rule = Ratio("Span", ("Hand",), ("Lead",), Decimal(3))
    plan = Plan(categories=(lead, hand), works=(work,), rules=(rule,))
    best = near_best(plan).crews[0]
    assert (dict(best.crew), best.tightest) == ({"Lead": (1.0,), "Hand": (3.0,)}, "Span")
    loose = Plan(categories=(lead, hand), works=(work,), rules=())
    assert near_best(loose).crews[0].tightest == "Digging"
    assert Program(plan).lines[-1].kind is LineKind.RATIO


def test_free_people_make_endless_crews_and_that_is_said() -> None:
    free = Category("Volunteer", Decimal(0), Decimal(40), output={"W": Decimal(1)})
    plan = Plan(categories=(free,), works=(Work("W", "u", (Decimal(80),)),))
    found = near_best(plan, most=5)
    assert [one.crew["Volunteer"] for one in found.crews] == [(2.0,), (3.0,), (4.0,), (5.0,), (6.0,)]
    assert not found.complete


def test_without_time_the_exact_crew_alone_and_not_complete() -> None:
    from solver import nearbest

    plan = Plan(
        categories=(Category("A", Decimal(1), Decimal(1), output={"W": Decimal(1)}),),
        works=(Work("W", "", (Decimal("1.5"),)),),
    )
    case = nearbest.Case(plan)
    best, _ = nearbest.exact_crew(case)
    found, complete = nearbest._Near(case, best, nearbest.Inquiry(0.0)).crews(50.0, 5)
    assert [one.lots for one in found] == [best.lots]
    assert not complete
