"""Hours and pay worked out step by step, each step as a sum that can be read and checked.

The sums repeat what `solver.hours` reckons exactly; here they are only put into words.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction

from desktop import figures
from desktop import hours_words as say
from solver.hours import (
    Away,
    Measure,
    ReckonedHours,
    ReckonedPay,
    WorkingYear,
    full_time_equivalent,
    reckon_hours,
    reckon_pay,
    weeks_in,
)


@dataclass(frozen=True)
class PayEntries:
    """A yearly salary, its on-costs as a share and as money a year."""

    salary: Decimal
    on_cost_share: Decimal
    on_costs: Decimal


@dataclass(frozen=True)
class Entries:
    """What was typed. `full_time`: hours a week of a whole post; `period_weeks`: where the plan's word for
    its period does not tell its length; `pay` None: not asked for."""

    year: WorkingYear
    full_time: Decimal
    period_weeks: Decimal | None
    pay: PayEntries | None


@dataclass(frozen=True)
class Step:
    """`what` is `how`, which comes to `result`; `taken`: the result goes into the plan."""

    what: str
    how: str
    result: str
    taken: bool = False


@dataclass(frozen=True)
class Reckoning:
    """What goes into the category, and how it came about."""

    hours: ReckonedHours
    pay: ReckonedPay | None
    steps: tuple[Step, ...]


def reckon(entries: Entries, period: str, currency: str) -> Reckoning:
    """Hours and pay per `period`. Raises CannotReckon."""
    hours = reckon_hours(entries.year, period, entries.period_weeks)
    part = full_time_equivalent(entries.year.hours_a_week, entries.full_time)
    pay = _pay(entries, period, currency)
    steps = [*_year_steps(entries.year), *_period_steps(entries, period, hours), _post(entries, part)]
    if pay is not None:
        steps += _pay_steps(entries, period, currency, pay)
    return Reckoning(hours, pay, tuple(steps))


def _pay(entries: Entries, period: str, currency: str) -> ReckonedPay | None:
    if entries.pay is None:
        return None
    return reckon_pay(
        entries.pay.salary,
        entries.year,
        period,
        on_cost_share=entries.pay.on_cost_share,
        on_costs=entries.pay.on_costs,
        currency=currency,
        period_weeks=entries.period_weeks,
    )


def _year_steps(year: WorkingYear) -> Iterator[Step]:
    week, weeks, gross = _hours(year.hours_a_week), _number(year.weeks_a_year), _hours(year.gross)
    yield Step(say.PAID_A_YEAR, f"{week} × {weeks}", gross)
    yield Step(say.ONE_DAY, f"{week} ÷ {_number(year.days_a_week)}", _hours(year.hours_a_day))
    taken = [away for away in year.away if away.amount]
    for away in taken:
        yield Step(away.name, _away(year, away), _hours(year.hours_away(away)))
    lost = _hours(year.gross - year.available)
    if len(taken) > 1:
        sums = " + ".join(_number(year.hours_away(away)) for away in taken)
        yield Step(say.AWAY_A_YEAR, f"{sums}{figures.NBSP}h", lost)
    yield Step(say.ATTENDED_A_YEAR, f"{gross} {figures.MINUS} {lost}", _hours(year.available))
    yield Step(say.ABSENCE, f"{lost} ÷ {gross}", _percent(year.absence), taken=True)


def _away(year: WorkingYear, away: Away) -> str:
    if away.measure is Measure.SHARE:
        return f"{_percent(Fraction(away.amount))} × {_hours(year.gross)}"
    if away.measure is Measure.HOURS:
        return _hours(away.amount)
    return f"{_number(away.amount)} × {_hours(year.hours_a_day)}"


def _period_steps(entries: Entries, period: str, hours: ReckonedHours) -> Iterator[Step]:
    weeks = _weeks(entries, period)
    paid, attended = _hours(hours.hours), _hours(hours.attended)
    week = _hours(entries.year.hours_a_week)
    yield Step(say.paid_per(period), week if weeks == 1 else f"{week} × {_number(weeks)}", paid, taken=True)
    yield Step(
        say.attended_per(period), f"{paid} × (1 {figures.MINUS} {_percent(entries.year.absence)})", attended
    )


def _post(entries: Entries, part: Fraction) -> Step:
    how = f"{_hours(entries.year.hours_a_week)} ÷ {_hours(entries.full_time)}"
    return Step(say.PART_OF_POST, how, _number(part))


def _pay_steps(entries: Entries, period: str, currency: str, pay: ReckonedPay) -> Iterator[Step]:
    assert entries.pay is not None
    given, weeks = entries.pay, _weeks(entries, period)
    yearly = Fraction(given.salary) * (1 + Fraction(given.on_cost_share)) + Fraction(given.on_costs)
    sums = _money(given.salary)
    if given.on_cost_share:
        sums += f" × (1 + {_percent(Fraction(given.on_cost_share))})"
    if given.on_costs:
        sums += f" + {_money(given.on_costs)}"
    yield Step(say.YEARLY_COST, sums, _money(yearly, currency))
    periods = Fraction(entries.year.weeks_a_year) / weeks
    if weeks != 1:
        how = f"{_number(entries.year.weeks_a_year)} ÷ {_number(weeks)}"
        yield Step(say.periods_a_year(period), how, _number(periods))
    yield Step(
        say.pay_per(period), f"{_money(yearly)} ÷ {_number(periods)}", _money(pay.pay, currency), taken=True
    )


def _weeks(entries: Entries, period: str) -> Fraction:
    known = weeks_in(period, entries.year)
    return known if known is not None else Fraction(entries.period_weeks or 1)


def _number(x: Decimal | Fraction) -> str:
    return figures.number(float(x), 4) if x else "0"


def _hours(x: Decimal | Fraction) -> str:
    return f"{figures.number(float(x), 2) if x else '0'}{figures.NBSP}h"


def _percent(x: Fraction) -> str:
    return f"{figures.number(float(100 * x), 2) if x else '0'}{figures.NBSP}%"


def _money(x: Decimal | Fraction, currency: str = "") -> str:
    return figures.money(float(x), currency) if x else f"{currency}{figures.NBSP}0".strip()
