"""Blocks of cells as spreadsheets put them on the clipboard: lines of tab-separated cells."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Sequence

Block = tuple[tuple[str, ...], ...]

# between thousands: before decimals
_SIGNS = {",": ".", ".": ","}

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


def settled(block: Block) -> Block:
    """`block` without the thousands signs of cells such as 75,000, where other cells tell what signs mean.

    1,250,000 or 2600.5 or 0.125 beside it: the comma sets thousands apart. Where nothing tells, or cells
    contradict each other, the block stays as it is and each such cell is decided on its own.
    """
    cells = [cell.strip() for row in block for cell in row]
    telling = [sign for sign in _SIGNS if any(_tells_thousands(cell, sign) for cell in cells)]
    if len(telling) != 1:
        return block
    sign = telling[0]
    grouped = re.compile(rf"-?[1-9][0-9]{{0,2}}{re.escape(sign)}[0-9]{{3}}\Z")
    return tuple(
        tuple(cell.replace(sign, "") if grouped.match(cell.strip()) else cell for cell in row)
        for row in block
    )


def _tells_thousands(cell: str, sign: str) -> bool:
    """Whether `cell` can only be read with `sign` between thousands and the other one before decimals."""
    decimal = re.escape(_SIGNS[sign])
    group = rf"{re.escape(sign)}[0-9]{{3}}"
    several = rf"[1-9][0-9]{{0,2}}(?:{group}){{2,}}(?:{decimal}[0-9]+)?"
    both = rf"[1-9][0-9]{{0,2}}(?:{group})+{decimal}[0-9]+"
    alone = rf"(?:0|[0-9]*){decimal}(?:[0-9]{{1,2}}|[0-9]{{4,}})|0{decimal}[0-9]+|[0-9]{{4,}}{decimal}[0-9]+"
    return re.fullmatch(rf"-?(?:{several}|{both}|{alone})", cell) is not None


def text_of(rows: Sequence[Sequence[str]]) -> str:
    """`rows` for the clipboard, quoted where a cell holds a tab, a line end or a quotation mark."""
    out = io.StringIO()
    csv.writer(out, dialect="excel-tab", lineterminator="\n").writerows(rows)
    return out.getvalue()
