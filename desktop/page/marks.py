"""What a laid-out page consists of: marks at places, in points from the top left of the sheet."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

from desktop.page.text import Text, height
from desktop.pictures.figure import Figure


@dataclass(frozen=True)
class TextMark:
    """A paragraph with its top left at (x, y)."""

    x: float
    y: float
    width: float
    text: Text


@dataclass(frozen=True)
class RuleMark:
    """A horizontal line of `weight` points; `role` is a colour name of Theme."""

    x: float
    y: float
    width: float
    weight: float
    role: str


@dataclass(frozen=True)
class FillMark:
    """A filled box."""

    x: float
    y: float
    width: float
    height: float
    role: str


@dataclass(frozen=True)
class FiguresMark:
    """Figures of the people tally, drawn `scale` times their own size."""

    x: float
    y: float
    scale: float
    figures: tuple[Figure, ...]


@dataclass(frozen=True)
class StepsMark:
    """Head counts over phases: `exact` as an area, `fractional` as a broken line; `edges` from x."""

    x: float
    y: float
    height: float
    edges: tuple[float, ...]
    exact: tuple[float, ...]
    fractional: tuple[float, ...]
    dividers: bool = False


Mark = TextMark | RuleMark | FillMark | FiguresMark | StepsMark


@dataclass(frozen=True)
class Piece:
    """Marks in a box of `height`, with the origin at its top left."""

    height: float
    marks: tuple[Mark, ...] = ()

    def at(self, x: float, y: float) -> tuple[Mark, ...]:
        """Its marks with the origin moved to (x, y)."""
        return tuple(replace(mark, x=mark.x + x, y=mark.y + y) for mark in self.marks)


NOTHING = Piece(0.0)


def paragraph(text: Text, width: float) -> Piece:
    """One paragraph as a piece."""
    return Piece(height(text, width), (TextMark(0.0, 0.0, width, text),))


def stacked(pieces: Iterable[Piece], gap: float = 0.0) -> Piece:
    """Pieces below each other; empty ones take no gap."""
    marks: list[Mark] = []
    y = 0.0
    for piece in pieces:
        if piece.height <= 0:
            continue
        y += gap if y else 0.0
        marks += piece.at(0.0, y)
        y += piece.height
    return Piece(y, tuple(marks))


def evenly(pieces: Sequence[Piece], gap: float, offset: float) -> Piece:
    """Pieces in order in two columns, broken where both come out most alike."""
    splits = [(pieces[:at], pieces[at:]) for at in range(1, len(pieces) + 1)]
    tried = [beside(stacked(left, gap), stacked(right, gap), offset) for left, right in splits]
    return min(tried, key=lambda piece: piece.height, default=NOTHING)


def beside(left: Piece, right: Piece, offset: float) -> Piece:
    """Two pieces with equal tops, the right one starting at `offset`."""
    return Piece(max(left.height, right.height), (*left.marks, *right.at(offset, 0.0)))
