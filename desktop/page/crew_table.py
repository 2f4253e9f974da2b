"""The table now -> recommended: head counts, people who come and go, pay and one-off costs."""

from __future__ import annotations

from decimal import Decimal

from desktop.page.chosen import ZERO, Chosen, moves
from desktop.page.recommendation import CrewRow, CrewTable
from desktop.page.speech import exact_decimal
from desktop.page.text import ALL_OF_IT, name
from solver.plan import Category, Plan


def crew_table(plan: Plan, chosen: Chosen) -> CrewTable:
    """The table of the recommended crew. Its money adds up to the crew's cost."""
    rows = tuple(_row(plan, category, chosen) for category in plan.categories)
    joined, left = _moves_per_phase(plan, chosen)
    running = _running(plan, chosen)
    total = sum((r.pay + r.one_off for r in rows), ZERO) + sum((money for _, money in running), ZERO)
    return CrewTable(tuple(name(p.name, ALL_OF_IT) for p in plan.phases), rows, joined, left, running, total)


def _row(plan: Plan, category: Category, chosen: Chosen) -> CrewRow:
    heads = chosen.heads(category.name)
    joiners, leavers = (sum(people, ZERO) for people in moves(heads, category.on_books))
    pay = sum((p.periods * category.pay * n for p, n in zip(plan.phases, heads, strict=True)), ZERO)
    opening = category.open_cost if any(heads) else ZERO
    one_off = joiners * category.join_cost + leavers * category.leave_cost + opening
    return CrewRow(name(category.name, ALL_OF_IT), category.on_books, heads, joiners, leavers, pay, one_off)


def _moves_per_phase(plan: Plan, chosen: Chosen) -> tuple[tuple[Decimal, ...], tuple[Decimal, ...]]:
    every = [moves(chosen.heads(c.name), c.on_books) for c in plan.categories]
    spans = range(len(plan.phases))
    joined = tuple(sum((joiners[t] for joiners, _ in every), ZERO) for t in spans)
    left = tuple(sum((leavers[t] for _, leavers in every), ZERO) for t in spans)
    return joined, left


def _running(plan: Plan, chosen: Chosen) -> tuple[tuple[str, Decimal], ...]:
    """Overtime and bought-in work, in money, where there is any."""
    overtime = sum((c.overtime_rate * _sum(chosen.overtime.get(c.name, ())) for c in plan.categories), ZERO)
    bought = sum(
        (w.buy_in_price * _sum(chosen.bought_in.get(w.name, ())) for w in plan.works if w.buy_in_price), ZERO
    )
    parts = (("overtime", overtime), ("work bought in", bought))
    return tuple((what, money) for what, money in parts if money)


def _sum(amounts: tuple[float, ...]) -> Decimal:
    return sum((exact_decimal(x) for x in amounts), ZERO)
