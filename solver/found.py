"""A whole crew that was found, and what a search knows at its end."""

from __future__ import annotations

from dataclasses import dataclass
from math import inf

# crews whose costs differ by less than a tenth of a cent are equally cheap
TIE = 1e-3

Lots = tuple[int, ...]


@dataclass(frozen=True)
class Found:
    """One whole crew, in lots, with the objective the program gives it."""

    lots: Lots
    objective: float


@dataclass(frozen=True)
class Outcome:
    """What a search knows: `complete` means nothing is better than `best` (or nothing exists)."""

    best: Found | None
    bound: float
    complete: bool
    nodes: int


@dataclass(frozen=True)
class Limits:
    """Where a search gives up."""

    nodes: int = 20_000
    seconds: float = inf


def tie_width(objective: float) -> float:
    """Objectives closer than this are equal: a tenth of a cent, or what doubles can tell apart."""
    return max(TIE, 1e-10 * abs(objective))
