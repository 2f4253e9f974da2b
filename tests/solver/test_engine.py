"""The one door to the native engines: statuses, odd shapes, warm changes."""

from __future__ import annotations

import os
import re
import subprocess
import sys
from dataclasses import replace
from decimal import Decimal
from math import inf
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import linprog

import solver
from solver.engine import EngineFailure, EngineName, LpStatus, Relaxation, WholeStatus, whole
from solver.matrix import DualBound, Matrix, Row, RowSense
from solver.plan import Plan
from solver.program import Program
from solver.review import review
from tests.solver.random_plans import random_plan

SENSES = (RowSense.AT_LEAST, RowSense.AT_MOST, RowSense.EQUAL)


def knapsack(rhs: float = 7.0) -> Matrix:
    """min -5x - 4y, 3x + 2y <= 7, whole: x = 1, y = 2."""
    matrix = Matrix()
    x, y = (matrix.add_column(cost, 0.0, 10.0, integer=True) for cost in (-5.0, -4.0))
    matrix.add_row([x, y], [3.0, 2.0], RowSense.AT_MOST, rhs)
    return matrix


def crossed() -> Matrix:
    """2x = 3 for a whole x: no whole solution, a fractional one."""
    matrix = Matrix()
    x = matrix.add_column(1.0, 0.0, 10.0, integer=True)
    matrix.add_row([x], [2.0], RowSense.EQUAL, 3.0)
    return matrix


class TestRelaxation:
    def test_optimum_with_its_prices(self) -> None:
        relaxation = Relaxation(knapsack())
        assert relaxation.solve() is LpStatus.OPTIMAL
        assert relaxation.objective == pytest.approx(-14)
        assert relaxation.x == pytest.approx([0, 3.5])
        assert relaxation.prices == pytest.approx([-2])

    def test_infeasible_and_unbounded(self) -> None:
        matrix = knapsack()
        matrix.rows[0] = Row((0,), (1.0,), RowSense.AT_LEAST, 11.0)
        assert Relaxation(matrix).solve() is LpStatus.INFEASIBLE
        endless = Matrix()
        endless.add_column(-1.0, 0.0, inf)
        assert Relaxation(endless).solve() is LpStatus.UNBOUNDED

    def test_answers_are_copies(self) -> None:
        relaxation = Relaxation(knapsack())
        relaxation.solve()
        x, prices = relaxation.x, relaxation.prices
        relaxation.set_bounds(1, 0.0, 1.0)
        relaxation.solve()
        assert x == pytest.approx([0, 3.5])
        assert prices == pytest.approx([-2])

    def test_bounds_costs_right_sides_and_rows_may_change(self) -> None:
        relaxation = Relaxation(knapsack())
        assert relaxation.solve() is LpStatus.OPTIMAL
        relaxation.set_bounds(1, 0.0, 2.0)
        relaxation.solve()
        assert relaxation.objective == pytest.approx(-8 - 5)
        relaxation.set_rhs(0, 4.0)
        relaxation.solve()
        assert relaxation.objective == pytest.approx(-8)
        relaxation.set_cost(0, -60.0)
        relaxation.solve()
        assert relaxation.x == pytest.approx([4 / 3, 0])
        assert relaxation.add_row(Row((0,), (1.0,), RowSense.AT_MOST, 1.0)) == 1
        relaxation.solve()
        assert relaxation.x == pytest.approx([1, 0.5])
        assert len(relaxation.prices) == 2

    @pytest.mark.parametrize("sense", SENSES)
    @pytest.mark.parametrize("rhs", [-1.0, 0.0, 1.0])
    def test_rows_without_entries_keep_their_place_and_meaning(self, sense: RowSense, rhs: float) -> None:
        matrix = Matrix()
        x = matrix.add_column(1.0, 0.0, 10.0)
        matrix.add_row([], [], sense, rhs)
        matrix.add_row([x], [1.0], RowSense.AT_LEAST, 2.0)
        relaxation = Relaxation(matrix)
        holds = {RowSense.AT_LEAST: rhs <= 0, RowSense.AT_MOST: rhs >= 0, RowSense.EQUAL: rhs == 0}[sense]
        assert (relaxation.solve() is LpStatus.OPTIMAL) == holds
        if holds:
            assert relaxation.x == pytest.approx([2])
            assert relaxation.prices == pytest.approx([0, 1])

    def test_no_columns_and_no_rows(self) -> None:
        relaxation = Relaxation(Matrix())
        assert relaxation.solve() is LpStatus.OPTIMAL
        assert (relaxation.objective, len(relaxation.x), len(relaxation.prices)) == (0, 0, 0)

    def test_a_strange_status_is_a_failure_of_its_own(self, monkeypatch: pytest.MonkeyPatch) -> None:
        relaxation = Relaxation(knapsack())
        monkeypatch.setattr(
            "solver.engine.cbclib", type("Lib", (), {"Cbc_resolve": staticmethod(lambda _: 1)})
        )
        with pytest.raises(EngineFailure, match="CLP answered status 1") as failed:
            relaxation.solve()
        assert failed.value.engine == "CLP"

    def test_random_edits_of_a_warm_program_equal_a_cold_one(self) -> None:
        rng = np.random.default_rng(7)
        for _ in range(15):
            matrix = _random_matrix(rng)
            relaxation = Relaxation(matrix)
            for _ in range(10):
                _edit(rng, matrix, relaxation)
                assert_equals_scipy(matrix, relaxation)


