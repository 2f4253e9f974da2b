"""A table as it was found: rows of cells, before anything in it is understood."""

from __future__ import annotations

import csv
import io
import os
import stat
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from decimal import Decimal
from functools import cached_property
from pathlib import Path
from types import MappingProxyType

MOST_ROWS = 20_000
MOST_COLUMNS = 500
LARGEST_FILE = 20_000_000  # bytes; pictures in a workbook may take most of them
LARGEST_TEXT = 8_000_000

Cell = str | Decimal  # a blank cell is ""

_DELIMITERS = {";": "semicolons", "\t": "tabs", ",": "commas"}
_SAMPLE = 100_000


class UnreadableTable(Exception):
    """What was given holds no table that could be read; the message is one sentence for people."""


@dataclass(frozen=True)
class Oddity:
    """Something about one cell that its value does not tell; `refused`: the cell cannot be used."""

    says: str
    refused: bool


@dataclass(frozen=True)
class Sheet:
    """One table: `rows` of cells, `oddities` by row and column (both from 0), `remarks` on the whole."""

    name: str
    rows: tuple[tuple[Cell, ...], ...]
    oddities: Mapping[tuple[int, int], Oddity] = field(default_factory=lambda: MappingProxyType({}))
    remarks: tuple[str, ...] = ()

    @property
    def width(self) -> int:
        """Columns of the widest row."""
        return max((len(row) for row in self.rows), default=0)

    def cell(self, row: int, column: int) -> Cell:
        """The cell, blank beyond the end of its row."""
        return self.rows[row][column] if column < len(self.rows[row]) else ""

    def is_blank(self, row: int) -> bool:
        """True if nothing stands in the row."""
        return row not in self._odd_rows and not any(is_filled(cell) for cell in self.rows[row])

    @cached_property
    def _odd_rows(self) -> frozenset[int]:
        return frozenset(row for (row, _), odd in self.oddities.items() if odd.refused)


def is_filled(cell: Cell) -> bool:
    """False for a cell that is empty or holds blanks only."""
    return isinstance(cell, Decimal) or bool(cell.strip())


def read_table(path: str | os.PathLike[str]) -> tuple[Sheet, ...]:
    """The sheets of an .xlsx workbook, or the one table of a .csv file, told apart by their content.

    Raises UnreadableTable, with the name of the file in its sentence. Formulas give their stored value.
    """
    name = Path(path).name or str(path)
    try:
        return tables_in(_bytes_of(Path(path)), Path(name))
    except UnreadableTable as refused:
        raise UnreadableTable(f"{name}: {refused}") from None


def pasted_table(text: str) -> Sheet:
    """The table in a text copied from a spreadsheet (tabs) or from a text file. Raises UnreadableTable."""
    if len(text) > LARGEST_TEXT:
        raise UnreadableTable(f"The pasted text is larger than {LARGEST_TEXT // 1_000_000} MB.")
    return _table_of_text(text, "Pasted table", "\t" if "\t" in text else None)


def _bytes_of(path: Path) -> bytes:
    try:
        if not stat.S_ISREG(path.stat().st_mode):
            raise UnreadableTable("This is not a file with a table.")
        with path.open("rb") as file:
            raw = file.read(LARGEST_FILE + 1)
    except FileNotFoundError:
        raise UnreadableTable("There is no such file.") from None
    except PermissionError:
        raise UnreadableTable("You have no permission to read this file.") from None
    except (OSError, ValueError) as error:
        raise UnreadableTable(f"The file cannot be read ({type(error).__name__}).") from None
    if len(raw) > LARGEST_FILE:
        raise UnreadableTable(
            f"It is larger than {LARGEST_FILE // 1_000_000} MB, too large for a table of a plan."
        )
    return raw


