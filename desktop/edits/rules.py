"""New rules, and duplicating, moving and deleting them."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import replace
from decimal import Decimal
from types import MappingProxyType

from desktop.edits.sequences import fresh_name, inserted, moved, replaced, without
from solver.plan import ONE, Budget, Plan, Presence, Ratio, Rule, Sense, Share


def add(plan: Plan, rule: Rule) -> Plan:
    """`plan` with `rule` as its last, under a name of its own."""
    return replace(plan, rules=(*plan.rules, named_apart(plan, rule)))


def put(plan: Plan, index: int, rule: Rule) -> Plan:
    """`plan` with `rule` in place of the one at `index`."""
    return replace(plan, rules=replaced(plan.rules, index, rule))


def named_apart(plan: Plan, rule: Rule) -> Rule:
    """`rule`, with a number behind its name where another rule has that name."""
    taken = {r.name for r in plan.rules}
    return replace(rule, name=fresh_name(rule.name, taken)) if rule.name in taken else rule


def duplicate(plan: Plan, indices: Collection[int]) -> Plan:
    """`plan` with a copy of each rule at `indices` below the last of them."""
    taken = {r.name for r in plan.rules}
    copies: list[Rule] = []
    for index in sorted(indices):
        copies.append(replace(plan.rules[index], name=fresh_name(plan.rules[index].name, taken)))
        taken.add(copies[-1].name)
    return replace(plan, rules=inserted(plan.rules, max(indices) + 1, copies))


def move(plan: Plan, indices: Collection[int], by: int) -> Plan:
    """`plan` with the rules at `indices` one place up (-1) or down (1)."""
    return replace(plan, rules=moved(plan.rules, indices, by))


def delete(plan: Plan, indices: Collection[int]) -> Plan:
    """`plan` without the rules at `indices`."""
    return replace(plan, rules=without(plan.rules, indices))


def new_presence(plan: Plan) -> Presence:
    """At least one of the first category: the commonest presence rule."""
    first = tuple(c.name for c in plan.categories[:1])
    return Presence("Presence", MappingProxyType(dict.fromkeys(first, ONE)), Sense.AT_LEAST, ONE)


def new_ratio(plan: Plan) -> Ratio:
    """At most three of the second category for each of the first."""
    names = [c.name for c in plan.categories]
    return Ratio("Ratio", tuple(names[1:2] or names[:1]), tuple(names[:1]), Decimal(3))


def new_share(plan: Plan) -> Share:
    """At least a quarter of everybody is of the first category."""
    names = tuple(c.name for c in plan.categories)
    return Share("Share", names[:1], names, Sense.AT_LEAST, Decimal("0.25"))


def new_budget(plan: Plan) -> Budget:
    """No limit worth the name until an amount is typed."""
    return Budget("Budget", Decimal(1_000_000))
