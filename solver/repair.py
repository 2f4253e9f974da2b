"""Repairs of an impossible plan: the number to change, in words, and the plan with it changed.

Knows no engine: the window applies repairs in its own process.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import replace
from decimal import Decimal
from typing import Any

from solver.answer import Conflicting, LineKind
from solver.plan import Budget, Category, Plan, Presence, Ratio, Rule, Sense, Share

NOT_ENOUGH = "Not enough alone."
PERCENT = "percentage points"


def can_repair(conflicting: Conflicting) -> bool:
    """Whether `apply_repair` knows a number of the plan to change."""
    if conflicting.move is None or conflicting.kind in (None, LineKind.SUPERVISION):
        return False
    return conflicting.kind is not LineKind.SHARE or conflicting.unit == PERCENT


def apply_repair(plan: Plan, conflicting: Conflicting) -> Plan:
    """The plan with the line's number moved, everywhere that number holds.

    ValueError where there is no number to move: see `can_repair`. KeyError if the plan has no such line.
    """
    if not can_repair(conflicting) or conflicting.move is None or conflicting.kind is None:
        raise ValueError(f"{conflicting.line} has no number that could be changed")
    return _APPLIED[conflicting.kind](plan, conflicting, decimal(conflicting.move))


def decimal(number: float) -> Decimal:
    """The decimal that prints like `number`."""
    return Decimal(repr(number))


# ---- one kind of line each -------------------------------------------------------------------------


def _work(plan: Plan, line: Conflicting, move: Decimal) -> Plan:
    t = next(i for i, phase in enumerate(plan.phases) if phase.name == line.phase)
    works = list(plan.works)
    k = next((i for i, work in enumerate(works) if work.name == line.line), None)
    if k is None:
        raise KeyError(line.line)
    amounts = list(works[k].amounts)
    amounts[t] -= move
    works[k] = replace(works[k], amounts=tuple(amounts))
    return replace(plan, works=tuple(works))


def _presence(plan: Plan, line: Conflicting, move: Decimal) -> Plan:
    rule = _rule(plan, line.line)
    assert isinstance(rule, Presence)
    bound = rule.bound - move if rule.sense is Sense.AT_LEAST else rule.bound + move
    return _with_rule(plan, replace(rule, bound=bound))


def _ratio(plan: Plan, line: Conflicting, move: Decimal) -> Plan:
    rule = _rule(plan, line.line)
    assert isinstance(rule, Ratio)
    return _with_rule(plan, replace(rule, at_most=rule.at_most + move))


def _share(plan: Plan, line: Conflicting, move: Decimal) -> Plan:
    rule = _rule(plan, line.line)
    assert isinstance(rule, Share)
    change = move / 100 if rule.sense is Sense.AT_MOST else -move / 100
    return _with_rule(plan, replace(rule, fraction=rule.fraction + change))


def _budget(plan: Plan, line: Conflicting, move: Decimal) -> Plan:
    rule = _rule(plan, line.line)
    assert isinstance(rule, Budget)
    return _with_rule(plan, replace(rule, at_most=rule.at_most + move))


def _bound(plan: Plan, line: Conflicting, move: Decimal) -> Plan:
    name, key = bound_of(line.line)
    category = plan.category(name)
    typed: Decimal | None = getattr(category, key)
    changed: dict[str, Any] = {key: (typed or Decimal(0)) + (move if key == "at_most" else -move)}
    mended = replace(category, **changed)
    return replace(plan, categories=tuple(mended if c is category else c for c in plan.categories))


_APPLIED: Mapping[LineKind, Callable[[Plan, Conflicting, Decimal], Plan]] = {
    LineKind.WORK: _work,
    LineKind.PRESENCE: _presence,
    LineKind.RATIO: _ratio,
    LineKind.SHARE: _share,
    LineKind.BUDGET: _budget,
    LineKind.BOUND: _bound,
}


# ---- names -----------------------------------------------------------------------------------------


def bound_of(line: str) -> tuple[str, str]:
    """`Lead hand: at least` as the category's name and the key of its number."""
    name, _, asks = line.rpartition(": ")
    return name, {"at least": "at_least", "at most": "at_most", "least if any": "least_if_any"}[asks]


def typed_bound(category: Category, key: str) -> Decimal:
    """The number of a category's bound as typed."""
    value: Decimal | None = getattr(category, key)
    return Decimal(0) if value is None else value


def _rule(plan: Plan, name: str) -> Rule:
    for rule in plan.rules:
        if rule.name == name:
            return rule
    raise KeyError(name)


def _with_rule(plan: Plan, mended: Rule) -> Plan:
    return replace(plan, rules=tuple(mended if r.name == mended.name else r for r in plan.rules))
