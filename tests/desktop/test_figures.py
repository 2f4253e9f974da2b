from decimal import Decimal

import pytest
from PySide6.QtCore import QLocale

from desktop import figures

ENGLISH = QLocale(QLocale.Language.English, QLocale.Country.UnitedStates)
GERMAN = QLocale(QLocale.Language.German, QLocale.Country.Germany)
NB = figures.NBSP


@pytest.mark.parametrize(
    ("x", "english", "german"),
    [
        (9.4117, "9.41", "9,41"),
        (9, "9", "9"),
        (0, "–", "–"),
        (1e-9, "–", "–"),
        (0.5, "0.5", "0,5"),
        (1234, "1,234", "1.234"),
        (-2, "−2", "−2"),
        (0.001, "0.001", "0,001"),
        (-0.00096, "−0.001", "−0,001"),
    ],
)
def test_people(x, english, german):
    assert figures.people(x, ENGLISH) == english
    assert figures.people(x, GERMAN) == german


@pytest.mark.parametrize(
    ("x", "unit", "text"),
    [
        (31, "h", f"31{NB}h"),
        (12480.4, "trees", f"12,480{NB}trees"),
        (-12.04, "h", f"−12{NB}h"),
        (0.5234, "h", f"0.52{NB}h"),
        (12.34, "h", f"12.3{NB}h"),
        (99.96, "h", f"100{NB}h"),
        (0, "h", "–"),
        (3, "", "3"),
        (1, "people", f"1{NB}person"),
        (-1, "hours", f"−1{NB}hour"),
        (0.5, "people", f"0.5{NB}people"),
        (1, "trees", f"1{NB}trees"),  # units of the planner stay as typed
    ],
)
def test_quantity(x, unit, text):
    assert figures.quantity(x, unit, ENGLISH) == text


def test_signs_are_shown_where_a_sign_is_the_news():
    assert figures.signed(3.21, "h", ENGLISH) == f"+3.21{NB}h"
    assert figures.signed(-3.21, "h", ENGLISH) == f"−3.21{NB}h"
    assert figures.signed(0, "h", ENGLISH) == "–"
    assert figures.change(2, ENGLISH) == "+2"
    assert figures.change(-0.5, ENGLISH) == "−0.5"


def test_money_shows_cents_only_where_there_are_any():
    assert figures.money(12480, "EUR", ENGLISH) == f"EUR{NB}12,480"
    assert figures.money(Decimal("12.5"), "EUR", ENGLISH) == f"EUR{NB}12.50"
    assert figures.money(-31.005, "", GERMAN) == "−31,01"
    assert figures.money(0.001, "EUR", ENGLISH) == "–"


def test_money_keeps_every_digit_of_a_large_decimal():
    assert figures.money(Decimal("123456789012345678.99"), "", ENGLISH) == "123,456,789,012,345,678.99"


@pytest.mark.parametrize(
    ("x", "text"), [(2.4, "2.4"), (0.351, "0.35"), (12.34, "12.3"), (100, "100"), (0.004, "0.004")]
)
def test_percent(x, text):
    assert figures.percent(x, ENGLISH) == f"{text}{NB}%"


def test_no_percent_is_a_dash():
    assert figures.percent(0, ENGLISH) == "–"
