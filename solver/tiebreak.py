"""Which of equally cheap crews is taken: all are looked at while they are few, else goal after goal.

Preemptive goals (Ignizio): the cost is held, joiners plus leavers are minimised and held, then people,
then the first category is maximised, and so on; the same order as heads.preference.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from functools import partial
from time import monotonic

import numpy as np

from solver import heads
from solver.engine import EngineName, whole
from solver.found import Found, Limits, Outcome, tie_width
from solver.matrix import Matrix, RowSense
from solver.program import Program
from solver.search import Search
from solver.twoengines import Box, boxed

# 4,000 nodes settled no more plans of 1,000 random ones than 1,000 do
TIES = Limits(nodes=1_000, seconds=1.0)
NODES = 100_000
GOAL_NODES = 2_000
_HALF_LOT = 0.5
Goal = list[tuple[int, float]]


def cheapest_preferred(
    search: Search, seconds: float, *, start: Found | None = None, box: Box | None = None
) -> Outcome:
    """The cheapest whole crew in the box, and of equally cheap ones the preferred one.

    Where `complete` is False nothing is proved: best and bound so far.
    """
    until = monotonic() + seconds
    key = partial(heads.preference, search.program)
    ties = Limits(TIES.nodes, min(TIES.seconds, seconds))
    outcome = search.cheapest(ties, key=key, start=start, box=box)
    if outcome.complete:
        return outcome
    limits = Limits(NODES, max(until - monotonic(), 0.0))
    outcome = search.cheapest(limits, start=outcome.best, box=box)
    if not outcome.complete or outcome.best is None:
        return outcome
    left = max(until - monotonic(), 0.5)
    return replace(outcome, best=preferred(search.program, outcome.best, left, box))


def preferred(program: Program, best: Found, seconds: float, box: Box | None = None) -> Found:
    """The preferred crew among those as cheap as `best`; `best` as improved so far if time runs out."""
    caps = [int(upper) for upper in program.matrix.upper[: program.head_count]]
    counting = Program(program.plan, caps, all_moves=True)
    matrix = counting.matrix.copy()
    costly = [(i, cost) for i, cost in enumerate(matrix.cost) if cost]
    _hold(matrix, costly, best.objective + tie_width(best.objective))
    until = monotonic() + seconds
    lots = best.lots
    for goal, tolerance in _goals(counting):
        left = until - monotonic()
        if left <= 0:
            break
        matrix.cost = [0.0] * matrix.width
        for column, weight in goal:
            matrix.cost[column] = weight
        search = Search(counting, matrix)
        value = search.evaluate(lots)
        start = None if value is None else Found(lots, value)
        outcome = search.cheapest(Limits(GOAL_NODES, left), start=start, box=box)
        found = outcome.best if outcome.complete else _by_engine(search, outcome.best, until, box)
        if found is None:
            break
        lots = found.lots
        _hold(matrix, goal, found.objective + tolerance)
    return Found(lots, best.objective)


def _by_engine(search: Search, best: Found | None, until: float, box: Box | None) -> Found | None:
    """The crew HiGHS finds for a goal that our own search did not settle, or `best` where it has none."""
    matrix = search.matrix if box is None else boxed(search, box)
    answer = whole(matrix, EngineName.HIGHS, seconds=until - monotonic())
    if answer.x is None:
        return best
    lots = tuple(int(n) for n in np.rint(answer.x[: search.program.head_count]))
    objective = search.evaluate(lots)
    if objective is None or (best is not None and best.objective <= objective):
        return best
    return Found(lots, objective)


def _hold(matrix: Matrix, goal: Goal, most: float) -> None:
    matrix.add_row([c for c, _ in goal], [w for _, w in goal], RowSense.AT_MOST, most)


def _goals(program: Program) -> Iterator[tuple[Goal, float]]:
    """Each goal with what may be added to its value without letting a worse crew in."""
    span = len(program.phases)
    least_lot = min((float(lot) for lot in program.lots), default=1.0)
    moves = [*program.joiners.values(), *program.leavers.values()]
    yield [(column, 1.0) for column in moves], 1e-4 * least_lot
    yield [(i, float(program.lots[i // span])) for i in range(program.head_count)], 1e-4 * least_lot
    for j in range(len(program.categories)):
        yield [(program.head(j, t), -1.0) for t in range(span)], _HALF_LOT
    if span > 1:
        for i in range(program.head_count):
            yield [(i, -1.0)], _HALF_LOT
