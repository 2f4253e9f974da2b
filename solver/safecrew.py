"""The cheapest whole crew for a wanted chance of covered days.

Whole crews are looked at cheapest first (see search); the first whose chance is high enough in every phase
is the answer. A box of crews is dropped unseen when even its easiest day does not reach the chance. Where
there are several phases, each phase alone is solved first: what its cheapest safe crew costs is a row that
lifts the bound of all together. A crew found by climbing limits the search, and stands when time runs out.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from itertools import cycle
from math import floor, inf
from time import monotonic

import numpy as np

from solver import heads
from solver.chances import SAME, Chances
from solver.found import Found, Limits, Lots, tie_width
from solver.grain import whole_grain
from solver.matrix import Floats, Matrix, RowSense
from solver.plan import Budget, Plan
from solver.program import UNLIMITED_LOTS, Program
from solver.saferows import SafeRows
from solver.search import Search

NODES = 400_000
CLIMBS = 400


@dataclass(frozen=True)
class Safe:
    """The cheapest crew known for `wanted`; none costs less than `bound`. Proved: nothing better exists (or,
    with `best` None, nothing at all)."""

    wanted: float
    best: Found | None
    bound: float
    proved: bool


class SafeSearch:
    """Finds safe crews of one program; shares chances and what was learned between questions."""

    def __init__(self, program: Program, chances: Chances, exact: Found) -> None:
        self.program = program
        self.chances = chances
        self.exact = exact
        self._search = Search(program, grain=whole_grain(program))

    def cheapest(self, wanted: float, seconds: float, known: Sequence[Found] = ()) -> Safe:
        """The cheapest crew with at least the chance `wanted` in every phase.

        `known` are crews worth a look. Stops after `seconds`.
        """
        until = monotonic() + seconds
        floors = self._phase_floors(wanted, until)
        if floors is None:
            return Safe(wanted, None, inf, True)
        candidates = [self.exact, *known, *self._put_together(floors)]
        start = self._start(wanted, candidates, monotonic() + max(until - monotonic(), 0.0) / 2)
        if start is not None:
            start = self._replanned(wanted, floors, start, monotonic() + max(until - monotonic(), 0.0) / 2)
        return self._search_all(wanted, floors, start, until)

    # ---- in order of cost --------------------------------------------------------------------

    def _search_all(
        self,
        wanted: float,
        floors: Sequence[Safe],
        start: Found | None,
        until: float,
        window: int | None = None,
    ) -> Safe:
        """`window`: only that phase's head counts may differ from `start`."""
        money = min((float(most) for most in self.program.budget_of.values()), default=inf)
        money = money if start is None else start.objective
        limit = money + tie_width(money) if money < inf else inf
        program, matrix = self._tightened(limit, floors)
        if window is not None and start is not None:
            self._hold_others(matrix, start.lots, window)
        rows = SafeRows(program, matrix, self.chances, wanted)
        search = Search(program, matrix, grain=self._search.grain)
        pay = np.array(matrix.cost[: program.head_count])

        def worth(lower: Floats, upper: Floats) -> bool:
            spent = limit - float(pay @ lower[: len(pay)])
            rows.follow(search, lower, upper)
            return self._worth(wanted, spent, lower, upper)

        limits = Limits(NODES, max(until - monotonic(), 0.05))
        crews = search.in_order(limits, worth=worth, cutoff=limit)
        best, key = start, None if start is None else heads.preference(program, start.lots)
        for found in crews:
            if best is not None and found.objective > best.objective + tie_width(best.objective):
                break
            mine = heads.preference(program, found.lots)
            cheaper = best is None or found.objective < best.objective - tie_width(best.objective)
            if (cheaper or key is None or mine < key) and self._safe(found.lots, wanted):
                best, key = found, mine
        bound = crews.bound
        proved = bound == inf or (best is not None and bound > best.objective - tie_width(best.objective))
        return Safe(wanted, best, best.objective if proved and best else bound, proved)

    def _worth(self, wanted: float, spent: float, lower: Floats, upper: Floats) -> bool:
        """Whether a box may hold a safe crew."""
        return all(
            self.chances.most_in(t, lower, upper, spent) >= wanted - SAME
            for t in range(len(self.program.phases))
        )

    def _safe(self, lots: Lots, wanted: float) -> bool:
        return self.chances.least(lots, wanted) >= wanted - SAME

    def _tightened(self, limit: float, floors: Sequence[Safe]) -> tuple[Program, Matrix]:
        """The program with head counts that `limit` money pays for, and the rows of the phases alone."""
        caps = [int(v) for v in self.program.matrix.upper[: self.program.head_count]]
        for i, pay in enumerate(self.program.matrix.cost[: len(caps)]):
            if pay > 0 and limit < inf:
                caps[i] = max(min(caps[i], floor(limit / pay)), int(self.program.matrix.lower[i]))
        program = Program(self.program.plan, caps)
        matrix = program.matrix.copy()
        for t, alone in enumerate(floors):
            if alone.bound == -inf:
                continue
            columns = _running_columns(program, t)
            costs = [matrix.cost[c] for c in columns]
            matrix.add_row(columns, costs, RowSense.AT_LEAST, alone.bound - tie_width(alone.bound))
        return program, matrix

    # ---- phases alone ------------------------------------------------------------------------

    def _phase_floors(self, wanted: float, until: float) -> list[Safe] | None:
        """Each phase solved alone where there are several; None if one of them cannot be made safe."""
        span = len(self.program.phases)
        if span == 1:
            return []
        found = []
        for t in range(span):
            share = max(until - monotonic(), 0.0) / 3 / (span - t)
            alone = _alone(self.program.plan, t, self._mine(t), wanted, share)
            if alone.proved and alone.best is None:
                return None
            found.append(alone)
        return found

    def _mine(self, t: int) -> Lots:
        return tuple(self.exact.lots[self.program.head(j, t)] for j in range(len(self.program.categories)))

    def _put_together(self, floors: Sequence[Safe]) -> list[Found]:
        """The phases' own crews side by side."""
        crews = [alone.best.lots for alone in floors if alone.best is not None]
        if not floors or len(crews) < len(floors):
            return []
        lots = tuple(crew[j] for j in range(len(self.program.categories)) for crew in crews)
        return [Found(lots, inf)]

    def _replanned(self, wanted: float, floors: Sequence[Safe], best: Found, until: float) -> Found:
        """Each phase solved again with the others held, until none gets cheaper; nothing for one phase."""
        span = len(self.program.phases)
        unchanged = 0
        for t in cycle(range(span)):
            if unchanged >= span or span == 1 or monotonic() > until:
                return best
            found = self._search_all(wanted, floors, best, until, window=t).best
            unchanged = 0 if found is not None and found.lots != best.lots else unchanged + 1
            best = found or best
        raise AssertionError("a plan without phases")

    def _hold_others(self, matrix: Matrix, lots: Lots, window: int) -> None:
        span = len(self.program.phases)
        for i, n in enumerate(lots):
            if i % span != window:
                matrix.lower[i] = matrix.upper[i] = float(n)

    # ---- climbing ----------------------------------------------------------------------------

    def _start(self, wanted: float, candidates: Sequence[Found], until: float) -> Found | None:
        """The cheapest of the candidates made safe, then made cheaper one lot at a time."""
        best: Found | None = None
        for candidate in candidates:
            lots = self._climbed(candidate.lots, wanted, until)
            objective = None if lots is None else self._search.evaluate(lots)
            if lots is not None and objective is not None and (best is None or objective < best.objective):
                best = Found(lots, objective)
        return None if best is None else self._thinned(best, wanted, until)

    def _climbed(self, lots: Lots, wanted: float, until: float) -> Lots | None:
        """`lots` with people added, each time those that raise the chance most for their pay."""
        for _ in range(CLIMBS):
            t, chance = self._worst_phase(lots)
            if chance >= wanted - SAME:
                return lots
            if monotonic() > until:
                return None
            better = self._best_addition(lots, t, chance)
            if better is None:
                return None
            lots = better
        return None

    def _worst_phase(self, lots: Lots) -> tuple[int, float]:
        values = [chance.value for chance in self.chances.of(lots)]
        t = int(np.argmin(values))
        return t, values[t]

    def _best_addition(self, lots: Lots, t: int, chance: float) -> Lots | None:
        best, most = None, 0.0
        for j in range(len(self.program.categories)):
            i = self.program.head(j, t)
            if lots[i] >= min(self.program.matrix.upper[i], UNLIMITED_LOTS):
                continue
            more = (*lots[:i], lots[i] + 1, *lots[i + 1 :])
            gain = self.chances.of_day(self.chances.days.of(t, more)).value - chance
            value = gain / max(self.program.matrix.cost[i], 1e-9)
            if gain > SAME and value > most:
                best, most = more, value
        return best

    def _thinned(self, best: Found, wanted: float, until: float) -> Found:
        """One lot fewer somewhere, or exchanged, as long as that is cheaper and still safe."""
        improved = True
        while improved and monotonic() < until:
            improved = False
            for lots in _neighbours(best.lots, len(self.program.phases)):
                objective = self._search.evaluate(lots)
                if objective is None or objective >= best.objective - tie_width(best.objective):
                    continue
                if self._safe(lots, wanted):
                    best, improved = Found(lots, objective), True
                    break
                if monotonic() > until:
                    break
        return best


