"""What the crew and rounding pages and their pictures say: words and sentences, no layout.

Sentences take ready-made texts of numbers (`desktop.figures`), never numbers.
"""

from __future__ import annotations

from collections.abc import Sequence

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


# why a crew is not workable

WATERFALL = "How the line came to be short"
FRACTIONAL_MARGIN = "Room of the fractional crew"
ROUNDING = "Rounding"


def listed(parts: Sequence[str]) -> str:
    """`a, b and c`."""
    if len(parts) < 2:
        return "".join(parts)
    return f"{', '.join(parts[:-1])} and {parts[-1]}"


def _effect(gives: bool, amount: str) -> str:
    return f"gives {amount}" if gives else f"takes {amount}"


def move_down(name: str, was: str, now: str, gives: bool, amount: str) -> str:
    """A category that lost part of its people."""
    return f"{was} {name} down to {now} {_effect(gives, amount)}"


def move_up(name: str, was: str, now: str, gives: bool, amount: str) -> str:
    """A category that gained."""
    return f"{was} {name} up to {now} {_effect(gives, amount)}"


def move_to_none(name: str, was: str, gives: bool, amount: str) -> str:
    """A category that lost all its people."""
    return f"{was} {name} down to none {_effect(gives, amount)}"


def move_instead(name: str, was: str, now: str, gives: bool, amount: str) -> str:
    """A category in the planner's own crew, which is not a rounding."""
    return f"{now} {name} instead of {was} {_effect(gives, amount)}"


def move_over_phases(name: str, gives: bool, amount: str) -> str:
    """A category whose counts changed in several phases."""
    return f"{name} {_effect(gives, amount)}"


def others_move(gives: bool, amount: str) -> str:
    """The categories that moved least, together."""
    return f"the others together {_effect(gives, amount).replace('gives', 'give').replace('takes', 'take')}"


def fractional_room(amount: str) -> str:
    """The line under the fractional crew."""
    return f"The fractional crew had {amount} to spare."


def given_up(amount: str, line: str) -> str:
    """Supervision nobody gives frees hours for work."""
    return f"{line}, left undone, frees {amount}."


def left_short(lines: str, short: str, phase: str) -> str:
    """The end of it."""
    where = f" in {phase}" if phase else ""
    return f"That leaves {lines}{where} {short} short."


def miss_sentence(verb: str, moves: str, between: Sequence[str], end: str) -> str:
    """The whole explanation of one miss."""
    first = f"{verb} {moves}.".strip() if moves else ""
    return " ".join(part for part in (first, *between, end) if part)


BAR = "What"
BY = "by"
AFTER = "margin after it"


def in_unit(title: str, unit: str) -> str:
    """A column title with its unit."""
    return f"{title} ({unit})" if unit else title


def move_title(name: str, was: str, now: str) -> str:
    """Before the bar of a category."""
    return f"{name} {was} \u2192 {now}"


def given_up_title(line: str) -> str:
    """Before the bar of supervision left undone."""
    return f"{line}, left undone"


def end_title(lines: str) -> str:
    """Before the last bar."""
    return f"Margin of {lines}"
