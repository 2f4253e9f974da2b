"""Reading .xlsx workbooks that may come from anywhere.

A workbook is a zip of XML: a small one can unfold to gigabytes, and one filled cell in the last corner makes
a reader allocate the whole sheet. So sizes are read from the zip's directory first, the needed parts are
unpacked under those sizes into a plain zip, and their cells are counted, before calamine sees anything.
The same pass finds what calamine does not tell: formulas, error values and merged cells.
"""

from __future__ import annotations

import io
import math
import re
import zipfile
import zlib
from collections.abc import Callable
from dataclasses import dataclass, field
from decimal import Decimal
from typing import Any
from xml.parsers import expat

import python_calamine as calamine

from solver.sheet import MOST_COLUMNS, MOST_ROWS, Cell, Oddity, Sheet, UnreadableTable

MOST_UNPACKED = 25_000_000  # bytes of XML
MOST_CELLS = 400_000  # of one sheet, blank ones between filled ones included
MOST_LETTERS = 10_000_000  # in all cells of a sheet; a text shared by many cells counts for each
MOST_PARTS = 2_000
MOST_SHEETS = 100

_NEEDED = re.compile(r"(?:\[Content_Types\]\.xml|_rels/.*|xl/.*\.(?:xml|rels))\Z", re.IGNORECASE)
_SPARED = re.compile(r"xl/(?:media|charts|drawings|theme|printerSettings|externalLinks|pivot)", re.IGNORECASE)
_REFERENCE = re.compile(r"([A-Z]{1,3})([0-9]{1,7})\Z")


def sheets_of_workbook(raw: bytes) -> tuple[Sheet, ...]:
    """Every worksheet of the workbook `raw`. Raises UnreadableTable."""
    parts = _unpacked(raw)
    looks = _looks(parts)
    try:
        return _sheets(_plain_zip(parts), looks)
    except calamine.PasswordError:
        raise UnreadableTable("It is protected by a password; save it without one, then import it.") from None
    except UnreadableTable:
        raise
    except BaseException as error:
        # a panic of the native reader is no Exception
        if isinstance(error, Exception) or type(error).__name__ == "PanicException":
            raise UnreadableTable(
                "It is a damaged workbook; open and save it again, then import it."
            ) from None
        raise


# unpacking


def _unpacked(raw: bytes) -> dict[str, bytes]:
    """The parts a reader of tables needs, each no larger than the directory says."""
    try:
        with zipfile.ZipFile(io.BytesIO(raw)) as archive:
            return _needed_parts(archive)
    except (zipfile.BadZipFile, zlib.error, EOFError, OSError, NotImplementedError, ValueError):
        raise UnreadableTable("It is a damaged workbook; open and save it again, then import it.") from None
    except RuntimeError:  # zipfile's way to say that a part is encrypted
        raise UnreadableTable("It is protected by a password; save it without one, then import it.") from None


def _needed_parts(archive: zipfile.ZipFile) -> dict[str, bytes]:
    entries = archive.infolist()
    names = {entry.filename for entry in entries}
    if "xl/workbook.xml" not in names or len(entries) > MOST_PARTS:
        raise UnreadableTable("It is not an .xlsx workbook; save it as .xlsx or .csv, then import it.")
    needed = [e for e in entries if _NEEDED.match(e.filename) and not _SPARED.match(e.filename)]
    if sum(entry.file_size for entry in needed) > MOST_UNPACKED:
        raise UnreadableTable(f"Its tables unfold to more than {MOST_UNPACKED // 1_000_000} MB.")
    return {entry.filename: archive.read(entry) for entry in needed}


def _plain_zip(parts: dict[str, bytes]) -> io.BytesIO:
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_STORED) as archive:
        for name, content in parts.items():
            archive.writestr(name, content)
    packed.seek(0)
    return packed


# looking at the XML


