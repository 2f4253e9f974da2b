"""The page as marks on one sheet: the fullest stage of detail that fits.

The upper part flows from the top, caution, signatures and origin stand at the foot; between them the short
blocks run in two columns. Room that is left over goes between the blocks, up to a limit.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from desktop.page import sections
from desktop.page.detail import STAGES, Detail
from desktop.page.marks import NOTHING, Mark, Piece, evenly, stacked
from desktop.page.paper import Paper
from desktop.page.recommendation import Recommendation
from desktop.page.tally_print import tally_piece
from desktop.page.text import forget_measures
from desktop.page_words import TOO_FULL

_GAP = 13.0
_WIDEST_GAP = 21.0


class PageTooFull(ValueError):
    """Not even the barest stage fits: a title or sentence of the plan is out of all proportion."""

    def __init__(self) -> None:
        super().__init__(TOO_FULL)


@dataclass(frozen=True)
class Sheet:
    """One laid-out page."""

    paper: Paper
    marks: tuple[Mark, ...]
    detail: Detail


def lay_out(what: Recommendation, paper: Paper) -> Sheet:
    """The page of `what` on `paper`. Raises PageTooFull when nothing more can be left out."""
    forget_measures()  # fonts may have been added since
    low, high = 0, len(STAGES) - 1
    if _room(what, paper, STAGES[high]) < 0:
        raise PageTooFull
    while low < high:  # every stage takes no more room than the one before
        middle = (low + high) // 2
        low, high = (low, middle) if _room(what, paper, STAGES[middle]) >= 0 else (middle + 1, high)
    return Sheet(paper, _placed(what, paper, STAGES[low]), STAGES[low])


def _upper(what: Recommendation, width: float, detail: Detail) -> list[Piece]:
    pieces = [
        sections.masthead(what, width),
        sections.banner(what, width),
        sections.decision(what, width, detail),
        sections.conflict(what, width, detail) if what.table is None else NOTHING,
        tally_piece(what, width, detail),
        sections.crew(what, width, detail),
        _two_columns(what, width, detail),
        sections.assumptions(what, width, detail),
    ]
    return [piece for piece in pieces if piece.height]


def _foot(what: Recommendation, width: float) -> Piece:
    pieces = [sections.caution(width), sections.signatures(what, width), sections.origin(what, width)]
    return stacked(pieces, 7.0)


def _two_columns(what: Recommendation, width: float, detail: Detail) -> Piece:
    """The short blocks in order, broken where both columns come out most alike."""
    column = (width - sections.COLUMN_GAP) / 2
    gap = max(6.0, 10.0 * detail.air)
    makers = (
        sections.rounding,
        sections.costs,
        sections.binding,
        sections.attendance,
        sections.alternatives,
    )
    blocks = [b for b in (make(what, column, detail) for make in makers) if b.height]
    return evenly(blocks, gap, column + sections.COLUMN_GAP)


def _room(what: Recommendation, paper: Paper, detail: Detail) -> float:
    """Height left over at the stage's own gaps; negative where it does not fit."""
    pieces = _upper(what, paper.column, detail)
    gaps = len(pieces) * _GAP * detail.air
    return paper.depth - sum(p.height for p in pieces) - gaps - _foot(what, paper.column).height


def _placed(what: Recommendation, paper: Paper, detail: Detail) -> tuple[Mark, ...]:
    pieces = _upper(what, paper.column, detail)
    foot = _foot(what, paper.column)
    gap = _gap(pieces, foot, paper, detail)
    marks: list[Mark] = []
    y = paper.top
    for piece in pieces:
        marks += piece.at(paper.left, y)
        y += piece.height + gap
    marks += foot.at(paper.left, paper.height - paper.bottom - foot.height)
    return tuple(marks)


def _gap(pieces: Sequence[Piece], foot: Piece, paper: Paper, detail: Detail) -> float:
    """The stage's gap, wider where there is room to spare."""
    spare = paper.depth - sum(p.height for p in pieces) - foot.height
    return max(_GAP * detail.air, min(_WIDEST_GAP, spare / max(1, len(pieces))))
