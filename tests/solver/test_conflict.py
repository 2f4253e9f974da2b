"""Why no crew is workable: textbook sets, and random plans against an independent program."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from functools import cache

import numpy as np
import pytest

from solver.answer import Conflict, Conflicting, LineKind, State
from solver.conflict import WHOLE_PEOPLE, find_conflict
from solver.deletion import deletion_filter
from solver.engine import LpStatus, Relaxation
from solver.matrix import Matrix, RowSense
from solver.plan import Budget, Category, Plan, Presence, Ratio, Sense, Share, Supervision, Work
from solver.repair import NOT_ENOUGH, PERCENT, apply_repair, can_repair
from solver.review import review
from solver.solve import solve
from tests.solver import bruteforce, reference
from tests.solver.random_plans import FEATURES, random_plan

BATCHES = [range(start, start + 75) for start in range(0, 300, 75)]


# ---- textbook programs: rows and bounds as conditions --------------------------------------------------


def impossible(matrix: Matrix, rows, bounds) -> bool:
    """Whether the rows and the columns' lower bounds at 0 that are named cannot hold together."""
    kept = Matrix(matrix.cost[:], [-1e6] * matrix.width, matrix.upper[:], matrix.integer[:])
    for column in bounds:
        kept.lower[column] = 0.0
    kept.rows = [matrix.rows[i] for i in rows]
    return Relaxation(kept).solve() is LpStatus.INFEASIBLE


def smallest(matrix: Matrix) -> set[tuple[str, int]]:
    conditions = [("row", i) for i in range(len(matrix.rows))]
    conditions += [("at least 0", j) for j in range(matrix.width)]

    def cannot(kept) -> bool:
        return impossible(
            matrix, [i for kind, i in kept if kind == "row"], [i for kind, i in kept if kind != "row"]
        )

    found = deletion_filter(conditions, cannot)
    for one in found:
        assert not cannot([other for other in found if other != one])
    return set(found)


def test_three_rows() -> None:
    # A <= 60, B <= 50, A + 2 B >= 220, A, B >= 0: exactly the three rows (public answer by R. Pratt, seen)
    matrix = Matrix()
    matrix.add_column(0.0, 0.0, np.inf)
    matrix.add_column(0.0, 0.0, np.inf)
    matrix.add_row([0], [1.0], RowSense.AT_MOST, 60.0)
    matrix.add_row([1], [1.0], RowSense.AT_MOST, 50.0)
    matrix.add_row([0, 1], [1.0, 2.0], RowSense.AT_LEAST, 220.0)
    assert smallest(matrix) == {("row", 0), ("row", 1), ("row", 2)}


def test_bevco_with_36_mg() -> None:
    # Winston, Operations Research: Applications and Algorithms, Bevco with 36 mg (memory)
    matrix = Matrix()
    matrix.add_column(0.0, 0.0, np.inf)
    matrix.add_column(0.0, 0.0, np.inf)
    matrix.add_row([0, 1], [0.5, 0.25], RowSense.AT_MOST, 4.0)
    matrix.add_row([0, 1], [1.0, 3.0], RowSense.AT_LEAST, 36.0)
    matrix.add_row([0, 1], [1.0, 1.0], RowSense.EQUAL, 10.0)
    assert smallest(matrix) == {("row", 1), ("row", 2), ("at least 0", 0)}


@pytest.mark.parametrize("count", [1, 2, 5, 8, 17])
def test_the_filter_finds_the_hidden_set_whatever_its_place(count: int) -> None:
    rng = np.random.default_rng(count)
    for _ in range(30):
        hidden = {int(i) for i in rng.choice(count, size=int(rng.integers(1, count + 1)), replace=False)}
        found = deletion_filter(range(count), lambda kept, hidden=hidden: hidden <= set(kept))
        assert found == sorted(hidden)


def test_three_rows_as_a_plan() -> None:
    """Case (a): two kinds of people, limits on both, and work for more than they are."""
    plan = Plan(
        categories=(
            Category("A", Decimal(1), Decimal(1), at_most=Decimal(60), output={"W": Decimal(1)}),
            Category("B", Decimal(1), Decimal(1), at_most=Decimal(50), output={"W": Decimal(2)}),
        ),
        works=(Work("W", "u", (Decimal(220),)),),
    )
    found = solve(plan).conflict
    assert found is not None
    assert not found.whole_people
    assert {one.line: one.move for one in found.lines} == {"A: at most": 60, "B: at most": 30, "W": 60}


