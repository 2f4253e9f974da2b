"""Exact decimal numbers that remember how they were typed, and the sizes that are allowed.

A number read from a file must be written back as it was typed: `980.00` stays `980.00` and `1e3` stays
`1e3`, although both are ordinary decimals in every calculation.
"""

from __future__ import annotations

import re
from decimal import Decimal, InvalidOperation
from typing import Self

LARGEST = Decimal(10) ** 12
MOST_DECIMALS = 15
LONGEST_TEXT = 40  # more digits than LARGEST and MOST_DECIMALS leave room for

ALLOWED_SIZE = f"allowed are numbers from -1e12 to 1e12 with at most {MOST_DECIMALS} decimals"

_GRAMMAR = re.compile(r"-?(?:0|[1-9][0-9]*)(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?\Z")


class TypedNumber(Decimal):
    """A decimal that remembers its text. `str` gives the text; arithmetic gives plain decimals."""

    __slots__ = ("_text",)
    _text: str

    def __new__(cls, text: str) -> Self:
        """The number written as `text` by the grammar of JSON; ValueError for any other text."""
        if not _GRAMMAR.match(text):
            raise ValueError(f"{text!r} is not a number")
        made = super().__new__(cls, text)
        made._text = text
        return made

    def __str__(self) -> str:
        return self._text


def has_allowed_size(number: Decimal) -> bool:
    """True for a finite number of at most 15 decimals, not beyond 1e12 in either direction."""
    if not number.is_finite():
        return False
    exponent = number.as_tuple().exponent
    return isinstance(exponent, int) and -MOST_DECIMALS <= exponent <= 12 and abs(number) <= LARGEST


def typed_number(text: str) -> TypedNumber | None:
    """The number written as `text`, None where it is of a size nobody means.

    Long texts are refused unread, so that ten million digits cost nothing. ValueError if `text` is not
    a number of JSON.
    """
    if len(text) > LONGEST_TEXT:
        return None
    try:
        made = TypedNumber(text)
    except InvalidOperation:  # an exponent beyond what a decimal can hold
        return None
    return made if has_allowed_size(made) else None


def as_written(number: Decimal) -> TypedNumber:
    """`number` with the text it is written with: as typed, else in plain notation without exponent."""
    return number if isinstance(number, TypedNumber) else TypedNumber(format(number, "f"))


def decimals(number: Decimal) -> int:
    """How many decimals `number` needs: 2 for 9.50 and 9.25, 0 for 1e3."""
    text = format(number, "f")
    return len(text.rpartition(".")[2].rstrip("0")) if "." in text else 0
