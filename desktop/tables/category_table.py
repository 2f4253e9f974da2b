"""The grid of worker categories. A new column is one entry of `_FIELDS`."""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import replace
from decimal import Decimal
from types import MappingProxyType
from typing import Any

from desktop import messages
from desktop.edits import categories
from desktop.edits.reckoned import by_hand, hours_note, pay_note
from desktop.edits.sequences import replaced
from desktop.tables.column import Column, Kind, Value
from desktop.tables.table import Table
from solver.plan import ONE, ZERO, Category, Plan, Supervision
from solver.review import step

LIMITS, MOVES, HOURS = "limits", "moves", "hours"


def _names(plan: Plan) -> tuple[str, ...]:
    return tuple(c.name for c in plan.categories)


def _put(plan: Plan, row: int, category: Category) -> Plan:
    return replace(plan, categories=replaced(plan.categories, row, category))


def _field(
    key: str,
    title: str,
    unit: str,
    tooltip: str,
    *,
    kind: Kind = Kind.NUMBER,
    group: str = "",
    blank: Value = ZERO,
    none_shown: str | None = None,
    note: Callable[[Category], str] | None = None,
) -> Column:
    """A column of a plain field of Category; `none_shown` makes it optional.

    `note` tells how a value that may have been worked out came about.
    """

    def put(plan: Plan, row: int, value: Value) -> Plan:
        changed: dict[str, Any] = {key: value}
        made = replace(plan.categories[row], **changed)
        return _put(plan, row, made if note is None else by_hand(plan.categories[row], made, title))

    return Column(
        key,
        title,
        unit,
        tooltip,
        kind,
        lambda plan, row: getattr(plan.categories[row], key),
        put,
        lambda row: f"categories[{row}].{key}",
        blank=blank,
        optional=none_shown is not None,
        none_shown=none_shown or "",
        group=group,
        note=None if note is None else lambda plan, row: note(plan.categories[row]),
    )


def _name() -> Column:
    def put(plan: Plan, row: int, value: Value) -> Plan:
        return categories.rename(plan, plan.categories[row].name, str(value))

    return Column(
        "name",
        "Category",
        "",
        "What this kind of worker is called. A new name is used in every rule that names the old one.",
        Kind.TEXT,
        lambda plan, row: plan.categories[row].name,
        put,
        lambda row: f"categories[{row}].name",
    )


def _output(work: str, unit: str) -> Column:
    def put(plan: Plan, row: int, value: Value) -> Plan:
        category = plan.categories[row]
        output = {w: rate for w, rate in category.output.items() if w != work}
        if isinstance(value, Decimal) and value != 0:
            output[work] = value
        ordered = {w.name: output[w.name] for w in plan.works if w.name in output}
        return _put(plan, row, replace(category, output=MappingProxyType({**output, **ordered})))

    return Column(
        f"output:{work}",
        work,
        f"{unit}/h",
        f"Output: {unit} of {work} that one person delivers per attended hour.",
        Kind.NUMBER,
        lambda plan, row: plan.categories[row].output.get(work, ZERO),
        put,
        lambda row: step(f"categories[{row}].output", work),
        blank=ZERO,
    )


def _supervision_hours(period: str) -> Column:
    def put(plan: Plan, row: int, value: Value) -> Plan:
        category = plan.categories[row]
        hours = value if isinstance(value, Decimal) else ZERO
        return _put(plan, row, replace(category, supervision=Supervision(hours, category.supervision.by)))

    return Column(
        "supervision.hours",
        "Supervision",
        f"h/{period}",
        f"Hours per {period} that one person takes from those who supervise.",
        Kind.NUMBER,
        lambda plan, row: plan.categories[row].supervision.hours,
        put,
        lambda row: f"categories[{row}].supervision.hours",
        blank=ZERO,
    )


def _supervised_by() -> Column:
    def put(plan: Plan, row: int, value: Value) -> Plan:
        category = plan.categories[row]
        by = value if isinstance(value, tuple) else ()
        return _put(plan, row, replace(category, supervision=Supervision(category.supervision.hours, by)))

    return Column(
        "supervision.by",
        "Supervised by",
        "",
        "The categories whose hours the supervision takes; any of them may give it.",
        Kind.NAMES,
        lambda plan, row: plan.categories[row].supervision.by,
        put,
        lambda row: f"categories[{row}].supervision.by",
        blank=(),
        choices=_names,
    )


