from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st
from PySide6.QtCore import QLocale

from desktop.tables import numbers
from desktop.tables.numbers import Refused

GERMAN = QLocale(QLocale.Language.German, QLocale.Country.Germany)
ENGLISH = QLocale(QLocale.Language.English, QLocale.Country.UnitedStates)


@pytest.mark.parametrize(
    ("text", "number"),
    [
        ("12", "12"),
        ("12.50", "12.50"),
        ("12,50", "12.50"),
        ("1.234", "1.234"),
        ("1.234,5", "1234.5"),
        ("1,234.5", "1234.5"),
        ("1.234.567", "1234567"),
        ("1,234,567.25", "1234567.25"),
        ("1 234 567,5", "1234567.5"),
        ("1\u202f234", "1234"),
        ("1\u00a0234", "1234"),
        ("1'234.5", "1234.5"),
        ("1\u2019234\u2019567", "1234567"),
        ("\u2212 5".replace(" ", ""), "-5"),
        ("+5", "5"),
        (".5", "0.5"),
        (",5", "0.5"),
        ("5,", "5"),
        ("007", "7"),
        ("–", "0"),
        ("-", "0"),
        ("١٢", "12"),
        ("1e3", "1e3"),
    ],
)
def test_what_is_typed_is_read(text, number):
    assert str(numbers.parse(text)) == number


@pytest.mark.parametrize(
    "text",
    [
        "abc",
        "12o",
        "NaN",
        "inf",
        "-inf",
        "1,23,4",
        "1.23.4,5",
        "1,234.567,8",
        "1.5.5",
        "1,23.4",
        "0,123.4",
        "1 234.567.890",
        "5 5",
        "52 00",
        "--5",
        "",
        "½",
        "1e999999",
        "9" * 60,
    ],
)
def test_what_is_no_number_is_refused(text):
    with pytest.raises(Refused, match=r"is not a number.*; (allowed|thousands)"):
        numbers.parse(text)


@given(st.decimals(min_value=-(10**9), max_value=10**9, allow_nan=False, allow_infinity=False, places=4))
def test_what_is_shown_can_be_typed_back(number):
    for locale in (GERMAN, ENGLISH):
        assert numbers.parse(numbers.shown(number, locale), locale) == number
        assert numbers.parse(numbers.plain(number, locale), locale) == number


def test_every_digit_is_shown():
    assert numbers.shown(Decimal("1234567.8900"), GERMAN) == "1\u202f234\u202f567,89"
    assert numbers.shown(Decimal("0.0001"), ENGLISH) == "0.0001"
    assert numbers.shown(Decimal("3100"), ENGLISH) == "3100"
    assert numbers.plain(Decimal("1e3"), ENGLISH) == "1000"


@pytest.mark.parametrize(
    ("text", "twice"),
    [
        ("52,000", True),
        ("1.234", True),
        ("-1.234", True),
        ("0.123", False),
        ("12o", False),
        ("1234", False),
        ("12.34", False),
        ("1,234.5", False),
    ],
)
def test_what_reads_two_ways(text, twice):
    assert numbers.reads_two_ways(text) is twice


@pytest.mark.parametrize(
    ("text", "locale", "number"),
    [
        ("75,000", ENGLISH, None),
        ("75.000", ENGLISH, "75.000"),
        ("75.000", GERMAN, None),
        ("-75,000", GERMAN, "-75.000"),
        ("-75.000", GERMAN, None),
        ("0,125", ENGLISH, "0.125"),
        ("1,234.5", GERMAN, "1234.5"),
    ],
)
def test_what_may_be_thousands_is_read_only_with_the_decimal_sign_of_the_machine(text, locale, number):
    if number is not None:
        assert str(numbers.parse(text, locale)) == number
        return
    with pytest.raises(numbers.Refused, match=r"type -?75000 for thousands or -?75[.,]000 for decimals"):
        numbers.parse(text, locale)
