"""Inserting, renaming, duplicating, moving and deleting works; outputs follow."""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping
from dataclasses import replace
from decimal import Decimal
from types import MappingProxyType

from desktop.edits.sequences import first_free, fresh_name, inserted, moved, without
from solver.plan import ZERO, Category, Plan, Work


def rename(plan: Plan, old: str, new: str) -> Plan:
    """`plan` with the work `old` called `new`, in the outputs too."""
    works = tuple(replace(w, name=new) if w.name == old else w for w in plan.works)
    return _with_outputs(
        replace(plan, works=works),
        lambda output: {new if work == old else work: rate for work, rate in output.items()},
    )


def insert(plan: Plan, at: int, count: int = 1) -> Plan:
    """`plan` with `count` new works of nothing before index `at`; the unit is that of the work above."""
    unit = plan.works[max(0, at - 1)].unit if plan.works else "units"
    new: list[Work] = []
    for _ in range(count):
        name = first_free("Work", {w.name for w in (*plan.works, *new)})
        new.append(Work(name, unit, (ZERO,) * len(plan.phases)))
    return replace(plan, works=inserted(plan.works, at, new))


def duplicate(plan: Plan, indices: Collection[int]) -> Plan:
    """`plan` with a copy of each work at `indices`, done at the same rates by the same categories."""
    taken = {w.name for w in plan.works}
    names: dict[str, str] = {}
    for index in sorted(indices):
        old = plan.works[index].name
        names[old] = fresh_name(old, taken)
        taken.add(names[old])
    copies = [replace(plan.works[index], name=names[plan.works[index].name]) for index in sorted(indices)]
    made = replace(plan, works=inserted(plan.works, max(indices) + 1, copies))
    return _with_outputs(
        made, lambda output: {**output, **{names[w]: r for w, r in output.items() if w in names}}
    )


def move(plan: Plan, indices: Collection[int], by: int) -> Plan:
    """`plan` with the works at `indices` one place up (-1) or down (1)."""
    return replace(plan, works=moved(plan.works, indices, by))


def delete(plan: Plan, indices: Collection[int]) -> Plan:
    """`plan` without the works at `indices` and the outputs of them."""
    gone = {plan.works[index].name for index in indices}
    made = replace(plan, works=without(plan.works, indices))
    return _with_outputs(made, lambda output: {w: r for w, r in output.items() if w not in gone})


def uses(plan: Plan, indices: Collection[int]) -> tuple[str, ...]:
    """The categories that lose an output when the works at `indices` are deleted."""
    gone = {plan.works[index].name for index in indices}
    return tuple(c.name for c in plan.categories if any(c.output.get(work) for work in gone))


def _with_outputs(plan: Plan, change: Callable[[Mapping[str, Decimal]], dict[str, Decimal]]) -> Plan:
    def changed(category: Category) -> Category:
        output = change(category.output)
        same = output == dict(category.output)
        return category if same else replace(category, output=MappingProxyType(output))

    return replace(plan, categories=tuple(changed(c) for c in plan.categories))
