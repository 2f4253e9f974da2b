"""A longer question being worked on: its time, its progress, and the integer programs it has solved."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import partial
from math import inf
from time import monotonic
from typing import Any

from solver import heads
from solver.found import Found, Limits, Outcome
from solver.search import Search
from solver.tiebreak import TIES
from solver.twoengines import two_engines

Heard = Callable[[str, Any], None]
SECONDS = 60.0
# what takes our own search more nodes than this, engines mostly do in some hundredths of a second; where they
# do not within a few seconds, our own search has another try
QUICK = Limits(nodes=3_000, seconds=1.0)
ENGINES = 6.0
OWN = Limits(nodes=50_000, seconds=3.0)


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
        outcome = self._own(search, QUICK, cutoff, start)
        for seconds in (ENGINES, inf):
            if not outcome.complete and self.left:
                outcome = two_engines(search, outcome, seconds=min(seconds, self.left), cutoff=cutoff)
            if not outcome.complete and self.left:
                outcome = self._own(search, OWN, cutoff, outcome.best or start)
        return self._preferred(search, outcome) if choose and outcome.complete else outcome

    def _own(self, search: Search, limits: Limits, cutoff: float, start: Found | None) -> Outcome:
        return search.cheapest(
            replace(limits, seconds=min(limits.seconds, self.left)), cutoff=cutoff, start=start
        )

    def _preferred(self, search: Search, outcome: Outcome) -> Outcome:
        """The same with the preferred one of equally cheap crews."""
        if outcome.best is None:
            return outcome
        limits = replace(TIES, seconds=min(TIES.seconds, self.left))
        key = partial(heads.preference, search.program)
        chosen = search.cheapest(limits, key=key, start=outcome.best)
        return replace(outcome, best=chosen.best) if chosen.complete else outcome
