"""Rules as sentences a planner would say."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal

from desktop.tables.column import percent_of
from desktop.tables.numbers import shown
from solver.plan import Budget, Plan, Presence, Ratio, Rule, Sense, Share

SENSES = {Sense.AT_LEAST: "at least", Sense.AT_MOST: "at most", Sense.EXACTLY: "exactly"}
NOBODY = "nobody"


def people(names: Sequence[str]) -> str:
    """`A, B or C`."""
    if not names:
        return NOBODY
    *most, last = names
    return f"{', '.join(most)} or {last}" if most else last


def together(names: Sequence[str]) -> str:
    """`A, B and C`."""
    if not names:
        return NOBODY
    *most, last = names
    return f"{', '.join(most)} and {last}" if most else last


def count(number: Decimal) -> str:
    """A number of people in a sentence, where zero is a word of its own."""
    return "0" if number == 0 else shown(number)


def when(rule: Rule, plan: Plan) -> str:
    """In which phases a rule holds; nothing for all of them."""
    if isinstance(rule, Budget) or rule.phases is None or len(plan.phases) == 1:
        return ""
    return f", only in {together(rule.phases)}"


def by_day(rule: Ratio | Share) -> str:
    """Whether a rule is asked of those present on a day too."""
    return ", on every working day too" if rule.by_day else ""


def presence(rule: Presence, plan: Plan) -> str:
    """At least 4 people of A or B."""
    weights = list(rule.weights.items())
    if all(weight == 1 for _, weight in weights):
        return f"{SENSES[rule.sense]} {count(rule.bound)} of {people(list(rule.weights))}{when(rule, plan)}"
    counted = together([f"{name} as {count(weight)}" for name, weight in weights])
    return f"{SENSES[rule.sense]} {count(rule.bound)}, counting {counted}{when(rule, plan)}"


def ratio(rule: Ratio, plan: Plan) -> str:
    """At most 2 A for each B."""
    most = f"at most {count(rule.at_most)} {people(rule.of)} for each {people(rule.per)}"
    return most + by_day(rule) + when(rule, plan)


def share(rule: Share, plan: Plan) -> str:
    """At least 40 % of all people are A or B."""
    everybody = set(rule.within) == {c.name for c in plan.categories}
    whole = "all people" if everybody else together(rule.within)
    part = f"{SENSES[rule.sense]} {count(percent_of(rule.fraction))} % of {whole}"
    return f"{part} are {people(rule.of)}{by_day(rule)}{when(rule, plan)}"


def budget(rule: Budget, plan: Plan) -> str:
    """The whole job costs at most EUR 95 000."""
    return f"the whole job costs at most {plan.currency} {count(rule.at_most)}"
