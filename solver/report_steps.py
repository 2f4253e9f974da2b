"""The answer of `steps` as plain text."""

from __future__ import annotations

from itertools import pairwise

from solver.answer import Step, Steps
from solver.caution import CAUTION
from solver.plan import Plan
from solver.report import crew_words, number, table


def steps(plan: Plan, answer: Steps) -> str:
    """Each step with its range, cost and crew, the fractional floor beside it."""
    what = "All works" if answer.work is None else answer.work
    unit = "% of today" if answer.work is None else answer.unit
    parts = [f"{what}, {unit}; today {number(answer.today)}."]
    rows = [["from", "to", f"Cost, {plan.currency}", "floor at the end", "crew"]]
    rows += [_row(answer, step) for step in answer.steps]
    parts.append(table(rows))
    if answer.ends:
        parts.append(answer.ends)
    if not answer.exact:
        parts.append("Not every border is proved: the time was not enough.")
    return "\n\n".join([*parts, CAUTION])


def _row(answer: Steps, step: Step) -> list[str]:
    sloping = abs(step.cost - step.cost_from) >= 0.005
    cost = f"{number(step.cost_from)} to {number(step.cost)}" if sloping else number(step.cost)
    floor = _floor(answer, step.to)
    return [number(step.from_), number(step.to), cost, floor, crew_words(step.crew)]


def _floor(answer: Steps, amount: float) -> str:
    for a, b in pairwise(answer.floor):
        if a.amount <= amount <= b.amount * (1 + 1e-9) and b.amount > a.amount:
            share = (amount - a.amount) / (b.amount - a.amount)
            return number(a.cost + share * (b.cost - a.cost))
    return ""
