"""From a contract to attended hours and pay per period, the way a personnel office reckons.

    gross      = hours a week x weeks a year                       paid hours a year
    away       = sum of leave, public holidays, sickness, ...      in hours; a day counts hours a day,
                                                                    a share counts of gross
    available  = gross - away                                      attended hours a year
    absence    = away / gross
    attended   = hours per period x (1 - absence)
    pay        = (salary x (1 + on-cost share) + fixed on-costs) / periods a year

`available` is the formula of the WHO's WISN User's Manual (2010), A - (B + C + D + E) days times the hours
of a day. All of it is exact; only what goes into a plan is rounded, and the note says what was reckoned.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from decimal import ROUND_HALF_UP, Decimal
from enum import StrEnum
from fractions import Fraction

from solver.plan import ZERO, Category
from solver.review import Problem

WEEKS = Decimal(52)  # the usual reckoning: 260 working days

HOURS_DECIMALS = 4
ABSENCE_DECIMALS = 6
MONEY_DECIMALS = 2

Amount = Decimal | Fraction


class CannotReckon(Exception):
    """The entries do not make a working year; `problems` says where and what is allowed."""

    def __init__(self, problems: tuple[Problem, ...]) -> None:
        super().__init__("\n".join(str(problem) for problem in problems))
        self.problems = problems


class Measure(StrEnum):
    """What an amount of absence is counted in, per year."""

    DAYS = "days"
    HOURS = "hours"
    SHARE = "share of paid hours"


@dataclass(frozen=True)
class Away:
    """Paid time not at work: `amount` a year, in `measure`."""

    name: str
    amount: Decimal
    measure: Measure = Measure.DAYS


@dataclass(frozen=True)
class WorkingYear:
    """A contract: `hours_a_week` over `days_a_week`, paid for `weeks_a_year`, less what is in `away`."""

    hours_a_week: Decimal
    days_a_week: Decimal = Decimal(5)
    weeks_a_year: Amount = WEEKS
    away: tuple[Away, ...] = ()

    @property
    def hours_a_day(self) -> Fraction:
        """Hours of a working day."""
        return Fraction(self.hours_a_week) / Fraction(self.days_a_week)

    @property
    def gross(self) -> Fraction:
        """Paid hours a year."""
        return Fraction(self.hours_a_week) * Fraction(self.weeks_a_year)

    def hours_away(self, away: Away) -> Fraction:
        """One entry of `away` in hours a year."""
        hours = {Measure.DAYS: self.hours_a_day, Measure.HOURS: Fraction(1), Measure.SHARE: self.gross}
        return Fraction(away.amount) * hours[away.measure]

    @property
    def available(self) -> Fraction:
        """Attended hours a year."""
        return self.gross - sum(self.hours_away(a) for a in self.away)

    @property
    def absence(self) -> Fraction:
        """Share of paid hours not attended."""
        return 1 - self.available / self.gross


@dataclass(frozen=True)
class ReckonedHours:
    """Paid `hours` and `attended` hours per period, the `absence` share, and how it came about."""

    hours: Decimal
    absence: Decimal
    attended: Decimal
    note: str


@dataclass(frozen=True)
class ReckonedPay:
    """`pay` per period and how it came about."""

    pay: Decimal
    note: str


def weeks_in(period: str, year: WorkingYear) -> Fraction | None:
    """Weeks of one period called day, week, fortnight, month, quarter or year; None for another word."""
    weeks = Fraction(year.weeks_a_year)
    lengths = {
        "day": 1 / Fraction(year.days_a_week),
        "week": Fraction(1),
        "fortnight": Fraction(2),
        "month": weeks / 12,
        "quarter": weeks / 4,
        "year": weeks,
    }
    return lengths.get(period.strip().lower())


def reckon_hours(
    year: WorkingYear, period: str = "week", period_weeks: Amount | None = None
) -> ReckonedHours:
    """Hours per `period` from a working year.

    `period_weeks` is the length of a period whose word is not known to `weeks_in`. Hours are rounded to 4
    decimals, absence to 6. Raises CannotReckon.
    """
    weeks = _period_weeks(year, period, period_weeks)
    hours = rounded(Fraction(year.hours_a_week) * weeks, HOURS_DECIMALS)
    absence = rounded(year.absence, ABSENCE_DECIMALS)
    attended = rounded(Fraction(year.hours_a_week) * weeks * (1 - year.absence), HOURS_DECIMALS)
    return ReckonedHours(hours, absence, attended, _hours_note(year, period, hours, absence, attended))


def reckon_pay(
    salary: Decimal,
    year: WorkingYear,
    period: str = "week",
    *,
    on_cost_share: Decimal = ZERO,
    on_costs: Decimal = ZERO,
    currency: str = "",
    period_weeks: Amount | None = None,
) -> ReckonedPay:
    """Pay per `period` from a yearly `salary`: on-costs as a share of it (0.21) and as money a year.

    Rounded to cents, half up. Raises CannotReckon.
    """
    _refuse(_negatives({"salary": salary, "on_cost_share": on_cost_share, "on_costs": on_costs}))
    weeks = _period_weeks(year, period, period_weeks)
    periods = Fraction(year.weeks_a_year) / weeks
    yearly = Fraction(salary) * (1 + Fraction(on_cost_share)) + Fraction(on_costs)
    pay = rounded(yearly / periods, MONEY_DECIMALS)
    money = f" {currency}" if currency else ""
    parts = [f"{_shown(salary)}{money} a year"]
    if on_cost_share:
        parts.append(f"{_shown(on_cost_share * 100)} % on-costs")
    if on_costs:
        parts.append(f"{_shown(on_costs)}{money} fixed on-costs a year")
    return ReckonedPay(
        pay, f"Pay: {' + '.join(parts)}, over {_shown(periods)} {period}s = {_shown(pay)}{money} a {period}."
    )


def full_time_equivalent(hours_a_week: Decimal, full_time_hours_a_week: Decimal) -> Fraction:
    """What part of a full-time post a contract is: 19 of 38 hours is 1/2."""
    _refuse(_not_positive({"full_time_hours_a_week": full_time_hours_a_week}))
    return Fraction(hours_a_week) / Fraction(full_time_hours_a_week)


def with_reckoned(
    category: Category, hours: ReckonedHours | None, pay: ReckonedPay | None = None
) -> Category:
    """`category` with the hours, absence and pay that were reckoned, and with the note that tells how."""
    note = " ".join(part.note for part in (hours, pay) if part is not None)
    changed = replace(category, hours_note=note)
    if hours is not None:
        changed = replace(changed, hours=hours.hours, absence=hours.absence)
    return changed if pay is None else replace(changed, pay=pay.pay)


def rounded(number: Fraction, decimals: int) -> Decimal:
    """`number` to so many decimals, half up, without trailing zeros."""
    scaled = number * 10**decimals
    whole = (2 * scaled.numerator + scaled.denominator) // (2 * scaled.denominator)
    exact = Decimal(whole).scaleb(-decimals)
    return Decimal(format(exact, "f").rstrip("0").rstrip(".")) if decimals else exact


# entries


def _period_weeks(year: WorkingYear, period: str, given: Amount | None) -> Fraction:
    _refuse(list(_year_problems(year)))
    weeks = weeks_in(period, year) if given is None else Fraction(given)
    if weeks is None:
        says = f'"{period}" is of unknown length; say how many weeks one has'
        raise CannotReckon((Problem("period_weeks", says),))
    if weeks <= 0:
        raise CannotReckon(
            (Problem("period_weeks", f"{_shown(weeks)} is not allowed; it must be more than 0"),)
        )
    return weeks


def _year_problems(year: WorkingYear) -> Iterator[Problem]:
    limits = {"hours_a_week": (year.hours_a_week, 168), "days_a_week": (year.days_a_week, 7)}
    for place, (value, most) in {**limits, "weeks_a_year": (year.weeks_a_year, 53)}.items():
        if not _is_finite(value) or not 0 < value <= most:
            yield Problem(place, f"{_shown(value)} is not allowed; it must be more than 0 and at most {most}")
            return
    yield from _away_problems(year)


def _away_problems(year: WorkingYear) -> Iterator[Problem]:
    for index, away in enumerate(year.away):
        if not _is_finite(away.amount) or away.amount < 0:
            yield Problem(f"away[{index}].amount", f"{away.amount} is not allowed; it must be 0 or more")
            return
    if year.available <= 0:
        lost, paid = _shown(year.gross - year.available), _shown(year.gross)
        yield Problem(
            "away", f"{lost} hours away leave nothing of {paid} paid hours; allowed is less than those"
        )


def _negatives(numbers: dict[str, Decimal]) -> list[Problem]:
    return [
        Problem(place, f"{number} is not allowed; it must be 0 or more")
        for place, number in numbers.items()
        if not _is_finite(number) or number < 0
    ]


def _not_positive(numbers: dict[str, Amount]) -> list[Problem]:
    return [
        Problem(place, f"{number} is not allowed; it must be more than 0")
        for place, number in numbers.items()
        if not _is_finite(number) or number <= 0
    ]


def _is_finite(number: Amount) -> bool:
    return isinstance(number, Fraction) or number.is_finite()


def _refuse(problems: list[Problem]) -> None:
    if problems:
        raise CannotReckon(tuple(problems))


# the note


def _hours_note(year: WorkingYear, period: str, hours: Decimal, absence: Decimal, attended: Decimal) -> str:
    away = ", ".join(_away_note(year, a) for a in year.away if a.amount)
    lost = f" less {away}" if away else ""
    contract = f"{_shown(year.hours_a_week)} h a week x {_shown(year.weeks_a_year)} weeks"
    return (
        f"Hours: {contract} = {_shown(year.gross)} h paid a year{lost} = {_shown(year.available)} h attended "
        f"a year; per {period} {_shown(hours)} h paid, {_shown(absence * 100)} % absence, {_shown(attended)} "
        "h attended."
    )


def _away_note(year: WorkingYear, away: Away) -> str:
    hours = _shown(year.hours_away(away))
    if away.measure is Measure.HOURS:
        return f"{hours} h {away.name}"
    if away.measure is Measure.SHARE:
        return f"{hours} h {away.name} ({_shown(away.amount * 100)} %)"
    return f"{hours} h {away.name} ({_shown(away.amount)} days)"


def _shown(number: Amount) -> str:
    """A number for a sentence: at most 4 decimals, thousands apart."""
    if isinstance(number, Decimal) and not number.is_finite():
        return str(number)
    exact = number if isinstance(number, Fraction) else Fraction(number)
    return f"{rounded(exact, 4).quantize(Decimal('0.0001'), ROUND_HALF_UP):,f}".rstrip("0").rstrip(".")
