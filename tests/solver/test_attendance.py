from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from itertools import product
from pathlib import Path

import numpy as np
import pytest
from scipy.stats import binom

from solver import heads
from solver.answer import Attendance, from_json, to_json
from solver.attendance import attend
from solver.chances import Chances
from solver.dayrisk import DayRisk
from solver.plan import Category, Plan, Presence, Sense, Work
from solver.planfile import read_plan
from solver.program import Program
from solver.solve import Case
from solver.turnout import binomial
from tests.solver import attended, daycheck

EXAMPLES = Path(__file__).parents[2] / "resources" / "examples"


def risk_of(plan: Plan, lots: tuple[int, ...], **settings: int):
    chances = Chances(Program(plan), **settings)
    chances.settle(lots)
    return DayRisk(chances).of(0, lots)


def one_category(people: int, absence: str, **more) -> Plan:
    person = Category("Hand", Decimal(100), Decimal(40), absence=Decimal(absence), **more)
    return Plan(categories=(person,), rules=())


# ---- published and textbook values ---------------------------------------------------------------


def at_least_present(people: int, absence: str, bound: int, sense: Sense = Sense.AT_LEAST) -> float:
    rule = Presence("There", {"Hand": Decimal(1)}, sense, Decimal(bound))
    return risk_of(replace(one_category(people, absence), rules=(rule,)), (people,)).covered


def test_feller_at_least_seven_of_ten():
    """Feller, An Introduction to Probability Theory, vol. 1, VI.2: 8441/9765625 (number seen)."""
    assert at_least_present(10, "0.8", 7) == pytest.approx(8441 / 9765625, rel=1e-12)


@pytest.mark.parametrize(
    ("most", "chance"),
    [(0, 1.024e-7), (5, 0.0327934976), (7, 0.3222004736), (8, 0.6241903616), (9, 0.8926258176)],
)
def test_tabled_binomial_of_ten(most: int, chance: float):
    """Binomial n = 10, p = .8 (Rossetti, Simulation Modeling, tables of the KSL; numbers seen)."""
    assert at_least_present(10, "0.2", most, Sense.AT_MOST) == pytest.approx(chance, abs=1e-10)


def test_ross_fifty_seats_for_fifty_two():
    """Ross, A First Course in Probability: 52 booked, 50 seats, show-up .95: .7405 (memory)."""
    assert at_least_present(52, "0.05", 50, Sense.AT_MOST) == pytest.approx(0.7405, abs=5e-5)


@pytest.mark.parametrize(("people", "needed", "absence"), [(1, 1, "0.1"), (9, 7, "0.08"), (40, 36, "0.05")])
def test_one_category_is_binomial(people: int, needed: int, absence: str):
    amount = Decimal(needed * 40 * 3 * 2)  # so many people's paid hours for two weeks, three units an hour
    plan = one_category(people, absence, output={"Digging": Decimal(3)})
    plan = replace(plan, phases=(replace(plan.phases[0], periods=Decimal(2)),))
    plan = replace(plan, works=(Work("Digging", "m", (amount,)),))
    found = risk_of(plan, (people,))
    chance = binom.sf(needed - 1, people, 1 - float(absence))
    assert found.covered == pytest.approx(chance, abs=1e-11)
    assert found.by_line == pytest.approx({"Digging": chance}, abs=1e-11)
    short = sum(binom.pmf(m, people, 1 - float(absence)) * (needed - m) * 120 for m in range(needed))
    assert found.expected_short["Digging"] == pytest.approx(short, abs=1e-8)
    assert found.survives == people - needed
    assert found.critical[0].stops == pytest.approx(
        1 - binom.sf(needed - 1, people - 1, 1 - float(absence)), abs=1e-11
    )


@pytest.mark.parametrize(("heads_", "away"), [(0, 0.1), (3, 0.0), (7, 0.3), (480, 0.02), (900, 0.05)])
def test_binomial_chances(heads_: int, away: float):
    expected = binom.pmf(np.arange(heads_ + 1), heads_, 1 - away)
    assert binomial(heads_, away) == pytest.approx(expected, abs=1e-12)


# ---- full enumeration ----------------------------------------------------------------------------


@pytest.mark.parametrize("block", range(10))
def test_full_enumeration_agrees_on_200_random_plans(block: int):
    for case, best in attended.many(200)[block * 20 : block * 20 + 20]:
        chances = Chances(case.program)
        chances.settle(best.lots)
        crew = heads.crew_of(case.program, best.lots)
        for t in range(len(case.plan.phases)):
            expected = daycheck.checked(case.plan, crew, t)
            found = DayRisk(chances).of(t, best.lots)
            assert found.error == 0
            assert found.covered == pytest.approx(expected.covered, abs=1e-9), (case.plan, t)
            units = {w.name: float(case.program.best_output(k)) for k, w in enumerate(case.plan.works)}
            work = sum(short / units[name] for name, short in found.expected_short.items() if name in units)
            led = sum(short for name, short in found.expected_short.items() if name not in units)
            assert work == pytest.approx(expected.work_short, abs=1e-5)
            assert led == pytest.approx(expected.supervision_short, abs=1e-5)


def test_a_line_is_short_no_more_often_than_the_day_and_together_they_explain_it():
    for case, best in attended.many(60):
        found = DayRisk(Chances(case.program)).of(0, best.lots)
        assert all(found.covered <= chance + 1e-9 for chance in found.by_line.values())
        assert 1 - found.covered <= sum(1 - chance for chance in found.by_line.values()) + 1e-9


def test_everybody_together_always_covers_the_day_of_an_exact_crew():
    for case, best in attended.many(100):
        for t in range(len(case.plan.phases)):
            assert DayRisk(Chances(case.program)).of(t, best.lots).survives is not None


