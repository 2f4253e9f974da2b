"""One phase with its head counts given: what is short, what more could be delivered, what running it costs.

minimise first the supervision hours short, then the work short (hours at each work's best output), or,
where nothing is short, the cost of overtime and of units bought in; or maximise the extra of one line.

    hours        sum_k e_jk + sum_g s_jg - v_j + settling_j p_j <= L A_j n_j
    overtime     v_j <= L overtime_hours_j n_j
    joined       p_j >= n_j - before_j
    work         sum_j (output_jk / best_k) e_jk + b_k / best_k + short_k - extra_k = amount_k / best_k
    supervision  sum_j s_jg + short_g - extra_g = L sum_i hours_i n_i
    cap          sum_g short_g <= S

Head counts stand on the right only, so dual prices y give an inequality in head counts alone: the least
shortage is at least y . rhs(n), for every n.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import Enum
from fractions import Fraction

import numpy as np

from solver.engine import EngineFailure, LpStatus, Relaxation
from solver.matrix import Floats, Matrix, RowSense
from solver.program import Program

# hours
SECOND = 1 / 3600
SHORT = 1e-6


class Aim(Enum):
    """What the phase's program minimises."""

    SUPERVISION = "supervision"
    WORK = "work"
    COST = "cost"


@dataclass(frozen=True)
class Prices:
    """least aim >= base + sum_j now_j n_j + before_j n_j(phase before) + cap x S, in people.

    `settled` adds, per category, what hours that settling in needs and nobody has are counted as there.
    """

    base: float
    now: Floats
    before: Floats
    cap: float
    settled: dict[int, float]


