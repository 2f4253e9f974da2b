"""A crew in one line of text, and what another one has more or fewer of."""

from __future__ import annotations

from collections.abc import Sequence

from desktop import crew_words, figures
from solver.answer import Crew
from solver.plan import Plan

_APART = " \u00b7 "
_SAME = 1e-9


def counts_text(counts: Sequence[float]) -> str:
    """Head counts of a category: 3, or per phase 3/0/2 where they differ."""
    if len(set(counts)) == 1:
        return figures.people(counts[0])
    return "/".join(figures.people(n) if n else "0" for n in counts)


def crew_text(plan: Plan, crew: Crew) -> str:
    """`3 Lead hand · 9 Contract hand`; counts per phase as 3/4/2; nobody is left out."""
    parts = []
    for category in plan.categories:
        counts = crew.get(category.name, ())
        if any(counts):
            parts.append(f"{counts_text(counts)}{figures.NBSP}{category.name}")
    return _APART.join(parts) or figures.NIL


def changes_text(plan: Plan, before: Crew, after: Crew) -> str:
    """`+3 Learner, −1 Driver in Packing`: who is more or fewer in `after`; the same people in words."""
    made = []
    for category in plan.categories:
        name = category.name
        moves = [new - old for old, new in zip(before[name], after[name], strict=True)]
        if len({round(move, 6) for move in moves}) == 1:
            made += [f"{figures.change(moves[0])}{figures.NBSP}{name}"] * (abs(moves[0]) > _SAME)
            continue
        for phase, move in zip(plan.phases, moves, strict=True):
            if abs(move) > _SAME:
                made.append(
                    crew_words.in_the_phase(f"{figures.change(move)}{figures.NBSP}{name}", phase.name)
                )
    return ", ".join(made) or crew_words.SAME_PEOPLE
