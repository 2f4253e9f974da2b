"""From the rows of a mapped table to entries of a plan, each row understood or refused with its reasons."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field, replace
from decimal import Decimal
from enum import StrEnum
from types import MappingProxyType
from typing import Any

from solver.exact import typed_number
from solver.importrules import rule_of
from solver.numeral import NotANumber, parse_number
from solver.plan import Category, Plan, Supervision, Work
from solver.review import MOST_ENTRIES, Problem, quoted, review, step
from solver.sheet import Sheet, UnreadableTable
from solver.tablecolumns import Reading, What
from solver.tablemapping import MappedColumn, Mapping, as_text, cell_name, filled_columns

MOST_ROUNDS = 50


class Fate(StrEnum):
    """What becomes of a row."""

    NEW = "new"
    CHANGED = "changes an entry"
    REFUSED = "refused"


@dataclass(frozen=True)
class RowResult:
    """One row of the table, numbered from 1 as spreadsheets do.

    `reasons` say why it is refused, `remarks` what should be looked at although it was understood.
    """

    row: int
    name: str
    fate: Fate
    reasons: tuple[str, ...] = ()
    remarks: tuple[str, ...] = ()


class ImportRefused(Exception):
    """Some rows were refused and the caller has not agreed to leave them out."""


@dataclass(frozen=True)
class ImportResult:
    """Every row's fate. The plan is handed out by `plan_after` only, so that nothing comes in by halves."""

    rows: tuple[RowResult, ...]
    _plan: Plan = field(repr=False)

    @property
    def refused(self) -> tuple[RowResult, ...]:
        """The rows that did not come in."""
        return tuple(row for row in self.rows if row.fate is Fate.REFUSED)

    @property
    def understood(self) -> tuple[RowResult, ...]:
        """The rows that come in."""
        return tuple(row for row in self.rows if row.fate is not Fate.REFUSED)

    def plan_after(self, *, without_refused: bool = False) -> Plan:
        """The plan with every row in it. Raises ImportRefused if rows were refused.

        `without_refused`: the caller has shown them and the user agreed to go on without.
        """
        if self.refused and not without_refused:
            raise ImportRefused(f"{len(self.refused):,} of {len(self.rows):,} rows were refused.")
        if not self.understood:
            raise ImportRefused("No row was understood.")
        return self._plan


@dataclass
class _Row:
    """A row on its way: what was read from its cells, and what is wrong with it."""

    number: int
    name: str = ""
    values: dict[str, Any] = field(default_factory=dict)
    reasons: list[str] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    entry: Any = None
    changes: bool = False

    def result(self) -> RowResult:
        fate = Fate.REFUSED if self.reasons else Fate.CHANGED if self.changes else Fate.NEW
        return RowResult(self.number + 1, self.name, fate, tuple(self.reasons), tuple(self.remarks))


def import_rows(sheet: Sheet, mapping: Mapping, plan: Plan) -> ImportResult:
    """The rows below the header of `mapping`, put into `plan` by name: new ones added, known ones changed.

    A blank cell leaves what is there, or the default. Raises UnreadableTable where the table as a whole
    cannot go into a plan.
    """
    if mapping.header_row is None:
        raise UnreadableTable("No row was recognised as the header; say which one it is.")
    numbers = [r for r in range(mapping.header_row + 1, len(sheet.rows)) if not sheet.is_blank(r)]
    most = MOST_ENTRIES[mapping.what]
    if len(numbers) > most:
        raise UnreadableTable(
            f"It has {len(numbers):,} rows of {mapping.what}; a plan holds at most {most:,}."
        )
    rows = [_read(sheet, number, mapping) for number in numbers]
    _refuse_twins(rows)
    for row in rows:
        _build(row, mapping, plan)
    after = _reviewed(rows, mapping, plan)
    return ImportResult(tuple(row.result() for row in rows), after)


# cells


def _read(sheet: Sheet, number: int, mapping: Mapping) -> _Row:
    row = _Row(number)
    for column in filled_columns(sheet, number, mapping):
        _read_cell(sheet, row, column)
    row.name = row.values.get("name", "")
    if not row.name and not any("name" in reason for reason in row.reasons):
        row.reasons.append("it has no name")
    return row


