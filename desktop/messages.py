"""Every sentence of the window that tells an outcome. One file, so that tests and translators find them."""

from __future__ import annotations

CAUTION = (
    "Not a legal check. Working time, licences and statutory staffing or supervision ratios are set by local "
    "rules; confirm them with whoever is competent before people are put to work."
)

# the solver process

WORKING = "Working on it"
WAITING_FOR_TURN = "Waiting for the question before it"
SOLVER_LOST = "The solver stopped twice on this plan ({how}). The plan is safe; change it, or ask again."
SOLVER_FAILED = "The solver could not finish on this plan. The plan is safe; the details are in the log file."
SOLVER_RESTARTING = "The solver stopped and was started again; the plan is safe."


def no_answer(part: str, said: object) -> str:
    """Why a question ended without an answer: the solver's own refusal, or that it failed."""
    return str(said) if part == "refused" else SOLVER_FAILED


# the headline

EMPTY_PLAN = "No plan yet"
EMPTY_NOBODY = "Add a category: a kind of worker, what one costs and delivers."
EMPTY_NOTHING_ASKED = "Add a work with its amount, or a rule about who must be there."
IN_WORK = "working on it"
OUT_OF_DATE = "out of date, working on the change"
OUT_OF_DATE_PROBLEMS = "out of date: this was the crew before the last change"
PROVED = "proved cheapest"
BEST_FOUND = "best found, at most {gap} above the cheapest possible"
BEST_FOUND_NO_BOUND = "best found, not proved"
IMPOSSIBLE = "No crew can meet this plan"
IMPOSSIBLE_WHOLE = "No whole crew can meet this plan; fractional people could"
NOTHING_FOUND = "No workable crew found yet; one may exist"
NOBODY_NEEDED = "Nobody is needed"
ONE_PROBLEM = "One entry of the plan must be mended first"
PROBLEMS = "{count} entries of the plan must be mended first"
REFUSED_ENTRY = "1 entry was refused and is not counted"
REFUSED_ENTRIES = "{count} entries were refused and are not counted"

# grids

NOT_A_NUMBER = "{text} is not a number; allowed are digits with one decimal sign"
NOT_A_SHARE = "{text} % is not possible here; allowed is 0 or more and less than 100 %"
NO_SUCH_CATEGORY = "no category is called {name}"
NO_LIMIT = "no limit"
NOBODY_SELLS = "none"
READ_AS = "{text} was read as {number}. For thousands leave the sign out."
PASTE_TOO_WIDE = "{count} columns of what was pasted did not fit and were left out."
PASTE_TOO_LARGE = "That is too much to paste at once: at most {most} rows."
NAME_TAKEN = "another one is called {name} already"
NAME_MISSING = "a name is needed"
REFUSED_CELL = "Refused: {reason}"
PROBLEM_CELL = "To be mended: {says}"
NEW_ROW = "new {noun}"
AS_ABSENCE = "as absence"

# deleting what is used elsewhere

LAST_PHASE_STAYS = "A plan has at least one phase; the last one stays."


def listed(names: tuple[str, ...], most: int = 6) -> str:
    """`A, B and 3 more`."""
    shown = ", ".join(names[:most])
    return shown if len(names) <= most else f"{shown} and {len(names) - most} more"


def category_loss(changed: tuple[str, ...], gone: tuple[str, ...], lost: tuple[str, ...]) -> str:
    """What deleting categories does to rules and supervision; "" for nothing."""
    said = []
    if changed:
        said.append(f"It is taken out of these rules: {listed(changed)}.")
    if gone:
        said.append(f"These rules would name nobody and are deleted: {listed(gone)}.")
    if lost:
        said.append(f"These categories would be supervised by nobody and need none then: {listed(lost)}.")
    return " ".join(said)


def work_loss(categories: tuple[str, ...]) -> str:
    """What deleting works does to categories; "" for nothing."""
    return (
        f"These categories have an output for it, which goes too: {listed(categories)}." if categories else ""
    )


def phase_loss(works: tuple[str, ...], rules: tuple[str, ...]) -> str:
    """What deleting phases does; "" for nothing."""
    said = []
    if works:
        said.append(f"The amounts of these works in it go too: {listed(works)}.")
    if rules:
        said.append(f"These rules hold in no other phase and are deleted: {listed(rules)}.")
    return " ".join(said)


# undo steps

CHANGE = "Change {what}"
CLEAR_CELLS = "Clear cells"
PASTE_CELLS = "Paste"
CUT_CELLS = "Cut"
FILL_DOWN = "Fill down"
INSERT_ROW = "Insert {noun}"
DUPLICATE_ROWS = "Duplicate {noun}"
DELETE_ROWS = "Delete {noun}"
MOVE_ROWS = "Move {noun}"

# asking before something goes

DELETE_QUESTION = "Delete {names}?"
DELETE = "Delete"
KEEP = "Keep"