@dataclass
class _Look:
    """What one sheet's XML tells: how far it reaches, and its odd cells and merged areas."""

    lengths: list[int]
    last_row: int = -1
    last_column: int = -1
    letters: int = 0
    formulas: set[tuple[int, int]] = field(default_factory=set)
    oddities: dict[tuple[int, int], Oddity] = field(default_factory=dict)
    merged: list[tuple[int, int, int, int]] = field(default_factory=list)
    _row: int = -1
    _at: tuple[int, int] = (-1, -1)
    _kind: str = ""
    _inside: str = ""
    _text: list[str] = field(default_factory=list)
    _has_formula: bool = False

    def start(self, name: str, attributes: dict[str, str]) -> None:
        """An element begins."""
        tag = name.rpartition(":")[2]
        if tag == "row":
            self._row = int(attributes["r"]) - 1 if "r" in attributes else self._row + 1
            self._at = (self._row, -1)
        elif tag == "c":
            self._at = _place(attributes["r"]) if "r" in attributes else (self._row, self._at[1] + 1)
            self._kind, self._text, self._has_formula = attributes.get("t", "n"), [], False
        elif tag == "f":
            self._has_formula, self._inside = True, ""
        elif tag in ("v", "t"):
            self._inside = tag
        elif tag == "mergeCell":
            first, _, last = attributes.get("ref", "").partition(":")
            self.merged.append((*_place(first), *_place(last or first)))

    def end(self, name: str) -> None:
        """An element ends."""
        tag = name.rpartition(":")[2]
        if tag == "c":
            self._cell("".join(self._text))
        elif tag in ("v", "t"):
            self._inside = ""

    def data(self, text: str) -> None:
        """Text inside the current element."""
        if self._inside:
            self._text.append(text)

    def _cell(self, text: str) -> None:
        if not text and not self._has_formula:
            return
        row, column = self._at
        self.last_row, self.last_column = max(self.last_row, row), max(self.last_column, column)
        self.letters += self._letters(text)
        if self._kind == "e":
            self.oddities[self._at] = Oddity(f"holds the error {text[:20]}", True)
        elif self._has_formula and not text:
            self.oddities[self._at] = Oddity("is a formula without a stored result", True)
        elif self._has_formula:
            self.formulas.add(self._at)
            self.oddities[self._at] = Oddity("is a formula; its stored result was taken", False)
        self._refuse_beyond_sizes()

    def _letters(self, text: str) -> int:
        if self._kind == "s" and text.strip().isdecimal() and int(text) < len(self.lengths):
            return self.lengths[int(text)]
        return len(text)

    def _refuse_beyond_sizes(self) -> None:
        rows, columns = self.last_row + 1, self.last_column + 1
        if rows > MOST_ROWS or columns > MOST_COLUMNS or rows * columns > MOST_CELLS:
            raise UnreadableTable(
                f"A sheet reaches to row {rows:,} and column {columns:,}; allowed are {MOST_ROWS:,} rows, "
                f"{MOST_COLUMNS} columns and {MOST_CELLS:,} cells."
            )
        if self.letters > MOST_LETTERS:
            raise UnreadableTable("Its cells hold more text than a table of a plan can have.")


@dataclass
class _SharedTexts:
    """Lengths of the texts that cells share."""

    lengths: list[int] = field(default_factory=list)

    def start(self, name: str, _attributes: dict[str, str]) -> None:
        """An element begins."""
        if name.rpartition(":")[2] == "si":
            self.lengths.append(0)

    def end(self, name: str) -> None:
        """An element ends."""

    def data(self, text: str) -> None:
        """Text inside the current element."""
        if self.lengths:
            self.lengths[-1] += len(text)


def _place(reference: str) -> tuple[int, int]:
    match = _REFERENCE.match(reference)
    if match is None:
        raise UnreadableTable(f"It is a damaged workbook: {reference[:20]!r} is no cell.")
    column = 0
    for letter in match[1]:
        column = 26 * column + ord(letter) - 64
    return int(match[2]) - 1, column - 1


def _looked_over(content: bytes, look: Any) -> None:
    parser = expat.ParserCreate()
    parser.buffer_text = True
    parser.StartElementHandler, parser.EndElementHandler = look.start, look.end
    parser.CharacterDataHandler = look.data
    parser.StartDoctypeDeclHandler = _no_doctype
    try:
        parser.Parse(content, True)
    except (expat.ExpatError, ValueError, LookupError, RecursionError):  # LookupError: an unknown encoding
        raise UnreadableTable("It is a damaged workbook; open and save it again, then import it.") from None


def _no_doctype(*_: object) -> None:
    raise UnreadableTable("It holds a document type, which no workbook has.")


