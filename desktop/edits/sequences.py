"""Moving, inserting and naming entries of a list."""

from __future__ import annotations

import re
from collections.abc import Collection, Iterable, Sequence
from typing import TypeVar

T = TypeVar("T")


def inserted(entries: Sequence[T], at: int, new: Iterable[T]) -> tuple[T, ...]:
    """`entries` with `new` before index `at`."""
    return (*entries[:at], *new, *entries[at:])


def without(entries: Sequence[T], indices: Collection[int]) -> tuple[T, ...]:
    """`entries` less those at `indices`."""
    return tuple(entry for index, entry in enumerate(entries) if index not in indices)


def moved(entries: Sequence[T], indices: Collection[int], by: int) -> tuple[T, ...]:
    """`entries` with those at `indices` one place up (`by` -1) or down (1), all or none of them."""
    if not indices or not all(0 <= index + by < len(entries) for index in indices):
        return tuple(entries)
    made = list(entries)
    for index in sorted(indices, reverse=by > 0):
        made[index], made[index + by] = made[index + by], made[index]
    return tuple(made)


def replaced(entries: Sequence[T], index: int, entry: T) -> tuple[T, ...]:
    """`entries` with `entry` at `index`."""
    return (*entries[:index], entry, *entries[index + 1 :])


def fresh_name(base: str, taken: Collection[str]) -> str:
    """`base` with the first number that makes a name nobody has: Lead hand -> Lead hand 2."""
    stem = re.sub(r" \d+$", "", base)
    number = 2
    while f"{stem} {number}" in taken:
        number += 1
    return f"{stem} {number}"


def first_free(noun: str, taken: Collection[str]) -> str:
    """`noun 1`, or the first number that is free."""
    number = 1
    while f"{noun} {number}" in taken:
        number += 1
    return f"{noun} {number}"
