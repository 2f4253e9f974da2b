"""Which column of a table means what: proposed from the headers, corrected by hand, shown either way."""

from __future__ import annotations

import difflib
import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal

from solver.plan import Plan
from solver.review import quoted
from solver.sheet import Cell, Sheet, is_filled
from solver.tablecolumns import Header, Meaning, Reading, What, meanings, other_period, taken_apart

HEADER_ROWS = 25  # how far down a header is looked for
FEWEST_HEADERS = 2  # understood headers that make a row the header


@dataclass(frozen=True)
class MappedColumn:
    """One column: its header, its meaning (None: left out) and a sentence that says how or why."""

    index: int
    header: str
    meaning: Meaning | None
    says: str
    percent: bool = False


@dataclass(frozen=True)
class Mapping:
    """What a table's columns mean. `header_row` counts from 0; None: no row was recognised as header."""

    what: What
    header_row: int | None
    columns: tuple[MappedColumn, ...]
    choices: tuple[Meaning, ...]

    @property
    def missing(self) -> tuple[Meaning, ...]:
        """Meanings a new entry needs that no column has."""
        taken = {c.meaning.key for c in self.columns if c.meaning}
        return tuple(m for m in self.choices if m.needed and m.key not in taken)

    @property
    def understood(self) -> int:
        """How many columns have a meaning."""
        return sum(column.meaning is not None for column in self.columns)

    def assigned(self, index: int, meaning: Meaning | None) -> Mapping:
        """The mapping with column `index` given a meaning by hand, taken from any column that had it."""
        said = "left out by choice" if meaning is None else f"taken as {meaning.title} by choice"
        columns = []
        for column in self.columns:
            if column.index == index:
                percent = meaning is not None and _is_percent(taken_apart(column.header), meaning)
                columns.append(replace(column, meaning=meaning, says=said, percent=percent))
            elif meaning is not None and column.meaning == meaning:
                columns.append(
                    replace(column, meaning=None, says=f"{meaning.title} was given to another column")
                )
            else:
                columns.append(column)
        return replace(self, columns=tuple(columns))


def propose_mapping(
    sheet: Sheet, what: What, plan: Plan | None = None, header_row: int | None = None
) -> Mapping:
    """What the headers of `sheet` say, for a table of `what` to go into `plan`.

    The header is the first row of the top 25 with most understood cells, at least two, or `header_row`.
    Only headers that are known are given a meaning; a near one is named in its sentence, not taken.
    """
    plan = plan or Plan()
    choices = meanings(what, plan)
    known = {taken_apart(name).words: m for m in reversed(choices) for name in reversed(m.headers)}
    row = _header_row(sheet, known) if header_row is None else header_row
    columns: list[MappedColumn] = []
    for index in range(sheet.width):
        header = _shown(sheet.cell(row, index)) if row is not None else ""
        columns.append(_column(index, header, known, columns, plan))
    return Mapping(what, row, tuple(columns), choices)


def likeliest(sheet: Sheet, plan: Plan) -> What:
    """What the rows of `sheet` most likely are, by the headers understood; only ever a suggestion."""
    return max(What, key=lambda what: propose_mapping(sheet, what, plan).understood)


def _header_row(sheet: Sheet, known: dict[str, Meaning]) -> int | None:
    best, most = None, FEWEST_HEADERS - 1
    for row in range(min(len(sheet.rows), HEADER_ROWS)):
        keys = {known[words].key for words in map(_words, sheet.rows[row]) if words in known}
        if len(keys) > most:
            best, most = row, len(keys)
    return best


def _words(cell: Cell) -> str:
    return taken_apart(cell).words if isinstance(cell, str) else ""


def _shown(cell: Cell) -> str:
    return " ".join(cell.split()) if isinstance(cell, str) else format(cell, "f")


def _column(
    index: int, text: str, known: dict[str, Meaning], before: Sequence[MappedColumn], plan: Plan
) -> MappedColumn:
    header = taken_apart(text)
    meaning = known.get(header.words)
    objection = _unknown(header, text, known) if meaning is None else _objection(header, text, meaning, plan)
    twin = next((c for c in before if meaning is not None and c.meaning == meaning), None)
    if not objection and twin is not None:
        objection = f"means the same as column {column_letters(twin.index)}"
    if objection or meaning is None:
        return MappedColumn(index, text, None, f"not understood: {objection}")
    percent = _is_percent(header, meaning)
    said = f"understood as {meaning.title}" + (", in per cent" if percent else "")
    return MappedColumn(index, text, meaning, said, percent)


def _unknown(header: Header, text: str, known: dict[str, Meaning]) -> str:
    if not header.words:
        return "it has no header"
    if header.words.startswith("output "):
        return "the plan has no work of that name; import the works first"
    near = difflib.get_close_matches(header.words[:100], known, n=1, cutoff=0.75)
    return f"no column is called {quoted(text)}" + (f"; is it {known[near[0]].title}?" if near else "")


def _objection(header: Header, text: str, meaning: Meaning, plan: Plan) -> str:
    """Why a known header is still not taken: its unit is not the plan's."""
    period = other_period(header, meaning, plan)
    if period:
        return f"it counts per {period}, the plan per {plan.period}"
    money = re.findall(r"\b[A-Z]{3}\b", " ".join(re.findall(r"[(\[]([^)\]]*)", text)))
    if plan.currency in meaning.unit and any(code != plan.currency for code in money):
        return f"it is in {money[0]}, the plan in {plan.currency}"
    if header.in_percent and meaning.reading is not Reading.SHARE:
        return f"it is in per cent, which {meaning.title} cannot be"
    return ""


def _is_percent(header: Header, meaning: Meaning) -> bool:
    return meaning.reading is Reading.SHARE and header.in_percent


def column_letters(index: int) -> str:
    """The column as spreadsheets call it: A, B, ..., Z, AA."""
    letters = ""
    while index >= 0:
        index, letter = divmod(index, 26)
        letters, index = chr(65 + letter) + letters, index - 1
    return letters


def cell_name(row: int, column: int) -> str:
    """The cell as spreadsheets call it: B3."""
    return f"{column_letters(column)}{row + 1}"


def as_text(cell: Cell) -> str:
    """The cell's text; a number in plain notation."""
    return format(cell, "f") if isinstance(cell, Decimal) else cell.strip()


def filled_columns(sheet: Sheet, row: int, mapping: Mapping) -> list[MappedColumn]:
    """The columns with a meaning in which the row has something, or something odd."""
    return [
        column
        for column in mapping.columns
        if column.meaning is not None
        and (
            is_filled(sheet.cell(row, column.index))
            or ((row, column.index) in sheet.oddities and sheet.oddities[row, column.index].refused)
        )
    ]
