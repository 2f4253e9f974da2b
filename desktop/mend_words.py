"""What the page of things to be mended says."""

from __future__ import annotations

from desktop import messages
from solver.review import quoted

TITLE = "To mend"
TOOLTIP = "What keeps the plan from having a crew"

NOTHING = "Nothing is to be mended."
WAITING = "Working on the plan as it stands now."
CAN_MEET = "A crew can meet the plan as it stands now."
REPAIRED = "Done: {repair} Undo takes it back."

CONFLICT = "Lines that cannot hold together"
NOBODY = (
    "No crew can meet this plan, not even one of fractional people. The lines below cannot all hold; without "
    "any one of them a crew could keep the others. Give way on one, by as much as it says."
)
NOT_WHOLE = (
    "Fractional people could meet this plan, whole people cannot. The lines below cannot all hold with whole "
    "people; without any one of them a whole crew could keep the others. Give way on one, by as much as it "
    "says."
)
UNTIL_THEN = "The plan was changed; what follows still belongs to the plan before."
APPLY = "Do this"
APPLY_TO = "Do this: {repair}"
UNDO_STEP = "Repair: {line}"

PROBLEMS = "Entries that make no plan"
REFUSED = "Entries that were refused and do not count"
GO_THERE = messages.GO_THERE
GO_TO = "Go to {where}"
MORE = messages.AND_MORE


def line_in(line: str, phase: str) -> str:
    """A line of a plan with several phases."""
    return f"{line}, in {phase}"


def entry(where: str, says: str) -> str:
    """Where something is wrong, and what."""
    return f"{where}: {says}"


def refused(where: str, text: str, reason: str) -> str:
    """A refused entry; most reasons quote what was typed."""
    return f"{where}: {reason}" if text in reason else f"{where}: {quoted(text)} \u2013 {reason}"
