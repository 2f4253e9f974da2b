"""A workbook to fill in: the sheets, headers and units that the import understands, with one example row."""

from __future__ import annotations

import os
from decimal import Decimal
from pathlib import Path
from typing import Any

from solver.plan import Plan, Work
from solver.planfile import CannotSave
from solver.tablecolumns import Meaning, What, meanings

_EXAMPLE: dict[What, dict[str, Any]] = {
    What.CATEGORIES: {
        "name": "Stone setter",
        "on_books": 2,
        "at_least": 0,
        "at_most": 12,
        "least_if_any": 0,
        "lot": 1,
        "pay": 940,
        "join_cost": 300,
        "leave_cost": 450,
        "open_cost": 0,
        "hours": 38,
        "absence": 0.06,
        "overtime_hours": 4,
        "overtime_rate": 33.5,
        "settling_hours": 8,
        "supervision.hours": 1.5,
        "supervision.by": "Stone setter",
    },
    What.WORKS: {"name": "Paving", "unit": "m²", "buy_in_price": 61.25, "buy_in_most": 400},
    What.RULES: {
        "kind": "presence",
        "name": "First aid",
        "people": "Stone setter",
        "sense": "at least",
        "number": 1,
    },
}
_EXAMPLE_WORK = Work("Paving", "m²", (Decimal(0),))


def write_template(path: str | os.PathLike[str], plan: Plan | None = None) -> None:
    """Write a workbook with the sheets Categories, Works and Rules to `path`.

    Headers carry the currency, the period, the works and the phases of `plan`. The example row is invented
    and meant to be written over. Raises CannotSave.
    """
    import xlsxwriter  # the window reads tables long before it writes one

    plan = plan or Plan()
    if not plan.works:
        plan = Plan(phases=plan.phases, currency=plan.currency, period=plan.period, works=(_EXAMPLE_WORK,))
    try:
        with xlsxwriter.Workbook(os.fspath(path), {"in_memory": True, "strings_to_formulas": False}) as book:
            formats = _formats(book)
            for what in What:
                _write_sheet(book, what, meanings(what, plan), formats)
    except (OSError, xlsxwriter.exceptions.FileCreateError) as error:
        raise CannotSave(f"{Path(path).name} was not saved: {error}.") from None


def _formats(book: Any) -> dict[str, Any]:
    return {
        "header": book.add_format({"bold": True, "text_wrap": True, "valign": "top", "bottom": 1}),
        "needed": book.add_format({"bold": True, "text_wrap": True, "valign": "top", "bottom": 2}),
        "example": book.add_format({"italic": True, "font_color": "#666666"}),
    }


def _write_sheet(book: Any, what: What, columns: tuple[Meaning, ...], formats: dict[str, Any]) -> None:
    sheet = book.add_worksheet(what.value.capitalize())
    sheet.freeze_panes(1, 1)
    sheet.set_row(0, 48)
    for index, meaning in enumerate(columns):
        sheet.set_column(index, index, 22 if index == 0 else 15)
        sheet.write_string(0, index, meaning.title, formats["needed" if meaning.needed else "header"])
        value = _example(what, meaning)
        if isinstance(value, str):
            sheet.write_string(1, index, value, formats["example"])
        elif value is not None:
            sheet.write_number(1, index, value, formats["example"])


def _example(what: What, meaning: Meaning) -> Any:
    if meaning.key.startswith("output:"):
        return 2.5
    if meaning.key.startswith("amount:"):
        return 1200
    return _EXAMPLE[what].get(meaning.key)