def test_bevco_as_a_plan() -> None:
    """Case (b), as far as a plan can say it: nobody is there less than not at all, so two lines remain."""
    both = {"Orange": Decimal(1), "Soda": Decimal(1)}
    sugar = {"Soda": Decimal("0.5"), "Orange": Decimal("0.25")}
    plan = Plan(
        categories=(
            Category("Soda", Decimal(1), Decimal(1), output={"Vitamin": Decimal(1)}),
            Category("Orange", Decimal(1), Decimal(1), output={"Vitamin": Decimal(3)}),
        ),
        works=(Work("Vitamin", "mg", (Decimal(36),)),),
        rules=(
            Presence("Mix", both, Sense.EXACTLY, Decimal(10)),
            Presence("Sugar", sugar, Sense.AT_MOST, Decimal(4)),
        ),
    )
    found = solve(plan).conflict
    assert found is not None
    assert {one.line: one.move for one in found.lines} == {"Vitamin": 6, "Mix": 2}
    assert "Change Mix from 10 to 12." in [one.repair for one in found.lines]


# ---- words -----------------------------------------------------------------------------------------


def hand(**changes) -> Category:
    return replace(Category("Hand", Decimal(100), Decimal(40), output={"Digging": Decimal(1)}), **changes)


def plan_of(*categories: Category, amount="100", rules=()) -> Plan:
    return Plan(categories=categories, works=(Work("Digging", "m", (Decimal(amount),)),), rules=tuple(rules))


def told(plan: Plan) -> dict[str, str]:
    answer = solve(plan)
    assert answer.state is State.IMPOSSIBLE
    assert answer.exact is None
    return {one.line: one.repair for one in answer.conflict.lines}


def test_a_budget_is_raised_to_what_the_cheapest_crew_costs() -> None:
    assert told(plan_of(hand(), rules=[Budget("Money", Decimal("299.99"))])) == {
        "Digging": "Lower Digging by 20 m to 80.",
        "Money": "Raise Money by EUR 0.01 to EUR 300.",
        WHOLE_PEOPLE: "Share someone with another site or take someone part-time: "
        "fractional people could do it.",
    }


def test_bounds() -> None:
    assert told(plan_of(hand(at_most=Decimal(2)))) == {
        "Hand: at most": "Allow 1 more Hand: at most 3.",
        "Digging": "Lower Digging by 20 m to 80.",
    }
    few = Presence("Places", {"Hand": Decimal(1)}, Sense.AT_MOST, Decimal(3))
    assert told(plan_of(hand(at_least=Decimal(5)), rules=[few])) == {
        "Hand: at least": "Ask for 2 fewer Hand: at least 3.",
        "Places": "Raise Places by 2 to 5.",
    }
    assert told(plan_of(hand(least_if_any=Decimal(5)), rules=[few])) == {
        "Hand: least if any": "Ask for 2 fewer Hand: none or at least 3.",
        "Places": "Raise Places by 2 to 5.",
        "Digging": "Lower Digging by 100 m to 0.",
    }


def test_bounds_in_lots_are_told_as_typed() -> None:
    gang = hand(lot=Decimal(4), at_most=Decimal(7))
    assert told(plan_of(gang, amount="300")) == {
        "Hand: at most": "Allow 1 more Hand: at most 8.",
        "Digging": "Lower Digging by 140 m to 160.",
    }


