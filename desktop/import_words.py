"""What importing and exporting tables says."""

from __future__ import annotations

from desktop import messages
from solver.phrases import counted
from solver.tablecolumns import What

IMPORT = "Import a table"
CHOOSE_TABLE = "Choose a table"
TABLE_FILES = "Tables (*.xlsx *.xlsm *.csv *.txt *.tsv);;All files (*)"
PASTED = "what was pasted"
NOT_IMPORTED = "{name} was not imported."
TEMPLATE = "Save a template workbook"
TEMPLATE_FILES = "Workbooks (*.xlsx)"
TEMPLATE_NAME = "template.xlsx"
TEMPLATE_SAVED = "The template is saved as {name}. Its example rows are meant to be written over."
NOT_WRITTEN = messages.NOT_WRITTEN

SHEET = "Sheet"
ROWS_ARE = "Its rows are"
ROWS_ARE_TIP = "Suggested by the headers; choose what the rows really are"
HEADER_ROW = "Headers in row"
HEADER_ROW_TIP = "The row in which the columns are named, counted as spreadsheets do"
NO_HEADER_ROW = "none found"
WHAT = {What.CATEGORIES: "categories", What.WORKS: "works", What.RULES: "rules"}
UNDO_STEP = {
    What.CATEGORIES: "Import categories",
    What.WORKS: "Import works",
    What.RULES: "Import rules",
}

COLUMNS = "Columns"
COLUMN = "Column"
FIRST_ENTRIES = "First entries"
TAKEN_AS = "Taken as"
UNDERSTOOD = "How it was understood"
LEFT_OUT = "left out"
NO_HEADER = "no header"
MEANING_OF = "What column {column} means"
UNDERSTOOD_SIGN, NOT_UNDERSTOOD_SIGN, LEFT_OUT_SIGN = "\u2713", "\u2717", "\u2013"

ROWS = "Rows"
NAME = "Name"
FATE = "What becomes of it"
WHY = "Why, or what to look at"
TIP_NAME = "The name in the table; an entry of the plan with the same name is changed"
TIP_FATE = "A row comes in whole or not at all; blank cells leave what is there, or the default"
TIP_WHY = "Why a row is refused, or what should be looked at although it was understood"
NEW, CHANGED, REFUSED = "\u2713 new", "\u2713 changes an entry", "\u2717 refused"
REFUSED_FIRST = "Refused rows stand first."
ACCEPT = "&Import"
ACCEPT_NEXT = "Import, then the &next sheet"

HEADERS_PASTED = "The first line of what you paste looks like headers: {headers}."
HEADERS_PASTED_MORE = "Match the columns by their headers, or type everything into the cells as it stands."
MATCH = "Match the columns..."
PASTE_AS_IT_IS = "Paste as it stands"


def rows_summary(new: int, changed: int, refused: int) -> str:
    """What becomes of the rows."""
    parts = []
    if new:
        parts.append(f"{counted(new, 'row is', 'rows are')} new")
    if changed:
        parts.append(f"{counted(changed, 'row changes', 'rows change')} an entry of the plan")
    if refused:
        parts.append(f"{counted(refused, 'row is', 'rows are')} refused")
    return f"{', '.join(parts)}." if parts else "There is no row below the headers."


def columns_summary(understood: int, count: int) -> str:
    """How many columns have a meaning."""
    return f"{understood} of {counted(count, 'column', 'columns')} understood; the others are left out."


def missing(titles: tuple[str, ...]) -> str:
    """What a new entry needs and no column gives."""
    return f"New entries also need: {', '.join(titles)}." if titles else ""


def leave_out(count: int) -> str:
    """The tick that lets the others in."""
    return f"&Leave out {'the refused row' if count == 1 else f'the {count:,} refused rows'}"


def imported(what: What, count: int, left_out: int, source: str) -> str:
    """What came in."""
    said = f"{counted(count, _ONE[what], WHAT[what])} imported from {source}."
    return f"{said} {counted(left_out, 'row was', 'rows were')} left out." if left_out else said


_ONE = {What.CATEGORIES: "category", What.WORKS: "work", What.RULES: "rule"}
