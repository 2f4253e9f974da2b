"""The steps in which the cost of whole crews can change at all."""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction
from math import gcd

from solver.found import TIE
from solver.program import Program


def whole_grain(program: Program) -> float:
    """The largest amount of money every whole crew's cost is a multiple of; 0 if hours cost money too."""
    if program.costs_hours:
        return 0.0
    steps: list[Fraction] = []
    for j, category in enumerate(program.categories):
        lot = program.lots[j]
        move = _gcd([lot, Fraction(category.on_books)])
        steps += [Fraction(phase.periods) * Fraction(category.pay) * lot for phase in program.phases]
        steps += [Fraction(category.join_cost) * move, Fraction(category.leave_cost) * move]
        steps.append(Fraction(category.open_cost))
    grain = float(_gcd(steps))
    return grain if grain > 4 * TIE else 0.0


def _gcd(values: Iterable[Fraction]) -> Fraction:
    result = Fraction(0)
    for value in values:
        numerator = gcd(result.numerator * value.denominator, value.numerator * result.denominator)
        result = Fraction(numerator, result.denominator * value.denominator)
    return result
