"""Inserting, renaming, duplicating, moving and deleting categories; everything that names them follows."""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping
from dataclasses import replace
from decimal import Decimal
from types import MappingProxyType
from typing import TypeVar

from desktop.edits.sequences import first_free, fresh_name, inserted, moved, without
from solver.plan import Budget, Category, Plan, Presence, Ratio, Rule, Share, Supervision

V = TypeVar("V")

FIRST_HOURS = Decimal(38)
FIRST_PAY = Decimal(800)


def rename(plan: Plan, old: str, new: str) -> Plan:
    """`plan` with the category `old` called `new` wherever it is named."""

    def name(given: str) -> str:
        return new if given == old else given

    return replace(
        plan,
        categories=tuple(_renamed(c, name) for c in plan.categories),
        rules=tuple(_rule_renamed(r, name) for r in plan.rules),
        own=_keys_renamed(plan.own, name),
    )


def _renamed(category: Category, name: Callable[[str], str]) -> Category:
    by = tuple(name(n) for n in category.supervision.by)
    return replace(category, name=name(category.name), supervision=replace(category.supervision, by=by))


def _rule_renamed(rule: Rule, name: Callable[[str], str]) -> Rule:
    if isinstance(rule, Presence):
        return replace(rule, weights=_keys_renamed(rule.weights, name))
    if isinstance(rule, Ratio):
        return replace(rule, of=tuple(map(name, rule.of)), per=tuple(map(name, rule.per)))
    if isinstance(rule, Share):
        return replace(rule, of=tuple(map(name, rule.of)), within=tuple(map(name, rule.within)))
    return rule


def _keys_renamed(pairs: Mapping[str, V], name: Callable[[str], str]) -> Mapping[str, V]:
    return MappingProxyType({name(key): value for key, value in pairs.items()})


def insert(plan: Plan, at: int, count: int = 1) -> Plan:
    """`plan` with `count` new categories before index `at`.

    Pay, hours and absence are those of the category above, as most often in one firm; a new category
    delivers nothing until its output is typed, so it changes no answer.
    """
    new: list[Category] = []
    for _ in range(count):
        taken = {c.name for c in (*plan.categories, *new)}
        new.append(_like(plan, at, first_free("Category", taken)))
    return replace(plan, categories=inserted(plan.categories, at, new))


def _like(plan: Plan, at: int, name: str) -> Category:
    if not plan.categories:
        return Category(name, FIRST_PAY, FIRST_HOURS)
    above = plan.categories[max(0, at - 1)]
    return Category(name, above.pay, above.hours, absence=above.absence)


def duplicate(plan: Plan, indices: Collection[int]) -> Plan:
    """`plan` with a copy of each category at `indices` below the last of them; rules name the old ones."""
    taken = {c.name for c in plan.categories}
    copies: list[Category] = []
    for index in sorted(indices):
        name = fresh_name(plan.categories[index].name, taken)
        taken.add(name)
        copies.append(replace(plan.categories[index], name=name))
    return replace(plan, categories=inserted(plan.categories, max(indices) + 1, copies))


def move(plan: Plan, indices: Collection[int], by: int) -> Plan:
    """`plan` with the categories at `indices` one place up (-1) or down (1)."""
    return replace(plan, categories=moved(plan.categories, indices, by))


def delete(plan: Plan, indices: Collection[int]) -> Plan:
    """`plan` without the categories at `indices`, also where they were named.

    A rule that is left with nobody goes; supervision by nobody but them goes too (`uses` says so first).
    """
    gone = {plan.categories[index].name for index in indices}
    rules = (_rule_without(rule, gone) for rule in plan.rules)
    return replace(
        plan,
        categories=tuple(_unsupervised(c, gone) for c in without(plan.categories, indices)),
        rules=tuple(rule for rule in rules if rule is not None),
        own=_without_keys(plan.own, gone),
    )


def _unsupervised(category: Category, gone: Collection[str]) -> Category:
    by = _others(category.supervision.by, gone)
    if by == category.supervision.by:
        return category
    return replace(category, supervision=Supervision(category.supervision.hours, by) if by else Supervision())


def _rule_without(rule: Rule, gone: Collection[str]) -> Rule | None:
    if isinstance(rule, Budget):
        return rule
    if isinstance(rule, Presence):
        weights = _without_keys(rule.weights, gone)
        return replace(rule, weights=weights) if weights else None
    of = _others(rule.of, gone)
    if isinstance(rule, Ratio):
        per = _others(rule.per, gone)
        return replace(rule, of=of, per=per) if of and per else None
    within = _others(rule.within, gone)
    return replace(rule, of=of, within=within) if of and within else None


def _others(names: tuple[str, ...], gone: Collection[str]) -> tuple[str, ...]:
    return tuple(n for n in names if n not in gone)


def _without_keys(pairs: Mapping[str, V], gone: Collection[str]) -> Mapping[str, V]:
    return MappingProxyType({key: value for key, value in pairs.items() if key not in gone})


def named_in(rule: Rule) -> tuple[str, ...]:
    """The categories a rule names."""
    if isinstance(rule, Presence):
        return tuple(rule.weights)
    if isinstance(rule, Ratio):
        return (*rule.of, *rule.per)
    if isinstance(rule, Share):
        return (*rule.of, *rule.within)
    return ()


def uses(plan: Plan, indices: Collection[int]) -> tuple[tuple[str, ...], tuple[str, ...], tuple[str, ...]]:
    """What deleting the categories at `indices` does elsewhere, as names.

    (rules that change, rules that go, categories that lose all supervision).
    """
    gone = {plan.categories[index].name for index in indices}
    after = {rule.name: _rule_without(rule, gone) for rule in plan.rules}
    touched = [rule.name for rule in plan.rules if gone.intersection(named_in(rule))]
    lost = [
        c.name
        for c in without(plan.categories, indices)
        if c.supervision.by and not _others(c.supervision.by, gone)
    ]
    changed = tuple(name for name in touched if after[name] is not None)
    return changed, tuple(name for name in touched if after[name] is None), tuple(lost)
