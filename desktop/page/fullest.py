"""Which entries stay where only some of them fit."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal
from typing import TypeVar

T = TypeVar("T")


def fullest(entries: Sequence[T], weights: Sequence[float] | Sequence[Decimal], most: int) -> list[T]:
    """The `most` entries of greatest weight, in their own order; of equals the first ones."""
    order = sorted(range(len(entries)), key=lambda at: (-weights[at], at))
    return [entries[at] for at in sorted(order[: max(0, most)])]
