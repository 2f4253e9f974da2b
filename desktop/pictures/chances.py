"""What the picture of cost against chance shows, as pure data, and shares of days in words."""

from __future__ import annotations

from dataclasses import dataclass

from desktop import attendance_words as say
from desktop import figures
from desktop.tables.crew_text import crew_text
from solver.answer import Attendance, CrewChance, SafeCrew
from solver.plan import Budget, Plan

_FEW_CENTS = 0.005


@dataclass(frozen=True)
class ChanceCurve:
    """The cheapest crews for rising chances, other workable crews beside them, and what is wanted."""

    curve: tuple[SafeCrew, ...]
    others: tuple[CrewChance, ...]
    wanted: float
    budget: float | None
    currency: str


def curve_of(plan: Plan, found: Attendance) -> ChanceCurve:
    """The picture of an answer: crews that stand on the curve are not shown a second time."""
    on_curve = {_key(crew.covered, crew.cost) for crew in found.curve}
    others = tuple(
        crew
        for crew in found.compared
        if crew.cost is not None and _key(crew.covered, crew.cost) not in on_curve
    )
    budgets = [float(rule.at_most) for rule in plan.rules if isinstance(rule, Budget)]
    return ChanceCurve(found.curve, others, found.chance, min(budgets, default=None), plan.currency)


def _key(covered: float, cost: float) -> tuple[float, float]:
    return round(covered, 9), round(cost, 2)


def share(chance: float) -> str:
    """A chance in per cent; never 100 % for less than always, nor a dash for what can happen."""
    if 0.9995 <= chance < 1:
        return f"over{figures.NBSP}{figures.percent(99.9)}"
    if 0 < chance < 0.0005:
        return f"under{figures.NBSP}{figures.percent(0.1)}"
    return f"{figures.number(100 * chance, 1)}{figures.NBSP}%" if chance > 0 else figures.NIL


def safe_sentence(plan: Plan, crew: SafeCrew) -> str:
    """A crew of the curve in words."""
    money = figures.money(crew.extra, plan.currency)
    extra = say.more(money) if crew.extra > _FEW_CENTS else say.AS_CHEAP
    told = say.safe(share(crew.wanted), crew_text(plan, crew.crew), extra, share(crew.covered))
    return told if crew.proved else f"{told} {say.not_proved(figures.money(crew.bound, plan.currency))}"
