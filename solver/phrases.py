"""Counts and lists as a sentence has them."""

from __future__ import annotations

from collections.abc import Sequence


def noun(count: int, one: str, several: str = "") -> str:
    """The word for `count` of a thing: `row`, else `several`, which is `rows` where none is given."""
    return one if count == 1 else several or f"{one}s"


def counted(count: int, one: str, several: str = "") -> str:
    """`1 row`, `12,000 rows`."""
    return f"{count:,} {noun(count, one, several)}"


def priced(amount: str, currency: str) -> str:
    """`EUR 1,520`, as the window has it."""
    return f"{currency} {amount}".strip()


def listed(parts: Sequence[str], last: str = "and") -> str:
    """`a, b and c`."""
    if len(parts) < 2:
        return "".join(parts)
    return f"{', '.join(parts[:-1])} {last} {parts[-1]}"
