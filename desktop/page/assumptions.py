"""What the recommendation takes for granted: amounts, hours, absence, outputs, pay, supervision, rules."""

from __future__ import annotations

from desktop.page.recommendation import Labelled
from desktop.page.speech import Speech
from desktop.page.text import name
from solver.phrases import listed
from solver.plan import Category, Work


def assumptions(speech: Speech) -> tuple[Labelled, ...]:
    """Works first, then one entry per category; in plan order."""
    plan = speech.plan
    works = tuple(Labelled(name(w.name, 40), _work_says(speech, w)) for w in plan.works)
    return works + tuple(Labelled(name(c.name, 40), _category_says(speech, c)) for c in plan.categories)


def _work_says(speech: Speech, work: Work) -> str:
    amounts = [speech.quantity(a, work.unit) if a else "0" for a in work.amounts]
    if len(set(amounts)) == 1:
        shown = amounts[0] + (" in each phase" if len(amounts) > 1 else "")
    else:
        shown = f"{', '.join(amounts)} by phase" if len(amounts) <= 4 else _span(speech, work)
    if work.buy_in_price is None:
        return shown
    return f"{shown}; can be bought in at {speech.money(work.buy_in_price)} each"


def _span(speech: Speech, work: Work) -> str:
    total = sum(work.amounts)
    return f"{speech.quantity(total, work.unit)} over {len(work.amounts)} phases"


def _category_says(speech: Speech, category: Category) -> str:
    per = name(speech.plan.period, 16)
    parts = [f"{speech.number(category.hours)}\u00a0h a {per} paid"]
    if category.absence:
        parts.append(f"{speech.percent(100 * category.absence)} absent")
    parts.append(f"pay {speech.money(category.pay)} a {per}")
    parts += _outputs(speech, category)
    parts += _needs(speech, category)
    return ", ".join(parts)


def _outputs(speech: Speech, category: Category) -> list[str]:
    units = {work.name: work.unit for work in speech.plan.works}
    return [
        f"{speech.quantity_as_typed(rate, units.get(work, ''))} an hour on {name(work, 32)}"
        for work, rate in category.output.items()
        if rate
    ]


def _needs(speech: Speech, category: Category) -> list[str]:
    parts = []
    if category.supervision.hours and category.supervision.by:
        by = listed([name(who, 32) for who in category.supervision.by], "or")
        parts.append(f"takes {speech.number(category.supervision.hours)}\u00a0h of {by}")
    if category.lot != 1:
        parts.append(f"comes in lots of {speech.number(category.lot)}")
    if category.overtime_hours:
        parts.append(f"up to {speech.number(category.overtime_hours)}\u00a0h overtime")
    if category.settling_hours:
        parts.append(f"loses {speech.number(category.settling_hours)}\u00a0h settling in")
    return parts
