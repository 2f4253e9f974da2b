"""Inserting, renaming, moving and deleting phases; amounts, rules and the own crew follow."""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import replace
from decimal import Decimal
from types import MappingProxyType

from desktop.edits.sequences import first_free, fresh_name, inserted, moved, without
from solver.plan import ZERO, Budget, Phase, Plan, Rule

PerPhase = Callable[[tuple[Decimal, ...]], tuple[Decimal, ...]]


def rename(plan: Plan, old: str, new: str) -> Plan:
    """`plan` with the phase `old` called `new`, in the rules too."""
    phases = tuple(replace(p, name=new) if p.name == old else p for p in plan.phases)
    rules = (_in_phases(r, lambda names: tuple(new if n == old else n for n in names)) for r in plan.rules)
    return replace(plan, phases=phases, rules=tuple(rules))


def insert(plan: Plan, at: int, count: int = 1) -> Plan:
    """`plan` with `count` new phases before index `at`, as long as the one before and without any work.

    The own crew stays as it was in the phase before.
    """
    before = max(0, at - 1)
    taken = {p.name for p in plan.phases}
    new: list[Phase] = []
    for _ in range(count):
        new.append(replace(plan.phases[before], name=first_free("Phase", taken)))
        taken.add(new[-1].name)
    return _reshaped(
        replace(plan, phases=inserted(plan.phases, at, new)),
        lambda amounts: inserted(amounts, at, [ZERO] * count),
        lambda counts: inserted(counts, at, list(counts[before : before + 1]) * count),
    )


def duplicate(plan: Plan, indices: Collection[int]) -> Plan:
    """`plan` with a copy of each phase at `indices` below the last of them, with the same amounts."""
    chosen, at = sorted(indices), max(indices) + 1
    taken = {p.name for p in plan.phases}
    copies: list[Phase] = []
    for index in chosen:
        copies.append(replace(plan.phases[index], name=fresh_name(plan.phases[index].name, taken)))
        taken.add(copies[-1].name)

    def follow(values: tuple[Decimal, ...]) -> tuple[Decimal, ...]:
        return inserted(values, at, [values[index] for index in chosen])

    return _reshaped(replace(plan, phases=inserted(plan.phases, at, copies)), follow, follow)


def move(plan: Plan, indices: Collection[int], by: int) -> Plan:
    """`plan` with the phases at `indices` one place earlier (-1) or later (1)."""

    def follow(values: tuple[Decimal, ...]) -> tuple[Decimal, ...]:
        return moved(values, indices, by)

    return _reshaped(replace(plan, phases=moved(plan.phases, indices, by)), follow, follow)


def delete(plan: Plan, indices: Collection[int]) -> Plan:
    """`plan` without the phases at `indices` and their amounts; the last phase stays.

    A rule that held in no other phase goes (`uses` says so first).
    """
    if len(set(indices)) >= len(plan.phases):
        return plan
    gone = {plan.phases[index].name for index in indices}
    rules = (_in_phases(r, lambda names: tuple(n for n in names if n not in gone)) for r in plan.rules)
    kept = tuple(r for r in rules if isinstance(r, Budget) or r.phases is None or r.phases)

    def follow(values: tuple[Decimal, ...]) -> tuple[Decimal, ...]:
        return without(values, indices)

    made = replace(plan, phases=without(plan.phases, indices), rules=kept)
    return _reshaped(made, follow, follow)


def uses(plan: Plan, indices: Collection[int]) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """(works that have an amount in the phases at `indices`, rules that hold in no other phase)."""
    gone = {plan.phases[index].name for index in indices}
    works = tuple(w.name for w in plan.works if any(w.amounts[i] for i in indices if i < len(w.amounts)))
    rules = tuple(
        r.name for r in plan.rules if not isinstance(r, Budget) and r.phases and gone.issuperset(r.phases)
    )
    return works, rules


def _in_phases(rule: Rule, change: Callable[[tuple[str, ...]], tuple[str, ...]]) -> Rule:
    if isinstance(rule, Budget) or rule.phases is None:
        return rule
    return replace(rule, phases=change(rule.phases))


def _reshaped(plan: Plan, amounts: PerPhase, counts: PerPhase) -> Plan:
    return replace(
        plan,
        works=tuple(replace(w, amounts=amounts(w.amounts)) for w in plan.works),
        own=MappingProxyType({name: counts(own) for name, own in plan.own.items()}),
    )
