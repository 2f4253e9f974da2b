"""Our own branch and bound against brute force and HiGHS."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise

import numpy as np
import pytest
from scipy.optimize import Bounds, LinearConstraint, milp

from solver import heads
from solver.engine import LpStatus
from solver.found import Found, Limits, tie_width
from solver.grain import whole_grain
from solver.matrix import Matrix, RowSense
from solver.plan import Plan
from solver.program import Program
from solver.search import Search
from tests.solver import checker, solved
from tests.solver.bare import BareProgram
from tests.solver.full_plans import full_plan
from tests.solver.random_plans import FEATURES, random_plan
from tests.solver.reference import written_out

pytestmark = pytest.mark.xdist_group("solved")  # one process, so that every plan is solved once

WIDE = Limits(nodes=200_000, seconds=30)
BOXED = [range(start, start + 40) for start in range(0, 120, 40)]


def crew_of(program: Program, found: Found) -> tuple[tuple[Fraction, ...], ...]:
    crew = heads.crew_of(program, found.lots)
    return tuple(tuple(map(checker.number, counts)) for counts in crew.values())


def searched(plan: Plan) -> tuple[Program, Search]:
    program = Program(plan)
    return program, Search(program, grain=whole_grain(program))


class TestWithin:
    @pytest.mark.parametrize("seeds", BOXED, ids=str)
    def test_lists_every_crew_once_and_in_order(self, seeds: range) -> None:
        for seed in seeds:
            plan, _, workable = solved.boxed(seed)
            program, search = searched(plan)
            costs = sorted(cost for cost, _ in workable)
            cutoff = _between(costs, len(costs) // 2)
            found, complete = search.within(cutoff, 10_000, WIDE)
            assert complete
            expected = {tuple(crew.values()) for cost, crew in workable if cost <= cutoff}
            listed = [crew_of(program, one) for one in found]
            assert len(listed) == len(set(listed)), "a crew is listed twice"
            assert set(listed) == expected
            assert all(b.objective >= a.objective - tie_width(a.objective) for a, b in pairwise(found))
            by_crew = {tuple(crew.values()): cost for cost, crew in workable}
            for one, crew in zip(found, listed, strict=True):
                assert one.objective == pytest.approx(by_crew[crew], abs=0.005)

    def test_the_first_few_are_the_cheapest_and_called_incomplete(self) -> None:
        cut_short = 0
        for seed in range(120):
            plan, _, workable = solved.boxed(seed)
            if len(workable) < 5:
                continue
            found, complete = searched(plan)[1].within(np.inf, 3, WIDE)
            assert not complete
            costs = sorted(cost for cost, _ in workable)
            assert [one.objective for one in found] == pytest.approx(costs[:3], abs=0.005)
            cut_short += 1
        assert cut_short > 20

    def test_exactly_as_many_as_there_are_is_complete(self) -> None:
        for seed in range(60):
            plan, _, workable = solved.boxed(seed)
            found, complete = searched(plan)[1].within(np.inf, len(workable), WIDE)
            assert complete
            assert len(found) == len(workable)

    def test_hears_of_every_crew(self) -> None:
        plan, _, workable = next(solved.boxed(s) for s in range(60) if len(solved.boxed(s)[2]) > 5)
        counts: list[int] = []
        searched(plan)[1].within(np.inf, 10_000, WIDE, counts.append)
        assert counts == list(range(1, len(workable) + 1))


def _between(costs: list[float], i: int) -> float:
    """A cutoff that no cost sits on."""
    if not costs:
        return 1e9
    higher = [cost for cost in costs if cost > costs[i] + 0.01]
    return (costs[i] + higher[0]) / 2 if higher else costs[i] + 1


class TestCheapest:
    def test_in_any_box_is_the_cheapest_of_that_box(self) -> None:
        rng = np.random.default_rng(11)
        compared = 0
        for seed in range(120):
            plan, _, workable = solved.boxed(seed)
            program, search = searched(plan)
            low, high = search.box()
            count = program.head_count
            corners = np.sort(rng.integers(0, 5, (2, count)), axis=0)
            low[:count] = np.maximum(low[:count], corners[0])
            high[:count] = np.minimum(high[:count], corners[1])
            if (low > high).any():
                continue
            outcome = search.cheapest(WIDE, box=(low, high))
            lots = [heads.lots_of(program, crew) for _, crew in workable]
            costs = [
                cost
                for (cost, _), mine in zip(workable, lots, strict=True)
                if all(a <= n <= b for a, n, b in zip(low, mine, high, strict=False))
            ]
            assert outcome.complete
            assert (outcome.best is None) == (not costs)
            if outcome.best is not None:
                assert outcome.best.objective == pytest.approx(min(costs), abs=0.005)
                compared += 1
        assert compared > 25

    def test_below_a_cutoff_only(self) -> None:
        for seed in range(40):
            plan, _, workable = solved.boxed(seed)
            if not workable:
                continue
            least = min(cost for cost, _ in workable)
            _, search = searched(plan)
            assert search.cheapest(WIDE, cutoff=least - 0.01).best is None
            found = search.cheapest(WIDE, cutoff=least + 0.01).best
            assert found is not None

    def test_a_start_is_kept_unless_something_is_cheaper(self) -> None:
        for seed in range(60):
            plan, answer, workable = solved.boxed(seed)
            if not workable or answer.exact is None:
                continue
            program, search = searched(plan)
            for cost, crew in workable[:3]:
                lots = tuple(int(n) for n in heads.lots_of(program, crew))
                outcome = search.cheapest(WIDE, start=Found(lots, cost))
                assert outcome.best is not None
                assert outcome.best.objective == pytest.approx(answer.exact.cost, abs=0.005)

    def test_head_counts_that_may_be_fractional(self) -> None:
        compared = 0
        for seed in range(80):
            rng = np.random.default_rng(seed)
            plan = random_plan(rng, features=FEATURES - {"least_if_any", "open_cost"}, max_phases=1)
            program = Program(plan)
            free = int(rng.integers(program.head_count))
            outcome = Search(program, fractional=[free]).cheapest(WIDE)
            model = written_out(plan, relax=False)
            model.whole[model.index["n", plan.categories[free].name, 0]] = 0
            result = model.solve()
            assert outcome.complete
            if result.status == 0:
                assert outcome.best is not None
                assert outcome.best.objective == pytest.approx(result.fun, rel=1e-6, abs=0.005)
                compared += 1
            else:
                assert outcome.best is None
        assert compared > 30


class TestLimits:
    def test_no_nodes_means_nothing_known(self) -> None:
        outcome = searched(full_plan(np.random.default_rng(1)))[1].cheapest(Limits(nodes=0))
        assert (outcome.best, outcome.complete, outcome.nodes) == (None, False, 0)
        assert outcome.bound == -np.inf

    @pytest.mark.parametrize("nodes", [1, 3, 10, 40])
    def test_bounds_of_an_unfinished_search_are_never_above_the_optimum(self, nodes: int) -> None:
        unfinished = 0
        for seed in range(60):
            plan, answer = solved.full(seed)
            outcome = searched(plan)[1].cheapest(Limits(nodes=nodes))
            if outcome.complete or answer.exact is None:
                continue
            assert outcome.bound <= answer.exact.cost + 0.005
            assert outcome.best is None or outcome.best.objective >= answer.exact.cost - 0.005
            unfinished += 1
        assert unfinished > 10


class TestAnyIntegerProgram:
    """Random programs with either sign everywhere, well and ill scaled, against SciPy's HiGHS."""

    @pytest.mark.parametrize("spread", [0, 2, 4])
    def test_optimum_equals_highs(self, spread: int) -> None:
        rng = np.random.default_rng(20 + spread)
        optimal = 0
        for _ in range(120):
            matrix = _random(rng, spread)
            outcome = Search(BareProgram(matrix)).cheapest(WIDE)
            reference = _highs(matrix)
            assert outcome.complete
            assert (outcome.best is None) == (reference.status != 0)
            if outcome.best is not None:
                assert outcome.best.objective == pytest.approx(reference.fun, rel=1e-9, abs=1e-3)
                optimal += 1
        assert optimal > 50

    def test_root_bound_is_safe(self) -> None:
        rng = np.random.default_rng(31)
        for _ in range(150):
            matrix = _random(rng, 6)
            search = Search(BareProgram(matrix))
            if search.relax() is not LpStatus.OPTIMAL:
                continue
            reference = _highs(matrix)
            if reference.status == 0:
                bound = search.bound(search._now)
                assert bound <= reference.fun + 1e-9 * (1 + abs(reference.fun))


