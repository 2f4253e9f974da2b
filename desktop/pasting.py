"""A whole table pasted into a grid: its columns are matched by their headers, if the planner wants that."""

from __future__ import annotations

from collections.abc import Callable
from decimal import Decimal

from PySide6.QtWidgets import QWidget

from desktop import import_words as say
from desktop import messages
from desktop.dialogs.question import CANCEL, Choice, ask
from desktop.document import Document
from solver.plan import Plan
from solver.tableimport import (
    MappedColumn,
    NotANumber,
    Sheet,
    UnreadableTable,
    What,
    parse_number,
    pasted_table,
    propose_mapping,
)

_CHOICES = (Choice("match", say.MATCH), Choice("cells", say.PASTE_AS_IT_IS), CANCEL)


def headed_table(text: str, what: What, plan: Plan) -> Sheet | None:
    """The table in `text` if its first line looks like headers of a table of `what`, else None.

    It does if it holds no number and two of its titles are known, or one is and numbers stand below.
    """
    try:
        sheet = pasted_table(text)
    except UnreadableTable:
        return None
    if len(sheet.rows) < 2 or any(_is_number(cell) for cell in sheet.rows[0]):
        return None
    known = propose_mapping(sheet, what, plan, header_row=0).understood
    below = any(_is_number(cell) for cell in sheet.rows[1])
    return sheet if known >= 2 or (known == 1 and below) else None


def mapped_instead(
    parent: QWidget, document: Document, what: What, text: str, told: Callable[[str], object]
) -> bool:
    """Offer to match the columns of a pasted table by its headers; False if it is to be pasted as cells."""
    sheet = headed_table(text, what, document.plan)
    if sheet is None:
        return False
    headers = messages.listed(tuple(c.header for c in _named(sheet, what, document.plan)), 4)
    chosen = ask(parent, say.HEADERS_PASTED.format(headers=headers), say.HEADERS_PASTED_MORE, _CHOICES)
    if chosen == "match":
        map_pasted(parent, document, what, sheet, told)
    return chosen != "cells"


def map_pasted(
    parent: QWidget, document: Document, what: What, sheet: Sheet, told: Callable[[str], object]
) -> None:
    """Show the mapping of a pasted table."""
    from desktop.dialogs.import_dialog import ImportDialog

    dialog = ImportDialog(document, (sheet,), say.PASTED, what, parent.window())
    dialog.told.connect(told)
    dialog.exec()
    dialog.deleteLater()


def _named(sheet: Sheet, what: What, plan: Plan) -> list[MappedColumn]:
    columns = propose_mapping(sheet, what, plan, header_row=0).columns
    return [column for column in columns if column.meaning is not None]


def _is_number(cell: str | Decimal) -> bool:
    if isinstance(cell, Decimal):
        return True
    try:
        parse_number(cell.strip().removesuffix("%"))
    except NotANumber:
        return False
    return True