def _random_matrix(rng: np.random.Generator) -> Matrix:
    matrix, width = Matrix(), int(rng.integers(2, 6))
    for _ in range(width):
        matrix.add_column(float(rng.integers(-9, 10)), 0.0, float(rng.integers(1, 20)))
    for _ in range(int(rng.integers(1, 6))):
        coefs = rng.integers(-5, 6, width).astype(float)
        sense = SENSES[int(rng.choice(3, p=[0.45, 0.45, 0.1]))]
        matrix.add_row(range(width), coefs.tolist(), sense, float(rng.integers(-10, 30)))
    return matrix


def _edit(rng: np.random.Generator, matrix: Matrix, relaxation: Relaxation) -> None:
    column, row = int(rng.integers(matrix.width)), int(rng.integers(len(matrix.rows)))
    low = float(rng.integers(0, 3))
    matrix.lower[column], matrix.upper[column] = low, low + float(rng.integers(0, 9))
    relaxation.set_bounds(column, matrix.lower[column], matrix.upper[column])
    matrix.cost[column] = float(rng.integers(-9, 10))
    relaxation.set_cost(column, matrix.cost[column])
    old = matrix.rows[row]
    matrix.rows[row] = Row(old.columns, old.coefs, old.sense, float(rng.integers(-10, 30)))
    relaxation.set_rhs(row, matrix.rows[row].rhs)


def _scipy(matrix: Matrix):
    rows: dict[RowSense, list] = {sense: [] for sense in SENSES}
    for row in matrix.rows:
        dense = np.zeros(matrix.width)
        dense[list(row.columns)] = row.coefs
        rows[row.sense].append((dense, row.rhs))
    up = [(a, b) for a, b in rows[RowSense.AT_MOST]] + [(-a, -b) for a, b in rows[RowSense.AT_LEAST]]
    equal = rows[RowSense.EQUAL]
    return linprog(
        matrix.cost,
        A_ub=np.array([a for a, _ in up]) if up else None,
        b_ub=[b for _, b in up] or None,
        A_eq=np.array([a for a, _ in equal]) if equal else None,
        b_eq=[b for _, b in equal] or None,
        bounds=list(zip(matrix.lower, matrix.upper, strict=True)),
    )


def assert_equals_scipy(matrix: Matrix, relaxation: Relaxation) -> None:
    status, reference = relaxation.solve(), _scipy(matrix)
    assert (status is LpStatus.OPTIMAL) == (reference.status == 0)
    if status is LpStatus.OPTIMAL:
        assert relaxation.objective == pytest.approx(reference.fun, abs=1e-7)
        bound = DualBound(matrix).value(relaxation.prices, np.array(matrix.lower), np.array(matrix.upper))
        assert bound <= relaxation.objective + 1e-9
        assert bound == pytest.approx(relaxation.objective, abs=1e-6)


class TestTheSafeBound:
    """Holds for any prices whatever, however the engine came by them."""

    @pytest.mark.parametrize("scale", [1e-6, 1.0, 1e6])
    def test_never_above_the_optimum(self, scale: float) -> None:
        rng = np.random.default_rng(3)
        below = 0
        for _ in range(60):
            matrix = _random_matrix(rng)
            reference = _scipy(matrix)
            if reference.status != 0:
                continue
            bound = DualBound(matrix)
            lower, upper = np.array(matrix.lower), np.array(matrix.upper)
            for _ in range(5):
                prices = rng.normal(size=len(matrix.rows)) * scale
                assert bound.value(prices, lower, upper) <= reference.fun + 1e-9 * (1 + abs(reference.fun))
                below += 1
        assert below > 100

    def test_holds_on_ill_scaled_plans(self) -> None:
        rng = np.random.default_rng(4)
        for _ in range(40):
            matrix = Program(random_plan(rng)).matrix
            scaled = matrix.copy()
            scaled.cost = [c * 10.0 ** float(rng.integers(-4, 5)) for c in matrix.cost]
            relaxation = Relaxation(scaled)
            if relaxation.solve() is not LpStatus.OPTIMAL:
                continue
            bound = DualBound(scaled).value(relaxation.prices, np.array(scaled.lower), np.array(scaled.upper))
            assert bound <= relaxation.objective + 1e-6 * (1 + abs(relaxation.objective))


