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