def _random(rng: np.random.Generator, spread: int) -> Matrix:
    matrix, width = Matrix(), int(rng.integers(2, 6))
    for _ in range(width):
        scale = 10.0 ** float(rng.integers(-spread // 2, spread // 2 + 1))
        matrix.add_column(
            float(rng.integers(-99, 100)) * scale, 0.0, float(rng.integers(1, 12)), integer=True
        )
    for _ in range(int(rng.integers(1, 5))):
        scale = 10.0 ** int(rng.integers(0, spread + 1))
        coefs = rng.integers(-9, 10, width) * scale
        rhs = float(rng.integers(-10, 40)) * scale
        if coefs.any():
            columns = [int(i) for i in np.nonzero(coefs)[0]]
            sense = RowSense.AT_LEAST if rng.random() < 0.5 else RowSense.AT_MOST
            matrix.add_row(columns, [float(coefs[i]) for i in columns], sense, rhs)
    return matrix


def _highs(matrix: Matrix):
    dense = np.zeros((len(matrix.rows), matrix.width))
    low, high = np.full(len(matrix.rows), -np.inf), np.full(len(matrix.rows), np.inf)
    for i, row in enumerate(matrix.rows):
        dense[i, list(row.columns)] = row.coefs
        if row.sense is RowSense.AT_LEAST:
            low[i] = row.rhs
        else:
            high[i] = row.rhs
    return milp(
        matrix.cost,
        integrality=np.ones(matrix.width),
        bounds=Bounds(matrix.lower, matrix.upper),
        constraints=LinearConstraint(dense, low, high) if len(dense) else (),
        options={"mip_rel_gap": 0.0},
    )


class TestGrain:
    def test_every_cost_is_a_multiple_of_the_grain(self) -> None:
        grains = 0
        for seed in range(120):
            plan, _, workable = solved.boxed(seed)
            grain = whole_grain(Program(plan))
            if not grain:
                continue
            exact = Fraction(str(round(grain, 9)))
            for _, crew in workable:
                steps = checker.cost_of_heads(plan, crew) / exact
                assert abs(steps - round(steps)) < Fraction(1, 1000)
            grains += 1
        assert grains > 25

    def test_where_overtime_costs_money_there_is_none(self) -> None:
        plan = full_plan(np.random.default_rng(0))
        assert whole_grain(Program(plan)) == 0.0