def _neighbours(lots: Lots, span: int) -> list[Lots]:
    """Crews with one lot fewer, or one moved to another category of the phase."""
    found = []
    for i, n in enumerate(lots):
        if n == 0:
            continue
        fewer = (*lots[:i], n - 1, *lots[i + 1 :])
        found.append(fewer)
        for k in range(i % span, len(lots), span):
            if k != i:
                found.append((*fewer[:k], fewer[k] + 1, *fewer[k + 1 :]))
    return found


def _running_columns(program: Program, t: int) -> list[int]:
    """Columns whose money is spent in phase t whatever the other phases do: pay, overtime, bought-in work."""
    columns = [program.head(j, t) for j in range(len(program.categories))]
    columns += [c for (_, at), c in program.overtime.items() if at == t]
    return columns + [c for (_, at), c in program.bought.items() if at == t]


def _alone(plan: Plan, t: int, exact: Lots, wanted: float, seconds: float) -> Safe:
    """Phase t with nothing asked of the others: nobody joins, leaves or settles in, no budget."""
    free = Decimal(0)
    single = replace(
        plan,
        phases=(plan.phases[t],),
        categories=tuple(
            replace(c, join_cost=free, leave_cost=free, open_cost=free, settling_hours=free)
            for c in plan.categories
        ),
        works=tuple(replace(w, amounts=(w.amounts[t],)) for w in plan.works),
        rules=tuple(r for r in plan.rules if not isinstance(r, Budget)),
        own={},
    )
    program = Program(single)
    chances = Chances(program)
    chances.settle(exact)
    return SafeSearch(program, chances, Found(exact, inf)).cheapest(wanted, seconds)
