"""Crews between lots and people, and which of two equally cheap ones is taken."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from decimal import Decimal
from fractions import Fraction

from solver.answer import Crew
from solver.ledger import Counts
from solver.program import Program


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


def preference(program: Program, lots: Sequence[int]) -> tuple[Fraction | int, ...]:
    """Of equally cheap crews the one with the least of these is taken: fewest joiners plus leavers, then
    fewest people, then the most of the first category, of the second and so on, then of the early phases."""
    span = len(program.phases)
    ledger = program.ledger
    joiners, leavers = ledger.moves(lots)
    totals = [-sum(lots[j * span : (j + 1) * span]) for j in range(len(program.categories))]
    return (joiners + leavers, ledger.people(lots), *totals, *(-n for n in lots))
