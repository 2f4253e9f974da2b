"""The exact staircase of cost over workload, read at any workload: pure data, no painting."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from math import nan

from desktop import figures
from desktop import question_words as say
from solver.answer import Crew, FloorPoint, RoundedPoint, Step, Steps
from solver.plan import Plan

_SAME = 1e-9
_FEW_CENTS = 0.005


def stair_path(steps: Sequence[Step]) -> tuple[list[float], list[float]]:
    """Corners of the staircase, left to right; a jump is an upright piece of the path."""
    xs: list[float] = []
    ys: list[float] = []
    for step in steps:
        xs += [point.amount for point in _corners(step)]
        ys += [point.cost for point in _corners(step)]
    return xs, ys


def _corners(step: Step) -> tuple[FloorPoint, ...]:
    """Where the cost of a step's crew begins, bends and ends."""
    return step.points or (FloorPoint(step.from_, step.cost_from), FloorPoint(step.to, step.cost))


def point_path(points: Sequence[FloorPoint | RoundedPoint]) -> tuple[list[float], list[float]]:
    """Corners of a piecewise linear line; not a number where there is a gap in it."""
    return [p.amount for p in points], [nan if p.cost is None else p.cost for p in points]


def step_at(steps: Sequence[Step], amount: float) -> int | None:
    """Number of the step that serves `amount`; at a border the lower one, which still serves it."""
    for at, step in enumerate(steps):
        if step.from_ - _SAME <= amount <= step.to + _SAME:
            return at
    return None


def cost_at(steps: Sequence[Step], amount: float) -> float | None:
    """Cost of the exact crew at `amount`; None outside the staircase."""
    at = step_at(steps, amount)
    if at is None:
        return None
    corners = _corners(steps[at])
    inside = min(max(amount, corners[0].amount), corners[-1].amount)
    return floor_at(corners, inside)


def floor_at(points: Sequence[FloorPoint], amount: float) -> float | None:
    """The relaxation's cost at `amount`; None outside what is known."""
    for a, b in pairwise(points):
        if a.amount - _SAME <= amount <= b.amount + _SAME:
            share = (amount - a.amount) / (b.amount - a.amount) if b.amount > a.amount else 0.0
            return a.cost + share * (b.cost - a.cost)
    return None


def changes(plan: Plan, before: Crew, after: Crew) -> list[str]:
    """`+1 Contract hand` for each category whose fullest phase changed, in plan order."""
    made = []
    for category in plan.categories:
        old, new = (max(crew.get(category.name, ()), default=0.0) for crew in (before, after))
        if abs(new - old) > _SAME:
            made.append(f"{figures.change(new - old)}{figures.NBSP}{category.name}")
    return made


def amount_text(steps: Steps, amount: float) -> str:
    """A workload with its unit; per cent of today where all works are scaled."""
    return figures.percent(amount) if steps.work is None else figures.quantity(amount, steps.unit)


def holds_sentence(plan: Plan, steps: Steps, amount: float) -> str:
    """How far the crew at `amount` holds, and what comes then."""
    at = step_at(steps.steps, amount)
    if at is None:
        return say.BEYOND_STEPS
    step = steps.steps[at]
    upto = amount_text(steps, step.to)
    if at + 1 == len(steps.steps):
        return say.holds_to_the_end(upto)
    following = steps.steps[at + 1]
    change = changes(plan, step.crew, following.crew)
    more = following.cost_from - step.cost
    cost = figures.money(more, plan.currency) if more > _FEW_CENTS else ""
    return say.holds_up_to(upto, say.listed(change) or say.ANOTHER_SPREAD, cost)