@pytest.mark.parametrize("engine", EngineName)
class TestWhole:
    def test_optimum(self, engine: EngineName) -> None:
        result = whole(knapsack(), engine, seconds=5)
        assert result.status is WholeStatus.OPTIMAL
        assert result.objective == result.bound == pytest.approx(-13)
        assert result.x == pytest.approx([1, 2])

    def test_with_a_start(self, engine: EngineName) -> None:
        result = whole(knapsack(), engine, seconds=5, start=[0.0, 3.0])
        assert (result.status, result.objective) == (WholeStatus.OPTIMAL, pytest.approx(-13))

    def test_infeasible_only_for_whole_numbers(self, engine: EngineName) -> None:
        result = whole(crossed(), engine, seconds=5)
        assert (result.status, result.x, result.bound) == (WholeStatus.INFEASIBLE, None, inf)

    @pytest.mark.parametrize(("rhs", "status"), [(0.0, WholeStatus.OPTIMAL), (1.0, WholeStatus.INFEASIBLE)])
    def test_no_columns(self, engine: EngineName, rhs: float, status: WholeStatus) -> None:
        matrix = Matrix()
        matrix.add_row([], [], RowSense.AT_LEAST, rhs)
        assert whole(matrix, engine, seconds=5).status is status
        assert whole(Matrix(), engine, seconds=5).status is WholeStatus.OPTIMAL

    @pytest.mark.parametrize(("rhs", "status"), [(0.0, WholeStatus.OPTIMAL), (1.0, WholeStatus.INFEASIBLE)])
    def test_rows_without_entries(self, engine: EngineName, rhs: float, status: WholeStatus) -> None:
        matrix = knapsack()
        matrix.add_row([], [], RowSense.AT_LEAST, rhs)
        assert whole(matrix, engine, seconds=5).status is status

    def test_no_time_at_all_claims_nothing_it_does_not_know(self, engine: EngineName) -> None:
        matrix = _market_split(np.random.default_rng(1))
        result = whole(matrix, engine, seconds=0.0)
        assert result.status in (WholeStatus.NOTHING, WholeStatus.FEASIBLE)
        assert result.bound <= result.objective
        assert (result.x is None) == (result.status is WholeStatus.NOTHING)

    def test_no_integers_is_a_linear_program(self, engine: EngineName) -> None:
        matrix = knapsack()
        matrix.integer = [False, False]
        assert whole(matrix, engine, seconds=5).objective == pytest.approx(-14)


def _market_split(rng: np.random.Generator) -> Matrix:
    """Cornuejols & Dawande's market split: a few equations in 0/1, hard for branch and bound."""
    matrix = Matrix()
    columns = [matrix.add_column(0.0, 0.0, 1.0, integer=True) for _ in range(40)]
    slacks = []
    for _ in range(5):
        coefs = rng.integers(0, 100, 40).astype(float)
        over, under = matrix.add_column(1.0, 0.0, 1e6), matrix.add_column(1.0, 0.0, 1e6)
        slacks += [over, under]
        terms, values = [*columns, over, under], [*coefs.tolist(), -1.0, 1.0]
        matrix.add_row(terms, values, RowSense.EQUAL, float(coefs.sum() // 2))
    return matrix


class TestNumbersThatAreNone:
    """Engines answer NaN and infinity with silent nonsense; no plan that holds them gets there."""

    @pytest.mark.parametrize("text", ["NaN", "Infinity", "-Infinity", "1e999"])
    @pytest.mark.parametrize(
        "key", ["pay", "hours", "absence", "lot", "on_books", "at_most", "overtime_rate"]
    )
    def test_are_problems_of_the_plan(self, key: str, text: str) -> None:
        plan = random_plan(np.random.default_rng(0), max_phases=1)
        first = replace(plan.categories[0], **{key: Decimal(text)})
        bad: Plan = replace(plan, categories=(first, *plan.categories[1:]))
        assert any(problem.place.startswith(f"categories[0].{key}") for problem in review(bad))


def test_only_the_engine_imports_mip() -> None:
    folder = Path(solver.__file__).parent
    imports = re.compile(r"^\s*(?:import|from)\s+mip\b", re.MULTILINE)
    files = [*folder.glob("*.py"), *folder.parent.glob("desktop/**/*.py")]
    found = [path.name for path in files if imports.search(path.read_text("utf-8"))]
    assert found == ["engine.py"]


def test_native_output_is_sent_to_nowhere_and_ours_is_kept() -> None:
    script = (
        "import os\n"
        "from solver.engine import EngineName, Relaxation, quiet_native_output, whole\n"
        "from tests.solver.test_engine import crossed, knapsack\n"
        "kept = quiet_native_output()\n"
        "Relaxation(crossed()).solve()\n"
        "[whole(m, e, seconds=5) for m in (crossed(), knapsack()) for e in EngineName]\n"
        "os.write(kept, b'ours')\n"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, check=True, env=_environment())
    assert (done.stdout, done.stderr) == (b"ours", b"")


def _environment() -> dict[str, str]:
    return {**os.environ, "PYTHONPATH": str(Path(solver.__file__).parent.parent)}
