"""Typing into a table: many cells at once, each accepted or refused on its own."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
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

    An entry counts if it can be read and if the plan has no problem at its place afterwards. Rows beyond
    the last are added. The problems of a plan are found in one go, so entries that only make sense
    together (a minimum and a maximum) may come together.
    """
    listed = sorted(entries, key=lambda e: e.row)
    grown = _with_rows(table, plan, listed)
    first = _put_all(table, grown, refused, listed, {})
    found = {problem.place: problem.says for problem in review(first.plan)}
    if not found:
        return first
    before = {problem.place for problem in review(grown)}
    wrong = {
        (e.row, e.column.key): _reason(e, found[e.column.place(e.row)])
        for e in listed
        if e.column.place(e.row) in found.keys() - before
    }
    return _put_all(table, grown, refused, listed, wrong) if wrong else first


def _with_rows(table: Table, plan: Plan, entries: list[Entry]) -> Plan:
    here = len(table.names(plan))
    missing = entries[-1].row + 1 - here if entries else 0
    return table.insert(plan, here, missing) if missing > 0 else plan


def _put_all(
    table: Table,
    plan: Plan,
    refused: Refusals,
    entries: list[Entry],
    wrong: Mapping[tuple[int, str], str],
) -> Outcome:
    made = Outcome(plan, dict(refused))
    for entry in entries:
        made = _put(table, made, entry, wrong.get((entry.row, entry.column.key)))
    return made


def _put(table: Table, so_far: Outcome, entry: Entry, wrong: str | None) -> Outcome:
    name = table.names(so_far.plan)[entry.row]
    place = (table.key, name, entry.column.key)
    try:
        if wrong is not None:
            raise Refused(wrong)
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
        others = table.names(plan)[: entry.row] + table.names(plan)[entry.row + 1 :]
        if not value:
            raise Refused(messages.NAME_MISSING)
        if value in others:
            raise Refused(messages.NAME_TAKEN.format(name=quoted(str(value))))
    return value


def _reason(entry: Entry, says: str) -> str:
    """The problem in the words of the cell: a share is typed in per cent there."""
    if entry.column.kind is Kind.PERCENT:
        return messages.NOT_A_SHARE.format(text=entry.text.strip().removesuffix("%").strip())
    return says


def restored(refused: Refusals, places: Iterable[Place]) -> Refusals:
    """`refused` less those at `places`: the value before shows again."""
    gone = set(places)
    return {place: refusal for place, refusal in refused.items() if place not in gone}
