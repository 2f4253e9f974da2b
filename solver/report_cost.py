"""The answer of `cost` as plain text."""

from __future__ import annotations

from solver.answer import Rung, WholePeopleDetail
from solver.plan import Plan
from solver.report import number, table


def cost(plan: Plan, answer: WholePeopleDetail) -> str:
    """What whole people cost, the ladder, and each category's part."""
    gap = f"{number(answer.absolute)} {plan.currency} ({number(answer.percent)} % of the exact cost)"
    ladder = table([["", f"Cost, {plan.currency}"], *([rung.name, _cost(rung)] for rung in answer.ladder)])
    told = [f"{rung.name}: {'; '.join(rung.broken)}" for rung in answer.ladder if rung.broken]
    rows = [[f"Saving, {plan.currency}, if it alone", "could be fractional", "came in half its lot"]]
    for one in answer.by_category:
        rows.append([one.category, number(one.if_fractional), number(one.if_half_lot)])
    parts = [f"Whole people cost {gap}.", "\n".join([ladder, *told]), table(rows)]
    return "\n\n".join(parts)


def _cost(rung: Rung) -> str:
    return "not workable" if rung.cost is None else number(rung.cost)
