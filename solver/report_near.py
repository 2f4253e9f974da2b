"""The answer of `near` as plain text."""

from __future__ import annotations

from solver.answer import NearBest
from solver.caution import CAUTION
from solver.plan import Plan
from solver.report import crew_words, number, table


def near(plan: Plan, answer: NearBest) -> str:
    """The crews, cheapest first, and whether there are more."""
    header = [f"Cost, {plan.currency}", "over", "joiners", "leavers", "people", "tightest line", "crew"]
    rows = [header]
    for one in answer.crews:
        numbers = (one.cost, one.over, one.joiners, one.leavers, one.people)
        rows.append([*(number(value) for value in numbers), one.tightest, crew_words(one.crew)])
    every = "These are all the crews within the limit."
    more = "There are more crews within the limit, or there may be: the search stopped here."
    return f"{table(rows)}\n\n{every if answer.complete else more}\n\n{CAUTION}"
