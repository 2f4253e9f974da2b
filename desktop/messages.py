"""Every sentence of the window that tells an outcome. One file, so that tests and translators find them."""

from __future__ import annotations

from solver.caution import CAUTION as CAUTION
from solver.phrases import counted
from solver.review import Problem

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

EMPTY_PLAN = "No crew yet"
EMPTY_STATE = "the plan is empty"
EMPTY_NOBODY = (
    "Add a category: a kind of worker, what one costs and delivers. Or open an example from the File menu."
)
EMPTY_NOTHING_ASKED = "Add a work with its amount, or a rule about who must be there."
FIRST_ANSWER = "Looking for the cheapest whole crew"
IN_WORK = "working on it"
OUT_OF_DATE = "out of date, working on the change"
PROVED = "proved cheapest"
PROVED_ONCE = "proved cheapest, by one solver"
PROOF_OWN = "Proved by a complete search; every line was checked again in exact arithmetic."
PROOF_TWO = "Two solvers agree to the cent; every line was checked again in exact arithmetic."
PROOF_ONE = (
    "Proved by one solver; there was no time for the second to confirm it. Every line was checked again."
)
BEST_FOUND = "best found, at most {gap} above the cheapest possible"
BEST_FOUND_NO_GAP = "best found, probably the cheapest"
BEST_FOUND_NO_BOUND = "best found, not proved"
SO_FAR = "at most {gap} above the cheapest possible, still improving"
SO_FAR_NO_GAP = "probably the cheapest, proof under way"
SO_FAR_NO_BOUND = "crew so far, still improving"
GAP = "{money} ({percent})"
GAP_TIP = "No whole crew costs less than {bound}. Whether one costs less than this one is not known yet."
IMPOSSIBLE = "No crew can meet this plan"
IMPOSSIBLE_WHOLE = "No whole crew can meet this plan; fractional people could"
IMPOSSIBLE_STATE = "impossible"
CONFLICT = "These cannot hold together: {lines}"
NOTHING_FOUND = "No workable crew found yet; one may exist"
NOBODY_NEEDED = "Nobody is needed"
NO_ANSWER = "No answer"
FAILED = "the solver stopped"
TO_BE_MENDED = "to be mended"
ONE_PROBLEM = "One entry of the plan must be mended first"
PROBLEMS = "{count} entries of the plan must be mended first"
REFUSED_ENTRY = "1 entry was refused and is not counted"
REFUSED_ENTRIES = "{count} entries were refused and are not counted"
SEPARATOR = "   \u00b7   "
RANGE = "{low} to {high}"
COSTS = "costs {money}"
FLOOR = "floor {money}"
WHOLE_PEOPLE = "whole-people cost {money} ({percent})"
JOIN = "{count} join"
LEAVE = "{count} leave"
AND_MORE = "and {count} more"
GO_THERE = "Go there"
ASK_AGAIN = "Ask again"
WHAT_HELPS = "What helps"
HEADLINE = "Headline"
STOP_HERE = "Stop here"
STOP_HERE_TIP = "Keep the best crew found so far, with what is known about it ({keys})"
LOOK_FURTHER = "Look further"
LOOK_FURTHER_TIP = "Go on from this crew for twice as long; it stays on show meanwhile ({keys})"

# how long to look, and how close

EFFORT = "Time and tolerance"
GOOD_ENOUGH = "&Good enough when within"
OF_THE_CHEAPEST = " % of the cheapest"
LOOK_AT_MOST = "&Look for at most"
SECONDS_OF_SOLVE = " s"
EFFORT_NOTE = (
    "With 0 % the search goes on until the crew is proved cheapest or the time is up. Small plans are proved "
    "at once whatever stands here. Both hold for every plan from now on."
)

# grids

NOT_A_SHARE = "{text} % is not possible here; allowed is 0 or more and less than 100 %"
NO_SUCH_CATEGORY = "no category is called {name}"
NO_LIMIT = "no limit"
NOBODY_SELLS = "none"
REFUSED_AS_TYPED = "{text} was refused: {reason}."
READ_AS = "{text} was read as {number}. For thousands leave the sign out."
READS_TWO_WAYS = "{text} can be read in two ways; type {thousands} for thousands or {decimals} for decimals"
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
FILL_DOWN = "Fill down"
INSERT_ROW = "Insert {noun}"
DUPLICATE_ROWS = "Duplicate {noun}"
DELETE_ROWS = "Delete {noun}"
MOVE_ROWS = "Move {noun}"

# asking before something goes

DELETE_QUESTION = "Delete {names}?"
DELETE = "Delete"
KEEP = "Keep"

# rules

RULE = "Rule"
RULES = "Rules"
SAYS = "What it says"
RULE_TITLE = "Rule: {kind}"
RULE_NAME = "Name"
RULE_PHASES = "In the phases"
SENSE = "Limit"
PEOPLE = "People"
WHO = "Who counts"
COUNTED = "Category"
COUNTS_AS = "One counts as"
AT_MOST = "At most"
RATIO_OF = "So many of"
RATIO_PER = "For each of"
SHARE_PERCENT = "Per cent"
SHARE_WITHIN = "Of all these"
SHARE_OF = "Must be these"
BY_DAY = "Ask it of those present on each working day too"
NO_RULES = "No rules yet: presence, ratio, share or budget."


