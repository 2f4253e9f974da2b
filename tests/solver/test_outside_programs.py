"""Published programs given straight to the engines and the search, each with its source and how it is known.

seen: read in a public source. memory: known, not looked up, solved again with SciPy's HiGHS here or
before. computed: by HiGHS or exact arithmetic, not published.
"""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction
from typing import ClassVar

import numpy as np
import pytest
from scipy.optimize import LinearConstraint, milp

from solver.answer import Policy, State
from solver.engine import EngineName, LpStatus, Relaxation, WholeStatus, whole
from solver.found import Limits
from solver.matrix import Matrix, RowSense
from solver.plan import Category, Plan, Presence, Sense
from solver.rounding import rounded
from solver.search import Search
from solver.solve import solve
from tests.solver.bare import BareProgram, largest

ONE_DAY = Decimal(8)  # paid hours; people are counted here, their hours are not used up


class TestWhereRoundingGoesWrong:
    """max c.x, A x <= b, x >= 0 integer. General reference: Glover & Sommer, Pitfalls of rounding in
    discrete management decision problems, Decision Sciences 6 (1975) 211-220 (memory)."""

    CASES: ClassVar = {
        # Bradley, Hax & Magnanti, Applied Mathematical Programming (1977), ch. 9 (memory)
        "BHM": {
            "c": [5, 8],
            "A": [[1, 1], [5, 9]],
            "b": [6, 45],
            "lp": 41.25,
            "x": [2.25, 3.75],
            "ip": 40,
            "at": (0, 5),
            "down": 34,
        },
        # Hillier & Lieberman, integer programming chapter (memory)
        "HL1": {
            "c": [0, 1],
            "A": [[-1, 1], [1, 1]],
            "b": [0.5, 3.5],
            "lp": 2,
            "x": [1.5, 2],
            "ip": 1,
            "at": None,
            "down": None,
        },
        "HL2": {
            "c": [1, 5],
            "A": [[1, 10], [1, 0]],
            "b": [20, 2],
            "lp": 11,
            "x": [2, 1.8],
            "ip": 10,
            "at": (0, 2),
            "down": 7,
        },
        # Anderson, Sweeney & Williams, integer programming exercise (seen): "not obtained by any rounding"
        "ASW": {
            "c": [3, 2],
            "A": [[3, 1], [1, 3], [-1, 1]],
            "b": [9, 7, 1],
            "lp": 10.5,
            "x": [2.5, 1.5],
            "ip": 9,
            "at": (3, 0),
            "down": 8,
        },
    }

    @pytest.fixture(params=CASES, ids=str)
    def case(self, request: pytest.FixtureRequest) -> dict:
        return self.CASES[request.param]

    def matrix(self, case: dict) -> Matrix:
        return largest(case["c"], case["A"], case["b"])

    def test_relaxation(self, case: dict) -> None:
        relaxation = Relaxation(self.matrix(case))
        assert relaxation.solve() is LpStatus.OPTIMAL
        assert -relaxation.objective == pytest.approx(case["lp"], rel=1e-9)
        assert relaxation.x == pytest.approx(case["x"], abs=1e-7)

    @pytest.mark.parametrize("engine", EngineName)
    def test_whole_numbers_by_each_engine(self, case: dict, engine: EngineName) -> None:
        result = whole(self.matrix(case), engine, seconds=5)
        assert result.status is WholeStatus.OPTIMAL
        assert -result.objective == pytest.approx(case["ip"], abs=1e-6)

    def test_whole_numbers_by_our_own_search(self, case: dict) -> None:
        outcome = Search(BareProgram(self.matrix(case))).cheapest(Limits())
        assert outcome.complete
        assert outcome.best is not None
        assert -outcome.best.objective == pytest.approx(case["ip"], abs=1e-6)
        if case["at"] is not None:
            assert outcome.best.lots == case["at"]

    def test_rounding_down_is_worse_and_nearest_breaks_a_row(self, case: dict) -> None:
        search = Search(BareProgram(self.matrix(case)))
        lots = [Fraction(1)] * 2
        down = search.evaluate(rounded(Policy.DOWN, case["x"], lots))
        assert (None if down is None else -down) == (
            None if case["down"] is None else pytest.approx(case["down"])
        )
        assert search.evaluate(rounded(Policy.NEAREST, case["x"], lots)) is None


class TestNotInfeasible:
    """min x + y, x - 0.95 y >= 5, y - 0.95 x >= 5, integer: 200 (computed). CBC as it comes says
    infeasible."""

    def matrix(self) -> Matrix:
        m = Matrix()
        x, y = (m.add_column(1.0, 0.0, 10_000.0, integer=True) for _ in range(2))
        m.add_row([x, y], [1.0, -0.95], RowSense.AT_LEAST, 5.0)
        m.add_row([y, x], [1.0, -0.95], RowSense.AT_LEAST, 5.0)
        return m

    @pytest.mark.parametrize("engine", EngineName)
    def test_by_each_engine(self, engine: EngineName) -> None:
        result = whole(self.matrix(), engine, seconds=5)
        assert (result.status, result.objective) == (WholeStatus.OPTIMAL, pytest.approx(200))

    def test_by_our_own_search(self) -> None:
        outcome = Search(BareProgram(self.matrix())).cheapest(Limits())
        assert outcome.complete
        assert outcome.best is not None
        assert outcome.best.lots == (100, 100)

    def test_as_a_plan(self) -> None:
        """Rules take no negative weights; "all but X" stands for M - X."""
        most = 1000
        categories = tuple(
            Category(name, Decimal(pay), ONE_DAY, at_most=Decimal(most))
            for name, pay in (("X", 1), ("Y", 1), ("All but X", 0), ("All but Y", 0))
        )
        one, part = Decimal(1), Decimal("0.95")
        bound = 5 + part * most
        rules = (
            Presence("X or not", {"X": one, "All but X": one}, Sense.EXACTLY, Decimal(most)),
            Presence("Y or not", {"Y": one, "All but Y": one}, Sense.EXACTLY, Decimal(most)),
            Presence("X over Y", {"X": one, "All but Y": part}, Sense.AT_LEAST, bound),
            Presence("Y over X", {"Y": one, "All but X": part}, Sense.AT_LEAST, bound),
        )
        answer = solve(Plan(categories=categories, rules=rules))
        assert answer.state is State.PROVED
        assert answer.floor == pytest.approx(200)
        assert answer.exact is not None
        assert answer.exact.cost == 200
        assert [n for counts in answer.exact.crew.values() for n in counts] == [100, 100, 900, 900]


class TestTheReferenceItself:
    """What is marked "memory" above, solved with SciPy's HiGHS without anything of ours."""

    @pytest.mark.parametrize(
        "case", TestWhereRoundingGoesWrong.CASES.values(), ids=list(TestWhereRoundingGoesWrong.CASES)
    )
    def test_rounding_cases(self, case: dict) -> None:
        rows = LinearConstraint(np.array(case["A"], dtype=float), -np.inf, case["b"])
        cost = -np.array(case["c"], dtype=float)
        assert -milp(cost, constraints=rows).fun == pytest.approx(case["lp"])
        assert -milp(cost, constraints=rows, integrality=np.ones(2)).fun == pytest.approx(case["ip"])
