"""The grid of phases, shown where a plan has more than one."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import replace
from decimal import Decimal

from desktop import messages
from desktop.edits import phases
from desktop.edits.sequences import replaced
from desktop.tables.column import Column, Kind, Value
from desktop.tables.table import Table
from solver.plan import ONE, Phase, Plan


def _names(plan: Plan) -> tuple[str, ...]:
    return tuple(p.name for p in plan.phases)


def put_periods(plan: Plan, row: int, value: Value) -> Plan:
    """`plan` with the phase at `row` as long as `value`."""
    periods = value if isinstance(value, Decimal) else ONE
    return replace(plan, phases=replaced(plan.phases, row, replace(plan.phases[row], periods=periods)))


def _columns(plan: Plan) -> tuple[Column, ...]:
    def put_name(plan: Plan, row: int, value: Value) -> Plan:
        return phases.rename(plan, plan.phases[row].name, str(value))

    return (
        Column(
            "name",
            "Phase",
            "",
            "A stretch of equal periods. A new name is used in the rules too.",
            Kind.TEXT,
            lambda plan, row: plan.phases[row].name,
            put_name,
            lambda row: f"phases[{row}].name",
        ),
        length_column(plan.period),
    )


def length_column(period: str) -> Column:
    """How long a phase is."""
    return Column(
        "periods",
        "Length",
        f"{period}s",
        f"How many {period}s the phase lasts; amounts of work are for the whole phase and do not change.",
        Kind.NUMBER,
        lambda plan, row: plan.phases[row].periods,
        put_periods,
        lambda row: f"phases[{row}].periods",
        blank=ONE,
    )


def _loss(plan: Plan, indices: Collection[int]) -> str:
    if len(set(indices)) >= len(plan.phases):
        return messages.LAST_PHASE_STAYS
    return messages.phase_loss(*phases.uses(plan, indices))


def _alone(plan: Plan, row: int) -> Plan:
    return Plan(phases=(Phase(plan.phases[row].name),))


PHASES = Table(
    key="phases",
    noun="phase",
    title="Phases",
    names=_names,
    columns=_columns,
    insert=phases.insert,
    duplicate=phases.duplicate,
    move=phases.move,
    delete=phases.delete,
    loss=_loss,
    alone=_alone,
)
