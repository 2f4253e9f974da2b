"""Writing a plan and its answer for other programs: .xlsx, .csv, .lp and .mps, chosen by the file's suffix.

Text of the plan is never more than text: in workbooks it is written as strings, in .csv a sign that makes
spreadsheets calculate is given an apostrophe in front (the usual guard against formula injection).
"""

from __future__ import annotations

import csv
import io
import os
from collections.abc import Callable
from datetime import datetime
from decimal import Decimal
from pathlib import Path
from typing import Any

import xlsxwriter

from solver.answer import Answer, NearBest
from solver.exportsheets import Cell, Origin, Table, crews_table, tables
from solver.plan import Plan
from solver.planfile import content_hash, write_whole
from solver.programfile import lp_text, mps_text
from solver.version import program_version

_CALCULATING = ("=", "+", "-", "@", "\t", "\r", "\n")
_MOST_LETTERS = 32_767  # of a cell in a workbook
_WIDEST, _NARROWEST = 60, 9


class UnknownFormat(ValueError):
    """The file's suffix is none of those that can be written; the message is one sentence."""


def export_plan(
    plan: Plan,
    answer: Answer | None,
    path: str | os.PathLike[str],
    *,
    near: NearBest | None = None,
    source: str = "",
    now: datetime | None = None,
) -> None:
    """Write `plan` and `answer` to `path` in the form its suffix asks for, whole or not at all.

    .lp and .mps need no `answer`. `source` is the name of the plan's file. Raises UnknownFormat,
    NeedsAnswer, CannotSave; every message is one sentence.
    """
    suffix = Path(path).suffix.lower()
    if suffix not in SUFFIXES:
        shown = f"{suffix!r}" if suffix else "a name without a suffix"
        raise UnknownFormat(f"{shown} cannot be exported; allowed are {', '.join(SUFFIXES)}.")
    if suffix in _PROGRAMS:
        content = _PROGRAMS[suffix](plan).encode("utf-8")
    elif answer is None:
        raise NeedsAnswer(f"{suffix} is written from an answer; this plan has none yet.")
    else:
        origin = _origin(plan, source, now)
        content = _workbook(plan, answer, near, origin) if suffix == ".xlsx" else _csv(plan, answer)
    write_whole(Path(path), content)


class NeedsAnswer(Exception):
    """What is to be written says who is needed, and nobody has worked that out."""


_PROGRAMS: dict[str, Callable[[Plan], str]] = {".lp": lp_text, ".mps": mps_text}
NEED_AN_ANSWER = (".xlsx", ".csv")
SUFFIXES = (*NEED_AN_ANSWER, *_PROGRAMS)


def _origin(plan: Plan, source: str, now: datetime | None) -> Origin:
    made = (now or datetime.now()).isoformat(sep=" ", timespec="minutes")
    return Origin(source, f"SHA-256 {content_hash(plan)}", program_version(), made)


# .csv


def _csv(plan: Plan, answer: Answer) -> bytes:
    """The crews, comma separated (RFC 4180), UTF-8 with the mark by which spreadsheets know it."""
    table = crews_table(plan, answer)
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow([_guarded(title) for title in table.header])
    writer.writerows([[_guarded(cell) for cell in row] for row in table.rows])
    return out.getvalue().encode("utf-8-sig")


def _guarded(cell: Cell) -> str:
    if cell is None:
        return ""
    if isinstance(cell, str):
        return f"'{cell}" if cell.startswith(_CALCULATING) else cell
    return format(cell, "f") if isinstance(cell, Decimal) else repr(cell).removesuffix(".0")


# .xlsx


def _workbook(plan: Plan, answer: Answer, near: NearBest | None, origin: Origin) -> bytes:
    out = io.BytesIO()
    with xlsxwriter.Workbook(out, {"in_memory": True}) as book:
        book.set_properties({"title": plan.title[:255], "comments": f"Full Complement {origin.version}"})
        formats = {
            "header": book.add_format({"bold": True, "text_wrap": True, "valign": "top", "bottom": 1}),
            "note": book.add_format({"italic": True}),
        }
        for table in tables(plan, answer, near, origin):
            _sheet(book, table, formats)
    return out.getvalue()


def _sheet(book: Any, table: Table, formats: dict[str, Any]) -> None:
    sheet = book.add_worksheet(table.name)
    sheet.freeze_panes(1, 1)
    for column, title in enumerate(table.header):
        sheet.write_string(0, column, title[:_MOST_LETTERS], formats["header"])
        sheet.set_column(column, column, _column_width(table, column))
    for row, cells in enumerate(table.rows, 1):
        for column, cell in enumerate(cells):
            if cell is not None and cell != "":
                _write(sheet, row, column, cell)
    for at, note in enumerate(table.notes):
        sheet.write_string(len(table.rows) + 2 + at, 0, note, formats["note"])


def _write(sheet: Any, row: int, column: int, cell: str | float | Decimal) -> None:
    """Numbers as numbers, everything else as the string it is: never a formula, never a link."""
    if isinstance(cell, str):
        sheet.write_string(row, column, str(cell)[:_MOST_LETTERS])
    else:
        sheet.write_number(row, column, float(cell))


def _column_width(table: Table, column: int) -> int:
    texts = [cells[column] for cells in table.rows if isinstance(cells[column], str)]
    longest = max((len(str(text)) for text in texts), default=0)
    return max(_NARROWEST, min(_WIDEST, longest + 1), min(18, len(table.header[column]) // 2 + 2))
