"""HiGHS and CBC one after the other, for what takes our own search too long: they must agree."""

from __future__ import annotations

from dataclasses import replace
from math import inf

import numpy as np

from solver.engine import EngineName, WholeResult, WholeStatus, whole
from solver.found import Found, Outcome
from solver.matrix import Floats, Matrix
from solver.search import Search

# engines are agreed when this close: half a cent, or half a hundredth of what is counted
AGREED = 0.005
Box = tuple[Floats, Floats]


def two_engines(
    search: Search, own: Outcome, *, seconds: float, cutoff: float = inf, box: Box | None = None
) -> Outcome:
    """What `own` lacks: the whole crew of least objective below `cutoff`, within `box` if one is given.

    `complete` False: they did not agree in time; best and bound are the best known.
    """
    matrix = search.matrix if box is None else boxed(search, box)
    first = whole(matrix, EngineName.HIGHS, seconds=seconds / 2)
    best = _better(own.best, _checked(search, first))
    if first.status not in (WholeStatus.OPTIMAL, WholeStatus.INFEASIBLE):
        return replace(own, best=best)
    second = whole(matrix, EngineName.CBC, seconds=seconds / 2)
    best = _better(best, _checked(search, second))
    if first.status is second.status is WholeStatus.INFEASIBLE:
        return Outcome(None, inf, True, own.nodes)
    if not _agree(first, second):
        return replace(own, best=best)
    if first.objective >= cutoff:
        return Outcome(None, cutoff, True, own.nodes)
    near = best is not None and abs(best.objective - first.objective) < _width(first)
    return Outcome(best, first.objective, near, own.nodes)


def boxed(search: Search, box: Box) -> Matrix:
    """The search's matrix with the integer columns held in a box of its."""
    matrix = search.matrix.copy()
    for column, lower, upper in zip(search.columns.tolist(), *box, strict=True):
        matrix.lower[column], matrix.upper[column] = float(lower), float(upper)
    return matrix


def _checked(search: Search, result: WholeResult) -> Found | None:
    """An engine's crew at whole lots, every line checked again; None if it does not stand."""
    if result.x is None:
        return None
    count = search.program.head_count
    if not all(search.matrix.integer[:count]):  # some may be fractional: no crew of whole lots to check
        return Found((), result.objective)
    lots = tuple(int(v) for v in np.rint(result.x[:count]))
    objective = search.evaluate(lots)
    return None if objective is None else Found(lots, objective)


def _better(a: Found | None, b: Found | None) -> Found | None:
    if a is None or b is None:
        return a or b
    return b if b.objective < a.objective else a


def _agree(first: WholeResult, second: WholeResult) -> bool:
    proved = first.status is second.status is WholeStatus.OPTIMAL
    return proved and abs(first.objective - second.objective) < _width(first)


def _width(result: WholeResult) -> float:
    return AGREED + 1e-9 * abs(result.objective)
