"""Whether the people present on a day can cover it: a pool of inequalities, and a program where it is open.

Each solve of the day's program (see day) leaves dual prices y, and with them an inequality in the people
present that every covered day of the plan satisfies:

    0 >= y_work . demand + sum_j (sum_g y_g supervision_gj + y_hours_j H_j) m_j

All patterns are tested against the pool at once. A pattern that no inequality rules out is solved; if it is
covered, so are all patterns that differ by more people of categories nobody has to supervise.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from solver.day import FIRST_SERVED, HEAVY, Day, DayRule
from solver.engine import EngineFailure, LpStatus, Relaxation
from solver.matrix import Floats, Ints, Matrix, RowSense
from solver.program import Program
from solver.shortfall import SHORT

Bools = npt.NDArray[np.bool_]
# a rule of the day is kept to within this many people: products of typed numbers in floats
EVEN = 1e-9
_BLOCK = 2_000_000
_REMEMBERED = 400


@dataclass(frozen=True)
class Inequality:
    """sum each[j] m_j >= need on every covered day, in people; `work[k]` is what `need` falls by per hour at
    best output of work k that is taken off the day."""

    each: Floats
    need: float
    work: Floats


class Coverage:
    """Decides patterns of attendance for the days of one program; what it learns serves every crew."""

    def __init__(self, program: Program) -> None:
        self.program = program
        self.drawn = _drawn(program)
        self.growing = [not drawn.any() for drawn in self.drawn.T]
        self._solo = np.array(self.growing)
        self._program = _DayProgram(program, self.drawn)
        self._work = np.zeros((0, len(program.plan.works)))
        self._people = np.zeros((0, len(program.categories)))
        self._hours = np.zeros((0, len(program.categories)))
        self._known: dict[tuple[bytes, bytes], Floats] = {}
        self.solved = 0

    def relevant(self, day: Day) -> list[int]:
        """Categories whose attendance can matter on the day."""
        program = self.program
        found = []
        for j, category in enumerate(program.categories):
            works = any(
                day.demand[k] > 0 and category.output.get(w.name, 0) > 0
                for k, w in enumerate(program.plan.works)
            )
            leads = any(category.name in group for group in program.groups)
            ruled = any(rule.each[j] for rule in day.rules)
            if day.heads[j] and (works or leads or ruled or self.drawn[:, j].any()):
                found.append(j)
        return found

    # ---- deciding ----------------------------------------------------------------------------

    def rules_kept(self, day: Day, patterns: Ints) -> Bools:
        """Whether those present keep every rule of the day."""
        kept = np.ones(len(patterns), dtype=bool)
        for rule in day.rules:
            kept &= self.rule_kept(rule, day, patterns)
        return kept

    def rule_kept(self, rule: DayRule, day: Day, patterns: Ints) -> Bools:
        """Whether those present keep one rule."""
        return _keeps((patterns * day.size) @ rule.each, rule.sense, rule.rhs)

    def maybe(self, day: Day, patterns: Ints, loose: Bools | None = None) -> Bools:
        """False only where a day is surely not covered. In `loose` categories fewer may be present: what
        they draw or break then does not count."""
        people = patterns * day.size
        fine = np.ones(len(patterns), dtype=bool)
        for rule in day.rules:
            fine &= _may_keep(people, rule.each, rule.sense, rule.rhs, loose)
        if len(self._work):
            base, each = self._inequalities(day)
            if loose is not None:
                each = np.where(loose, np.minimum(each, 0.0), each)
            fine[fine] = ~_exceeds(base, each, people[fine])
        return fine

    def hours_kept(self, day: Day, patterns: Ints) -> Bools:
        """Whether those present can do the day's work and supervision; patterns in lexicographic order."""
        people = patterns * day.size
        kept = np.zeros(len(patterns), dtype=bool)
        open_ = np.arange(len(patterns))
        if len(self._work):
            open_ = open_[~_exceeds(*self._inequalities(day), people)]
        key = (day.demand.tobytes(), day.hours.tobytes())
        for covered in self._known.get(key, ()):
            more = self._at_least(people[open_], covered)
            kept[open_[more]] = True
            open_ = open_[~more]
        while len(open_):
            open_ = self._decide_one(day, people, open_, kept, key)
        return kept

    def covered(self, day: Day, patterns: Ints) -> Bools:
        """Whether those present keep every rule and can do the work and supervision."""
        kept = self.rules_kept(day, patterns)
        kept[kept] = self.hours_kept(day, patterns[kept])
        return kept

    def shorts(self, day: Day, pattern: Ints) -> tuple[Floats, Floats]:
        """Hours at best output short per work, and supervision hours short per group, in a period of
        such days."""
        self.solved += 1
        self._program.solve(day, pattern * day.size)
        return self._program.shorts()

    def _decide_one(
        self, day: Day, people: Floats, open_: Ints, kept: Bools, key: tuple[bytes, bytes]
    ) -> Ints:
        """Solve the first open pattern; returns what is open after what that teaches."""
        self.solved += 1
        first = people[open_[0]]
        if self._program.solve(day, first) <= SHORT:
            more = self._at_least(people[open_], first)
            kept[open_[more]] = True
            self._remember(key, first)
            return open_[~more]
        self._learn()
        base, each = self._inequalities(day, self._work[-1:], self._people[-1:], self._hours[-1:])
        gone = _exceeds(base, each, people[open_])
        gone[0] = True
        return open_[~gone]

    def _at_least(self, people: Floats, covered: Floats) -> Bools:
        """Rows with the people of `covered`, or more where more cannot hurt."""
        ahead = people - covered
        more = np.asarray((ahead[:, self._solo] >= -EVEN).all(axis=1))
        return more & np.asarray((np.abs(ahead[:, ~self._solo]) <= EVEN).all(axis=1))

    def _remember(self, key: tuple[bytes, bytes], covered: Floats) -> None:
        known = self._known.get(key, np.zeros((0, len(covered))))
        if len(known) < _REMEMBERED:
            self._known[key] = np.vstack([known, covered])

    def inequalities(self, day: Day) -> list[Inequality]:
        """All that is known: from the pool, and from the rules of the day."""
        none = np.zeros(len(day.demand))
        base, each = self._inequalities(day)
        found = [Inequality(-a, float(d), y) for a, d, y in zip(each, base, self._work, strict=True)]
        for rule in day.rules:
            if rule.sense is not RowSense.AT_MOST:
                found.append(Inequality(rule.each, rule.rhs, none))
            if rule.sense is not RowSense.AT_LEAST:
                found.append(Inequality(-rule.each, -rule.rhs, none))
        return found

    # ---- the pool ----------------------------------------------------------------------------

    def _learn(self) -> None:
        work, groups, hours = self._program.prices()
        self._work = np.vstack([self._work, work])
        self._people = np.vstack([self._people, groups @ self.drawn])
        self._hours = np.vstack([self._hours, hours])

    def _inequalities(
        self, day: Day, work: Floats | None = None, people: Floats | None = None, hours: Floats | None = None
    ) -> tuple[Floats, Floats]:
        """base + each . people <= 0 for every covered day, one row per inequality."""
        work = self._work if work is None else work
        people = self._people if people is None else people
        hours = self._hours if hours is None else hours
        return work @ day.demand, people + hours * day.hours