def _read_cell(sheet: Sheet, row: _Row, column: MappedColumn) -> None:
    if column.meaning is None:
        return
    where = f"{column.meaning.headers[0]} ({cell_name(row.number, column.index)})"
    odd = sheet.oddities.get((row.number, column.index))
    if odd is not None and odd.refused:
        row.reasons.append(f"{where} {odd.says}")
        return
    cell = sheet.cell(row.number, column.index)
    if odd is not None:
        row.remarks.append(f"{where} {odd.says}: {as_text(cell)}")
    try:
        row.values[column.meaning.key] = _READERS[column.meaning.reading](cell, column, where, row)
    except NotANumber as refused:
        row.reasons.append(f"{where}: {refused}")


def _text(cell: str | Decimal, _column: MappedColumn, _where: str, _row: _Row) -> str:
    return " ".join(as_text(cell).split())


def _number(cell: str | Decimal, _column: MappedColumn, where: str, row: _Row) -> Decimal:
    if isinstance(cell, Decimal):
        made = typed_number(format(cell, "f"))
        if made is None:
            raise NotANumber(f"{cell:.3e} is beyond all sizes")
        return made
    numeral = parse_number(cell)
    if numeral.remark:
        row.remarks.append(f"{where}: {numeral.remark}")
    return numeral.number


def _share(cell: str | Decimal, column: MappedColumn, where: str, row: _Row) -> Decimal:
    """A share; a % in the cell or in the header makes it a hundredth."""
    signed = isinstance(cell, str) and cell.strip().endswith("%")
    bare = cell.strip().removesuffix("%") if isinstance(cell, str) else cell
    number = _number(bare, column, where, row)
    return number / 100 if signed or column.percent else number


def _limit(cell: str | Decimal, column: MappedColumn, where: str, row: _Row) -> Decimal | None:
    if isinstance(cell, str) and cell.strip().casefold() in ("none", "no limit"):
        return None
    return _number(cell, column, where, row)


def _names(cell: str | Decimal, _column: MappedColumn, _where: str, _row: _Row) -> tuple[str, ...]:
    names = (" ".join(part.split()) for part in re.split(r"[;\n]", as_text(cell)))
    return tuple(name for name in names if name)


def _weights(cell: str | Decimal, _column: MappedColumn, where: str, row: _Row) -> dict[str, Decimal]:
    weights: dict[str, Decimal] = {}
    for part in _names(cell, _column, where, row):
        name, equals, number = part.rpartition("=")
        if not equals:
            weights[part] = Decimal(1)
        else:
            weights[name.strip()] = _number(number, _column, where, row)
    return weights


_READERS = {
    Reading.TEXT: _text,
    Reading.NUMBER: _number,
    Reading.SHARE: _share,
    Reading.LIMIT: _limit,
    Reading.NAMES: _names,
    Reading.WEIGHTS: _weights,
}


# entries


def _refuse_twins(rows: Iterable[_Row]) -> None:
    first: dict[str, int] = {}
    for row in rows:
        before = first.setdefault(row.name, row.number)
        if row.name and before != row.number:
            row.reasons.append(f"{quoted(row.name)} stands in row {before + 1} already")


def _build(row: _Row, mapping: Mapping, plan: Plan) -> None:
    if row.reasons:
        return
    before = next((e for e in getattr(plan, mapping.what) if e.name == row.name), None)
    row.changes = before is not None
    if before is None or mapping.what is What.RULES:
        lacking = [m.title for m in mapping.choices if m.needed and row.values.get(m.key) in (None, "")]
        row.reasons += [f"{title} is missing" for title in lacking]
    if not row.reasons:
        row.entry = _BUILDERS[mapping.what](row, before, plan)


