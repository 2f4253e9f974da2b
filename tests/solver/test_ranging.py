"""Dual prices and the ranges they hold in: textbook cases, HiGHS's own ranging, and the value itself."""

from __future__ import annotations

from dataclasses import replace

import highspy
import numpy as np
import pytest
from scipy.optimize import linprog

from solver.fractionalprice import FractionalPrices
from solver.matrix import Matrix, RowSense
from solver.program import Program
from solver.ranging import Ranging
from tests.solver.random_plans import random_plan
from tests.solver.reference import reference_costs

# max c.x, A x <= b, x >= 0
TEXTBOOK = {
    # Hillier & Lieberman, Introduction to Operations Research, Wyndor Glass (3/2: seen; rest memory)
    "WYNDOR": ([3, 5], [[1, 0], [0, 2], [3, 2]], [4, 12, 18], 36,
               [0, 1.5, 1], [(2, None), (6, 18), (12, 24)]),
    # Winston, Operations Research: Applications and Algorithms, Dakota Furniture (memory)
    "DAKOTA": ([60, 30, 20], [[8, 6, 1], [4, 2, 1.5], [2, 1.5, 0.5]], [48, 20, 8], 280,
               [0, 10, 10], [(24, None), (16, 24), (20 / 3, 10)]),
}  # fmt: skip


def maximising(c, rows, b) -> Matrix:
    matrix = Matrix()
    for gain in c:
        matrix.add_column(-float(gain), 0.0, np.inf)
    for coefs, rhs in zip(rows, b, strict=True):
        matrix.add_row(range(len(c)), [float(a) for a in coefs], RowSense.AT_MOST, float(rhs))
    return matrix


@pytest.mark.parametrize("name", TEXTBOOK)
def test_textbook_prices_and_ranges(name: str) -> None:
    c, rows, b, best, prices, ranges = TEXTBOOK[name]
    found = Ranging(maximising(c, rows, b))
    assert found.objective == pytest.approx(-best)
    for i, (price, (low, high)) in enumerate(zip(prices, ranges, strict=True)):
        priced = found.priced(i)
        assert -priced.price == pytest.approx(price)
        assert priced.low == pytest.approx(low)
        assert priced.high is None if high is None else priced.high == pytest.approx(high)


def test_nothing_to_range_without_an_optimum() -> None:
    matrix = maximising([1], [[1]], [2])
    matrix.add_row([0], [1.0], RowSense.AT_LEAST, 3.0)
    with pytest.raises(ValueError, match="infeasible"):
        Ranging(matrix)


# ---- random programs ---------------------------------------------------------------------------------


def random_program(rng: np.random.Generator, whole_numbers: bool) -> Matrix:
    """Covering rows, limits and balances; whole numbers make degenerate optima common."""
    width, height = int(rng.integers(2, 6)), int(rng.integers(2, 6))
    draw = (
        (lambda k: rng.integers(1, 5, k).astype(float)) if whole_numbers else (lambda k: rng.uniform(1, 9, k))
    )
    matrix = Matrix()
    for cost in draw(width):
        matrix.add_column(float(cost), 0.0, float(rng.choice([np.inf, 6.0])))
    for _ in range(height):
        coefs = draw(width) * rng.choice([0.0, 1.0], width)
        sense = RowSense(rng.choice(["G", "G", "L", "E"]))
        rhs = float(draw(1)[0]) * (4.0 if sense is RowSense.AT_MOST else 2.0)
        matrix.add_row(range(width), coefs.tolist(), sense, rhs)
    return matrix


def value(matrix: Matrix, row: int, rhs: float) -> float | None:
    """The least cost by SciPy's HiGHS with one right-hand side changed."""
    rows = [replace(r, rhs=rhs) if i == row else r for i, r in enumerate(matrix.rows)]
    sign = {RowSense.AT_LEAST: -1.0, RowSense.AT_MOST: 1.0}
    upper = [r for r in rows if r.sense is not RowSense.EQUAL]
    equal = [r for r in rows if r.sense is RowSense.EQUAL]
    found = linprog(
        matrix.cost,
        A_ub=[[sign[r.sense] * a for a in r.coefs] for r in upper] or None,
        b_ub=[sign[r.sense] * r.rhs for r in upper] or None,
        A_eq=[list(r.coefs) for r in equal] or None,
        b_eq=[r.rhs for r in equal] or None,
        bounds=list(zip(matrix.lower, matrix.upper, strict=True)),
    )
    return float(found.fun) if found.status == 0 else None


@pytest.mark.parametrize("whole_numbers", [False, True], ids=["general", "degenerate"])
def test_the_value_is_linear_within_the_range_and_not_beyond(whole_numbers: bool) -> None:
    rng = np.random.default_rng(11)
    ends = 0
    for _ in range(120):
        matrix = random_program(rng, whole_numbers)
        try:
            found = Ranging(matrix)
        except ValueError:
            continue
        for i, row in enumerate(matrix.rows):
            priced = found.priced(i)
            for end, outwards in ((priced.low, -1.0), (priced.high, 1.0)):
                inside = row.rhs + outwards * 50 if end is None else end
                expected = found.objective + priced.price * (inside - row.rhs)
                assert value(matrix, i, inside - outwards * 1e-9) == pytest.approx(expected, abs=1e-5)
                if end is not None:
                    ends += 1
                    beyond = value(matrix, i, end + outwards * 0.01)
                    past = expected + priced.price * outwards * 0.01
                    assert beyond is None or beyond > past + 1e-7
    assert ends > 200


