"""Will enough of them be there: the attendance of the recommended crew in two or three sentences."""

from __future__ import annotations

from desktop.page.decision import crew_words
from desktop.page.speech import Speech, exact_decimal
from desktop.page.text import name, sentence
from solver.answer import Attendance, PhaseAttendance, SafeCrew

_NAMED = 5
_SURE = 1 - 5e-4  # what would be printed as 100 % although it is less


def attendance_line(speech: Speech, found: Attendance | None, *, own: bool) -> str:
    """How often enough of the crew are there; empty where that was not worked out."""
    if found is None or not found.phases:
        return ""
    if own:
        return _of_own(speech, found)
    worst = min(found.phases, key=lambda phase: phase.covered)
    parts = [_covered(speech, worst), _critical(speech, worst), _wanted(speech, found)]
    return " ".join(part for part in parts if part)


def _of_own(speech: Speech, found: Attendance) -> str:
    crew = next((c for c in found.compared if c.name == "own"), None)
    return f"Enough of them are there on {_share(speech, crew.covered)} of days." if crew else ""


def _share(speech: Speech, chance: float) -> str:
    """A chance as a share of days; never 100 % for less than always."""
    if _SURE < chance < 1:
        return f"more than {speech.percent(99.9)}"
    return speech.percent(100 * chance) if chance >= 5e-5 else "none"


def _covered(speech: Speech, worst: PhaseAttendance) -> str:
    where = f" in {name(worst.phase, 32)}, the worst phase" if len(speech.plan.phases) > 1 else ""
    drawn = f" (from drawn days, standard error {speech.percent(100 * worst.error)})" if worst.error else ""
    return f"Enough of them are there on {_share(speech, worst.covered)} of days{where}{drawn}."


def _critical(speech: Speech, worst: PhaseAttendance) -> str:
    first = max(worst.critical, key=lambda c: c.stops, default=None)
    if first is None or first.stops < 5e-4:
        return ""
    return f"With one {name(first.category, 32)} away, {_share(speech, first.stops)} of days are stopped."


def _wanted(speech: Speech, found: Attendance) -> str:
    if found.wanted is None:
        return sentence(found.why_none)
    safe = found.wanted
    if safe.extra < 0.005:
        return ""
    which = "The cheapest crew" if safe.proved else "The cheapest crew found"
    price = speech.money(safe.extra)
    return (
        f"{which} for {speech.percent(100 * safe.wanted)} of days costs {price} more: {_crew(speech, safe)}."
    )


def _crew(speech: Speech, safe: SafeCrew) -> str:
    peaks = [(max(exact_decimal(n) for n in counts), who) for who, counts in safe.crew.items()]
    at_most = "at most " if len(speech.plan.phases) > 1 else ""
    return at_most + crew_words(speech, peaks, _NAMED)