def test_absences_survived_and_the_miss_that_is_told():
    for case, best in attended.many(40):
        plan, crew = case.plan, heads.crew_of(case.program, best.lots)
        asked = daycheck.ask(plan, crew, 0)
        found = DayRisk(Chances(case.program)).of(0, best.lots)
        assert _fewest_that_stop(plan, asked) in (found.survives + 1, None)
        if found.first_miss:
            size = {c.name: float(c.lot) / -(-float(c.lot) // 1) for c in plan.categories}
            gone = [round(found.first_miss.get(c.name, 0) / size[c.name]) for c in plan.categories]
            assert sum(gone) == found.survives + 1
            left = tuple(n - g for n, g in zip(asked.heads, gone, strict=True))
            assert not _covers(plan, asked, left)


def _fewest_that_stop(plan: Plan, asked: daycheck.Ask) -> int | None:
    """The fewest absences, whoever they are, that can leave a day uncovered."""
    for count in range(sum(asked.heads) + 1):
        for away in product(*(range(n + 1) for n in asked.heads)):
            left = tuple(n - a for n, a in zip(asked.heads, away, strict=True))
            if sum(away) == count and not _covers(plan, asked, left):
                return count
    return None


def _covers(plan: Plan, asked: daycheck.Ask, pattern: tuple[int, ...]) -> bool:
    ((led, work),) = daycheck.shortages(plan, asked.t, (pattern,), asked.hours, asked.work)
    return led + work <= daycheck.SHORT and daycheck.rules_kept(plan, asked.t, pattern)


def test_who_is_critical():
    for case, best in attended.many(40):
        plan = case.plan
        asked = daycheck.ask(plan, heads.crew_of(case.program, best.lots), 0)
        found = {one.category: one.stops for one in DayRisk(Chances(case.program)).of(0, best.lots).critical}
        for j, category in enumerate(plan.categories):
            if asked.heads[j]:
                fewer = tuple(n - (i == j) for i, n in enumerate(asked.heads))
                expected = 1 - daycheck.judged(plan, replace(asked, heads=fewer)).covered
                assert found[category.name] == pytest.approx(expected, abs=1e-9)
            else:
                assert category.name not in found


# ---- drawn days ----------------------------------------------------------------------------------


def test_drawn_days_agree_within_three_standard_errors():
    for case, best in attended.many(40):
        exact = DayRisk(Chances(case.program)).of(0, best.lots)
        chances = Chances(case.program, most_patterns=0, draws=4_000)
        chances.settle(best.lots)
        drawn = DayRisk(chances).of(0, best.lots)
        assert drawn.drawn == 4_000
        assert drawn.error > 0
        assert abs(drawn.covered - exact.covered) <= 3 * drawn.error
        for line, short in drawn.expected_short.items():
            assert abs(short - exact.expected_short[line]) <= 3 * drawn.expected_error[line] + 1e-9


def test_more_people_meet_the_same_drawn_days():
    plan = one_category(30, "0.1", output={"Digging": Decimal(1)})
    plan = replace(plan, works=(Work("Digging", "m", (Decimal(1000),)),))
    chances = Chances(Program(plan), most_patterns=0, draws=500)
    values = [chances.of((n,))[0].value for n in range(25, 40)]
    assert values == sorted(values)
    again = Chances(Program(plan), most_patterns=0, draws=500)
    assert [again.of((n,))[0].value for n in (39, 30, 25)] == [values[14], values[5], values[0]]


# ---- the whole question --------------------------------------------------------------------------


def test_hillside_answer_is_whole():
    answer = attend(read_plan(EXAMPLES / "hillside.crew.json"), 0.95)
    assert from_json(to_json(answer), Attendance) == answer
    safe = answer.wanted or answer.beyond_budget
    assert safe is not None
    assert safe.proved
    assert safe.covered >= 0.95
    assert min(phase.covered for phase in answer.phases) == answer.compared[0].covered
    costs = [one.cost for one in answer.curve]
    covered = [one.covered for one in answer.curve]
    assert costs == sorted(costs)
    assert covered == sorted(covered)
    assert covered[0] == answer.compared[0].covered
    assert covered[-1] >= 0.99


def test_an_own_crew_with_part_of_a_lot_is_left_out_of_the_comparison():
    case, _ = attended.many(1)[0]
    name = case.plan.categories[0].name
    half = case.plan.categories[0].lot / 4
    for counts, shown in ((half, False), (case.plan.categories[0].lot, True)):
        plan = replace(case.plan, own={name: (counts,) * len(case.plan.phases)})
        names = [one.name for one in attend(plan, 0.5, seconds=1).compared]
        assert ("own" in names) is shown


def test_progress_is_told():
    told: list[tuple[str, object]] = []
    case = Case(read_plan(EXAMPLES / "hillside.crew.json"))
    attend(case.plan, 0.9, heard=lambda part, value: told.append((part, value)))
    assert {part for part, _ in told} == {"progress"}
    done = [value["done"] for _, value in told]
    assert done == sorted(done)
    assert all(0 <= d <= 1 for d in done)


def test_pairs_of_absences_are_told_apart():
    """Two of four may be away in any mix of two trades unless both keyholders are."""
    plan = Plan(
        categories=tuple(Category(n, Decimal(10), Decimal(40), absence=Decimal("0.1")) for n in ("A", "B")),
        rules=(Presence("Keys", {"A": Decimal(1)}, Sense.AT_LEAST, Decimal(1)),),
    )
    found = risk_of(plan, (2, 2))
    assert found.survives == 1
    assert found.first_miss == {"A": 2.0}
    assert found.by_line == pytest.approx({"Keys": 0.99})
