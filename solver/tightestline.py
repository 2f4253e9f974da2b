"""Answer of `tightest`, apart from what works it out."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class TightestLine:
    """The line on which a crew has least room; empty where no line asks for anything."""

    line: str
