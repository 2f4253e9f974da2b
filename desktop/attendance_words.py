"""What the page about attendance says. Sentences take ready-made texts of numbers, never numbers."""

from __future__ import annotations

from collections.abc import Sequence

from desktop.crew_words import CATEGORY, COST, CREW, NOT_WORKABLE, PHASE, in_unit, listed

__all__ = ["CATEGORY", "COST", "CREW", "NOT_WORKABLE", "PHASE", "in_unit", "listed"]

WANTED = "Enough people on"
OF_DAYS = "of days"
TIP_WANTED = "The chance you want that the people present cover a day, in every phase"
TAKE = "Take this crew as own"
TIP_TAKE = "Copy the crew under the cursor of the picture into your own crew"
EDIT_TAKE = "take a safer crew as own"
CURVE = "Cost against chance"
CURVE_HINT = "Each dot is the cheapest whole crew for so many days; arrow keys move along."
AXIS_CHANCE = "days on which enough people are there, %"
KEY_CURVE, KEY_NOT_PROVED, KEY_OTHERS = "cheapest crew for a chance", "not proved cheapest", "other crews"
BUDGET, WANTED_MARK = "budget", "wanted"

CREWS = "Crews side by side"
TIP_CREW = "Where the crew comes from, and who is in it"
COVERS = "Enough\non"
TIP_COVERS = "Days on which those present cover the day; in the worst phase"
TIP_COST = "Cost of the crew, where it is workable"
MORE = "Above exact"
TIP_MORE = "What it costs above the exact crew"
WHO = "Who"

LINES = "What is short, and how often"
LINE = "Line"
TIP_LINE = "A work, supervision, or a rule asked of those present"
TIP_CATEGORY = "The category of the one who is away"
KEPT = "Kept on"
TIP_KEPT = "Days on which those present keep this line"
SHORT = "Short on average,\nper {period}"
TIP_SHORT = "What is left undone on average, days with enough people counted as none"
WHO_IS_MISSED = "Who is missed"
STOPS = "Days stopped with\none away"
TIP_STOPS = "When one given person of the category is away: days that the others cannot cover"
OWN_CHANGED = "Your own crew has changed since; work it out again to see how often it is enough."

MODEL = (
    "How it is worked out: on a working day every person is present or away independently of the others, "
    "away with the day absence of the category (where none is given, its absence). A day has its share of "
    "the phase's work. Those present work their paid hours, and overtime up to their limit; they are "
    "supervised by those present; presence rules, and rules asked by day, are asked of those present. "
    "Bought-in work is that of the crew's cheapest plan, spread evenly, and so is settling-in. A lot of "
    "several people is that many people, each present or away alone; part of a post is one person who "
    "counts as that part."
)
EXACT_CHANCES = "Chances are exact: every pattern of attendance was looked at."


def over_unit(title: str, unit: str) -> str:
    """A title with its unit below."""
    return f"{title}\n({unit})"


def drawn_chances(days: str, error: str) -> str:
    """Where there are too many patterns of attendance."""
    return (
        f"There are too many patterns of attendance to look at all: chances come from {days} drawn days, "
        f"the same for every crew, with a standard error of {error}."
    )


def headline(covered: str, phase: str) -> str:
    """How often the exact crew is enough."""
    where = f" in {phase}, the worst phase" if phase else ""
    return f"The exact crew is enough on {covered} of days{where}."


def survives(count: int | None, missing: Sequence[str]) -> str:
    """How many absences never matter, and a set that does."""
    miss = f" {listed(missing)} away stops the day." if missing else ""
    if count is None:
        return "Even with everybody there a day is not covered."
    if count == 0:
        return f"A single absence can stop a day:{miss}" if missing else "A single absence can stop a day."
    people = "one person" if count == 1 else f"any {count} people"
    return f"Whoever it is, {people} may be away and the day is still covered.{miss}"


def safe(share: str, crew: str, extra: str, covered: str) -> str:
    """The cheapest crew for the wanted chance, proved."""
    return f"For {share} of days: {crew}, {extra}; it is enough on {covered}."


def more(money: str) -> str:
    """Against the exact crew."""
    return f"{money} more than the exact crew"


AS_CHEAP = "no dearer than the exact crew"


def not_proved(bound: str) -> str:
    """After a crew that is not proved cheapest."""
    return f"Not proved: there may be a cheaper one, but none below {bound}."


def without_budget(sentence: str) -> str:
    """What it would take without the budget."""
    return f"Without the budget, {sentence[:1].lower()}{sentence[1:]}"


def described(count: int, low: str, high: str) -> str:
    """The picture for those who cannot see it."""
    return f"{count} crews, from enough people on {low} of days to {high}"


def for_days(share: str) -> str:
    """What the cheapest crew for the wanted chance is called."""
    return f"for {share}"


def who(name: str, crew: str) -> str:
    """The people of a crew of the table."""
    return f"{name}: {crew}"


def taken(crew: str) -> str:
    """After taking a crew."""
    return f"Now your own crew: {crew}."
