"""What the crew and rounding pages and their pictures say: words and sentences, no layout.

Sentences take ready-made texts of numbers (`desktop.figures`), never numbers.
"""

from __future__ import annotations

COPY_IMAGE = "Copy image"
COPY_DATA = "Copy data"
SHOW_TABLE = "Show as table"

TALLY = "People tally"
FRACTIONAL = "fractional"
EXACT = "exact"
LEGEND_FRACTIONAL = "fractional crew"
LEGEND_EXACT = "exact crew"
OWN_HEIGHT = "each category to its own height"
LEGEND_STAYS = "exact crew, on the books"
LEGEND_JOINS = "joins"
LEGEND_LEAVES = "leaves"
NO_CREW = "no crew"
CATEGORY = "Category"
PHASE = "Phase"
JOIN = "join"
LEAVE = "leave"


def legend_scale(people: str) -> str:
    """What the largest figure stands for."""
    return f"one figure marked {people} = {people} people"


def joining(people: str) -> str:
    """Beside the figures of a category."""
    return f"{people} join"


def leaving(people: str) -> str:
    """Beside the figures of a category."""
    return f"{people} leave"


def in_lots(lot: str) -> str:
    """Under the name of a category that comes in lots."""
    return f"in lots of {lot}"


def tally_row(name: str, fractional: str, exact: str, moves: str) -> str:
    """One category of the tally, for tooltips and screen readers."""
    return f"{name}: fractional {fractional}, exact {exact}{moves}"


def periods(count: str, period: str) -> str:
    """How long a phase is."""
    return f"{count} {period}" if count == "1" else f"{count} {period}s"


def on_the_books(people: str) -> str:
    """Under the name of a category."""
    return f"{people} on the books"
