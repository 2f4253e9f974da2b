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

from solver.matrix import Matrix, RowSense
from solver.plan import Budget, Category, Plan
from solver.program import Program
from solver.search import Limits, Lots, Search, tie_width, whole_grain

NONE = Decimal(0)
# one phase alone is a small program; what is not proved by then gives its bound all the same
ALONE = Limits(nodes=20_000, seconds=1.0)


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


def phases_alone(program: Program, lower: Sequence[float] | None = None) -> list[PhaseAlone]:
    """Every phase's cheapest crew on its own; `lower` asks for at least these lots per head count."""
    return [_alone(program, t, lower) for t in range(len(program.phases))]


def _alone(program: Program, t: int, lower: Sequence[float] | None) -> PhaseAlone:
    part = Program(phase_alone(program.plan, t))
    search = Search(part, grain=whole_grain(part))
    box = search.box()
    if lower is not None:
        for j in range(len(program.categories)):
            box[0][j] = max(box[0][j], lower[program.head(j, t)])
    outcome = search.cheapest(ALONE, box=box)
    return PhaseAlone(outcome.bound, None if outcome.best is None else outcome.best.lots)


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