def _columns(plan: Plan) -> tuple[Column, ...]:
    per = f"{plan.currency}/{plan.period}"
    return (
        _name(),
        _field(
            "on_books", "On books", "people", "People of this category who are there before the first phase."
        ),
        *_limits(),
        _field(
            "pay", "Pay", per, f"What one person costs per {plan.period}, {plan.currency}.", note=pay_note
        ),
        *_moves(plan.currency),
        _field(
            "hours",
            "Hours",
            f"h/{plan.period}",
            f"Paid hours of one person per {plan.period}.",
            note=hours_note,
        ),
        _field(
            "absence",
            "Absence",
            "%",
            "Share of the paid hours that are lost to leave, illness and training.",
            kind=Kind.PERCENT,
            note=hours_note,
        ),
        *_more_hours(plan),
        *(_output(work.name, work.unit) for work in plan.works),
        _supervision_hours(plan.period),
        _supervised_by(),
    )


def _limits() -> tuple[Column, ...]:
    return (
        _field(
            "at_least",
            "At least",
            "people",
            "The fewest people of this category, in every phase.",
            group=LIMITS,
        ),
        _field(
            "at_most",
            "At most",
            "people",
            "The most people of this category, in every phase; empty for no limit.",
            group=LIMITS,
            blank=None,
            none_shown=messages.NO_LIMIT,
        ),
        _field(
            "least_if_any",
            "Least if any",
            "people",
            "If anybody of this category is there in a phase, then at least so many.",
            group=LIMITS,
        ),
        _field(
            "lot",
            "Lot",
            "people",
            "People come in whole multiples of this: 4 = gangs of four, 0.5 = half posts.",
            group=LIMITS,
            blank=ONE,
        ),
    )


def _moves(currency: str) -> tuple[Column, ...]:
    return (
        _field(
            "join_cost",
            "Joining",
            f"{currency}/person",
            "What it costs once to take one person on.",
            group=MOVES,
        ),
        _field(
            "leave_cost",
            "Leaving",
            f"{currency}/person",
            "What it costs once to let one person go.",
            group=MOVES,
        ),
        _field(
            "open_cost",
            "Opening",
            f"{currency} once",
            "Paid once if anybody of this category is there in any phase: equipment, a hut, a licence.",
            group=MOVES,
        ),
    )


def _more_hours(plan: Plan) -> tuple[Column, ...]:
    return (
        _field(
            "overtime_hours",
            "Overtime",
            f"h/{plan.period}",
            f"The most overtime one person can work per {plan.period}, beyond the paid hours.",
            group=HOURS,
        ),
        _field(
            "overtime_rate", "Rate", f"{plan.currency}/h", "What one hour of overtime costs.", group=HOURS
        ),
        _field(
            "settling_hours",
            "Settling in",
            "h/joiner",
            "Hours of one joiner that are lost in the phase of joining.",
            group=HOURS,
        ),
        _field(
            "day_absence",
            "Day absence",
            "%",
            "Chance that one person is away on a working day, where it differs from the absence.",
            kind=Kind.PERCENT,
            group=HOURS,
            blank=None,
            none_shown=messages.AS_ABSENCE,
        ),
    )


def _loss(plan: Plan, indices: Collection[int]) -> str:
    changed, gone, lost = categories.uses(plan, indices)
    return messages.category_loss(changed, gone, lost)


def _alone(plan: Plan, row: int) -> Plan:
    return Plan(categories=(Category(plan.categories[row].name, ZERO, ZERO),), works=plan.works)


CATEGORIES = Table(
    key="categories",
    noun="category",
    title="Categories",
    names=_names,
    columns=_columns,
    insert=categories.insert,
    duplicate=categories.duplicate,
    move=categories.move,
    delete=categories.delete,
    loss=_loss,
    alone=_alone,
    groups=(
        (LIMITS, "Limits", "At least, at most, least if any, lot"),
        (MOVES, "Joining and leaving", "What joining, leaving and opening cost"),
        (HOURS, "More hours", "Overtime and its rate, settling in, chance of being away on a day"),
    ),
)