def test_the_price_is_the_one_for_loosening_where_the_sides_differ() -> None:
    # least cost of x >= 2 and x <= 2 is 2: one less asked saves 1, one more asked is impossible
    matrix = Matrix()
    matrix.add_column(1.0, 0.0, np.inf)
    matrix.add_row([0], [1.0], RowSense.AT_LEAST, 2.0)
    matrix.add_row([0], [1.0], RowSense.AT_MOST, 2.0)
    at_least, at_most = Ranging(matrix).priced(0), Ranging(matrix).priced(1)
    assert (at_least.price, at_least.low, at_least.high) == pytest.approx((1.0, 0.0, 2.0))
    assert at_most.price == 0.0
    assert at_most.low == pytest.approx(2.0)
    assert at_most.high is None


def test_equal_to_the_ranging_of_highs_where_nothing_is_degenerate() -> None:
    rng = np.random.default_rng(5)
    compared = 0
    for _ in range(150):
        matrix = random_program(rng, whole_numbers=False)
        ranges = highs_ranging(matrix)
        if ranges is None:
            continue
        found = Ranging(matrix)
        for i, row in enumerate(matrix.rows):
            price, low, high = ranges[i]
            if price == 0.0:
                continue  # HiGHS ranges the row's activity then, not its right-hand side
            priced = found.priced(i)
            compared += 1
            assert priced.price == pytest.approx(price, rel=1e-6)
            assert (-np.inf if priced.low is None else priced.low) == pytest.approx(low, rel=1e-6, abs=1e-6)
            assert (np.inf if priced.high is None else priced.high) == pytest.approx(high, rel=1e-6, abs=1e-6)
            assert row.rhs == pytest.approx(min(max(row.rhs, low), high))
    assert compared > 100


def highs_ranging(matrix: Matrix) -> list[tuple[float, float, float]] | None:
    """Per row price and range by HiGHS; None where the optimum is degenerate or there is none."""
    highs = highspy.Highs()
    highs.setOptionValue("output_flag", False)
    highs.setOptionValue("presolve", "off")
    for cost, low, high in zip(matrix.cost, matrix.lower, matrix.upper, strict=True):
        highs.addVar(low, high)
        highs.changeColCost(highs.getNumCol() - 1, cost)
    for row in matrix.rows:
        low = row.rhs if row.sense is not RowSense.AT_MOST else -highspy.kHighsInf
        high = row.rhs if row.sense is not RowSense.AT_LEAST else highspy.kHighsInf
        used = [i for i, a in enumerate(row.coefs) if a]
        highs.addRow(
            low, high, len(used), np.array(used, dtype=np.int32), np.array([row.coefs[i] for i in used])
        )
    highs.run()
    if highs.getModelStatus() != highspy.HighsModelStatus.kOptimal:
        return None
    solution, basis = highs.getSolution(), highs.getBasis()
    basic = highspy.HighsBasisStatus.kBasic
    parts = [
        (basis.col_status, solution.col_value, solution.col_dual, matrix.lower, matrix.upper),
        (basis.row_status, solution.row_value, solution.row_dual,
         [r.rhs if r.sense is not RowSense.AT_MOST else -np.inf for r in matrix.rows],
         [r.rhs if r.sense is not RowSense.AT_LEAST else np.inf for r in matrix.rows]),
    ]  # fmt: skip
    for statuses, values, duals, lower, upper in parts:
        for status, x, dual, low, high in zip(statuses, values, duals, lower, upper, strict=True):
            tight = min(abs(x - low), abs(x - high)) < 1e-7
            if (status == basic and tight) or (status != basic and abs(dual) < 1e-7 and low != high):
                return None
    _, ranging = highs.getRanging()
    down, up = ranging.row_bound_dn.value_, ranging.row_bound_up.value_
    return list(zip(solution.row_dual, down, up, strict=True))


# ---- plans -----------------------------------------------------------------------------------------


def test_prices_of_plans_are_what_the_floor_does() -> None:
    """Works and presence rules of random plans, against SciPy's HiGHS on the plan with the number changed."""
    compared = 0
    for seed in range(60):
        plan = random_plan(np.random.default_rng(seed), max_phases=1, features=PLAIN)
        floor_cost = reference_costs(plan)[0]
        if floor_cost is None:
            continue
        prices = FractionalPrices(plan)
        assert prices.floor == pytest.approx(floor_cost, abs=1e-5)
        for i, line in enumerate(Program(plan).lines):
            for k, work in enumerate(plan.works):
                if line.name == work.name and work.amounts[0] > 0:
                    compared += check_work(plan, k, prices.priced(i), floor_cost)
    assert compared > 60


PLAIN = frozenset(
    {"ratio", "share", "presence", "supervision", "moves", "books", "overtime", "absence", "buy_in"}
)


def check_work(plan, k, priced, floor_cost) -> int:
    work = plan.works[k]
    amount = work.amounts[0]
    compared = 0
    low = 0.0 if priced.low is None else max(priced.low, 0.0)
    high = float(amount) * 2 if priced.high is None else priced.high
    for share in (0.05, 0.5, 0.95):
        moved = type(amount)(repr(round(low + share * (high - low), 6)))
        works = (*plan.works[:k], replace(work, amounts=(moved,)), *plan.works[k + 1 :])
        floor_there = reference_costs(replace(plan, works=works))[0]
        expected = floor_cost + priced.price * float(moved - amount)
        assert floor_there == pytest.approx(expected, rel=1e-6, abs=1e-3)
        compared += 1
    return compared
