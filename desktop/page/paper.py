"""Sheets of paper and the margins of the page, in points (1/72 inch)."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from PySide6.QtGui import QPageSize


class PaperSize(StrEnum):
    """The sheets the page is laid out for."""

    A4 = "A4"
    LETTER = "Letter"


@dataclass(frozen=True)
class Paper:
    """A sheet and its margins; `left` holds on both sides."""

    size: PaperSize
    width: float
    height: float
    left: float = 48.0
    top: float = 40.0
    bottom: float = 34.0

    @property
    def column(self) -> float:
        """Width between the margins."""
        return self.width - 2 * self.left

    @property
    def depth(self) -> float:
        """Height between the margins."""
        return self.height - self.top - self.bottom

    @property
    def qt(self) -> QPageSize:
        """The same sheet for printers and PDF files."""
        return QPageSize(_QT[self.size])


_QT = {PaperSize.A4: QPageSize.PageSizeId.A4, PaperSize.LETTER: QPageSize.PageSizeId.Letter}
_SHEETS = {
    PaperSize.A4: Paper(PaperSize.A4, 595.0, 842.0),  # ISO 216, as Qt rounds it
    PaperSize.LETTER: Paper(PaperSize.LETTER, 612.0, 792.0),  # ANSI/ASME Y14.1
}


def paper(size: str) -> Paper:
    """The sheet called `size` ("A4" or "Letter", in any case). Raises ValueError for another word."""
    for known, sheet in _SHEETS.items():
        if known.value.lower() == size.lower():
            return sheet
    raise ValueError(f"paper size {size!r}: use A4 or Letter")
