"""The grid of works."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import replace
from decimal import Decimal
from typing import Any

from desktop import messages
from desktop.edits import works
from desktop.edits.sequences import replaced
from desktop.tables.column import Column, Kind, Value
from desktop.tables.table import Table
from solver.plan import ZERO, Plan, Work


def _names(plan: Plan) -> tuple[str, ...]:
    return tuple(w.name for w in plan.works)


def _put(plan: Plan, row: int, work: Work) -> Plan:
    return replace(plan, works=replaced(plan.works, row, work))


def _name() -> Column:
    def put(plan: Plan, row: int, value: Value) -> Plan:
        return works.rename(plan, plan.works[row].name, str(value))

    return Column(
        "name",
        "Work",
        "",
        "What is to be delivered. A new name is used in the outputs too.",
        Kind.TEXT,
        lambda plan, row: plan.works[row].name,
        put,
        lambda row: f"works[{row}].name",
    )


def _field(
    key: str, title: str, unit: str, tooltip: str, kind: Kind, none_shown: str | None = None
) -> Column:
    def put(plan: Plan, row: int, value: Value) -> Plan:
        changed: dict[str, Any] = {key: value if value is not None or none_shown is not None else ""}
        return _put(plan, row, replace(plan.works[row], **changed))

    return Column(
        key,
        title,
        unit,
        tooltip,
        kind,
        lambda plan, row: getattr(plan.works[row], key),
        put,
        lambda row: f"works[{row}].{key}",
        optional=none_shown is not None,
        none_shown=none_shown or "",
    )


def _amount(at: int, title: str, tooltip: str) -> Column:
    def get(plan: Plan, row: int) -> Value:
        amounts = plan.works[row].amounts
        return amounts[at] if at < len(amounts) else ZERO

    def put(plan: Plan, row: int, value: Value) -> Plan:
        work = plan.works[row]
        amounts = (*work.amounts, *[ZERO] * (len(plan.phases) - len(work.amounts)))
        number = value if isinstance(value, Decimal) else ZERO
        return _put(plan, row, replace(work, amounts=replaced(amounts, at, number)))

    return Column(
        f"amount:{at}",
        title,
        "units",
        tooltip,
        Kind.NUMBER,
        get,
        put,
        lambda row: f"works[{row}].amounts[{at}]",
        blank=ZERO,
    )


def _amounts(plan: Plan) -> tuple[Column, ...]:
    if len(plan.phases) == 1:
        return (_amount(0, "Amount", "How much is to be delivered, in all."),)
    return tuple(
        _amount(at, phase.name, f"How much is to be delivered in the whole phase {phase.name}.")
        for at, phase in enumerate(plan.phases)
    )


def _columns(plan: Plan) -> tuple[Column, ...]:
    per_phase = "" if len(plan.phases) == 1 else " in one phase"
    return (
        _name(),
        _field("unit", "Unit", "", "What it is counted in: trees, m, crates.", Kind.TEXT),
        *_amounts(plan),
        _field(
            "buy_in_price",
            "Buy-in price",
            f"{plan.currency}/unit",
            "What one unit costs when somebody else delivers it; empty where nobody sells it.",
            Kind.NUMBER,
            messages.NOBODY_SELLS,
        ),
        _field(
            "buy_in_most",
            "Buy in at most",
            "units",
            f"The most that can be bought in{per_phase}; empty for no limit.",
            Kind.NUMBER,
            messages.NO_LIMIT,
        ),
    )


def _loss(plan: Plan, indices: Collection[int]) -> str:
    return messages.work_loss(works.uses(plan, indices))


def _alone(plan: Plan, row: int) -> Plan:
    work = Work(plan.works[row].name, plan.works[row].unit, (ZERO,) * len(plan.phases))
    return Plan(phases=plan.phases, works=(work,))


WORKS = Table(
    key="works",
    noun="work",
    title="Works",
    names=_names,
    columns=_columns,
    insert=works.insert,
    duplicate=works.duplicate,
    move=works.move,
    delete=works.delete,
    loss=_loss,
    alone=_alone,
)