def _looks(parts: dict[str, bytes]) -> dict[str, _Look]:
    """What every part that may be a sheet tells, by the part's name."""
    shared = _SharedTexts()
    others: dict[str, bytes] = {}
    for name, content in parts.items():
        if name.lower().endswith("sharedstrings.xml"):
            _looked_over(content, shared)
        elif not name.endswith("styles.xml"):
            others[name] = content
    looks = {name: _Look(shared.lengths) for name in others}
    for name, content in others.items():
        _looked_over(content, looks[name])
    return looks


# handing over to calamine


def _sheets(packed: io.BytesIO, looks: dict[str, _Look]) -> tuple[Sheet, ...]:
    book = calamine.CalamineWorkbook.from_filelike(packed)
    kinds = [m for m in book.sheets_metadata if m.typ == calamine.SheetTypeEnum.WorkSheet]
    if len(kinds) > MOST_SHEETS:
        raise UnreadableTable(f"It has {len(kinds):,} sheets; allowed are {MOST_SHEETS}.")
    files = _files_of_sheets(packed)
    found = []
    for about in kinds:
        rows = book.get_sheet_by_name(about.name).to_python(skip_empty_area=False)
        hidden = about.visible != calamine.SheetVisibleEnum.Visible
        found.append(_sheet(about.name, rows, looks.get(files.get(about.name, "")), hidden))
    if not any(sheet.rows for sheet in found):
        raise UnreadableTable("There is nothing in it.")
    return tuple(found)


def _files_of_sheets(packed: io.BytesIO) -> dict[str, str]:
    """Which part of the workbook holds the sheet of a name."""
    targets: dict[str, str] = {}
    sheets: dict[str, str] = {}

    def relation(name: str, attributes: dict[str, str]) -> None:
        if name.rpartition(":")[2] == "Relationship":
            target = attributes.get("Target", "")
            path = target.lstrip("/") if target.startswith("/") else f"xl/{target}"
            targets[attributes.get("Id", "")] = path

    def sheet(name: str, attributes: dict[str, str]) -> None:
        if name.rpartition(":")[2] == "sheet":
            relation_id = next((v for k, v in attributes.items() if k.endswith(":id")), "")
            sheets[attributes.get("name", "")] = relation_id

    with zipfile.ZipFile(packed) as archive:
        for part, handler in (("xl/_rels/workbook.xml.rels", relation), ("xl/workbook.xml", sheet)):
            _starts_of(archive.read(part), handler)
    return {name: targets.get(relation_id, "") for name, relation_id in sheets.items()}


def _starts_of(content: bytes, handler: Callable[[str, dict[str, str]], None]) -> None:
    parser = expat.ParserCreate()
    parser.StartElementHandler = handler
    parser.Parse(content, True)


def _sheet(name: str, rows: list[list[Any]], look: _Look | None, hidden: bool) -> Sheet:
    oddities = dict(look.oddities) if look else {}
    merged = set(_merged_cells(look)) if look else set()
    for at in merged:
        oddities.setdefault(at, Oddity("is part of merged cells; take the merging apart", True))
    cells = []
    for row, values in enumerate(rows):
        cells.append(tuple(_cell(value, (row, column), oddities) for column, value in enumerate(values)))
    remarks = ("This sheet is hidden in the workbook.",) if hidden else ()
    return Sheet(name, tuple(cells), oddities, remarks)


def _merged_cells(look: _Look) -> list[tuple[int, int]]:
    """Cells of merged areas, as far as the sheet is filled."""
    found = []
    for top, left, bottom, right in look.merged[:10_000]:
        rows = range(top, min(bottom, look.last_row) + 1)
        found += [(r, c) for r in rows for c in range(left, min(right, look.last_column) + 1)]
        if len(found) > MOST_CELLS:
            raise UnreadableTable("Its merged cells overlap without end.")
    return found


def _cell(value: Any, at: tuple[int, int], oddities: dict[tuple[int, int], Oddity]) -> Cell:
    if isinstance(value, str):
        return value
    if isinstance(value, bool):
        return "TRUE" if value else "FALSE"
    if isinstance(value, int | float) and math.isfinite(value):
        # 15 digits are what a spreadsheet shows and means: 0.30000000000000004 is 0.3
        return Decimal(f"{value:.15g}")
    said = f"is {value}, no number" if isinstance(value, float) else f"is the date or time {value}"
    oddities[at] = Oddity(said, True)
    return str(value)
