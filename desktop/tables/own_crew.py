"""The planner's own crew: what may be typed, and the plan with it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from decimal import Decimal
from types import MappingProxyType

from desktop import crew_words as say
from desktop import figures
from desktop.tables.numbers import Refused, parse
from solver.answer import Answer
from solver.plan import Category, Plan


def own_count(text: str, category: Category) -> Decimal:
    """The head count typed as `text`; nothing typed is nobody. Raises Refused with the reason."""
    if not text.strip():
        return Decimal(0)
    count = Decimal(parse(text))
    if count < 0:
        raise Refused(say.below_nobody(text, category.name))
    if category.lot > 0 and count % category.lot:
        raise Refused(say.not_in_lots(text, category.name, figures.people(category.lot)))
    return count


def own_started(plan: Plan, answer: Answer | None) -> dict[str, tuple[Decimal, ...]]:
    """The own crew with a count for every category and phase: what was typed, else exact, else nobody."""
    exact = answer.exact.crew if answer and answer.exact else {}
    nobody = tuple(Decimal(0) for _ in plan.phases)
    made = {}
    for category in plan.categories:
        counts = plan.own.get(category.name)
        if counts is None or len(counts) != len(plan.phases):
            found = exact.get(category.name, ())
            right = len(found) == len(plan.phases)
            counts = tuple(Decimal(f"{n:.12g}") for n in found) if right else nobody
        made[category.name] = counts
    return made


def with_own(plan: Plan, own: Mapping[str, tuple[Decimal, ...]]) -> Plan:
    """`plan` with another own crew."""
    return replace(plan, own=MappingProxyType(dict(own)))
