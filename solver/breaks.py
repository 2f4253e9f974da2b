"""Why a crew is not workable, as inequalities in head counts that split the miss among categories.

For hours they come from the dual prices of the shortfall program (Farkas' lemma, made quantitative by
LP duality); for rules and bounds from the rule itself; for a missed budget from the dual prices of the
cheapest way to run the crew.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import Protocol

import numpy as np

from solver import heads
from solver.answer import Break, LineKind
from solver.ledger import Counts
from solver.lines import HeadLine, Line
from solver.matrix import Floats, RowSense
from solver.program import Program
from solver.shortfall import SHORT, Prices

_NOTHING: dict[str, float] = {}


class Running(Protocol):
    """What a budget break needs of how a phase is run."""

    @property
    def running_prices(self) -> Prices | None:
        """Dual prices of the phase's cheapest way to run."""


def rule_break(program: Program, head: HeadLine, lots: Counts, base: Sequence[float]) -> Break:
    """A rule or bound on head counts that `lots` misses, in people with the rule's own coefficients."""
    miss = head.margin(lots)
    total = sum((a * lots[i] for i, a in head.terms), start=Fraction(0))
    up = head.sense is RowSense.AT_LEAST or (head.sense is RowSense.EQUAL and total < head.rhs)
    sign = 1 if up else -1
    span = len(program.phases)
    worth: dict[str, float] = {}
    before: dict[str, float] = {}
    moves: dict[str, float] = {}
    margin = -sign * head.rhs / head.divisor
    for i, coef in head.terms:
        j, t = divmod(i, span)
        name, lot = program.categories[j].name, float(program.lots[j])
        each = sign * coef / (head.divisor * lot)
        (worth if program.phases[t].name == head.line.phase else before)[name] = each
        moves[name] = moves.get(name, 0.0) + each * lot * (float(lots[i]) - base[i])
        margin += each * lot * base[i]
    line = head.line
    need = float(Fraction(sign * head.rhs, head.divisor))
    return Break(
        (line.name,), line.kind, line.phase, line.unit, -float(miss), worth, need, margin, moves,
        _NOTHING, before,
    )  # fmt: skip


def hours_break(
    program: Program,
    t: int,
    kind: LineKind,
    shorts: Floats,
    prices: Prices,
    lots: Counts,
    base: Sequence[float],
    given_up: Mapping[str, float],
) -> Break:
    """Supervision or work short in phase t: net worth per person, need, and the split of the miss."""
    mine = [line for line, _, k, _, at in program.hours_lines if k is kind and at == t]
    missed = [i for i, short in enumerate(shorts) if short > SHORT]
    scale = mine[missed[0]].scale if len(missed) == 1 else 1.0
    unit = mine[missed[0]].unit if len(missed) == 1 else "hours at best output"
    if kind is LineKind.SUPERVISION:
        unit = "hours"
    now, before = -scale * prices.now, -scale * prices.before
    need = scale * prices.base
    moves, margin = _moves(program, t, now, before, lots, base)
    freed = {name: scale * value for name, value in given_up.items()}
    short = float(-(margin - need + sum(moves.values()) + sum(freed.values())))
    return Break(
        tuple(mine[i].name for i in missed),
        kind,
        program.phases[t].name,
        unit,
        short,
        _by_name(program, now),
        float(need),
        float(margin - need),
        moves,
        freed,
        _by_name(program, before) if t else _NOTHING,
    )


def _moves(
    program: Program, t: int, now: Floats, before: Floats, lots: Counts, base: Sequence[float]
) -> tuple[dict[str, float], float]:
    """Per category, worth x (people - fractional people), and the worth of the fractional crew."""
    moves: dict[str, float] = {}
    total = 0.0
    for j, category in enumerate(program.categories):
        lot, i = float(program.lots[j]), program.head(j, t)
        move = float(now[j]) * lot * (float(lots[i]) - base[i])
        total += float(now[j]) * lot * base[i]
        if t and before[j]:
            move += float(before[j]) * lot * (float(lots[i - 1]) - base[i - 1])
            total += float(before[j]) * lot * base[i - 1]
        moves[category.name] = move
    return moves, total


def _by_name(program: Program, values: Floats) -> dict[str, float]:
    return {c.name: float(v) for c, v in zip(program.categories, values, strict=True) if v}


def budget_break(
    program: Program,
    line: Line,
    lots: Counts,
    base: Sequence[float],
    runs: Sequence[Running],
    cost: float,
) -> Break:
    """A missed budget: what a person of each category costs at this crew, over all phases.

    Opening costs of the categories there are count in full, as a constant.
    """
    worth, budget = _worth(program, lots, runs), float(program.budget_of[line])
    span = len(program.phases)
    moves: dict[str, float] = {}
    per_person: dict[str, float] = {}
    for j, category in enumerate(program.categories):
        lot, mine = float(program.lots[j]), range(j * span, (j + 1) * span)
        moves[category.name] = -sum(float(worth[i]) * lot * (float(lots[i]) - base[i]) for i in mine)
        per_person[category.name] = -float(worth[j * span : (j + 1) * span].sum())
    short = cost - budget
    margin = -short - sum(moves.values())
    crew = sum(float(worth[i]) * float(lots[i] * program.lots[i // span]) for i in range(len(lots)))
    return Break(
        (line.name,), line.kind, None, line.unit, short, per_person, cost - crew - budget, margin, moves,
        _NOTHING, _NOTHING,
    )  # fmt: skip


def _worth(program: Program, lots: Counts, runs: Sequence[Running]) -> Floats:
    """d cost / d people per head count, where the crew is."""
    span = len(program.phases)
    worth = np.zeros(program.head_count)
    counts = heads.people(program, lots)
    for j, category in enumerate(program.categories):
        for t in range(span):
            before = counts[j][t - 1] if t else Fraction(category.on_books)
            change = counts[j][t] - before
            rate = float(category.join_cost) * (change > 0) - float(category.leave_cost) * (change < 0)
            worth[program.head(j, t)] += float(program.periods(t)) * float(category.pay) + rate
            if t:
                worth[program.head(j, t - 1)] -= rate
    for t, run in enumerate(runs):
        if run.running_prices is not None:
            for j in range(len(program.categories)):
                worth[program.head(j, t)] += run.running_prices.now[j]
                if t:
                    worth[program.head(j, t - 1)] += run.running_prices.before[j]
    return worth
