"""A crew in one line of text."""

from __future__ import annotations

from desktop import figures
from solver.answer import Crew
from solver.plan import Plan

_APART = " \u00b7 "


def crew_text(plan: Plan, crew: Crew) -> str:
    """`3 Lead hand · 9 Contract hand`; counts per phase as 3/4/2; nobody is left out."""
    parts = []
    for category in plan.categories:
        counts = crew.get(category.name, ())
        if any(counts):
            same = len(set(counts)) == 1
            shown = [figures.people(n) for n in (counts[:1] if same else counts)]
            parts.append(f"{'/'.join(shown)}{figures.NBSP}{category.name}")
    return _APART.join(parts) or figures.NIL
