"""Categories, works and rules from a table: the one door to it.

First `read_table` or `pasted_table` gives sheets, then `propose_mapping` says which header was understood as
what and which was not, then `import_rows` says row by row what was understood and what was refused and why.
The plan changes only when the caller takes the result, and by default only if no row was refused.
"""

from solver.importrows import Fate, ImportRefused, ImportResult, RowResult, import_rows
from solver.numeral import NotANumber, Numeral, parse_number
from solver.sheet import Oddity, Sheet, UnreadableTable, pasted_table, read_table
from solver.tablecolumns import Meaning, Reading, What
from solver.tablemapping import (
    MappedColumn,
    Mapping,
    cell_name,
    column_letters,
    likeliest,
    propose_mapping,
)
from solver.tabletemplate import write_template

__all__ = [
    "Fate",
    "ImportRefused",
    "ImportResult",
    "MappedColumn",
    "Mapping",
    "Meaning",
    "NotANumber",
    "Numeral",
    "Oddity",
    "Reading",
    "RowResult",
    "Sheet",
    "UnreadableTable",
    "What",
    "cell_name",
    "column_letters",
    "import_rows",
    "likeliest",
    "parse_number",
    "pasted_table",
    "propose_mapping",
    "read_table",
    "write_template",
]
