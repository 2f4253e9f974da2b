"""The hours helper against published reckonings; every source stands beside its numbers."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from fractions import Fraction

import pytest

from solver.hours import (
    Away,
    CannotReckon,
    Measure,
    WorkingYear,
    full_time_equivalent,
    reckon_hours,
    reckon_pay,
    rounded,
    weeks_in,
    with_reckoned,
)
from solver.plan import Category

D = Decimal


class TestPublished:
    def test_ssa_work_year(self) -> None:
        """Social Security Administration, POMS DI 39503.230 (seen): hours a year."""
        away = {"holiday": "68", "sick": "75", "annual leave": "155.7", "administrative": "4.8"}
        year = WorkingYear(D(40), away=tuple(Away(n, D(h), Measure.HOURS) for n, h in away.items()))
        assert year.gross == 2080
        assert year.available == Fraction("1776.5")
        assert reckon_hours(year).absence == rounded(Fraction("303.5") / 2080, 6) == D("0.145913")

    def test_burmen_available_days_and_people(self) -> None:
        """Burmen et al., Human Resources for Health 15:9 (2017), Table 3 (seen): days a year."""
        days = {"public holidays": 10, "annual leave": 30, "sick": 15}
        year = WorkingYear(D(40), D(5), Fraction(234, 5), tuple(Away(name, D(n)) for name, n in days.items()))
        assert year.gross / year.hours_a_day == 234
        assert year.available / year.hours_a_day == 179
        people = 3125 * year.hours_a_day / Fraction(reckon_hours(year, "year").attended)
        assert rounded(people, 2) == D("17.46")

    def test_dutch_shares_of_gross_hours(self) -> None:
        """BMC Health Services Research 7:196 (2007) (seen): shares of 1,872 hours."""
        shares = ("0.09", "0.002", "0.035", "0.02", "0.04")
        year = WorkingYear(D(36), away=tuple(Away(f"share {s}", D(s), Measure.SHARE) for s in shares))
        assert year.gross == 1872
        assert rounded(year.available, 1) == D("1521.9")
        assert reckon_hours(year).absence == D("0.187")

    def test_wisn_formula(self) -> None:
        """WHO, WISN User's Manual (2010): (A - (B + C + D + E)) days x hours a day (memory, formula only)."""
        a, hours_a_day = 260, 8
        b, c, d, e = 9, 21, 8, 6
        away = tuple(Away(name, D(n)) for name, n in zip("BCDE", (b, c, d, e), strict=True))
        year = WorkingYear(D(40), D(5), D(52), away)
        assert year.available == (a - (b + c + d + e)) * hours_a_day

    def test_the_2087_hour_divisor(self) -> None:
        """5 U.S.C. 5504(b) (seen): 28 years average 14610/7 h; 89,033 a year is 42.66 an hour."""
        average = Fraction(36525, 700)  # weeks of a year of 365.25 days
        assert WorkingYear(D(40), weeks_a_year=average).gross == Fraction(14610, 7)
        year = WorkingYear(D(40), weeks_a_year=D("52.175"))
        assert year.gross == 2087
        assert reckon_pay(D(89033), year, "hour", period_weeks=Fraction(1, 40)).pay == D("42.66")


class TestPeriods:
    @pytest.mark.parametrize(
        ("period", "hours"),
        [
            *(("week", "38"), ("fortnight", "76"), ("month", "164.6667"), ("quarter", "494")),
            *(("year", "1976"), ("day", "7.6"), (" Week ", "38")),
        ],
    )
    def test_named(self, period: str, hours: str) -> None:
        assert reckon_hours(WorkingYear(D(38)), period).hours == D(hours)

    def test_of_another_name_need_their_length(self) -> None:
        assert weeks_in("campaign", WorkingYear(D(38))) is None
        with pytest.raises(CannotReckon, match='"campaign" is of unknown length'):
            reckon_hours(WorkingYear(D(38)), "campaign")
        assert reckon_hours(WorkingYear(D(38)), "campaign", D("2.5")).hours == 95

    def test_attended_hours_are_what_the_plan_makes_of_them(self) -> None:
        year = WorkingYear(D(38), away=(Away("leave", D(30)), Away("training", D("0.02"), Measure.SHARE)))
        got = reckon_hours(year)
        assert got.absence == D("0.135385")  # 30 / 260 + 0.02
        assert abs(got.hours * (1 - got.absence) - got.attended) < D("0.0001")


