"""The deletion filter: from conditions that cannot hold together to a smallest such set among them.

Chinneck & Dravnieks, Locating minimal infeasible constraint sets in linear programs, ORSA Journal on
Computing 3 (1991) 157-168. Conditions are first tried away in groups, which changes nothing about what the
last pass, one by one, makes sure of: without any one member the rest can hold.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TypeVar

T = TypeVar("T")


def deletion_filter(conditions: Sequence[T], impossible: Callable[[Sequence[T]], bool]) -> list[T]:
    """A smallest set, in the order given, of conditions that are impossible together.

    Conditions early in the list are the first to be left out. `impossible` must hold for all of them.
    """
    kept = list(conditions)
    size = max(len(kept) // 2, 1)
    while True:
        kept = _one_pass(kept, size, impossible)
        if size == 1:
            return kept
        size //= 2


def _one_pass(kept: list[T], size: int, impossible: Callable[[Sequence[T]], bool]) -> list[T]:
    start = 0
    while start < len(kept):
        rest = kept[:start] + kept[start + size :]
        if impossible(rest):
            kept = rest
        else:
            start += size
    return kept
