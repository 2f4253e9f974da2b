"""The shared hypothesis strategy for plans."""

from __future__ import annotations

from collections.abc import Callable

from hypothesis import strategies as st

from solver.plan import Plan
from tests.solver.random_plans import FEATURES, build_plan


class _Drawn:
    """Decisions drawn by hypothesis, so that a failing plan shrinks to the plainest one."""

    def __init__(self, draw: Callable[[st.SearchStrategy[int]], int]) -> None:
        self._draw = draw

    def integer(self, low: int, high: int) -> int:
        return self._draw(st.integers(low, high))

    def chance(self, percent: int) -> bool:
        return self._draw(st.integers(0, 99)) >= 100 - percent


@st.composite
def plans(
    draw: Callable[[st.SearchStrategy[int]], int],
    max_categories: int = 4,
    max_works: int = 2,
    max_phases: int = 2,
    boxed: bool = False,
    features: frozenset[str] = FEATURES,
) -> Plan:
    """Valid small plans of every feature; see `random_plans.random_plan` for the arguments."""
    return build_plan(
        _Drawn(draw),
        max_categories=max_categories,
        max_works=max_works,
        max_phases=max_phases,
        boxed=boxed,
        features=features,
    )