def test_ratio_and_share_move_by_their_own_number() -> None:
    lead = Category("Lead", Decimal(200), Decimal(40), at_most=Decimal(2))
    span = Ratio("Span", ("Hand",), ("Lead",), Decimal(2))
    repairs = told(plan_of(hand(), lead, amount="190", rules=[span]))
    assert repairs["Span"] == "Raise Span by 0.5 to 2.5 Hand per Lead."
    own = Share("Leads", ("Lead",), ("Lead", "Hand"), Sense.AT_LEAST, Decimal("0.4"))
    repairs = told(plan_of(hand(), lead, amount="190", rules=[own]))
    assert repairs["Leads"] == "Lower Leads by 11.43 percentage points to 28.57 %."
    few = Share("Hands", ("Hand",), ("Lead", "Hand"), Sense.AT_MOST, Decimal("0.5"))
    repairs = told(plan_of(hand(), lead, amount="190", rules=[few]))
    assert repairs["Hands"] == "Raise Hands by 21.43 percentage points to 71.43 %."


def test_supervision_and_what_is_not_enough_alone() -> None:
    learner = hand(supervision=Supervision(Decimal(10), ("Lead",)))
    lead = Category("Lead", Decimal(200), Decimal(40), at_most=Decimal(0))
    repairs = told(plan_of(learner, lead))
    assert repairs["Supervision by Lead"] == "Find 30 hours of supervision a week from others than Lead."
    nobody = Plan(categories=(hand(at_most=Decimal(0)),), works=(
        Work("Digging", "m", (Decimal(10),)), Work("Blasting", "holes", (Decimal(3),))))  # fmt: skip
    found = solve(nobody).conflict
    assert [one.line for one in found.lines] in (["Blasting"], ["Hand: at most", "Digging"])
    assert {one.repair for one in found.lines} == {NOT_ENOUGH}
    assert [one.move for one in found.lines] == [None] * len(found.lines)


def test_exactly_moves_the_way_that_is_shorter() -> None:
    both = {"Hand": Decimal(1)}
    rules = [Presence("Exactly", both, Sense.EXACTLY, Decimal("2.5"))]
    plan = plan_of(hand(), amount="10", rules=rules)
    found = solve(plan).conflict
    assert found.whole_people
    only = found.lines[0]
    assert abs(only.move) == 0.5
    assert solve(apply_repair(plan, only)).state is State.PROVED


# ---- random plans ----------------------------------------------------------------------------------


@cache
def impossible_plan(seed: int) -> tuple[Plan, Conflict] | None:
    """A random plan that is made impossible by a hard number, with its conflict."""
    rng = np.random.default_rng(seed)
    plan = random_plan(rng, max_categories=3, max_works=2, max_phases=1 + seed % 2, features=FEATURES)
    answer = solve(plan)
    if answer.exact is not None and seed % 3:
        tight = Decimal(repr(round(answer.exact.cost * float(rng.uniform(0.5, 0.999)), 2)))
        plan = replace(plan, rules=(*plan.rules, Budget("Money", tight)))
        answer = solve(plan)
    return None if answer.conflict is None else (plan, answer.conflict)


def cases(seeds: range):
    for seed in seeds:
        found = impossible_plan(seed)
        if found is not None:
            yield seed, *found


def members(conflict: Conflict) -> set[bruteforce.Member]:
    return {(str(one.kind), one.line, one.phase) for one in conflict.lines if one.kind is not None}


@pytest.mark.parametrize("seeds", BATCHES, ids=str)
def test_sets_cannot_hold_and_do_without_any_one_member(seeds: range) -> None:
    tried = 0
    for seed, plan, conflict in cases(seeds):
        lines = members(conflict)
        assert lines <= bruteforce.all_lines(plan), seed
        assert not bruteforce.can_hold(plan, lines), seed
        for one in lines:
            assert bruteforce.can_hold(plan, lines - {one}), (seed, one)
        assert conflict.whole_people == bruteforce.can_hold(plan, lines, whole=False), seed
        assert conflict.whole_people == (conflict.lines[-1].line == WHOLE_PEOPLE)
        tried += 1
    assert tried > 40


@pytest.mark.parametrize("seeds", BATCHES, ids=str)
def test_each_move_alone_makes_a_crew_workable_and_less_does_not(seeds: range) -> None:
    for seed, plan, conflict in cases(seeds):
        for one in conflict.lines:
            if one.kind is None:
                assert one.move is None
            elif one.move is None:
                assert one.repair == NOT_ENOUGH, (seed, one)
                assert not workable_without(plan, one), (seed, one)
            elif can_repair(one):
                check_move(seed, plan, one)


