"""Numbers as people write them: both decimal signs, nothing hidden, nothing else accepted."""

from __future__ import annotations

from contextlib import suppress
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from solver.numeral import NotANumber, parse_number


@pytest.mark.parametrize(
    ("text", "number"),
    [
        ("12", "12"),
        (" 12 ", "12"),
        ("+12", "12"),
        ("-12", "-12"),
        ("\u221212", "-12"),
        ("12.5", "12.5"),
        ("12,5", "12.5"),
        ("12,50", "12.50"),
        ("0,05", "0.05"),
        (",5", "0.5"),
        (".5", "0.5"),
        ("5.", "5"),
        ("1,234.5", "1234.5"),
        ("1.234,5", "1234.5"),
        ("1.234.567", "1234567"),
        ("1,234,567", "1234567"),
        ("1,234,567.89", "1234567.89"),
        ("12 480", "12480"),
        ("12\u00a0480,5", "12480.5"),
        ("12\u202f480", "12480"),
        ("12'480.5", "12480.5"),
        ("12\u2019480", "12480"),
        ("007", "7"),
        ("1e3", "1e3"),
        ("2,5E-2", "2.5E-2"),
        ("1000000000000", "1000000000000"),
    ],
)
def test_understood(text: str, number: str) -> None:
    assert parse_number(text).number == Decimal(number)
    assert parse_number(text).remark == ""


@pytest.mark.parametrize(
    ("text", "number", "meant"),
    [("1.234", "1.234", "1234"), ("1,234", "1.234", "1234"), ("999.000", "999.000", "999000")],
)
def test_a_lone_sign_before_three_digits_is_a_decimal_sign_and_says_so(
    text: str, number: str, meant: str
) -> None:
    got = parse_number(text)
    assert got.number == Decimal(number)
    assert meant in got.remark


@pytest.mark.parametrize("text", ["0.125", "0,125", "1234.567", "12.34", "1.2345", "1,234.567"])
def test_no_remark_where_there_is_no_doubt(text: str) -> None:
    assert parse_number(text).remark == ""


WORDS = ("", " ", "-", ".", ",", "abc", "NaN", "nan", "inf", "-Infinity", "12 EUR", "12.5 h", "½", "١٢")
SHAPES = (
    "1..2",
    "1,2,3",
    "1.23.456",
    "1,234.567,8",
    "1 2",
    "12 48",
    "1 234 56",
    "1  234",
    "1,234 567",
    "1 234'567",
    "1.234 567,8",
    "0,123.4",
    "1,23.4",
    "1_000",
    "--1",
    "12-",
    "(12)",
)
OTHERS = (
    "12 %",
    "€ 12",
    "0x10",
    "1.5e",
    "1e",
    "2024-01-02",
    "=1+1",
    "1e999",
    "1e13",
    "9" * 41,
    "1" * 500_000,
)


@pytest.mark.parametrize("text", [*WORDS, *SHAPES, *OTHERS])
def test_refused(text: str) -> None:
    with pytest.raises(NotANumber):
        parse_number(text)


@given(st.decimals(-(10**9), 10**9, places=4), st.sampled_from([".", ","]), st.sampled_from(["", " ", "'"]))
def test_every_way_of_writing_means_the_same(number: Decimal, sign: str, group: str) -> None:
    written = f"{number:,.4f}".replace(",", "_").replace(".", sign).replace("_", group)
    assert parse_number(written).number == number


@given(st.text(max_size=60))
def test_any_text_is_a_number_or_refused(text: str) -> None:
    with suppress(NotANumber):
        assert parse_number(text).number.is_finite()