def tables_in(raw: bytes, name: Path) -> tuple[Sheet, ...]:
    """The tables in the content of a file called `name`. Raises UnreadableTable."""
    if raw.startswith(b"PK"):
        from solver.workbook import sheets_of_workbook

        return sheets_of_workbook(raw)
    if raw.startswith(b"\xd0\xcf\x11\xe0"):
        if "EncryptedPackage".encode("utf-16-le") in raw:
            raise UnreadableTable("It is protected by a password; save it without one, then import it.")
        raise UnreadableTable("It is a workbook of an old kind; save it as .xlsx, then import it.")
    if name.suffix.lower() in (".xlsx", ".xlsm"):
        raise UnreadableTable("It is called a workbook, but it is not one.")
    text, remarks = _decoded(raw)
    table = _table_of_text(text, name.stem, None)
    return (Sheet(table.name, table.rows, table.oddities, (*remarks, *table.remarks)),)


# text


def _decoded(raw: bytes) -> tuple[str, tuple[str, ...]]:
    if len(raw) > LARGEST_TEXT:
        raise UnreadableTable(
            f"It is larger than {LARGEST_TEXT // 1_000_000} MB, too large for a table of a plan."
        )
    if raw.startswith((b"\xff\xfe", b"\xfe\xff")):
        try:
            return raw.decode("utf-16"), ("The text was read as UTF-16.",)
        except UnicodeDecodeError:
            raise UnreadableTable("It is not text: it begins as UTF-16 and does not go on so.") from None
    if b"\0" in raw:
        raise UnreadableTable("It is not a text file, so there is no table in it.")
    try:
        return raw.decode("utf-8-sig"), ()
    except UnicodeDecodeError:
        pass
    try:
        remark = "The text is not UTF-8 and was read as Windows-1252: check names with accents."
        return raw.decode("cp1252"), (remark,)
    except UnicodeDecodeError:
        raise UnreadableTable("It is not text in UTF-8, UTF-16 or Windows-1252.") from None


def _table_of_text(text: str, name: str, delimiter: str | None) -> Sheet:
    odd = next((c for c in text if ord(c) < 32 and c not in "\t\r\n"), None)
    if odd is not None:
        raise UnreadableTable(f"It holds the control character U+{ord(odd):04X}, so it is not a table.")
    first, _, rest = text.partition("\n")
    declared = first.strip().lower().removeprefix("sep=") if first.lower().startswith("sep=") else ""
    if declared in _DELIMITERS:
        delimiter, text = declared, rest
    chosen = delimiter or _sniffed(text)
    rows = _parsed(text, chosen)
    if len(rows) > MOST_ROWS or any(len(row) > MOST_COLUMNS for row in rows):
        raise UnreadableTable(f"It has more than {MOST_ROWS:,} rows or {MOST_COLUMNS} columns.")
    if not any(cell.strip() for row in rows for cell in row):
        raise UnreadableTable("There is nothing in it.")
    remark = f"Columns are set apart by {_DELIMITERS[chosen]}."
    return Sheet(name, tuple(tuple(row) for row in rows), remarks=(remark,))


def _parsed(text: str, delimiter: str) -> list[list[str]]:
    try:
        return list(csv.reader(io.StringIO(text, newline=""), delimiter=delimiter))
    except csv.Error as error:
        raise UnreadableTable(f"It is not a table of text: {error}.") from None


def _sniffed(text: str) -> str:
    """The delimiter that cuts most rows into the same number of columns, at least two."""
    sample = text[:_SAMPLE]
    if len(text) > _SAMPLE:
        sample = sample[: sample.rfind("\n") + 1]
    return max(_DELIMITERS, key=lambda d: _agreement(_parsed(sample, d)))


def _agreement(rows: Sequence[Sequence[str]]) -> float:
    widths = [len(row) for row in rows if any(cell.strip() for cell in row)]
    if not widths:
        return 0.0
    common = max(set(widths), key=lambda w: (widths.count(w), w))
    return widths.count(common) / len(widths) if common > 1 else 0.0
