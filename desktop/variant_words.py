"""What the page that compares variants of a plan says."""

from __future__ import annotations

from desktop import messages, question_words
from desktop.crew_words import COST, JOINERS, LEAVERS, PEOPLE, TIGHTEST, TIP_PEOPLE
from desktop.question_words import PROGRESS

__all__ = ["COST", "JOINERS", "LEAVERS", "PEOPLE", "PROGRESS", "TIGHTEST", "TIP_PEOPLE"]

TITLE = "Variants"
TOOLTIP = "Several variants of the plan side by side"
ACTION = "Duplicate as a &variant..."
DUPLICATE = "Duplicate as a variant..."
DUPLICATE_TIP = "A copy of the plan in a file beside it, under a name of its own"
ADD = "Add a plan..."
ADD_TIP = "Compare another plan too, wherever it lies"
LEAVE_OUT = "Leave out"
LEAVE_OUT_TIP = "Compare the chosen plan no longer; its file stays"
OPEN = "Open this one"
OPEN_TIP = "Open the chosen plan in this window"
CHOOSE = "Plans to compare with"
WORK_OUT = question_words.ASK
CANCEL = messages.CANCEL
TABLE = "Variants side by side"
HOW = (
    "The plan in the window stands first, with what was changed since it was saved. Numbers that differ from "
    "it are bold. Choose a column to open its plan or to leave it out."
)
ALONE = (
    "There is nothing to compare with yet: duplicate the plan as a variant and change it, or add another "
    "plan."
)
HERE = "in this window"
UNSAVED = messages.UNTITLED
CHANGED = "changed, not saved"

STATE = "State"
AGAINST = "Against the first"
FLOOR = "Floor"
WHOLE_PEOPLE = "Whole-people cost"
TIP_STATE = "Whether the crew is proved cheapest"
TIP_COST = "Cost of the exact crew"
TIP_AGAINST = "How much dearer or cheaper than the plan in the window"
TIP_FLOOR = "Cost of the fractional crew; no whole crew costs less"
TIP_WHOLE = "Exact cost less floor, in money and in per cent of the exact cost"
TIP_JOINERS = "People who join, over all phases"
TIP_LEAVERS = "People who leave, over all phases"
TIP_TIGHTEST = "The line with the least room under the exact crew"

PROVED = messages.PROVED
BEST_FOUND = "best found"
IMPOSSIBLE = "no crew can meet it"
NO_CREW = "no crew found yet"
WAITING = "waiting"
WORKING = "being worked on"
UNREADABLE = "cannot be read"
TO_MEND = "must be mended first"
EMPTY = "nothing is asked in it"
LOST = "could not be worked out"
NOT_THERE = ""

NAME_TITLE = "Duplicate as a variant"
NAME = "Name of the variant"
NAME_HINT = "what is different in it, for instance: night shift"
FILE = "It is saved as {file}."
NO_NAME = "A name is needed."
LONG_NAME = "The name is too long: at most {most} characters."
BAD_SIGN = "{sign} cannot stand in the name of a file."
TAKEN = "There is a file called {file} already."
SAVE_FIRST = "The plan has no file yet. A variant stands beside it, so save the plan first."
BOTH = "Save them in both"
ONLY_VARIANT = "Only in the variant"
WHERE = "Where should the changes since the last save go?"
WHERE_MORE = "With \u201c{only}\u201d, {name} stays as it was saved."
UNDO_STEP = "Name the variant"
MADE = "{variant} is in the window now; {original} stays as it is."


def asking(name: str, at: int, count: int) -> str:
    """Which plan is being worked on."""
    return f"Working on {name}, {at} of {count}"


def titled(title: str, variant: str) -> str:
    """The title of a variant: it heads the page that is signed."""
    return f"{title} \u2013 {variant}" if title else variant


def people_of(category: str) -> str:
    """What a row of head counts means."""
    return f"People of {category} in the exact crew"


def with_percent(money: str, percent: str) -> str:
    """Money and its share."""
    return f"{money} ({percent})"


def column(name: str, note: str) -> str:
    """Title of a column."""
    return f"{name}\n{note}"


def problem(name: str, says: str) -> str:
    """Why a plan is not compared."""
    return f"{name}: {says}"