def _drawn(program: Program) -> Floats:
    """Supervision hours per period that one person of each category (columns) draws from each group."""
    drawn = np.zeros((len(program.groups), len(program.categories)))
    for g in range(len(program.groups)):
        for i in program.charges(g):
            drawn[g, i] = float(program.categories[i].supervision.hours)
    return drawn


def _exceeds(base: Floats, each: Floats, people: Floats) -> Bools:
    """Rows of `people` that break an inequality by more than rounding could."""
    broken = np.zeros(len(people), dtype=bool)
    step = max(_BLOCK // max(len(people), 1), 1)
    for i in range(0, len(base), step):
        value = people @ each[i : i + step].T + base[i : i + step]
        size = people @ np.abs(each[i : i + step]).T + np.abs(base[i : i + step])
        broken |= (value > SHORT + 1e-9 * size).any(axis=1)
    return broken


def _keeps(total: Floats, sense: RowSense, rhs: float) -> Bools:
    if sense is RowSense.AT_LEAST:
        return total >= rhs - EVEN
    if sense is RowSense.AT_MOST:
        return total <= rhs + EVEN
    return np.abs(total - rhs) <= EVEN


def _may_keep(people: Floats, each: Floats, sense: RowSense, rhs: float, loose: Bools | None) -> Bools:
    if loose is None:
        return _keeps(people @ each, sense, rhs)
    fine = np.ones(len(people), dtype=bool)
    if sense is not RowSense.AT_MOST:
        fine &= people @ np.where(loose, np.maximum(each, 0.0), each) >= rhs - EVEN
    if sense is not RowSense.AT_LEAST:
        fine &= people @ np.where(loose, np.minimum(each, 0.0), each) <= rhs + EVEN
    return fine


class _DayProgram:
    """The program of day.py, kept warm and given other people and demands."""

    def __init__(self, program: Program, drawn: Floats) -> None:
        self._people = len(program.categories)
        self._drawn = drawn
        matrix = Matrix()
        used: list[list[int]] = [[] for _ in program.categories]
        served: list[list[tuple[int, float]]] = [[] for _ in program.plan.works]
        led: list[list[int]] = [[] for _ in program.groups]
        for j, category in enumerate(program.categories):
            for k, work in enumerate(program.plan.works):
                if category.output.get(work.name, 0) > 0:
                    used[j].append(matrix.add_column(0.0, 0.0, np.inf))
                    served[k].append((used[j][-1], float(category.output[work.name]) / _best(program, k)))
            for g, group in enumerate(program.groups):
                if category.name in group:
                    used[j].append(matrix.add_column(0.0, 0.0, np.inf))
                    led[g].append(used[j][-1])
        works, groups = len(served), len(led)
        self._short = [matrix.add_column(_weight(k, works), 0.0, np.inf) for k in range(works)]
        self._unled = [matrix.add_column(HEAVY * _weight(g, groups), 0.0, np.inf) for g in range(groups)]
        for columns in used:
            matrix.add_row(columns, [1.0] * len(columns), RowSense.AT_MOST, 0.0)
        for k, able in enumerate(served):
            columns, coefs = [c for c, _ in able], [a for _, a in able]
            matrix.add_row([*columns, self._short[k]], [*coefs, 1.0], RowSense.AT_LEAST, 0.0)
        for g, columns in enumerate(led):
            matrix.add_row([*columns, self._unled[g]], [1.0] * (len(columns) + 1), RowSense.AT_LEAST, 0.0)
        self._relaxation = Relaxation(matrix)
        self._rhs = np.zeros(len(matrix.rows))

    def solve(self, day: Day, people: Floats) -> float:
        """Weighted hours short of a period of such days."""
        rhs = np.concatenate([day.hours * people, day.demand, self._drawn @ people])
        for row in np.nonzero(rhs != self._rhs)[0].tolist():
            self._relaxation.set_rhs(row, float(rhs[row]))
        self._rhs = rhs
        status = self._relaxation.solve()
        if status is not LpStatus.OPTIMAL:
            raise EngineFailure("CLP", f"{status} for a day on which anything may be short")
        return self._relaxation.objective

    def shorts(self) -> tuple[Floats, Floats]:
        """Hours short per work and per group in the last solve."""
        x = self._relaxation.x
        return x[self._short], x[self._unled]

    def prices(self) -> tuple[Floats, Floats, Floats]:
        """Dual prices of the last solve per work, group and hour of a category, of their right signs."""
        y = self._relaxation.prices
        hours, works = self._people, self._people + len(self._short)
        return np.maximum(y[hours:works], 0.0), np.maximum(y[works:], 0.0), np.minimum(y[:hours], 0.0)


def _weight(rank: int, count: int) -> float:
    return 1.0 + FIRST_SERVED * (count - 1 - rank)


def _best(program: Program, k: int) -> float:
    return float(program.best_output(k))
