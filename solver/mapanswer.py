"""What the crew map holds, as frozen values."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class MapPoint:
    """One whole crew of the map: people of the two categories, the cost where it is workable, and the lines
    it breaks where it is not."""

    x: float
    y: float
    workable: bool
    cost: float | None
    breaks: tuple[str, ...]


@dataclass(frozen=True)
class MapName:
    """Where a named crew stands on the map; its other categories may differ from the exact crew's."""

    name: str
    x: float
    y: float


@dataclass(frozen=True)
class CrewMap:
    """Answer of `map`: two categories in one phase, everybody else as in the exact crew.

    `polygon`: corners, anticlockwise, of where fractional people keep every line but least-if-any, within
    the window; `points`: all whole crews of the window, row by row; `equal_cost`: crews as dear as the
    exact one in pay, joining and leaving, from border to border of the window, None where there is no such
    line.
    """

    across: str
    up: str
    phase: str
    polygon: tuple[tuple[float, float], ...]
    points: tuple[MapPoint, ...]
    named: tuple[MapName, ...]
    equal_cost: tuple[tuple[float, float], ...] | None
