"""A plan whose workload is a number between two ends: 1 is the heavier end.

The matrix program of the plan at the heavier end, with one column w for the workload:

    work   sum_j output_jk e_jkt + b_kt - amount_kt w >= 0      for the works that are scaled
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from decimal import Decimal
from math import floor, inf

from solver.corners import Corner, corners
from solver.engine import LpStatus, Relaxation
from solver.found import Lots, tie_width
from solver.grain import whole_grain
from solver.matrix import Matrix
from solver.plan import Plan
from solver.program import Program
from solver.search import Search


def scaled(plan: Plan, work: str | None, factor: Decimal) -> Plan:
    """`plan` with the amounts of one work, or of all, times `factor`."""
    works = tuple(
        replace(w, amounts=tuple(amount * factor for amount in w.amounts)) if work in (None, w.name) else w
        for w in plan.works
    )
    return replace(plan, works=works)


class Workload:
    """The program with its workload column; `caps` limit head counts in lots (None: as the plan does)."""

    def __init__(
        self,
        plan: Plan,
        work: str | None,
        caps: Sequence[int] | None = None,
        *,
        open_ended: bool = False,
    ) -> None:
        """`plan` is the plan at the heavier end."""
        self.program = Program(plan, caps, open_ended=open_ended)
        self.grain = whole_grain(self.program)
        self.matrix, self.column = self._with_workload(work)
        self.pulls = [
            (row, -one.coefs[one.columns.index(self.column)])
            for row, one in enumerate(self.matrix.rows)
            if self.column in one.columns
        ]

    def _with_workload(self, work: str | None) -> tuple[Matrix, int]:
        matrix = self.program.matrix.copy()
        column = matrix.add_column(0.0, 1.0, 1.0)
        for (k, _), row in self.program.work_row.items():
            old = matrix.rows[row]
            if old.rhs and work in (None, self.program.plan.works[k].name):
                matrix.rows[row] = replace(
                    old, columns=(*old.columns, column), coefs=(*old.coefs, -old.rhs), rhs=0.0
                )
        return matrix, column

    def search(self, low: float, high: float, slope: float = 0.0) -> Search:
        """A search for the least of cost - slope x workload, workloads from `low` to `high`."""
        matrix = self.matrix.copy()
        matrix.lower[self.column], matrix.upper[self.column] = low, high
        matrix.cost[self.column] = -slope
        return Search(self.program, matrix, grain=0.0 if slope else self.grain)


class Relaxed:
    """Fractional crews at every workload."""

    def __init__(self, workload: Workload) -> None:
        self._workload = workload
        self._relaxation = Relaxation(workload.matrix)

    def reach(self, low: float) -> float | None:
        """The largest workload up to 1 that fractional people can do; None if not even `low`."""
        return _reach(self._relaxation, self._workload, low)

    def corners(self, low: float, high: float) -> list[Corner]:
        """Cost of the cheapest fractional crew between two workloads it can do."""
        return corners(self._at, low, high)

    def lots(self, at: float) -> list[float]:
        """The cheapest fractional crew at one workload."""
        self._at(at)
        return [float(v) for v in self._relaxation.x[: self._workload.program.head_count]]

    def _at(self, at: float) -> Corner:
        return _cost_at(self._relaxation, self._workload, at)


class CrewRuns:
    """What crews with given head counts can do, and at what cost."""

    def __init__(self, workload: Workload) -> None:
        self._workload = workload
        self._relaxation = Relaxation(workload.matrix)
        self._now: Lots | None = None

    def reach(self, lots: Lots, low: float) -> float | None:
        """The largest workload up to 1 that the crew can do; None if not even `low`."""
        if not self._fits(lots):
            return None
        self._take(lots)
        return _reach(self._relaxation, self._workload, low)

    def corners(self, lots: Lots, low: float, high: float) -> list[Corner]:
        """Cost of the crew between two workloads it can do."""
        self._take(lots)
        return corners(lambda at: _cost_at(self._relaxation, self._workload, at), low, high)

    def _fits(self, lots: Lots) -> bool:
        program = self._workload.program
        within = all(program.matrix.lower[i] <= n <= program.matrix.upper[i] for i, n in enumerate(lots))
        return within and all(line.margin(lots) >= 0 for line in program.head_lines)

    def _take(self, lots: Lots) -> None:
        if lots == self._now:
            return
        self._now = lots
        for i, n in enumerate(lots):
            self._relaxation.set_bounds(i, float(n), float(n))
        for switch, served in self._workload.program.switches.items():
            on = float(any(lots[i] for i in served))
            self._relaxation.set_bounds(switch, on, on)


def _reach(relaxation: Relaxation, workload: Workload, low: float) -> float | None:
    for column, cost in enumerate(workload.matrix.cost):
        if cost:
            relaxation.set_cost(column, 0.0)
    relaxation.set_bounds(workload.column, low, 1.0)
    relaxation.set_cost(workload.column, -1.0)
    status = relaxation.solve()
    most = -relaxation.objective
    relaxation.set_cost(workload.column, 0.0)
    for column, cost in enumerate(workload.matrix.cost):
        if cost:
            relaxation.set_cost(column, cost)
    return most if status is LpStatus.OPTIMAL else None


def _cost_at(relaxation: Relaxation, workload: Workload, at: float) -> Corner:
    """Cost and a slope of it at one workload; infinite where it cannot be done."""
    relaxation.set_bounds(workload.column, at, at)
    if relaxation.solve() is not LpStatus.OPTIMAL:
        return Corner(at, inf, 0.0)
    prices = relaxation.prices
    slope = sum(float(prices[row]) * amount for row, amount in workload.pulls)
    return Corner(at, relaxation.objective, slope)


def caps_for(program: Program, cost: float) -> list[int]:
    """No crew that costs at most `cost` has more of anyone than this, in lots."""
    caps = [int(v) for v in program.matrix.upper[: program.head_count]]
    for i, pay in enumerate(program.matrix.cost[: len(caps)]):
        if pay > 0:
            most = floor((cost + tie_width(cost)) / pay)
            caps[i] = max(min(caps[i], most), int(program.matrix.lower[i]))
    return caps