def _category(row: _Row, before: Category | None, _plan: Plan) -> Category:
    values = dict(row.values)
    base = before or Category(row.name, values["pay"], values["hours"])
    output = {k.removeprefix("output:"): v for k, v in values.items() if k.startswith("output:")}
    hours = values.pop("supervision.hours", base.supervision.hours)
    by = values.pop("supervision.by", base.supervision.by)
    plain = {k: v for k, v in values.items() if not k.startswith("output:")}
    merged = MappingProxyType({**base.output, **output})
    made = replace(base, **plain, output=merged, supervision=Supervision(hours, by))
    over = any(getattr(made, key) != getattr(base, key) for key in ("hours", "absence", "pay"))
    if over and base.hours_note:  # what was worked out is typed over: its note must not vouch for it
        made = replace(made, hours_note=f"{base.hours_note} Changed by an imported table since.")
    return made


def _work(row: _Row, before: Work | None, plan: Plan) -> Work:
    zero = (Decimal(0),) * len(plan.phases)
    base = before or Work(row.name, "units", zero)
    amounts = list(base.amounts)
    for key, value in row.values.items():
        if key.startswith("amount:"):
            amounts[int(key.removeprefix("amount:"))] = value
    plain = {k: v for k, v in row.values.items() if not k.startswith("amount:")}
    return replace(base, **plain, amounts=tuple(amounts))


def _rule(row: _Row, _before: Any, _plan: Plan) -> Any:
    rule, reasons = rule_of(row.name, row.values)
    row.reasons += reasons
    return rule


_BUILDERS: dict[What, Callable[..., Any]] = {What.CATEGORIES: _category, What.WORKS: _work, What.RULES: _rule}


# the whole plan


def _reviewed(rows: list[_Row], mapping: Mapping, plan: Plan) -> Plan:
    """The plan with the understood rows; rows that would bring a problem into it are refused first."""
    old = set(review(plan))
    for _ in range(MOST_ROUNDS):
        after, owners = _with_entries(rows, mapping.what, plan)
        new = [p for p in review(after) if p not in old]
        if not _refuse_owners(new, owners, mapping):
            return after
    for row in rows:
        if not row.reasons:
            row.reasons.append("it depends on rows that were refused")
    return plan


def _with_entries(rows: list[_Row], what: What, plan: Plan) -> tuple[Plan, dict[int, _Row]]:
    """The plan with every understood row, and which row stands behind each entry's position."""
    entries = list(getattr(plan, what))
    position = {entry.name: index for index, entry in enumerate(entries)}
    owners: dict[int, _Row] = {}
    for row in rows:
        if row.reasons or row.entry is None:
            continue
        if row.name in position:
            entries[position[row.name]] = row.entry
        else:
            position[row.name] = len(entries)
            entries.append(row.entry)
        owners[position[row.name]] = row
    changed: Any = {what.value: tuple(entries)}
    return replace(plan, **changed), owners


def _refuse_owners(problems: list[Problem], owners: dict[int, _Row], mapping: Mapping) -> bool:
    """Refuse the rows behind the problems; True if there was one."""
    refused = False
    for problem in problems:
        match = re.match(rf"{mapping.what}\[([0-9]+)\]\.?", problem.place)
        row = owners.get(int(match[1])) if match else None
        if row is not None and match is not None:
            row.reasons.append(f"{_titled(problem.place[match.end() :], mapping)}: {problem.says}")
            refused = True
    return refused


_PLACES = {  # of rules: what stands in one column is called otherwise in each kind
    "number": ("bound", "at_most", "fraction"),
    "people": ("weights", "of"),
    "among": ("per", "within"),
}


def _titled(place: str, mapping: Mapping) -> str:
    """The title of the column that a place within an entry came from; the place where no column did."""
    for meaning in mapping.choices:
        for own in _places(meaning.key, mapping.what):
            if place == own or place.startswith((f"{own}.", f"{own}[")):
                return meaning.headers[0]
    return place


def _places(key: str, what: What) -> tuple[str, ...]:
    kind, _, name = key.partition(":")
    if kind == "output":
        return (step("output", name),)
    if kind == "amount":
        return (f"amounts[{name}]",)
    return _PLACES.get(key, (key,)) if what is What.RULES else (key,)