def to_the_cent(plan: Plan) -> Plan:
    """Budgets hold to the cent; the reference knows no cents."""
    rules = tuple(
        replace(rule, at_most=rule.at_most + Decimal("0.01")) if isinstance(rule, Budget) else rule
        for rule in plan.rules
    )
    return replace(plan, rules=rules)


def check_move(seed: int, plan: Plan, one: Conflicting) -> None:
    mended = apply_repair(plan, one)
    assert review(mended) == (), (seed, one)
    assert holds(plan, one), (seed, one)
    if one.kind is LineKind.PRESENCE and is_exactly(plan, one.line):
        return  # half the way is another number, which a crew may hit
    if one.kind in (LineKind.RATIO, LineKind.SHARE) and any(c.at_most is None for c in plan.categories):
        return  # the reference would water the ratio down with thousands of people
    less = replace(one, move=one.move - max(0.002 * one.move, 0.0011))
    if less.move > 0:
        assert reference.reference_costs(apply_repair(plan, less))[1] is None, (seed, one)


def holds(plan: Plan, one: Conflicting) -> bool:
    """Whether HiGHS finds a crew after the move. It forgives no second of work as the program does, so a move
    in hours that ends where a line is met exactly may need the last digit that is told once more."""
    moves = (one.move, one.move + 0.001) if one.kind in (LineKind.WORK, LineKind.SUPERVISION) else (one.move,)
    mended = (apply_repair(plan, replace(one, move=move)) for move in moves)
    return any(reference.reference_costs(plan)[1] is not None for plan in mended)


def is_exactly(plan: Plan, name: str) -> bool:
    rule = next(rule for rule in plan.rules if rule.name == name)
    return isinstance(rule, Presence) and rule.sense is Sense.EXACTLY


def workable_without(plan: Plan, one: Conflicting) -> bool:
    """Whether a crew is workable with the number behind the line as loose as it can be."""
    if one.kind in (LineKind.RATIO, LineKind.SHARE) and one.unit != "people":
        rule = next(rule for rule in plan.rules if rule.name == one.line)
        if isinstance(rule, Ratio):
            loose = replace(rule, at_most=Decimal(1000))
        else:
            loose = replace(rule, fraction=Decimal(int(rule.sense is Sense.AT_MOST)))
        rules = tuple(loose if r is rule else r for r in plan.rules)
        return reference.reference_costs(replace(plan, rules=rules))[1] is not None
    gone = {(str(one.kind), one.line, one.phase)}
    if one.kind not in (LineKind.WORK, LineKind.SUPERVISION):
        gone = {line for line in bruteforce.all_lines(plan) if line[:2] == (str(one.kind), one.line)}
    return bruteforce.can_hold(plan, bruteforce.all_lines(plan) - gone)


# ---- repairs ---------------------------------------------------------------------------------------


def test_nothing_to_apply_is_refused() -> None:
    plan = plan_of(hand())
    for one in (
        Conflicting(WHOLE_PEOPLE, None, None, "", None, "", ""),
        Conflicting("Supervision by Lead", LineKind.SUPERVISION, "Whole job", "hours", 3.0, "", ""),
        Conflicting("Digging", LineKind.WORK, "Whole job", "m", None, "", NOT_ENOUGH),
        Conflicting("Own", LineKind.SHARE, "Whole job", "people", 1.0, "", ""),
    ):
        assert not can_repair(one)
        with pytest.raises(ValueError, match="no number"):
            apply_repair(plan, one)
    for gone in (
        Conflicting("Fencing", LineKind.WORK, "Whole job", "m", 1.0, "", ""),
        Conflicting("Own", LineKind.SHARE, "Whole job", PERCENT, 1.0, "", ""),
    ):
        with pytest.raises(KeyError):
            apply_repair(plan, gone)


def test_without_time_moves_are_not_worked_out_and_that_is_said() -> None:
    plan = plan_of(hand(at_most=Decimal(2)))
    found = find_conflict(plan, seconds=0.0)
    assert {one.line for one in found.lines} == {"Hand: at most", "Digging"}
    for one in found.lines:
        assert one.move is None or solve(apply_repair(plan, one)).exact is not None