def rule_problem(problem: Problem, place: str) -> str:
    """A problem of a rule in its own dialog, where the field is seen: `at_most: -1 is negative`."""
    field = problem.place.removeprefix(place).lstrip(".")
    return f"{RULE_FIELDS.get(field.split('[')[0].split('.')[0], field)}: {problem.says}"


RULE_FIELDS = {
    "name": RULE_NAME,
    "weights": WHO,
    "bound": PEOPLE,
    "of": f"{RATIO_OF} / {SHARE_OF.lower()}",
    "per": RATIO_PER,
    "within": SHARE_WITHIN,
    "at_most": AT_MOST,
    "fraction": SHARE_PERCENT,
    "phases": RULE_PHASES,
}

# the Plan page

LENGTH = "Length, {period}s"
LENGTH_TIP = "How many periods the whole job lasts; pay and hours are per period, amounts for the whole job."
NOTES = "Notes"
NOTES_HINT = "What the plan rests on, in your own words"
MORE_COLUMNS = "More columns:"
COLUMNS_USED = "These columns hold something."
ADD_PHASE = "Add a phase"
ADD_PHASE_TIP = (
    "For jobs with a start, a peak and an end: amounts per phase, people join and leave between them."
)
ADD_RULE = "Add a rule"
ADD_RULE_TIP = "A limit on head counts or money: presence, ratio, share, budget."

# dialogs

PROGRAM = "Full Complement"
OK = "OK"
CANCEL = "Cancel"

# files

UNTITLED = "Unsaved plan"
OPEN = "Open"
PLAN_FILES = "Plans (*.crew.json);;All files (*)"
SAVE_FIRST = "Save the changes to {name} first?"
SAVE_FIRST_MORE = "Without saving, the changes since the last save are lost."
SAVE = "Save"
DONT_SAVE = "Don't save"
NOT_OPENED = "{name} was not opened."
NOT_SAVED = "The plan was not saved."
NOT_WRITTEN = "{name} was not written."
OPEN_ELSEWHERE = "{name} is open in another window of this program already."
OPEN_ELSEWHERE_MORE = "If both save, the later one replaces what the other has saved. A copy has no file yet."
OPEN_COPY = "Open a copy"
OPEN_ANYWAY = "Open anyway"
CHANGED_ON_DISK = "{name} was changed by another program since it was opened here."
CHANGED_ON_DISK_MORE = "Reading it again replaces what is in the window; that can be undone."
CHANGED_ON_DISK_SAVE = "Saving replaces what the other program has written."
GONE_FROM_DISK = "{name} is no longer where it was. Save the plan to keep it."
READ_AGAIN = "Read it again"
KEEP_MINE = "Keep what is here"
REPLACE_IT = "Replace it"
SAVE_AS = "Save as..."
READ_FROM_DISK = "Read again from disk"
SAVED = "Saved as {name}."
RECOVER = "Recover"
DISCARD = "Discard"
LATER = "Ask again at the next start"
LEFT_BEHIND = "{name} had changes that were not saved when the program ended."
LEFT_BEHIND_MORE = "The last of them was typed {when}."
NO_RECOVERY_COPY = "No recovery copy could be written: {why}"
LAST_PLAN_GONE = "{name}, the plan of last time, is not there any more."


def saved(name: str, refused: int) -> str:
    """That a plan was saved, and what of it was not."""
    if not refused:
        return SAVED.format(name=name)
    entries = counted(refused, "refused entry is", "refused entries are")
    return f"{SAVED.format(name=name)} {entries} not in the file."


def listed_lines(lines: tuple[str, ...], most: int = 12) -> str:
    """One line each, the rest counted."""
    shown = "\n".join(lines[:most])
    return shown if len(lines) <= most else f"{shown}\nand {len(lines) - most} more"


# the window

PAGES = "Pages"
HELP = "Help"
HELP_WORDS = "Words"
HELP_PAGES = "Pages"
HELP_PROOF = "How the crew is found and proved"
HELP_KEYS = "Keys"
ABOUT_TITLE = "About Full Complement"
KEPT_IN = "The log and the copies of unsaved changes are kept in {folder}."
ABOUT = "Turns a workload into a whole number of people of each category, proved cheapest."
NOT_INSTALLED = "not installed"
NO_RECENT = "No plans yet"
NOTHING_TO_PRINT = "There is no answer to this plan yet that could be printed."

# what nobody expected

UNEXPECTED = "Something unexpected went wrong. What you typed is still here."
UNEXPECTED_MORE = "Please save the plan. The details are in the log file: {log}"
COPY_DETAILS = "Copy details"
GO_ON = "Go on"

# the command

USAGE = """\
full-complement                     open the window with the last plan, or an example
full-complement PLAN                open the window with this plan
full-complement page PLAN OUT.pdf   write the page that gets signed; needs no display
full-complement --version           say which version this is
Everything else: python -m solver --help"""
NO_DISPLAY = "No display was found, so the page and the answer of {name} are written here: {page} and {text}."
PAGE_WRITTEN = "The page was written to {out}."
