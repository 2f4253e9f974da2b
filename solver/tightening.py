"""Rows that every whole crew satisfies and fractional crews do not: they bring the relaxation nearer.

For each phase alone (no joining, leaving, settling or opening costs) the cheapest whole crew is found in
milliseconds; the pay, overtime and bought-in work of that phase cannot cost less in any crew of the plan.
Measured on the family of tests/family.py (two busy cores): 6x3x6, seeds 0 and 1, HiGHS with one thread
proves in 0.9 and 2.5 s with the rows, with two threads and without them in 1.4 and 8.0 s.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from time import monotonic

from solver.engine import EngineName, whole
from solver.found import Limits, Lots, tie_width
from solver.grain import whole_grain
from solver.matrix import Matrix, RowSense
from solver.plan import Budget, Category, Plan
from solver.program import UNLIMITED_LOTS, Program
from solver.search import Search

NONE = Decimal(0)
# one phase alone is a small program; what is not proved by then gives its bound all the same
SECONDS_IN_ALL = 2.0
OWN_SHARE = 0.1
ENGINE_SECONDS = 0.5
# a first workable crew needs no proof: some 60 nodes a phase, fewer where there are very many phases
FIRST_NODES_IN_ALL = 720
FIRST_NODES = (12, 60)
STUBBORN = Limits(nodes=500)


@dataclass(frozen=True)
class PhaseAlone:
    """The least a phase can cost, and the crew that does it (lots per category; None if none was found)."""

    bound: float
    lots: Lots | None


def phase_alone(plan: Plan, t: int) -> Plan:
    """The plan of phase `t` without what ties it to the others; no crew of the plan pays less there."""
    phase = plan.phases[t]
    rules = tuple(
        rule
        for rule in plan.rules
        if not isinstance(rule, Budget) and (rule.phases is None or phase.name in rule.phases)
    )
    return replace(
        plan,
        phases=(phase,),
        categories=tuple(_untied(c) for c in plan.categories),
        works=tuple(replace(w, amounts=(w.amounts[t],)) for w in plan.works),
        rules=rules,
        own={},
    )


def _untied(category: Category) -> Category:
    return replace(
        category, on_books=NONE, join_cost=NONE, leave_cost=NONE, open_cost=NONE, settling_hours=NONE
    )


class PhasesAlone:
    """Each phase of a program as a program of its own, built once and asked several times."""

    def __init__(self, program: Program) -> None:
        self.program = program
        self._searches: dict[int, Search] = {}

    def _search(self, t: int) -> Search:
        if t not in self._searches:
            part = Program(phase_alone(self.program.plan, t))
            self._searches[t] = Search(part, grain=whole_grain(part))
        return self._searches[t]

    def cheapest(self) -> list[PhaseAlone]:
        """Every phase's cheapest crew on its own, for as many phases as time allows."""
        until = monotonic() + SECONDS_IN_ALL
        found = []
        for t in range(len(self.program.phases)):
            if monotonic() > until:
                break
            found.append(_alone(self._search(t)))
        return found

    def mended(self, lower: Sequence[int]) -> Lots | None:
        """A crew of at least `lower` lots, each phase mended on its own; None where one cannot be."""
        program = self.program
        fewest, most = FIRST_NODES
        limits = Limits(nodes=min(max(fewest, FIRST_NODES_IN_ALL // len(program.phases)), most))
        parts: list[Lots] = []
        for t in range(len(program.phases)):
            search = self._search(t)
            box = search.box()
            for j in range(len(program.categories)):
                box[0][j] = max(box[0][j], lower[program.head(j, t)])
            best = search.cheapest(limits, box=box).best or search.cheapest(STUBBORN, box=box).best
            if best is None:
                return None
            parts.append(best.lots)
        return tuple(lots[j] for j in range(len(program.categories)) for lots in parts)


def _alone(search: Search) -> PhaseAlone:
    outcome = search.cheapest(Limits(nodes=5_000, seconds=OWN_SHARE))
    if outcome.complete or outcome.best is None:
        return PhaseAlone(outcome.bound, None if outcome.best is None else outcome.best.lots)
    part = search.program
    most = [int(outcome.best.objective / cost) if cost > 0 else UNLIMITED_LOTS for cost in part.matrix.cost]
    matrix = Program(part.plan, most[: part.head_count]).matrix
    bound = whole(matrix, EngineName.HIGHS, seconds=ENGINE_SECONDS).bound
    return PhaseAlone(search.rounded(max(bound, outcome.bound)), outcome.best.lots)


def tightened(program: Program, alone: Sequence[PhaseAlone]) -> Matrix:
    """The program's matrix with one more row per phase: its costs are at least the phase's own least."""
    matrix = program.matrix.copy()
    for t, phase in enumerate(alone):
        columns = _costly(program, t)
        if columns and 0 < phase.bound < float("inf"):
            least = phase.bound - tie_width(phase.bound)
            matrix.add_row(columns, [matrix.cost[c] for c in columns], RowSense.AT_LEAST, least)
    return matrix


def _costly(program: Program, t: int) -> list[int]:
    """Columns of phase t that cost money while it runs: pay, overtime, bought-in work."""
    heads = [program.head(j, t) for j in range(len(program.categories))]
    overtime = [column for (_, at), column in program.overtime.items() if at == t]
    bought = [column for (_, at), column in program.bought.items() if at == t]
    return [column for column in (*heads, *overtime, *bought) if program.matrix.cost[column]]
