"""Plans met exactly to the last digit, plans of very many people: doubles must not call them impossible."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal

import numpy as np
import pytest

from solver.answer import Policy, State
from solver.engine import LpStatus, Relaxation
from solver.matrix import Matrix, RowSense, forgiving
from solver.plan import Category, Phase, Plan, Presence, Ratio, Sense, Share, Supervision, Work
from solver.program import Program
from solver.solve import solve

SEEDS = [range(start, start + 25) for start in range(0, 100, 25)]
ONE_DAY = Decimal(8)


def counts(plan: Plan) -> list[float]:
    answer = solve(plan)
    assert answer.state is State.PROVED
    assert answer.exact is not None
    return [counts[0] for counts in answer.exact.crew.values()]


def odd(rng: np.random.Generator, most: int = 99) -> Decimal:
    """A decimal that no binary float holds, of one to six decimals."""
    return Decimal(int(rng.integers(1, most))) / Decimal(10) ** int(rng.integers(1, 7))


class TestRules:
    @pytest.mark.parametrize("seeds", SEEDS, ids=str)
    @pytest.mark.parametrize("sense", [Sense.AT_LEAST, Sense.EXACTLY])
    def test_a_presence_rule_met_by_everyone_there_may_be(self, seeds: range, sense: Sense) -> None:
        for seed in seeds:
            rng = np.random.default_rng(seed)
            weights = {name: odd(rng) for name in "ABC"}
            digits = 7 if sense is Sense.AT_LEAST else 4  # equations in large numbers take long to search
            people = {name: int(rng.integers(1, 10 ** int(rng.integers(1, digits)))) for name in "ABC"}
            bound = sum((weights[name] * people[name] for name in "ABC"), Decimal(0))
            categories = tuple(
                Category(name, Decimal(int(rng.integers(1, 999))), ONE_DAY, at_most=Decimal(people[name]))
                for name in "ABC"
            )
            plan = Plan(categories=categories, rules=(Presence("P", weights, sense, bound),))
            assert counts(plan) == list(people.values()), seed

    def test_one_more_than_everyone_is_impossible(self) -> None:
        weights = {"A": Decimal("8.1"), "B": Decimal("0.000088"), "C": Decimal("0.000067")}
        people = {"A": 581, "B": 820, "C": 646}
        categories = tuple(Category(n, Decimal(5), ONE_DAY, at_most=Decimal(people[n])) for n in "ABC")
        for bound, state in (("4706.215442", State.PROVED), ("4706.215443", State.IMPOSSIBLE)):
            rule = Presence("P", weights, Sense.AT_LEAST, Decimal(bound))
            assert solve(Plan(categories=categories, rules=(rule,))).state is state

    @pytest.mark.parametrize("seeds", SEEDS, ids=str)
    def test_a_ratio_of_six_decimals_met_exactly(self, seeds: range) -> None:
        for seed in seeds:
            rng = np.random.default_rng(seed)
            ratio = Decimal(int(rng.integers(1, 10**6))) / 10**6
            per = 10**6 * int(rng.integers(1, 4))
            of = Decimal(int(ratio * per))
            fixed = Category("A", Decimal(5), ONE_DAY, at_least=of, at_most=of)
            plan = Plan(
                categories=(fixed, Category("B", Decimal(7), ONE_DAY)),
                rules=(Ratio("R", ("A",), ("B",), ratio),),
            )
            assert counts(plan) == [float(of), per], seed

    def test_a_share_of_a_third_to_six_decimals(self) -> None:
        third = Decimal("0.333333")
        fixed = Category("A", Decimal(5), ONE_DAY, at_least=Decimal(333_333), at_most=Decimal(333_333))
        rule = Share("S", ("A",), ("A", "B"), Sense.EXACTLY, third)
        plan = Plan(categories=(fixed, Category("B", Decimal(7), ONE_DAY)), rules=(rule,))
        assert counts(plan) == [333_333, 666_667]


class TestHours:
    @pytest.mark.parametrize("seeds", SEEDS, ids=str)
    def test_work_met_exactly_needs_nobody_more(self, seeds: range) -> None:
        for seed in seeds:
            rng = np.random.default_rng(seed)
            hours, absence = Decimal(int(rng.integers(1, 10**5))) / 1000, Decimal(int(rng.integers(99))) / 100
            output, length = odd(rng, 10_000), Decimal(int(rng.integers(1, 100))) / 10
            people = int(rng.integers(1, 10 ** int(rng.integers(1, 7))))
            amount = length * hours * (1 - absence) * output * people
            hand = Category("A", Decimal(5), hours, absence=absence, output={"W": output})
            dear = Category("B", Decimal(50_000), hours, absence=absence, output={"W": output * 2})
            plan = Plan(
                phases=(Phase("P", length),),
                categories=(hand, dear),
                works=(Work("W", "u", (amount,)),),
            )
            assert counts(plan) == [people, 0], seed

    @pytest.mark.parametrize("amount", ["0.1", "215004693.75", "10582957051.606720", "999999999999"])
    def test_all_of_a_work_bought_in_needs_nobody(self, amount: str) -> None:
        dear = Category("A", Decimal(10_000_000), Decimal("0.001"), output={"W": Decimal("13.75")})
        work = Work("W", "u", (Decimal(amount),), Decimal("1.5"))
        answer = solve(Plan(categories=(dear,), works=(work,)))
        assert answer.exact is not None
        assert answer.exact.crew == {"A": (0.0,)}
        assert answer.exact.cost == pytest.approx(float(amount) * 1.5, rel=1e-9)
        assert answer.exact.bought_in["W"] == (pytest.approx(float(amount), rel=1e-9),)

    def test_a_work_short_by_less_than_a_person_is_short(self) -> None:
        hand = Category("A", Decimal(5), Decimal(38), output={"W": Decimal("0.7")})
        plan = Plan(
            categories=(hand,),
            works=(Work("W", "u", (Decimal("26.601"),)),),
            own={"A": (Decimal(1),)},
        )
        report = solve(plan).report(Policy.OWN)
        assert report is not None
        assert report.lines[0].margin == pytest.approx(-0.001, rel=1e-6)


class TestVeryMany:
    @pytest.mark.parametrize("amount", ["1e6", "1e9", "5e9"])
    def test_amounts_of_a_billion_and_more(self, amount: str) -> None:
        hand = Category("A", Decimal(5), Decimal(40), output={"W": Decimal("0.25")})
        answer = solve(Plan(categories=(hand,), works=(Work("W", "u", (Decimal(amount),)),)))
        assert answer.state is State.PROVED
        assert answer.exact is not None
        assert answer.exact.crew == {"A": (float(amount) / 10,)}

    def test_limits_nobody_can_mean_keep_the_engines_safe(self) -> None:
        """A weight of a millionth asks for millions; HiGHS forgets its time limit at 1e10 and more."""
        plan = Plan(
            categories=(
                Category("A", Decimal(5), ONE_DAY, at_most=Decimal("1e12")),
                Category("B", Decimal(7), ONE_DAY),
            ),
            rules=(
                Presence("P", {"A": Decimal("1e-12"), "B": Decimal(1)}, Sense.AT_LEAST, Decimal("1000.5")),
            ),
        )
        assert max(Program(plan).matrix.upper) <= 1e9
        assert counts(plan) == [0, 1001]

    def test_supervisors_asked_for_by_millions_of_others(self) -> None:
        """Nothing asks for leads but those they supervise: 1.2 million learners, a lead to every two."""
        lead = Category("Lead", Decimal(9), ONE_DAY)
        drawn = Supervision(Decimal(4), ("Lead",))
        learner = Category("Learner", Decimal(5), ONE_DAY, supervision=drawn, output={"W": Decimal(1)})
        plan = Plan(categories=(lead, learner), works=(Work("W", "u", (Decimal(9_600_000),)),))
        assert counts(plan) == [600_000, 1_200_000]
        rule = Ratio("R", ("Learner",), ("Lead",), Decimal("0.25"))
        plan = Plan(categories=(lead, learner), works=plan.works, rules=(rule,))
        assert counts(plan) == [4_800_000, 1_200_000]


class TestForgiving:
    """CLP, warm and with every column fixed, may miss what is met but for the last digit."""

    def program(self, sense: RowSense) -> Matrix:
        matrix = Matrix()
        columns = [matrix.add_column(1.0, 0.0, n, integer=True) for n in (581.0, 820.0, 646.0)]
        matrix.add_row(columns, [8.1, 8.8e-5, 6.7e-5], sense, 4706.215442)
        return matrix

    @pytest.mark.parametrize("sense", RowSense)
    def test_the_last_digit_is_forgiven(self, sense: RowSense) -> None:
        matrix = self.program(sense)
        relaxation = Relaxation(forgiving(matrix))
        assert relaxation.solve() is LpStatus.OPTIMAL
        for column, n in enumerate(matrix.upper):
            relaxation.set_bounds(column, n, n)
        assert relaxation.solve() is LpStatus.OPTIMAL

    def test_a_millionth_is_not(self) -> None:
        matrix = self.program(RowSense.AT_LEAST)
        matrix.rows[0] = replace(matrix.rows[0], rhs=4706.215443)
        assert Relaxation(forgiving(matrix)).solve() is LpStatus.INFEASIBLE

    def test_places_of_rows_and_columns_stay(self) -> None:
        matrix = self.program(RowSense.EQUAL)
        free = matrix.add_column(2.0, 0.0, 5.0)
        matrix.add_row([0, free], [1.0, 1.0], RowSense.AT_MOST, 9.0)
        made = forgiving(matrix)
        assert made.rows[1] == matrix.rows[1]
        assert (made.cost[:4], made.integer[:4]) == (matrix.cost, matrix.integer)
        assert len(made.rows) == 2

    def test_an_unlimited_count_that_must_be_nil_makes_no_room_for_another(self) -> None:
        """Ten free learners an hour would be worth half a cent (small:1019641 of the long run)."""
        matrix = Matrix()
        free, unlimited = (matrix.add_column(0.0, 0.0, most, integer=True) for most in (3.0, 1e6))
        paid = matrix.add_column(7.06, 0.0, 1e3)
        matrix.add_row([free, unlimited], [1.3, 2000.0], RowSense.EQUAL, 0.0)
        matrix.add_row([paid, free], [1.0, 2440.0], RowSense.AT_LEAST, 160.0)
        relaxation = Relaxation(forgiving(matrix))
        assert relaxation.solve() is LpStatus.OPTIMAL
        assert relaxation.objective == pytest.approx(160 * 7.06, abs=1e-6)
