"""What the columns of an imported table can mean: keys, headers that are understood, how cells are read."""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from enum import StrEnum

from solver.plan import Plan


class What(StrEnum):
    """What the rows of a table are."""

    CATEGORIES = "categories"
    WORKS = "works"
    RULES = "rules"


class Reading(StrEnum):
    """How the cells of a column are read."""

    TEXT = "text"
    NUMBER = "number"
    SHARE = "share"  # a number from 0 to 1; with % in the cell or the header, a hundredth of it
    LIMIT = "number or blank for none"
    NAMES = "names set apart by ;"
    WEIGHTS = "names set apart by ;, each with = and a weight where it is not 1"


@dataclass(frozen=True)
class Meaning:
    """One thing a column can mean: `headers` are the titles it is known by, the first is shown."""

    key: str
    headers: tuple[str, ...]
    reading: Reading
    unit: str = ""
    needed: bool = False

    @property
    def title(self) -> str:
        """The header, with the unit in brackets."""
        return f"{self.headers[0]} ({self.unit})" if self.unit else self.headers[0]


def meanings(what: What, plan: Plan) -> tuple[Meaning, ...]:
    """Everything a column of a table of `what` can mean in `plan`."""
    if what is What.CATEGORIES:
        return (*_categories(plan), *(_output(work.name, work.unit) for work in plan.works))
    if what is What.WORKS:
        return (*_works(plan), *_amounts(plan))
    return _RULES


def _categories(plan: Plan) -> tuple[Meaning, ...]:
    money, period = plan.currency, plan.period
    hours, per_period = f"hours per {period}", f"{money} per {period}"
    number, limit, share = Reading.NUMBER, Reading.LIMIT, Reading.SHARE
    return (
        Meaning("name", ("Category", "Name", "Grade", "Trade", "Kind of worker"), Reading.TEXT, needed=True),
        Meaning("on_books", ("On the books", "On books", "Now", "Already there"), number, "people"),
        Meaning("at_least", ("At least", "Minimum", "Min"), number, "people"),
        Meaning("at_most", ("At most", "Maximum", "Max"), limit, "people"),
        Meaning("least_if_any", ("Least if any",), number, "people"),
        Meaning("lot", ("Lot", "Come in lots of", "Gang size"), number, "people"),
        Meaning("pay", ("Pay", "Wage", "Wages", "Salary"), number, per_period, needed=True),
        Meaning("join_cost", ("Joining cost", "Join cost", "Cost of joining"), number, f"{money} per person"),
        Meaning(
            "leave_cost", ("Leaving cost", "Leave cost", "Cost of leaving"), number, f"{money} per person"
        ),
        Meaning("open_cost", ("Opening cost", "Open cost"), number, f"{money} once"),
        Meaning("hours", ("Paid hours", "Hours"), number, hours, needed=True),
        Meaning("absence", ("Absence", "Absence share"), share, "share"),
        Meaning("overtime_hours", ("Overtime hours", "Overtime limit"), number, hours),
        Meaning("overtime_rate", ("Overtime rate", "Overtime pay"), number, f"{money} per hour"),
        Meaning(
            "settling_hours",
            ("Settling-in hours", "Settling hours", "Settling-in"),
            number,
            "hours per joiner",
        ),
        Meaning("supervision.hours", ("Supervision hours", "Supervision"), number, hours),
        Meaning("supervision.by", ("Supervised by", "Supervision by"), Reading.NAMES, "names with ; between"),
        Meaning("day_absence", ("Day absence",), Reading.SHARE, "share"),
    )


def _output(work: str, unit: str) -> Meaning:
    return Meaning(f"output:{work}", (f"Output {work}", work), Reading.NUMBER, f"{unit} per hour")


def _works(plan: Plan) -> tuple[Meaning, ...]:
    return (
        Meaning("name", ("Work", "Name", "Task", "Item"), Reading.TEXT, needed=True),
        Meaning("unit", ("Unit", "Units"), Reading.TEXT),
        Meaning(
            "buy_in_price",
            ("Buy-in price", "Bought-in price", "Price"),
            Reading.LIMIT,
            f"{plan.currency} per unit",
        ),
        Meaning("buy_in_most", ("Buy-in most", "Most bought in"), Reading.LIMIT, "units per phase"),
    )


def _amounts(plan: Plan) -> tuple[Meaning, ...]:
    if len(plan.phases) == 1:
        phase = plan.phases[0].name
        headers = ("Amount", "Quantity", f"Amount {phase}", phase)
        return (Meaning("amount:0", headers, Reading.NUMBER, "units", needed=True),)
    return tuple(
        Meaning(f"amount:{t}", (f"Amount {p.name}", p.name), Reading.NUMBER, "units", needed=True)
        for t, p in enumerate(plan.phases)
    )


_RULES = (
    Meaning(
        "kind", ("Kind", "Kind of rule", "Rule kind"), Reading.TEXT, "presence, ratio, share or budget", True
    ),
    Meaning("name", ("Rule", "Name"), Reading.TEXT, needed=True),
    Meaning("people", ("People", "Of"), Reading.WEIGHTS, "categories with ; between"),
    Meaning("among", ("Per or within", "Per", "Within"), Reading.NAMES, "categories with ; between"),
    Meaning("sense", ("Sense", "Direction"), Reading.TEXT, "at least, at most or exactly"),
    Meaning("number", ("Number", "Bound", "Limit"), Reading.SHARE, "people, ratio, share or money", True),
    Meaning("phases", ("Phases", "In phases"), Reading.NAMES, "names with ; between"),
)


@dataclass(frozen=True)
class Header:
    """A header cell taken apart: its words, and what stands in brackets (most often a unit)."""

    words: str
    bracket: str

    @property
    def in_percent(self) -> bool:
        """True where the header says that its numbers are per cent."""
        return "%" in self.words or "%" in self.bracket or "per cent" in f"{self.words} {self.bracket}"


def taken_apart(header: str) -> Header:
    """The header without case, brackets, colons and doubled blanks."""
    plain = unicodedata.normalize("NFKC", header).casefold()
    bracket = " ".join(re.findall(r"[(\[]([^)\]]*)[)\]]", plain))
    words = re.sub(r"[(\[][^)\]]*[)\]]", " ", plain)
    return Header(" ".join(re.sub(r"[:*]", " ", words).split()), " ".join(bracket.split()))


_PERIODS = ("hour", "day", "shift", "week", "fortnight", "month", "quarter", "year")


def other_period(header: Header, meaning: Meaning, plan: Plan) -> str:
    """A period the header names that is not the plan's: `month` where the plan counts in weeks."""
    own = plan.period.casefold()
    if f"per {own}" not in meaning.unit.casefold() or own not in _PERIODS:
        return ""
    said = re.findall(r"[a-z]+", f"{header.words} {header.bracket}")
    adverbs = {"daily": "day", "weekly": "week", "monthly": "month", "quarterly": "quarter", "yearly": "year"}
    named = [adverbs.get(w, w.removesuffix("s")) for w in said]
    found = [w for w in named if w in _PERIODS and w not in (own, "hour")]
    return "" if own in named else next(iter(found), "")
