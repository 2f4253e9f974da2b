"""The exact crew: right to the cent, workable, cheapest, the preferred one of equals, honestly labelled."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings

from solver import tiebreak
from solver.answer import Answer, Policy, Proof, State, from_json, to_json
from solver.found import Limits, tie_width
from solver.plan import Budget, Category, Phase, Plan, Presence, Ratio, Sense, Supervision, Work
from solver.planfile import plan_from_document, plan_to_document
from solver.review import review
from solver.solve import solve
from tests.solver import agreement, checker, solved
from tests.solver.full_plans import full_plan
from tests.solver.hostile_plans import BENDS, hostile_plan
from tests.solver.random_plans import random_plan
from tests.solver.strategies import plans

pytestmark = pytest.mark.xdist_group("solved")  # one process, so that every plan is solved once

MIXED = [range(start, start + 30) for start in range(0, 300, 30)]
FULL = [range(start, start + 29) for start in range(0, 116, 29)]
BOXED = [range(start, start + 40) for start in range(0, 120, 40)]
QUICK = settings(
    max_examples=20, deadline=None, derandomize=True, suppress_health_check=[HealthCheck.too_slow]
)


class TestAgainstHighs:
    @pytest.mark.parametrize("seeds", MIXED, ids=str)
    def test_floor_and_exact_cost_are_equal(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_floor_and_exact_equal_highs(*solved.mixed(seed))

    @pytest.mark.parametrize("seeds", FULL, ids=str)
    def test_plans_of_everything_at_once_are_equal(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_floor_and_exact_equal_highs(*solved.full(seed))

    def test_plans_of_the_tests_have_no_problems(self) -> None:
        plans = [random_plan(np.random.default_rng(seed)) for seed in range(300)]
        plans += [full_plan(np.random.default_rng(seed)) for seed in range(120)]
        plans += [solved.boxed_plan(seed) for seed in range(120)]
        assert [problem for plan in plans for problem in review(plan)] == []

    def test_most_plans_of_everything_at_once_have_an_answer(self) -> None:
        answers = [solved.full(seed)[1] for seeds in FULL for seed in seeds]
        assert sum(answer.exact is not None for answer in answers) >= 100

    @pytest.mark.parametrize("bend", BENDS, ids=lambda bend: bend.__name__)
    def test_bent_plans_are_equal(self, bend) -> None:
        for seed in range(8):
            rng = np.random.default_rng(seed)
            plan = bend(rng, random_plan(rng, max_phases=1))
            agreement.assert_floor_and_exact_equal_highs(plan, solve(plan))

    @pytest.mark.parametrize("seed", range(40, 70))
    def test_plans_bent_several_ways_are_equal(self, seed: int) -> None:
        plan = hostile_plan(np.random.default_rng(seed), max_phases=1)
        agreement.assert_floor_and_exact_equal_highs(plan, solve(plan))


class TestCrews:
    @pytest.mark.parametrize("seeds", MIXED, ids=str)
    def test_the_exact_crew_stands_an_engine_free_check(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_exact_crew_stands(*solved.mixed(seed))

    @pytest.mark.parametrize("seeds", FULL, ids=str)
    def test_so_do_those_of_everything_at_once(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_exact_crew_stands(*solved.full(seed))

    @pytest.mark.parametrize("seeds", MIXED, ids=str)
    def test_every_crew_is_called_workable_rightly_and_none_is_cheaper(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_crews_are_called_rightly(*solved.mixed(seed))

    def test_all_policies_are_answered_in_order(self) -> None:
        _, answer = next(solved.full(seed) for seed in range(9) if solved.full(seed)[1].exact)
        assert [r.policy for r in answer.crews] == [p for p in Policy if p is not Policy.OWN]

    def test_best_corner_is_the_cheapest_corner_and_patched_the_cheapest_addition(self) -> None:
        compared = 0
        for seed in range(120):
            _, answer, workable = solved.boxed(seed)
            if answer.fractional is None:
                continue
            for policy, low, high in (
                (Policy.BEST_CORNER, answer.report(Policy.DOWN), answer.report(Policy.UP)),
                (Policy.PATCHED, answer.report(Policy.NEAREST), None),
            ):
                costs = [cost for cost, crew in workable if _between(crew, low, high)]
                report = answer.report(policy)
                assert report is not None
                assert (report.crew is None) == (not costs)
                if costs:
                    assert agreement.same(report.cost, min(costs))
                    compared += 1
        assert compared > 60

    def test_the_own_crew_is_appraised_even_between_lots(self) -> None:
        plan = replace(_gangs(), own={"Gang": (Decimal("2.5"),)})
        report = solve(plan).report(Policy.OWN)
        assert report is not None
        assert report.crew == {"Gang": (2.5,), "Lead": (0.0,)}
        assert not report.workable


def _between(crew, low, high) -> bool:
    return all(
        (low.crew[name][t] <= n) and (high is None or n <= high.crew[name][t])
        for name, counts in crew.items()
        for t, n in enumerate(counts)
    )


class TestTies:
    """Cheapest; of equals fewest joiners plus leavers; fewest people; most of the first category; ..."""

    @pytest.mark.parametrize("seeds", BOXED, ids=str)
    def test_brute_force_over_the_box_takes_the_same_crew(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_preferred_crew_is_taken(*solved.boxed(seed))

    def test_ties_do_occur_in_these_plans(self) -> None:
        tied = 0
        for seeds in BOXED:
            for seed in seeds:
                costs = sorted(cost for cost, _ in solved.boxed(seed)[2])
                tied += len(costs) > 1 and costs[1] - costs[0] <= tie_width(costs[0])
        assert tied >= 10

    @pytest.mark.parametrize("seeds", [range(60), range(60, 120)], ids=str)
    def test_goal_after_goal_takes_the_same_crew(self, seeds: range, monkeypatch: pytest.MonkeyPatch) -> None:
        """The way of plans with too many ties to look at: by our own search, and by HiGHS."""
        monkeypatch.setattr(tiebreak, "TIES", Limits(nodes=1))
        for seed in seeds:
            plan, _, workable = solved.boxed(seed)
            monkeypatch.setattr(tiebreak, "GOAL_NODES", 2_000 if seed % 4 < 2 else 0)
            agreement.assert_preferred_crew_is_taken(plan, solve(plan), workable)

    @pytest.mark.parametrize("seeds", [range(40), range(40, 80)], ids=str)
    def test_plans_without_a_box_take_the_crew_that_highs_finds_by_goals(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_preferred_crew_by_goals(*solved.mixed(seed))

    def test_identical_categories_leave_the_work_to_the_first(self) -> None:
        answer = solve(_clones(4))
        assert answer.exact is not None
        assert answer.exact.crew == {"A": (3.0,), "B": (0.0,), "C": (0.0,), "D": (0.0,)}

    def test_those_on_the_books_are_kept_before_anyone_joins(self) -> None:
        plan = _clones(3)
        kept = replace(plan.categories[2], on_books=Decimal(2))
        answer = solve(replace(plan, categories=(*plan.categories[:2], kept)))
        assert answer.exact is not None
        assert answer.exact.crew == {"A": (1.0,), "B": (0.0,), "C": (2.0,)}

    def test_many_ties_over_phases_are_settled_the_same_way(self) -> None:
        answer = solve(_clones(3, phases=3))
        assert answer.exact is not None
        assert answer.exact.crew == {"A": (3.0,) * 3, "B": (0.0,) * 3, "C": (0.0,) * 3}


def _clones(count: int, phases: int = 1) -> Plan:
    categories = tuple(
        Category(name, Decimal(500), Decimal(40), output={"Work": Decimal(1)}) for name in "ABCD"[:count]
    )
    spans = tuple(Phase(f"P{t}") for t in range(phases))
    return Plan(phases=spans, categories=categories, works=(Work("Work", "h", (Decimal(100),) * phases),))


def _gangs() -> Plan:
    gang = Category("Gang", Decimal(100), Decimal(10), lot=Decimal(4), output={"Work": Decimal(1)})
    lead = Category("Lead", Decimal(150), Decimal(10))
    return Plan(categories=(gang, lead), works=(Work("Work", "h", (Decimal(75),)),))


class TestStates:
    def test_proved_by_our_own_search(self) -> None:
        answer = solve(_gangs())
        assert (answer.state, answer.proof) == (State.PROVED, Proof.OWN_SEARCH)
        assert answer.exact is not None
        assert answer.exact.crew == {"Gang": (8.0,), "Lead": (0.0,)}
        assert (answer.floor, answer.exact.cost, answer.bound) == pytest.approx((750, 800, 800))
        assert answer.whole_people_cost is not None
        assert answer.whole_people_cost.absolute == pytest.approx(50)
        assert answer.whole_people_cost.percent == pytest.approx(6.25)

    def test_impossible_even_in_fractions_takes_two_engines(self) -> None:
        answer = solve(replace(_gangs(), rules=(Budget("Budget", Decimal(700)),)))
        assert (answer.state, answer.proof) == (State.IMPOSSIBLE, Proof.TWO_ENGINES)
        assert answer.exact is answer.floor is answer.bound is answer.whole_people_cost is None
        assert answer.crews == ()

    def test_impossible_for_whole_people_keeps_floor_and_roundings(self) -> None:
        answer = solve(replace(_gangs(), rules=(Budget("Budget", Decimal(760)),)))
        assert (answer.state, answer.exact) == (State.IMPOSSIBLE, None)
        assert answer.floor == pytest.approx(750)
        assert not any(report.workable for report in answer.crews)

    def test_a_plan_cut_short_is_called_best_found_and_bounded(self) -> None:
        answer = solve(_hard(), seconds=0.0)
        assert (answer.state, answer.proof) == (State.BEST_FOUND, None)
        assert answer.bound is not None
        assert answer.floor is not None
        if answer.exact is not None:
            assert answer.floor - 0.01 <= answer.bound <= answer.exact.cost
            assert checker.missed_by_heads(_hard(), answer.exact.crew) == []

    def test_an_empty_plan_costs_nothing(self) -> None:
        answer = solve(Plan())
        assert answer.state is State.PROVED
        assert answer.exact is not None
        assert (answer.exact.crew, answer.exact.cost) == ({}, 0)

    def test_work_without_people_can_be_bought_in(self) -> None:
        work = Work("Work", "h", (Decimal(5),), Decimal("2.5"))
        answer = solve(Plan(works=(work,)))
        assert answer.exact is not None
        assert answer.exact.cost == pytest.approx(12.5)
        assert answer.exact.bought_in == {"Work": pytest.approx((5.0,))}

    @pytest.mark.parametrize(("amount", "state"), [("0", State.PROVED), ("0.01", State.IMPOSSIBLE)])
    def test_work_nobody_does_and_nobody_sells(self, amount: str, state: State) -> None:
        plan = replace(_gangs(), works=(*_gangs().works, Work("Blasting", "holes", (Decimal(amount),))))
        assert solve(plan).state is state

    @pytest.mark.parametrize(("cents", "state"), [(0, State.PROVED), (1, State.IMPOSSIBLE)])
    @pytest.mark.parametrize("pay", ["0.1", "199.99", "3333333.33"])
    def test_a_budget_binds_to_the_cent(self, pay: str, cents: int, state: State) -> None:
        gang = replace(_gangs().categories[0], pay=Decimal(pay))
        budget = Budget("Budget", Decimal(pay) * 8 - Decimal(cents) / 100)
        answer = solve(replace(_gangs(), categories=(gang,), rules=(budget,)))
        assert answer.state is state

    def test_an_amount_met_exactly_needs_nobody_more(self) -> None:
        """0.1 h x 0.9 x 0.7 units x 3 people is 0.189 in decimals, not in doubles."""
        hand = Category(
            "Hand", Decimal(10), Decimal("0.1"), absence=Decimal("0.1"), output={"Work": Decimal("0.7")}
        )
        answer = solve(Plan(categories=(hand,), works=(Work("Work", "h", (Decimal("0.189"),)),)))
        assert answer.exact is not None
        assert answer.exact.crew == {"Hand": (3.0,)}

    def test_everyone_supervised_by_themselves_for_all_their_hours_delivers_nothing(self) -> None:
        own = Supervision(Decimal(10), ("Gang",))
        gang = replace(_gangs().categories[0], supervision=own)
        assert solve(replace(_gangs(), categories=(gang,))).state is State.IMPOSSIBLE

    def test_ratios_and_presence_need_nobody_where_nobody_is_there(self) -> None:
        plan = replace(_gangs(), works=(), rules=(Ratio("R", ("Gang",), ("Lead",), Decimal(0)),))
        answer = solve(plan)
        assert answer.exact is not None
        assert answer.exact.cost == 0

    def test_people_asked_for_exactly_in_half_posts(self) -> None:
        half = Category("Half", Decimal(100), Decimal(20), lot=Decimal("0.5"))
        rule = Presence("P", {"Half": Decimal(2)}, Sense.EXACTLY, Decimal(3))
        answer = solve(Plan(categories=(half,), rules=(rule,)))
        assert answer.exact is not None
        assert answer.exact.crew == {"Half": (1.5,)}


def _hard() -> Plan:
    """Ten categories in twelve phases: nobody proves this in a blink."""
    rng = np.random.default_rng(5)
    categories = tuple(
        Category(
            f"C{j}",
            pay=Decimal(int(rng.integers(40_000, 90_000))) / 100,
            hours=Decimal(38),
            join_cost=Decimal(int(rng.integers(100, 900))),
            leave_cost=Decimal(int(rng.integers(100, 900))),
            supervision=Supervision() if j < 3 else Supervision(Decimal(2), ("C0", "C1")),
            output={f"W{k}": Decimal(int(rng.integers(100, 900))) / 100 for k in range(4)},
        )
        for j in range(10)
    )
    works = tuple(
        Work(f"W{k}", "u", tuple(Decimal(int(rng.integers(500, 9000))) for _ in range(12))) for k in range(4)
    )
    phases = tuple(Phase(f"P{t}", Decimal(4)) for t in range(12))
    rules = (Ratio("R", ("C7", "C8", "C9"), ("C0",), Decimal("2.5")),)
    return Plan(phases=phases, categories=categories, works=works, rules=rules)


class TestProperties:
    @QUICK
    @given(plans())
    def test_answers_survive_json(self, plan: Plan) -> None:
        answer = solve(plan)
        assert from_json(to_json(answer), Answer) == answer

    @QUICK
    @given(plans())
    def test_a_plan_read_back_has_the_same_answer(self, plan: Plan) -> None:
        answer, again = solve(plan), solve(plan_from_document(plan_to_document(plan)))
        assert without_the_clock(answer) == without_the_clock(again)

    @QUICK
    @given(plans())
    def test_the_floor_bounds_every_workable_crew(self, plan: Plan) -> None:
        answer = solve(plan)
        for report in answer.crews:
            if report.cost is not None:
                assert answer.floor is not None
                assert report.cost >= answer.floor - 1e-6 * (1 + abs(answer.floor))

    @QUICK
    @given(plans())
    def test_the_order_of_the_plan_changes_no_cost(self, plan: Plan) -> None:
        turned = replace(
            plan,
            categories=plan.categories[::-1],
            works=plan.works[::-1],
            rules=plan.rules[::-1],
        )
        answer, other = solve(plan), solve(turned)
        assert agreement.same(answer.floor, other.floor)
        assert agreement.same(_exact(answer), _exact(other))

    @QUICK
    @given(plans(features=frozenset({"lots", "bounds", "books", "moves", "ratio", "overtime", "phases"})))
    def test_money_in_another_currency_keeps_the_crew(self, plan: Plan) -> None:
        ten = Decimal(10)
        dearer = replace(
            plan,
            categories=tuple(
                replace(
                    c,
                    pay=c.pay * ten,
                    join_cost=c.join_cost * ten,
                    leave_cost=c.leave_cost * ten,
                    overtime_rate=c.overtime_rate * ten,
                )
                for c in plan.categories
            ),
        )
        cost, tenfold = _exact(solve(plan)), _exact(solve(dearer))
        assert agreement.same(cost and cost * 10, tenfold)

    @QUICK
    @given(plans())
    def test_a_further_rule_never_makes_it_cheaper(self, plan: Plan) -> None:
        first = plan.categories[0].name
        rule = Presence("One more", {first: Decimal(1)}, Sense.AT_LEAST, Decimal(2))
        cost, ruled = _exact(solve(plan)), _exact(solve(replace(plan, rules=(*plan.rules, rule))))
        if ruled is not None:
            assert cost is not None
            assert ruled >= cost - 0.005


def without_the_clock(answer: Answer) -> Answer:
    """What is left of an answer when how long it took, and so who proved it, is taken away."""
    return replace(answer, seconds=0, proof=None, bound=None)


def _exact(answer: Answer) -> float | None:
    return answer.exact.cost if answer.exact else None


def test_crews_of_one_plan_are_lots_of_people() -> None:
    for seed in range(300):
        plan, answer = solved.mixed(seed)
        for report in answer.crews:
            for c in plan.categories if report.crew is not None else ():
                assert all(
                    (checker.number(n) / Fraction(c.lot)).denominator == 1 for n in report.crew[c.name]
                )
