"""What the pages of long questions say: whole-people cost, room to move, near-best crews, steps and map.

Sentences take ready-made texts of numbers (`desktop.figures`), never numbers.
"""

from __future__ import annotations

from collections.abc import Sequence

from desktop import messages
from desktop.crew_words import (
    CATEGORY,
    COST,
    CREW,
    FRACTIONAL,
    JOINERS,
    LEAVERS,
    NO_CREW,
    NOT_WORKABLE,
    PEOPLE,
    PHASE,
    TIGHTEST,
    TIP_PEOPLE,
    in_unit,
    listed,
)

__all__ = [
    "CATEGORY",
    "COST",
    "CREW",
    "FRACTIONAL",
    "JOINERS",
    "LEAVERS",
    "NOT_WORKABLE",
    "NO_CREW",
    "PEOPLE",
    "PHASE",
    "TIGHTEST",
    "TIP_PEOPLE",
    "in_unit",
    "listed",
]

PROGRESS = "Progress"
CANCEL = messages.CANCEL
ASK = "Work it out"
CANCELLED = "Cancelled."
NEEDS_CREW = "This needs an exact crew, and there is none yet."
NEEDS_MENDING = "This needs an exact crew, and no crew can meet the plan: the page To mend tells what helps."

# whole-people cost

ABOVE_FLOOR = "above the floor"
LADDER = "What each crew costs above the floor"
SAVINGS = "Where the cost of whole people comes from"
SAVING = "Saving"
IF_FRACTIONAL = "if any part of a post could be shared"
NO_SAVING = "neither way"
IF_HALF_POST = "if half posts could be had"
IF_HALF_LOT = "if the lot were half as large"
WHOLE_PEOPLE_FREE = "Whole people cost nothing extra: the exact crew costs as much as the floor."
NO_ONE_SAVES = "No category alone would save anything by being shared or part time."
COST_METHOD = (
    "The floor is the cost of the fractional crew, the optimum of the linear relaxation; no whole crew costs "
    "less. Each saving is worked out anew with that one category fractional, or with half its lot, and all "
    "others whole. The savings do not add up."
)


def breaks(lines: Sequence[str]) -> str:
    """Beside a crew that is not workable."""
    return f"breaks {listed(lines)}"


def whole_people_cost(absolute: str, percent: str) -> str:
    """The headline of the page."""
    return f"That people are whole costs {absolute}, which is {percent} of the exact crew's cost."


def shared(category: str, saving: str) -> str:
    """The category worth talking about."""
    return f"Sharing one {category} with another site, or part time, would save up to {saving}."


# room to move

ROOM_LINES = "Lines"
ROOM_PAY = "Pay"
TIGHTEN = "Can tighten\nby"
TIP_TIGHTEN = "How far the line can tighten before the exact crew is no longer workable"
LOOSEN = "Loosen\nby"
TIP_LOOSEN = "The least loosening that makes a cheaper whole crew possible; none where no loosening does"
WOULD_SAVE = "Would\nsave"
TIP_WOULD_SAVE = "What the cheapest whole crew at that loosening costs less than the exact crew"
NEXT_CREW = "With this change\nof the crew"
TIP_NEXT_CREW = "How the cheapest whole crew at that loosening differs from the exact crew"
DUAL = "Price for\nfractional\npeople"
TIP_DUAL = (
    "Dual price: what one unit less of the line would save if people could be divided. "
    "It does not hold for whole people."
)
DUAL_RANGE = "holds while\nthe line\nasks for"
TIP_DUAL_RANGE = "The range of the line's own limit in which that price holds, for fractional people"
NOT_BY_LOOSENING = "none"
ROOM_INTRO = "How far each line can move: worked out with whole people, one line at a time."
PAY_INTRO = "The pay at which the exact crew stays the cheapest, one category at a time."
PAY_NOW = "Pay now"
TIP_PAY_NOW = "Pay per person and period as planned"
PAY_FROM = "Stays cheapest\nfrom"
PAY_TO = "to"
TIP_PAY_FROM = "Below this pay another whole crew is cheaper"
TIP_PAY_TO = "Above this pay another whole crew is cheaper"
NO_LIMIT = messages.NO_LIMIT
CHOOSE_LINE = "Choose a line to read what loosening it would do."


def from_to(low: str, high: str) -> str:
    """A range."""
    return f"{low} to {high}"


# near-best crews

