"""Blocks of cells as spreadsheets put them on the clipboard: lines of tab-separated cells."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence

Block = tuple[tuple[str, ...], ...]

MOST_ROWS = 1000
LARGEST = 5_000_000  # characters


class TooLarge(Exception):
    """More was copied than any table of a plan takes."""


def block_of(text: str) -> Block:
    """The cells in `text`; a cell in quotes may hold tabs and line ends. Raises TooLarge."""
    if len(text) > LARGEST:
        raise TooLarge
    unified = text.replace("\r\n", "\n").replace("\r", "\n").replace("\0", "")
    lines = csv.reader(io.StringIO(unified.removesuffix("\n"), newline=""), dialect="excel-tab")
    rows = tuple(tuple(line) or ("",) for line in lines)
    if len(rows) > MOST_ROWS:
        raise TooLarge
    return rows


def text_of(rows: Sequence[Sequence[str]]) -> str:
    """`rows` for the clipboard, quoted where a cell holds a tab, a line end or a quotation mark."""
    out = io.StringIO()
    csv.writer(out, dialect="excel-tab", lineterminator="\n").writerows(rows)
    return out.getvalue()
