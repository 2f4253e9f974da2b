"""The rounding policies: a fractional crew, in lots, made whole without looking at any line."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import ceil, floor

from solver.answer import Policy

SNAP = 1e-6


def snapped(value: float) -> float:
    """`value`, or the whole lot it is within 1e-6 of."""
    nearest = round(value)
    return float(nearest) if abs(value - nearest) <= SNAP else value


def rounded(policy: Policy, fractional: Sequence[float], lots: Sequence[Fraction]) -> tuple[int, ...]:
    """The crew of `policy` in lots; `fractional` as columns (category by category, phases within).

    `lots[i]` is the size of a lot of head count i, people. Raises KeyError for policies that are not
    roundings.
    """
    values = [snapped(v) for v in fractional]
    return _ROUNDINGS[policy](values, lots)


def _down(values: Sequence[float], _: Sequence[Fraction]) -> tuple[int, ...]:
    return tuple(floor(v) for v in values)


def _up(values: Sequence[float], _: Sequence[Fraction]) -> tuple[int, ...]:
    return tuple(ceil(v) for v in values)


def _nearest(values: Sequence[float], _: Sequence[Fraction]) -> tuple[int, ...]:
    return tuple(half_up(v) for v in values)


def half_up(value: float) -> int:
    """The nearest whole number; halves go up, also those that doubles show a hair below."""
    return floor(value + 0.5 + 1e-9)


_ROUNDINGS = {Policy.DOWN: _down, Policy.UP: _up, Policy.NEAREST: _nearest}


def largest_remainder(fractional: Sequence[float], lots: Sequence[Fraction], phases: int) -> tuple[int, ...]:
    """Hamilton's method in each phase: the phase's total head count, rounded to the nearest whole
    person, is kept; every category gets its whole lots, and the lots still to hand out go to the
    largest remainders (in lots; of equal ones to the category that stands first).

    Where lots of several people cannot make the total exactly, lots are handed out as long as one
    brings the total nearer.
    """
    values = [snapped(v) for v in fractional]
    result = [floor(v) for v in values]
    for t in range(phases):
        mine = range(t, len(values), phases)
        left = half_up(sum(values[i] * float(lots[i]) for i in mine)) - sum(result[i] * lots[i] for i in mine)
        for i in sorted(mine, key=lambda i: (-(round(values[i] - result[i], 9)), i)):
            if values[i] > result[i] and 2 * left >= lots[i]:
                result[i] += 1
                left -= lots[i]
    return tuple(result)