WITHIN = "Within"
WITHIN_TIP = "How much more than the exact crew a crew may cost, in per cent"
MOST = "At most"
MOST_TIP = "How many crews are listed"
CREWS_UNIT = " crews"
OF_EXACT = "above the exact cost"
OVER = "Above\nexact"
TIP_OVER = "What the crew costs above the exact crew"
TIP_NEAR_COST = "Cost of the crew"
TIP_TIGHTEST = "The line with the least room under this crew"
TAKE_THIS = "Take this one as own"
TIP_TAKE_THIS = "Copy the chosen crew into your own crew, where it is appraised and can be printed"
COMPLETE = "These are all the crews within the limit."
NOT_COMPLETE = "There are more crews within the limit than are listed; these are the cheapest."
NO_OTHER = "No other whole crew is within the limit."


def taken(cost: str) -> str:
    """After 'take this one'."""
    return f"Now your own crew: {cost} above the exact crew."


TAKEN_FREE = "Now your own crew; it costs as much as the exact crew."
EDIT_TAKE = "take a near-best crew as own"


def count_of(category: str) -> str:
    """What a column of head counts means."""
    return f"People of {category}"


# workload steps

STAIRCASE = "Cost over workload"
STEPS = "Steps"
FROM = "From"
TO = "To"
ALL_WORKS = "All works together"
WORK = "Work"
WORKLOAD = "Workload"
TIP_WORKLOAD = "Type a workload, or drag the line in the picture, or move it with the arrow keys"
RANGE = "Range"
RANGE_TIP = "Which part of the workload is looked at, in per cent of today's"
RANGE_TO = "to"
NO_RANGE = "The range must begin below its end."
CHANGE = "Against the step before"
TIP_STEP_FROM = "The least workload of the step"
TIP_STEP_TO = "The largest workload its crew serves at least cost"
TIP_STEP_CREW = "The cheapest crew in this step"
TIP_STEP_COST = "Cost of the crew at the end of the step"
TIP_CHANGE = "Who is added or no longer needed"
BEYOND_STEPS = "No crew of the staircase serves this workload."
ANOTHER_SPREAD = "the same people, spread otherwise"
STEPS_EXACT = "Every border of a step is exact."
STEPS_UNPROVED = "Not every border is proved: the time was not enough."
TODAY = "today"
KEY_EXACT, KEY_FLOOR, KEY_UP = "cheapest whole crew", "fractional crew", "fractional crew rounded up"


def workload_axis(work: str | None, unit: str) -> str:
    """Title of the axis of workloads."""
    return in_unit(work, unit) if work else "All works, % of today"


def stairs_described(count: int, today: str) -> str:
    """The staircase in words."""
    return f"{count} steps; today's workload is {today}. The table lists every step."


def crew_at(amount: str, crew: str, cost: str) -> str:
    """The crew at the workload looked at."""
    return f"At {amount}: {crew}, {cost}."


def holds_up_to(amount: str, change: str, more: str) -> str:
    """How far a crew holds and what comes then."""
    cost = f"for {more} more" if more else "at the same cost"
    return f"Holds up to {amount}; then {change}, {cost}."


def holds_to_the_end(amount: str) -> str:
    """The last step."""
    return f"Holds up to {amount}, the end of the range."


# the crew map

CREW_MAP = "Crew map"
ACROSS = "Across"
UPWARDS = "Upwards"
WORKABLE = "Workable"
BREAKS = "Breaks"
YES, NO = "yes", "no"
KEY_WORKABLE = "workable whole crew"
KEY_NOT_WORKABLE = "not workable"
KEY_EQUAL_COST = "as dear as the exact crew"
MAP_HINT = (
    "Dots and crosses are crews with all other categories as in the exact crew; named crews stand where they "
    "are, though their other categories differ. Point at a crew, or move with the arrow keys; click, or "
    "press Space, to make it your own."
)
NEEDS_TWO = "The map needs at least two categories."
SAME_TWICE = "Choose two different categories."
EDIT_FROM_MAP = "take a crew of the map as own"


def people_axis(category: str) -> str:
    """Title of an axis of the map."""
    return in_unit(category, "people")


def map_described(workable: int, count: int) -> str:
    """The map in words."""
    return f"{workable} of {count} whole crews on the map are workable. The table lists them all."


NOBODY_OF = "no"


def pair(x: str, across: str, y: str, up: str) -> str:
    """Two head counts."""
    return f"{x} {across} and {y} {up}"


def spot_costs(crew: str, cost: str) -> str:
    """A workable crew."""
    return f"{crew}: workable, {cost}."


def spot_breaks(crew: str, lines: str) -> str:
    """A crew that is not workable."""
    return f"{crew}: breaks {lines}."


def spot_not_workable(crew: str) -> str:
    """A crew that is not workable, without its lines."""
    return f"{crew}: not workable."
