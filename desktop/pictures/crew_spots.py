"""What the crew map shows: whole crews of two categories, the polygon of workable ones, and named crews.

Pure data in head counts of the two categories, all others as in the exact crew.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum

from desktop import figures
from desktop import question_words as say

Point = tuple[float, float]


class SpotKind(StrEnum):
    """Where a named point comes from; each has a shape of its own."""

    FRACTIONAL = "fractional"
    ROUNDED = "rounded"
    PATCHED = "patched"
    EXACT = "exact"
    OWN = "own"


@dataclass(frozen=True)
class Spot:
    """One whole crew of the lattice: `cost` where it is workable, what it breaks where it is not."""

    x: float
    y: float
    workable: bool
    cost: float | None = None
    breaks: tuple[str, ...] = ()


@dataclass(frozen=True)
class NamedSpot:
    """A crew with a name; `names` share the point."""

    kind: SpotKind
    names: tuple[str, ...]
    x: float
    y: float


@dataclass(frozen=True)
class CrewSpots:
    """Everything on the map. `equal_cost` is a stretch of the line of crews as dear as the exact one."""

    across: str
    up: str
    currency: str
    polygon: tuple[Point, ...] = ()
    lattice: tuple[Spot, ...] = ()
    named: tuple[NamedSpot, ...] = ()
    equal_cost: tuple[Point, ...] | None = None


def nearest_spot(spots: Sequence[Spot], x: float, y: float) -> Spot | None:
    """The whole crew nearest to a point of the map; None on an empty one."""
    return min(spots, key=lambda s: (s.x - x) ** 2 + (s.y - y) ** 2, default=None)


def next_spot(spots: Sequence[Spot], here: Spot, dx: int, dy: int) -> Spot:
    """The next whole crew in a direction (one of dx, dy is 1 or -1); `here` at the edge."""
    ahead = [s for s in spots if (s.y == here.y and (s.x - here.x) * dx > 0) or _above(s, here, dy)]
    return min(ahead, key=lambda s: abs(s.x - here.x) + abs(s.y - here.y), default=here)


def _above(spot: Spot, here: Spot, dy: int) -> bool:
    return spot.x == here.x and (spot.y - here.y) * dy > 0


def _how_many(count: float) -> str:
    return figures.people(count) if count else say.NOBODY_OF


def spot_sentence(shown: CrewSpots, spot: Spot) -> str:
    """A whole crew in words: who, what it costs or what it breaks, and its names."""
    crew = say.pair(_how_many(spot.x), shown.across, _how_many(spot.y), shown.up)
    names = [name for named in shown.named if (named.x, named.y) == (spot.x, spot.y) for name in named.names]
    told = f"{crew} ({say.listed(names)})" if names else crew
    if not spot.workable:
        return say.spot_breaks(told, say.listed(spot.breaks)) if spot.breaks else say.spot_not_workable(told)
    return say.spot_costs(told, figures.money(spot.cost, shown.currency)) if spot.cost is not None else told
