"""Text on the page: runs of one style, shaped by Qt, measured in points.

Shaping is done in tenths of a point with unhinted metrics, so that paper, PDF and screen break lines at the
same places. Ligatures are off: words stay whole when text is copied out of the PDF.
"""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass, replace
from enum import StrEnum
from functools import lru_cache

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QFont, QTextCharFormat, QTextLayout, QTextOption

from desktop.theme import FAMILY, Theme

UNITS = 10  # layout units per point
LEADING = 1.24  # line distance as a share of the size: fallback fonts are taller than the bundled one
_RISE = 0.97  # top of the line to the baseline, as a share of the size
ELLIPSIS = "…"
ALL_OF_IT = 10**6  # letters
_JOINERS = "\u200c\u200d"  # Persian and Indian scripts, and joined signs, need them


class Side(StrEnum):
    """Alignment of lines in their box."""

    LEFT = "left"
    RIGHT = "right"
    CENTRE = "centre"


@dataclass(frozen=True)
class Run:
    """Words of one weight and colour (`role`: a colour name of Theme, None = the text's own)."""

    words: str
    bold: bool = False
    role: str | None = None


@dataclass(frozen=True)
class Text:
    """A paragraph. `role` is a colour name of Theme; `points` the size."""

    runs: tuple[Run, ...]
    points: float
    role: str = "ink"
    side: Side = Side.LEFT
    spacing: float = 0.0

    @property
    def words(self) -> str:
        """All of it, unformatted."""
        return "".join(run.words for run in self.runs)


def text(words: str, points: float, *, bold: bool = False, role: str = "ink", side: Side = Side.LEFT) -> Text:
    """A paragraph of a single run."""
    return Text((Run(words, bold),), points, role, side)


@lru_cache(maxsize=64)
def font(points: float, bold: bool = False, spacing: float = 0.0) -> QFont:
    """The font of the page at `points`, in layout units."""
    made = QFont(FAMILY)
    made.setPixelSize(round(points * UNITS))
    made.setBold(bold)
    made.setHintingPreference(QFont.HintingPreference.PreferNoHinting)
    made.setFeature(QFont.Tag("liga"), 0)
    if spacing:
        made.setLetterSpacing(QFont.SpacingType.AbsoluteSpacing, spacing * UNITS)
    return made


def shaped(what: Text, width: float, theme: Theme | None = None) -> QTextLayout:
    """`what` broken into lines of `width` points, in layout units; colours only with a `theme`."""
    layout = QTextLayout(what.words, font(what.points, False, what.spacing))
    layout.setTextOption(_option(what.side))
    layout.setFormats(_formats(what, theme))
    _break_lines(layout, what, width)
    return layout


def _option(side: Side) -> QTextOption:
    option = QTextOption(_SIDES[side])
    option.setWrapMode(QTextOption.WrapMode.WrapAtWordBoundaryOrAnywhere)
    option.setTextDirection(Qt.LayoutDirection.LeftToRight)  # names may run right to left inside
    return option


_SIDES = {
    Side.LEFT: Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignAbsolute,
    Side.RIGHT: Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignAbsolute,
    Side.CENTRE: Qt.AlignmentFlag.AlignHCenter,
}


def _formats(what: Text, theme: Theme | None) -> list[QTextLayout.FormatRange]:
    made, start = [], 0
    for run in what.runs:
        length = len(run.words.encode("utf-16-le")) // 2  # Qt counts UTF-16 units
        piece = QTextLayout.FormatRange()
        piece.start, piece.length = start, length
        format_ = QTextCharFormat()
        format_.setFont(font(what.points, run.bold, what.spacing))
        if theme is not None:
            format_.setForeground(getattr(theme, run.role or what.role))
        piece.format = format_
        made.append(piece)
        start += length
    return made


def _break_lines(layout: QTextLayout, what: Text, width: float) -> None:
    """Lines at equal distances, whatever fonts their letters come from."""
    y = 0.0
    layout.beginLayout()
    while (line := layout.createLine()).isValid():
        line.setLineWidth(width * UNITS)
        line.setPosition(QPointF(0.0, y + _RISE * what.points * UNITS - line.ascent()))
        y += LEADING * what.points * UNITS
    layout.endLayout()


def forget_measures() -> None:
    """Measure every text anew: for when fonts came or went."""
    natural_width.cache_clear()
    line_count.cache_clear()


@lru_cache(maxsize=20_000)
def line_count(what: Text, width: float) -> int:
    """How many lines `what` takes at `width` points."""
    return max(1, shaped(what, width).lineCount())


def height(what: Text, width: float) -> float:
    """Height in points at `width` points."""
    return line_count(what, width) * LEADING * what.points


def balanced_width(what: Text, width: float) -> float:
    """The narrowest width that takes no more lines than `width`: no last line of one word."""
    lines, low, high = line_count(what, width), width * 0.5, width
    while high - low > 2.0:
        middle = (low + high) / 2
        low, high = (low, middle) if line_count(what, middle) <= lines else (middle, high)
    return high


@lru_cache(maxsize=20_000)
def natural_width(what: Text) -> float:
    """Width in points on one line, a hair more to be safe against breaking."""
    layout = shaped(what, 1e5)
    return layout.lineAt(0).naturalTextWidth() / UNITS + 0.5 if layout.lineCount() else 0.0


def widest_word(what: Text) -> float:
    """Width in points of its widest word."""
    words = what.words.split() or [""]
    return max(natural_width(replace(what, runs=(Run(w, what.runs[0].bold),))) for w in words)


def shortened(what: Text, width: float, lines: int) -> Text:
    """`what` (a single run), cut with an ellipsis to at most `lines` lines of `width` points."""
    if line_count(what, width) <= lines:
        return what
    whole = what.words
    low, high = 0, len(whole)
    while high - low > 1:
        middle = (low + high) // 2
        low, high = (middle, high) if line_count(_cut(what, middle), width) <= lines else (low, middle)
    return _cut(what, low)


def _cut(what: Text, letters: int) -> Text:
    kept = what.words[:letters].rstrip() + ELLIPSIS
    return replace(what, runs=(replace(what.runs[0], words=kept),))


def plain(words: str) -> str:
    """`words` on one line: no control characters, no formatting marks that could turn the rest around."""
    spaced = "".join(" " if unicodedata.category(c) in ("Cc", "Zl", "Zp") else c for c in words)
    kept = (c for c in spaced if c in _JOINERS or unicodedata.category(c) not in ("Cf", "Cs", "Co"))
    return " ".join("".join(kept).split())


def sentence(words: str, most: int = 300) -> str:
    """A sentence made elsewhere, at most `most` letters: no plan can fill the page with one of them."""
    shown = re.sub(r"(?<=\d) %", "\u00a0%", plain(words))
    return shown if len(shown) <= most else shown[: most - 1].rstrip() + ELLIPSIS


def name(words: str, most: int = 48) -> str:
    """A planner's name inside a sentence: at most `most` letters; right-to-left ones kept to themselves."""
    shown = plain(words)
    if len(shown) > most:
        shown = shown[: most - 1].rstrip() + ELLIPSIS
    turns = any(unicodedata.bidirectional(c) in ("R", "AL", "AN") for c in shown)
    return f"\u2068{shown}\u2069" if turns else shown
