"""Crews as whole lots: people, joiners, leavers, exact costs, and which of two equal ones is taken."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from decimal import Decimal
from fractions import Fraction

from solver.answer import Crew
from solver.program import Program

Counts = Sequence[Fraction | int]
"""Lots per head count, in the order of the program's first columns; fractions only in an own crew."""


def crew_of(program: Program, lots: Sequence[Fraction | int | float]) -> Crew:
    """Head counts by category, from lots."""
    span = len(program.phases)
    crew: dict[str, tuple[float, ...]] = {}
    for j, category in enumerate(program.categories):
        lot = program.lots[j]
        mine = lots[j * span : (j + 1) * span]
        crew[category.name] = tuple(float(n * float(lot) if isinstance(n, float) else n * lot) for n in mine)
    return crew


def lots_of(program: Program, crew: Mapping[str, Sequence[Decimal | float | int]]) -> list[Fraction]:
    """Lots of a crew in people; categories it leaves out count 0. Fractions where it is not in whole lots."""
    lots: list[Fraction] = []
    for j, category in enumerate(program.categories):
        counts = crew.get(category.name, ())
        for t in range(len(program.phases)):
            people = Fraction(str(counts[t])) if t < len(counts) else Fraction(0)
            lots.append(people / program.lots[j])
    return lots


def people(program: Program, lots: Counts) -> list[list[Fraction]]:
    """People per category and phase."""
    span = len(program.phases)
    return [
        [lots[j * span + t] * program.lots[j] for t in range(span)] for j in range(len(program.categories))
    ]


def moves(program: Program, lots: Counts) -> tuple[Fraction, Fraction]:
    """Joiners and leavers over all categories and phases, in people."""
    joiners = leavers = Fraction(0)
    for j, counts in enumerate(people(program, lots)):
        before = Fraction(program.categories[j].on_books)
        for now in counts:
            if now > before:
                joiners += now - before
            else:
                leavers += before - now
            before = now
    return joiners, leavers


def total_people(program: Program, lots: Counts) -> Fraction:
    """Head counts summed over categories and phases."""
    return sum((n * program.lots[i // len(program.phases)] for i, n in enumerate(lots)), start=Fraction(0))


def most_people(program: Program, lots: Counts) -> Fraction:
    """The largest number of people there in any one phase."""
    return max((sum(column, start=Fraction(0)) for column in zip(*people(program, lots), strict=True)),
               default=Fraction(0))  # fmt: skip


def paper_cost(program: Program, lots: Counts) -> Fraction:
    """Pay, joining, leaving and opening costs of the head counts, exact."""
    total = Fraction(0)
    for j, counts in enumerate(people(program, lots)):
        category = program.categories[j]
        before = Fraction(category.on_books)
        for t, now in enumerate(counts):
            total += program.periods(t) * Fraction(category.pay) * now
            rate = category.join_cost if now > before else category.leave_cost
            total += abs(now - before) * Fraction(rate)
            before = now
        if any(counts):
            total += Fraction(category.open_cost)
    return total


def preference(program: Program, lots: Sequence[int]) -> tuple[Fraction | int, ...]:
    """Of equally cheap crews the one with the least of these is taken: fewest joiners plus leavers, then
    fewest people, then the most of the first category, of the second and so on, then of the early phases."""
    span = len(program.phases)
    joiners, leavers = moves(program, lots)
    totals = [-sum(lots[j * span : (j + 1) * span]) for j in range(len(program.categories))]
    return (joiners + leavers, total_people(program, lots), *totals, *(-n for n in lots))
