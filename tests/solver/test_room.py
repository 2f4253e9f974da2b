"""Room to move and pay ranges against every crew of small boxed plans."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from fractions import Fraction
from functools import cache
from math import ceil, floor

import numpy as np
import pytest

from solver.answer import LineKind, PayRange, Policy, Room
from solver.plan import Budget, Category, Plan, Presence, Sense, Work
from solver.room import room
from solver.solve import solve
from tests.solver import bruteforce, checker, solved

BATCHES = [range(start, start + 34) for start in range(0, 340, 34)]


@cache
def answered(seed: int) -> Room | None:
    plan, answer, _ = solved.boxed(seed)
    return room(plan) if answer.exact is not None else None


def cases(seeds: range):
    for seed in seeds:
        plan, answer, workable = solved.boxed(seed)
        found = answered(seed)
        if found is not None:
            yield seed, plan, answer, workable, found


def crew_of(floats) -> dict[str, tuple[Fraction, ...]]:
    return {name: tuple(Fraction(str(n)) for n in counts) for name, counts in floats.items()}


class TestLines:
    @pytest.mark.parametrize("seeds", BATCHES, ids=str)
    def test_least_loosening_and_saving_by_looking_at_every_crew(self, seeds: range) -> None:
        for seed, plan, answer, _, found in cases(seeds):
            every = bruteforce.Room(plan, answer.exact.cost)
            for line in found.lines:
                if line.kind is LineKind.BUDGET or line.line.endswith(": settling in"):
                    assert line.loosen is None
                    continue
                expected = every.loosened(line.line, line.phase)
                if expected is not None:
                    self.compare(seed, answer, line, expected)

    def compare(self, seed, answer, line, expected) -> None:
        place = (seed, line.line, line.phase)
        if expected.by is None:
            assert line.loosen is None, place
            assert line.saving is None
            assert line.next_crew is None
            return
        assert line.loosen == pytest.approx(expected.by, rel=1e-6, abs=1e-5), place
        assert line.saving == pytest.approx(answer.exact.cost - expected.cost, abs=2e-3), place
        assert line.saving > 0.0099

    def test_the_cheaper_crew_costs_what_is_said_and_misses_that_line_alone(self) -> None:
        seen = 0
        for _, plan, answer, _, found in cases(range(340)):
            for line in found.lines:
                if line.next_crew is None:
                    continue
                seen += 1
                crew = crew_of(line.next_crew)
                missed = checker.missed_by_heads(plan, crew)
                assert {(m.line, m.phase) for m in missed} <= {(line.line, line.phase)}
                assert all(float(m.by) <= line.loosen + 1e-9 for m in missed)
                heads = float(checker.cost_of_heads(plan, crew))
                assert heads <= answer.exact.cost - line.saving + 1e-6
        assert seen > 150

    def test_tighten_is_the_margin_of_the_exact_crew(self) -> None:
        for _, _, answer, _, found in cases(range(340)):
            margins = answer.report(Policy.EXACT).lines
            assert [(x.line, x.phase) for x in found.lines] == [(m.line, m.phase) for m in margins]
            assert [x.tighten for x in found.lines] == pytest.approx([m.margin for m in margins])

    def test_sentences_never_quote_the_price_for_fractional_people(self) -> None:
        for _, _, _, _, found in cases(range(100)):
            for line in found.lines:
                assert "price" not in line.says
                assert line.says.endswith(".")
                assert "  " not in line.says


class TestPay:
    @pytest.mark.parametrize("seeds", BATCHES, ids=str)
    def test_ranges_by_looking_at_every_crew(self, seeds: range) -> None:
        for seed, plan, answer, workable, found in cases(seeds):
            for category, pay in zip(plan.categories, found.pay, strict=True):
                low, high = expected_range(plan, answer, workable, category)
                assert pay.category == category.name
                same(pay.from_, low, (seed, category.name, "from"))
                same(pay.to, high, (seed, category.name, "to"))

    def test_inside_the_range_the_exact_crew_is_cheapest_and_just_outside_not(self) -> None:
        tried = 0
        for seed, plan, answer, _, found in cases(range(240)):
            if any(isinstance(rule, Budget) for rule in plan.rules):
                continue  # kept at typed pay, which a changed plan is not
            for j, pay in enumerate(found.pay):
                for inside, outside in cents_around(pay):
                    tried += 1
                    assert paid(plan, j, inside) == pytest.approx(
                        own_cost(plan, answer, j, inside), abs=0.006
                    )
                    assert paid(plan, j, outside) < own_cost(plan, answer, j, outside) - 1e-4, (seed, j)
        assert tried > 80

    def test_a_budget_is_kept_at_typed_pay(self) -> None:
        hand = Category("Hand", Decimal(100), Decimal(40), output={"Digging": Decimal(1)})
        machine = Category("Machine", Decimal(260), Decimal(40), output={"Digging": Decimal(2)})
        work = Work("Digging", "m", (Decimal(80),))
        budget = Budget("Budget", Decimal(210))
        found = room(Plan(categories=(hand, machine), works=(work,), rules=(budget,)))
        # two hands cost 200; one machine, the only other way, is over the budget whatever hands are paid
        assert found.pay[0] == PayRange("Hand", None, None)
        free = room(Plan(categories=(hand, machine), works=(work,)))
        assert free.pay == (PayRange("Hand", None, 130.0), PayRange("Machine", 200.0, None))


def expected_range(plan, answer, workable, category) -> tuple[float | None, float | None]:
    best = crew_of(answer.exact.crew)
    lengths = [Fraction(p.periods) for p in plan.phases]

    def amount(crew) -> Fraction:
        return sum((length * n for length, n in zip(lengths, crew[category.name], strict=True)), Fraction(0))

    here = amount(best)
    less = [(cost - answer.exact.cost) / float(here - amount(c)) for cost, c in workable if amount(c) < here]
    more = [(cost - answer.exact.cost) / float(amount(c) - here) for cost, c in workable if amount(c) > here]
    pay = float(category.pay)
    low = pay - max(min(more), 0.0) if more else None
    return (None if low is None or low <= 1e-9 else low), (pay + max(min(less), 0.0) if less else None)


def same(value: float | None, expected: float | None, place) -> None:
    if expected is None or value is None:
        assert value is expected, place
    else:
        assert value == pytest.approx(expected, rel=1e-7, abs=2e-3), place


def cents_around(pay: PayRange) -> list[tuple[Decimal, Decimal]]:
    """A pay just inside and one just outside of each end of the range."""
    pairs = []
    if pay.from_ is not None and pay.from_ > 1:
        cents = ceil(pay.from_ * 100 + 0.1)
        pairs.append((Decimal(cents) / 100, Decimal(cents - 3) / 100))
    if pay.to is not None:
        cents = floor(pay.to * 100 - 0.1)
        pairs.append((Decimal(cents) / 100, Decimal(cents + 3) / 100))
    return [
        (inside, outside)
        for inside, outside in pairs
        if (pay.from_ is None or float(inside) >= pay.from_) and (pay.to is None or float(inside) <= pay.to)
    ]


def with_pay(plan: Plan, j: int, pay: Decimal) -> Plan:
    categories = [replace(c, pay=pay) if i == j else c for i, c in enumerate(plan.categories)]
    return replace(plan, categories=tuple(categories))


def paid(plan: Plan, j: int, pay: Decimal) -> float:
    return solve(with_pay(plan, j, pay)).exact.cost


def own_cost(plan: Plan, answer, j: int, pay: Decimal) -> float:
    """What the exact crew of the typed plan costs at another pay."""
    crew = crew_of(answer.exact.crew)
    then, now = (checker.cost_of_heads(p, crew) for p in (with_pay(plan, j, pay), plan))
    return answer.exact.cost + float(then - now)


class TestWords:
    def plan(self, **changes) -> Plan:
        lead = Category("Lead hand", Decimal(500), Decimal(40))
        hand = Category("Hand", Decimal(300), Decimal(40), output={"Digging": Decimal(1)})
        work = Work("Digging", "m", (Decimal(90),))
        rule = Presence("Keys", {"Lead hand": Decimal(1)}, Sense.AT_LEAST, Decimal(2))
        return replace(Plan(categories=(lead, hand), works=(work,), rules=(rule,)), **changes)

    def test_a_work_line(self) -> None:
        line = room(self.plan()).lines[0]
        assert (line.tighten, line.loosen, line.saving) == pytest.approx((30, 10, 300))
        assert line.says == (
            "10 m less of Digging would let you do with 2 Lead hand, 2 Hand and save EUR 300."
        )

    def test_a_rule(self) -> None:
        line = room(self.plan()).lines[1]
        assert (line.tighten, line.loosen, line.saving) == (0, 1, 500)
        assert line.says == "Keys: 1 instead of 2 would let you do with 1 Lead hand, 3 Hand and save EUR 500."

    def test_a_line_that_cannot_help(self) -> None:
        keys = Presence("Keys", {"Lead hand": Decimal(1)}, Sense.AT_MOST, Decimal(2))
        line = room(self.plan(rules=(keys,))).lines[1]
        assert line.loosen is None
        assert line.says == "No cheaper crew, however far this gives way; 2 people to spare."

    def test_progress_is_told_and_programs_are_counted(self) -> None:
        heard = []
        found = room(self.plan(), heard=lambda part, value: heard.append((part, value["done"])))
        assert {part for part, _ in heard} == {"progress"}
        done = [share for _, share in heard]
        assert done == sorted(done)
        assert 0 <= done[0] <= done[-1] <= 1
        assert found.programs > 4


def test_without_time_nothing_is_claimed() -> None:
    rng = np.random.default_rng(3)
    categories = tuple(
        Category(f"C{i}", Decimal(int(rng.integers(500, 900))), Decimal(38),
                 output={"W": Decimal(int(rng.integers(20, 60)))})
        for i in range(4)
    )  # fmt: skip
    plan = Plan(categories=categories, works=(Work("W", "u", (Decimal(9000),)),))
    exact = solve(plan).exact
    from solver import room as module

    inquiry = module.Inquiry(0.0)
    case = module.Case(plan)
    best, report = module.exact_crew(case)
    lines = module._Lines(case, best, report, inquiry).all()
    assert report.cost == exact.cost
    for line in lines:
        assert line.loosen is None
        assert line.says.startswith("Not worked out in the time given")
