"""Making a crew of many phases cheaper a few phases at a time, the phases around them held.

Each stretch is a small integer program of its own: the head counts before it are its books, those after
it its last, frozen phase. (Rolling horizons with overlap.) Single phases come first, then longer stretches
once a round of short ones brings little: measured over 8 s on one core, stretches of 1 phase bring the first
crew of 20x8x52 seed 0 from 3.538 to 3.446 million, stretches of 2 to 3.475, of 3 to 3.506, while HiGHS alone
has 3.496; on 10x4x12 rounds of 1 are over in 1 to 4 s and stretches of 2 and 4 go on from there.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from decimal import Decimal
from fractions import Fraction

import numpy as np

from solver.engine import EngineName, whole
from solver.found import Found, Lots, tie_width
from solver.plan import Budget, Category, Phase, Plan
from solver.program import Program
from solver.search import Search

# phases in a stretch, and the seconds HiGHS has for each
ROUNDS = ((1, 0.15), (2, 0.3), (4, 0.5))
# a round that makes the crew cheaper by a smaller share of its cost than this is followed by longer stretches
LITTLE = 0.0005
FEWEST_PHASES = 8
# more head counts than these in a stretch and HiGHS finds nothing in half a second
MOST_HEADS = 48


class Windows:
    """Improves a crew stretch by stretch; `step` does one and says whether there is more to try."""

    def __init__(self, program: Program, search: Search) -> None:
        self._program = program
        self._search = search
        self._queue: Iterator[int] = iter(())
        fitting = MOST_HEADS // max(1, len(program.categories))
        self._rounds = [r for r in ROUNDS if r[0] <= max(2, fitting)]
        self._before: float | None = None  # what the crew cost when the round began

    @property
    def useful(self) -> bool:
        """Short jobs are solved whole."""
        return len(self._program.phases) >= FEWEST_PHASES

    def step(self, best: Found) -> Found | None:
        """A cheaper crew from the next stretch, `best` itself if it found none, None when nothing is left to
        try."""
        first = next(self._queue, None)
        if first is None:
            return best if self._next_round(best) else None
        found = self._reoptimised(best, first)
        if found is None or found.objective >= best.objective - tie_width(best.objective):
            return best
        return found

    def _next_round(self, best: Found) -> bool:
        """Begin a round; False when the last one, of the longest stretches, brought nothing."""
        before, self._before = self._before, best.objective
        if before is not None:
            gain = before - best.objective
            if gain <= LITTLE * abs(before) and len(self._rounds) > 1:
                del self._rounds[0]
            elif gain <= tie_width(before):
                return False
        length = self._rounds[0][0]
        last = len(self._program.phases) - (length > 1)
        self._queue = iter(range(0, last, max(1, length // 2)))
        return True

    def _reoptimised(self, best: Found, first: int) -> Found | None:
        length, seconds = self._rounds[0]
        last = min(first + length, len(self._program.phases))
        part = self._part(best.lots, first, last)
        x = whole(part.matrix, EngineName.HIGHS, seconds=seconds).x
        if x is None:
            return None
        lots = self._spliced(best.lots, part, np.rint(x[: part.head_count]).astype(int).tolist(), first, last)
        objective = self._search.evaluate(lots)
        return None if objective is None else Found(lots, objective)

    def _spliced(self, lots: Lots, part: Program, found: list[int], first: int, last: int) -> Lots:
        new = list(lots)
        for j in range(len(self._program.categories)):
            for t in range(first, last):
                new[self._program.head(j, t)] = found[part.head(j, t - first)]
        return tuple(new)

    def _part(self, lots: Lots, first: int, last: int) -> Program:
        """The stretch, with the phase after it frozen at its head counts."""
        program = self._program
        shown = min(last + 1, len(program.phases))
        caps = self._caps(lots, first, shown)
        part = Program(_stretch(program, lots, first, shown), caps)
        if shown > last:
            for j in range(len(program.categories)):
                column = part.head(j, last - first)
                part.matrix.lower[column] = part.matrix.upper[column] = float(lots[program.head(j, last)])
        return part

    def _caps(self, lots: Lots, first: int, shown: int) -> list[int]:
        """Close limits make a small program easy: no cheaper crew needs several times the people."""
        program = self._program
        most = max(lots, default=0) * 3 + 10
        counts = len(program.categories) * (shown - first)
        return [most] * counts


def _stretch(program: Program, lots: Lots, first: int, shown: int) -> Plan:
    plan = program.plan
    phases = plan.phases[first:shown]
    names = {phase.name for phase in phases}
    rules = tuple(
        rule if rule.phases is None else replace(rule, phases=tuple(n for n in rule.phases if n in names))
        for rule in plan.rules
        if not isinstance(rule, Budget) and (rule.phases is None or names & set(rule.phases))
    )
    categories = tuple(_starting(program, j, lots, first, phases) for j in range(len(plan.categories)))
    works = tuple(replace(w, amounts=w.amounts[first:shown]) for w in plan.works)
    return replace(plan, phases=phases, categories=categories, works=works, rules=rules, own={})


def _starting(program: Program, j: int, lots: Lots, first: int, phases: tuple[Phase, ...]) -> Category:
    """The category with the people of the phase before on its books; opened elsewhere, it is open here."""
    category = program.categories[j]
    span = len(program.phases)
    mine = lots[j * span : (j + 1) * span]
    outside = [n for t, n in enumerate(mine) if not first <= t < first + len(phases)]
    books = category.on_books if first == 0 else _decimal(mine[first - 1] * program.lots[j])
    open_cost = Decimal(0) if any(outside) else category.open_cost
    return replace(category, on_books=books, open_cost=open_cost)


def _decimal(value: Fraction) -> Decimal:
    return Decimal(value.numerator) / Decimal(value.denominator)
