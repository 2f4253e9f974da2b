"""Typing into a table: many cells at once, each accepted or refused on its own."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

from desktop import messages
from desktop.document import Place, Refusal, Refusals
from desktop.tables.column import Column, Kind, Value
from desktop.tables.numbers import Refused
from desktop.tables.table import Table
from solver.plan import Plan
from solver.review import quoted, review


@dataclass(frozen=True)
class Entry:
    """`text` typed into a row and column."""

    row: int
    column: Column
    text: str


@dataclass(frozen=True)
class Outcome:
    """The plan after entries, and everything refused in the document."""

    plan: Plan
    refused: Refusals


def enter(table: Table, plan: Plan, refused: Refusals, entries: Iterable[Entry]) -> Outcome:
    """`plan` with every entry that counts; the others are kept as refused, with the reason.

    An entry is refused if it cannot be read or could not stand there in any plan (a negative pay). What is
    only wrong beside other entries (a maximum below the minimum) counts: the review of the plan tells it,
    and mending either entry will do. Rows beyond the last are added.
    """
    listed = sorted(entries, key=lambda e: e.row)
    made = Outcome(_with_rows(table, plan, listed), dict(refused))
    for entry in listed:
        made = _put(table, made, entry)
    return made


def _with_rows(table: Table, plan: Plan, entries: list[Entry]) -> Plan:
    here = len(table.names(plan))
    missing = entries[-1].row + 1 - here if entries else 0
    return table.insert(plan, here, missing) if missing > 0 else plan


def _put(table: Table, so_far: Outcome, entry: Entry) -> Outcome:
    name = table.names(so_far.plan)[entry.row]
    place = (table.key, name, entry.column.key)
    try:
        value = _read(table, so_far.plan, entry)
    except Refused as refusal:
        kept = {**so_far.refused, place: Refusal(entry.text, refusal.reason)}
        return replace(so_far, refused=kept)
    refused = {p: r for p, r in so_far.refused.items() if p != place}
    if entry.column.key == "name":
        refused = {_called(p, table.key, name, str(value)): r for p, r in refused.items()}
    return Outcome(entry.column.put(so_far.plan, entry.row, value), refused)


def _called(place: Place, table: str, old: str, new: str) -> Place:
    """`place` after the row `old` of `table` was renamed."""
    return (table, new, place[2]) if place[:2] == (table, old) else place


def _read(table: Table, plan: Plan, entry: Entry) -> Value:
    value = entry.column.read(plan, entry.text)
    if entry.column.key == "name":
        _check_name(table.names(plan), entry.row, str(value))
    elif entry.column.kind is not Kind.NAMES:  # names were looked up when they were read
        _check_alone(table.alone(plan, entry.row), entry, value)
    return value


def _check_name(names: tuple[str, ...], row: int, name: str) -> None:
    if not name:
        raise Refused(messages.NAME_MISSING)
    if name in names[:row] + names[row + 1 :]:
        raise Refused(messages.NAME_TAKEN.format(name=quoted(name)))


def _check_alone(alone: Plan, entry: Entry, value: Value) -> None:
    """Refuse what the review of a plan would refuse whatever else stood in it."""
    place = entry.column.place(0)
    for problem in review(entry.column.put(alone, 0, value)):
        if problem.place == place:
            raise Refused(_reason(entry, problem.says))


def _reason(entry: Entry, says: str) -> str:
    """The problem in the words of the cell: a share is typed in per cent there."""
    if entry.column.kind is Kind.PERCENT:
        return messages.NOT_A_SHARE.format(text=entry.text.strip().removesuffix("%").strip())
    return says


def restored(refused: Refusals, places: Iterable[Place]) -> Refusals:
    """`refused` less those at `places`: the value before shows again."""
    gone = set(places)
    return {place: refusal for place, refusal in refused.items() if place not in gone}
