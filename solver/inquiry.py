"""A longer question being worked on: its time, its progress, and the integer programs it has solved."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import partial
from math import inf
from time import monotonic
from typing import Any

import numpy as np

from solver import heads
from solver.engine import EngineName, WholeResult, WholeStatus, whole
from solver.found import Found, Limits, Outcome
from solver.search import Search
from solver.tiebreak import TIES

Heard = Callable[[str, Any], None]
SECONDS = 60.0
OWN = Limits(nodes=50_000, seconds=3.0)
# engines are agreed when this close: half a cent, or half a hundredth of what is counted
AGREED = 0.005


def unheard(part: str, value: Any) -> None:
    """For those who do not follow the progress."""


class Inquiry:
    """One question. `seconds` (None: 60) is for all its integer programs together."""

    def __init__(self, seconds: float | None = None, heard: Heard = unheard) -> None:
        self._until = monotonic() + (SECONDS if seconds is None else seconds)
        self._heard = heard
        self.programs = 0

    @property
    def left(self) -> float:
        """Seconds left, not below 0."""
        return max(self._until - monotonic(), 0.0)

    def tell(self, says: str, done: float | None) -> None:
        """Report progress; `done` from 0 to 1, None where it cannot be known."""
        self._heard("progress", {"says": says, "done": done})

    def cheapest(
        self, search: Search, *, cutoff: float = inf, start: Found | None = None, choose: bool = False
    ) -> Outcome:
        """The whole crew of least objective below `cutoff`, proved like the exact crew is.

        By our own search, else by two engines that agree. `complete` False: the time was not enough.
        `choose`: of equally cheap crews the preferred one, as long as they are few.
        """
        self.programs += 1
        limits = replace(OWN, seconds=min(OWN.seconds, self.left))
        outcome = search.cheapest(limits, cutoff=cutoff, start=start)
        if not outcome.complete and self.left:
            return self._two_engines(search, outcome, cutoff)
        return self._preferred(search, outcome) if choose and outcome.complete else outcome

    def _preferred(self, search: Search, outcome: Outcome) -> Outcome:
        """The same with the preferred one of equally cheap crews."""
        if outcome.best is None:
            return outcome
        limits = replace(TIES, seconds=min(TIES.seconds, self.left))
        key = partial(heads.preference, search.program)
        chosen = search.cheapest(limits, key=key, start=outcome.best)
        return replace(outcome, best=chosen.best) if chosen.complete else outcome

    def _two_engines(self, search: Search, own: Outcome, cutoff: float) -> Outcome:
        first = whole(search.matrix, EngineName.HIGHS, seconds=self.left / 2)
        best = _better(own.best, _checked(search, first))
        if not self.left or first.status not in (WholeStatus.OPTIMAL, WholeStatus.INFEASIBLE):
            return replace(own, best=best)
        second = whole(search.matrix, EngineName.CBC, seconds=self.left)
        best = _better(best, _checked(search, second))
        if first.status is second.status is WholeStatus.INFEASIBLE:
            return Outcome(None, inf, True, own.nodes)
        if not _agree(first, second):
            return replace(own, best=best)
        if first.objective >= cutoff:
            return Outcome(None, cutoff, True, own.nodes)
        near = best is not None and abs(best.objective - first.objective) < _width(first)
        return Outcome(best, first.objective, near, own.nodes)


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