class TestPay:
    def test_salary_and_on_costs(self) -> None:
        got = reckon_pay(
            D(41600), WorkingYear(D(38)), on_cost_share=D("0.21"), on_costs=D(520), currency="EUR"
        )
        assert got.pay == D("978")  # (41600 x 1.21 + 520) / 52
        assert got.note == (
            "Pay: 41,600 EUR a year + 21 % on-costs + 520 EUR fixed on-costs a year, over 52 weeks "
            "= 978 EUR a week."
        )

    def test_is_rounded_half_up_to_cents(self) -> None:
        assert reckon_pay(D("0.06"), WorkingYear(D(38)), "quarter").pay == D("0.02")  # 0.015
        assert reckon_pay(D(50000), WorkingYear(D(38)), "month").pay == D("4166.67")


class TestNote:
    def test_tells_the_whole_reckoning(self) -> None:
        year = WorkingYear(D(38), away=(Away("annual leave", D(30)), Away("sickness", D(40), Measure.HOURS)))
        assert reckon_hours(year).note == (
            "Hours: 38 h a week x 52 weeks = 1,976 h paid a year less 228 h annual leave (30 days), 40 h "
            "sickness = 1,708 h attended a year; per week 38 h paid, 13.5628 % absence, 32.8462 h attended."
        )

    def test_goes_with_the_category(self) -> None:
        year = WorkingYear(D(38), away=(Away("leave", D(26)),))
        before = Category("Lead hand", D(1), D(1), output={"Planting": D(3)})
        hours, pay = reckon_hours(year), reckon_pay(D(52000), year)
        after = with_reckoned(before, hours, pay)
        assert (after.hours, after.absence, after.pay) == (38, D("0.1"), 1000)
        assert after.hours_note == f"{hours.note} {pay.note}"
        assert after.output == before.output
        assert with_reckoned(before, None, pay).hours == 1


@pytest.mark.parametrize(
    ("part", "full", "equals"), [("19", "38", "0.5"), ("38", "38", "1"), ("0", "40", "0")]
)
def test_full_time_equivalents(part: str, full: str, equals: str) -> None:
    assert full_time_equivalent(D(part), D(full)) == Fraction(equals)


YEAR = WorkingYear(D(38))


@pytest.mark.parametrize(
    ("year", "place"),
    [
        (replace(YEAR, hours_a_week=D(0)), "hours_a_week"),
        (replace(YEAR, hours_a_week=D(169)), "hours_a_week"),
        (replace(YEAR, hours_a_week=D("NaN")), "hours_a_week"),
        (replace(YEAR, days_a_week=D(8)), "days_a_week"),
        (replace(YEAR, weeks_a_year=D(54)), "weeks_a_year"),
        (replace(YEAR, away=(Away("leave", D(-1)),)), "away[0].amount"),
        (replace(YEAR, away=(Away("leave", D(200)), Away("sick", D(60)))), "away"),
        (replace(YEAR, away=(Away("all", D(1), Measure.SHARE),)), "away"),
    ],
)
def test_impossible_years_are_refused_with_their_place(year: WorkingYear, place: str) -> None:
    with pytest.raises(CannotReckon) as refused:
        reckon_hours(year)
    assert [p.place for p in refused.value.problems] == [place]


def test_impossible_money_is_refused() -> None:
    with pytest.raises(CannotReckon, match="salary: -1"):
        reckon_pay(D(-1), YEAR)
    with pytest.raises(CannotReckon, match="full_time_hours_a_week: 0"):
        full_time_equivalent(D(1), D(0))
    with pytest.raises(CannotReckon, match="period_weeks: 0"):
        reckon_pay(D(1), YEAR, "spell", period_weeks=D(0))


@pytest.mark.parametrize(
    ("number", "decimals", "text"),
    [("1/3", 4, "0.3333"), ("2/3", 4, "0.6667"), ("1/8", 2, "0.13"), ("100", 4, "100"), ("5/2", 0, "3")],
)
def test_rounding_is_half_up_and_short(number: str, decimals: int, text: str) -> None:
    assert str(rounded(Fraction(number), decimals)) == text
