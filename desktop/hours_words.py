"""What the helper for hours and pay says."""

from __future__ import annotations

from solver.hours import Measure

TITLE = "Hours and pay: {category}"
ACTION = "Work out &hours and pay..."
BUTTON = "Hours and pay..."
BUTTON_TIP = "From a contract, leave and sickness to attended hours, from a yearly salary to pay per period"
CHOOSE_CATEGORY = "Choose a category first: hours and pay are worked out for the current one."
UNDO_STEP = "Work out hours of {category}"

CONTRACT = "Contract"
HOURS_A_WEEK = "Hours a week"
DAYS_A_WEEK = "Days a week"
WEEKS_A_YEAR = "Weeks a year"
WEEKS_TIP = (
    "52 is the usual reckoning, 260 working days of a five-day week; a year has 52.18 weeks on average"
)
FULL_TIME = "Full time is, hours a week"
FULL_TIME_TIP = "What a full-time post has, to tell what part of one this contract is"
PERIOD_WEEKS = "Weeks in one {period}"

AWAY = "Paid, but not at work, in a year"
LEAVE = "Annual leave"
HOLIDAYS = "Public holidays"
SICKNESS = "Sickness"
TRAINING = "Training"
OTHER = "Other"
MEASURED_IN = "{name} is counted in"
MEASURES = {Measure.DAYS: "days", Measure.HOURS: "hours", Measure.SHARE: "% of paid hours"}

PAY = "Work out the pay too"
SALARY = "Salary a year"
ON_COST_SHARE = "On-costs, % of it"
ON_COSTS = "Other on-costs a year"

STEPS = "Step by step"
WHAT = "What"
HOW = "How"
RESULT = "Result"
TIP_WHAT = "What is worked out"
TIP_HOW = "The sum, with the numbers typed at the left"
TIP_RESULT = "What comes of it"
TAKE = "&Put into the plan"
MISSING = "{field}: a number is needed"
WRONG = "{field}: {reason}"

CHANGED_BY_HAND = "{what}: changed by hand since."

FIELD_OF = {
    "hours_a_week": HOURS_A_WEEK,
    "days_a_week": DAYS_A_WEEK,
    "weeks_a_year": WEEKS_A_YEAR,
    "full_time_hours_a_week": FULL_TIME,
    "away": AWAY,
    "salary": SALARY,
    "on_cost_share": ON_COST_SHARE,
    "on_costs": ON_COSTS,
}

PAID_A_YEAR = "Paid a year"
ONE_DAY = "One working day"
AWAY_A_YEAR = "Away a year"
ATTENDED_A_YEAR = "Attended a year"
ABSENCE = "Absence"
PART_OF_POST = "Part of a full-time post"
YEARLY_COST = "Cost a year"


def paid_per(period: str) -> str:
    """Paid hours of one period."""
    return f"Paid hours per {period}"


def attended_per(period: str) -> str:
    """Attended hours of one period."""
    return f"Attended hours per {period}"


def periods_a_year(period: str) -> str:
    """How many periods are paid."""
    return f"{period.capitalize()}s a year"


def pay_per(period: str) -> str:
    """Pay of one period."""
    return f"Pay per {period}"


def outcome(category: str, parts: tuple[str, ...]) -> str:
    """What goes into the plan."""
    return f"Goes into {category}: {', '.join(parts)}."


def now_was(what: str, now: str, was: str) -> str:
    """One value of the category, and the one it replaces."""
    return f"{what} {now}" if now == was else f"{what} {now} (was {was})"