class Shortfall:
    """The program of phase `t`; solved again and again with other head counts (people, as floats)."""

    def __init__(self, program: Program, t: int) -> None:
        self.program = program
        self.t = t
        self._matrix = Matrix()
        self._people = len(program.categories)
        # each row's right-hand side is constant + now . n_t + before . n_t-1
        self._constant: list[float] = []
        self._now: list[dict[int, float]] = []
        self._before: list[dict[int, float]] = []
        self._costs: dict[Aim, dict[int, float]] = {aim: {} for aim in Aim}
        self._effort: dict[tuple[int, int], int] = {}
        self._guidance: dict[tuple[int, int], int] = {}
        self._hours_row: dict[int, int] = {}
        self.overtime: dict[int, int] = {}
        self.bought: dict[int, int] = {}
        self._add_hours_columns()
        self._add_hours_rows()
        works, groups = len(program.plan.works), len(program.groups)
        self.work_short, self.work_extra = self._slack_columns(works, Aim.WORK)
        self.group_short, self.group_extra = self._slack_columns(groups, Aim.SUPERVISION)
        self.work_rows = [self._add_work_row(k) for k in range(works)]
        for g in range(groups):
            self._add_group_row(g)
        self._cap = self._row(self.group_short, [1.0] * groups, RowSense.AT_MOST, 0.0)
        self._relaxation = Relaxation(self._matrix)
        self._priced: dict[int, float] = {}
        self._bounds = {c: (self._matrix.lower[c], self._matrix.upper[c]) for c in range(self._matrix.width)}
        self._rhs = list(self._constant)
        self.hair = min(SHORT + 1e-14 * max(map(abs, self._constant), default=0.0), SECOND)
        self._unsettled: dict[int, float] = {}

    # ---- building ----------------------------------------------------------------------------

    def _row(
        self,
        columns: Sequence[int],
        coefs: Sequence[float],
        sense: RowSense,
        constant: float,
        now: dict[int, float] | None = None,
        before: dict[int, float] | None = None,
    ) -> int:
        self._constant.append(constant)
        self._now.append(now or {})
        self._before.append(before or {})
        return self._matrix.add_row(columns, coefs, sense, constant)

    def _free(self) -> int:
        return self._matrix.add_column(0.0, 0.0, np.inf)

    def _add_hours_columns(self) -> None:
        program = self.program
        for j, category in enumerate(program.categories):
            for k, work in enumerate(program.plan.works):
                if category.output.get(work.name, 0) > 0:
                    self._effort[j, k] = self._free()
            for g, group in enumerate(program.groups):
                if category.name in group:
                    self._guidance[j, g] = self._free()
        for k, work in enumerate(program.plan.works):
            if work.buy_in_price is not None:
                most = program.matrix.upper[program.bought[k, self.t]]
                self.bought[k] = self._matrix.add_column(0.0, 0.0, most)
                self._costs[Aim.COST][self.bought[k]] = float(work.buy_in_price)

    def _add_hours_rows(self) -> None:
        program, length = self.program, self.program.periods(self.t)
        for j, category in enumerate(program.categories):
            used = [c for (i, _), c in (*self._effort.items(), *self._guidance.items()) if i == j]
            if not used and not category.settling_hours:
                continue
            coefs = [1.0] * len(used)
            if category.overtime_hours > 0:
                over = self.overtime[j] = self._free()
                self._costs[Aim.COST][over] = float(category.overtime_rate)
                used, coefs = [*used, over], [*coefs, -1.0]
                each = float(length * Fraction(category.overtime_hours))
                self._row([over], [1.0], RowSense.AT_MOST, 0.0, {j: each})
            if category.settling_hours > 0:
                joined = self._joined(j)
                used, coefs = [*used, joined], [*coefs, float(category.settling_hours)]
            attended = {j: float(length * program.attended[j])}
            self._hours_row[j] = self._row(used, coefs, RowSense.AT_MOST, 0.0, attended)

    def _joined(self, j: int) -> int:
        column = self._free()
        books = float(self.program.categories[j].on_books)
        first = self.t == 0
        self._row(
            [column],
            [1.0],
            RowSense.AT_LEAST,
            -books if first else 0.0,
            {j: 1.0},
            None if first else {j: -1.0},
        )
        return column

    def _slack_columns(self, count: int, aim: Aim) -> tuple[list[int], list[int]]:
        short = [self._free() for _ in range(count)]
        extra = [self._free() for _ in range(count)]
        self._costs[aim].update(dict.fromkeys(short, 1.0))
        return short, extra

    def _add_work_row(self, k: int) -> int:
        program, work, best = self.program, self.program.plan.works[k], self.program.best_output(k)
        columns = [self.work_short[k], self.work_extra[k]]
        coefs = [1.0, -1.0]
        for j, category in enumerate(program.categories):
            if (j, k) in self._effort:
                columns.append(self._effort[j, k])
                coefs.append(float(Fraction(category.output[work.name]) / best))
        if k in self.bought:
            columns.append(self.bought[k])
            coefs.append(float(1 / best))
        return self._row(columns, coefs, RowSense.EQUAL, float(Fraction(work.amounts[self.t]) / best))

    def _add_group_row(self, g: int) -> None:
        program = self.program
        columns = [self.group_short[g], self.group_extra[g]]
        coefs = [1.0, -1.0]
        for j in range(self._people):
            if (j, g) in self._guidance:
                columns.append(self._guidance[j, g])
                coefs.append(1.0)
        length = program.periods(self.t)
        drawn = {
            i: float(length * Fraction(program.categories[i].supervision.hours)) for i in program.charges(g)
        }
        self._row(columns, coefs, RowSense.EQUAL, 0.0, drawn)

    # ---- asking ------------------------------------------------------------------------------

    def set_heads(self, now: Sequence[float], before: Sequence[float]) -> None:
        """Give the head counts of this phase and of the one before, in people.

        Where settling in takes more hours than a category has, the missing ones are lent: that miss is a
        line of its own, and here the category simply has no hours.
        """
        self._unsettled = self._missing_to_settle(now, before)
        lent = {self._hours_row[j]: hours for j, hours in self._unsettled.items()}
        for row in range(len(self._constant)):
            if self._now[row] or self._before[row]:
                rhs = self._constant[row] + lent.get(row, 0.0)
                rhs += sum(a * now[j] for j, a in self._now[row].items())
                rhs += sum(a * before[j] for j, a in self._before[row].items())
                self._set_rhs(row, rhs)

    def _missing_to_settle(self, now: Sequence[float], before: Sequence[float]) -> dict[int, float]:
        program, length = self.program, self.program.periods(self.t)
        missing: dict[int, float] = {}
        for j in self._hours_row:
            category = program.categories[j]
            if category.settling_hours > 0 and now[j] > before[j]:
                each = float(length * (program.attended[j] + Fraction(category.overtime_hours)))
                lack = float(category.settling_hours) * (now[j] - before[j]) - each * now[j]
                if lack > 0:
                    missing[j] = lack
        return missing

    def _set_rhs(self, row: int, rhs: float) -> None:
        if self._rhs[row] != rhs:
            self._rhs[row] = rhs
            self._relaxation.set_rhs(row, rhs)

    def allow(self, columns: Sequence[int], most: Sequence[float]) -> None:
        """Let the columns reach at most `most` (from 0)."""
        for column, value in zip(columns, most, strict=True):
            if self._bounds[column][1] != value:
                self._bounds[column] = (0.0, value)
                self._relaxation.set_bounds(column, 0.0, value)

    def price(self, column: int) -> float:
        """What the plan asks for one unit or hour of the column, money."""
        return self._costs[Aim.COST].get(column, 0.0)

    def most(self, column: int) -> float:
        """The column's upper bound."""
        return self._bounds[column][1]

    def cap_supervision(self, total: float) -> None:
        """Limit the supervision hours short in all."""
        self._set_rhs(self._cap, total)

    def minimise(self, aim: Aim) -> float | None:
        """The least of `aim`, None if the phase cannot be run within what is allowed."""
        return self._minimise(self._costs[aim])

    def most_extra(self, column: int) -> float | None:
        """The most an `extra` column can reach, None as for `minimise`."""
        least = self._minimise({column: -1.0})
        return None if least is None else -least

    def minimise_costs(self, costs: dict[int, float]) -> float | None:
        """The least of a sum over columns, None as for `minimise`."""
        return self._minimise(costs)

    def _minimise(self, costs: dict[int, float]) -> float | None:
        for column in self._priced.keys() - costs.keys():
            self._relaxation.set_cost(column, 0.0)
        for column, cost in costs.items():
            if self._priced.get(column) != cost:
                self._relaxation.set_cost(column, cost)
        self._priced = dict(costs)
        status = self._relaxation.solve()
        if status is LpStatus.UNBOUNDED:
            raise EngineFailure("CLP", "unbounded for a phase whose hours are finite")
        return self._relaxation.objective if status is LpStatus.OPTIMAL else None

    @property
    def x(self) -> Floats:
        """Columns of the last solve."""
        return self._relaxation.x

    def prices(self) -> Prices:
        """The inequality in head counts that the last solve's dual prices give."""
        y = self._relaxation.prices
        now, before = np.zeros(self._people), np.zeros(self._people)
        for row, price in enumerate(y):
            for j, a in self._now[row].items():
                now[j] += price * a
            for j, a in self._before[row].items():
                before[j] += price * a
        base = float(y @ np.array(self._constant)) + self._bounded_part(y)
        settled = {j: float(y[self._hours_row[j]]) * lent for j, lent in self._unsettled.items()}
        return Prices(base, now, before, float(y[self._cap]), settled)

    def _bounded_part(self, y: Floats) -> float:
        """What columns at a finite upper bound add: bought-in units cheaper than their line's price."""
        total = 0.0
        for k, column in self.bought.items():
            cost = self._priced.get(column, 0.0)
            reduced = cost - y[self.work_rows[k]] * float(1 / self.program.best_output(k))
            total += min(reduced, 0.0) * self._bounds[column][1]
        return total
