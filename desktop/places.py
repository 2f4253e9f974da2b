"""Places of problems (`categories[2].pay`) in the words of the window."""

from __future__ import annotations

import re

from desktop.tables.category_table import CATEGORIES
from desktop.tables.phase_table import PHASES
from desktop.tables.table import Table
from desktop.tables.work_table import WORKS
from solver.plan import Plan

TABLES: tuple[Table, ...] = (CATEGORIES, WORKS, PHASES)


def in_words(plan: Plan, place: str) -> str:
    """`Lead hand, Pay` for a cell, the name for a rule, the place itself where nothing better is known."""
    found = re.match(r"(\w+)\[(\d+)\]", place)
    if found is None:
        return place
    name = _row_name(plan, found[1], int(found[2]))
    column = _column_title(plan, found[1], int(found[2]), place)
    return ", ".join(part for part in (name, column) if part) or place


def _row_name(plan: Plan, key: str, row: int) -> str:
    entries = getattr(plan, key, ())
    return str(entries[row].name) if row < len(entries) else ""


def _column_title(plan: Plan, key: str, row: int, place: str) -> str:
    table = next((t for t in TABLES if t.key == key), None)
    columns = table.columns(plan) if table else ()
    return next((c.title for c in columns if c.place(row) == place), "")
