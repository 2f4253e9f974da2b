"""Numbers as they are typed into a grid and shown there.

Typed: as `solver.numeral` reads them, in the digits of any script; but 75,000 is refused where the point is
the decimal sign, and 75.000 where the comma is: a thousand times as much may be meant. Shown: every digit as
typed, the locale's decimal sign, and thousands apart by a narrow space, never by a sign, so that what is
shown can be typed back.
"""

from __future__ import annotations

import re
import unicodedata
from decimal import Decimal

from PySide6.QtCore import QLocale

from desktop import messages
from desktop.figures import NIL
from solver.exact import TypedNumber
from solver.numeral import NotANumber, parse_number
from solver.review import quoted

NARROW_SPACE = "\u202f"
_GROUPED_FROM = 5  # 3100 reads well as it is, 52 000 does not
_ZEROS = ("-", "\u2212", NIL)  # the dash that zero is shown as, typed back


class Refused(Exception):
    """What was typed does not count; the message says why and what is allowed."""

    @property
    def reason(self) -> str:
        """The sentence."""
        return str(self)


def parse(text: str, locale: QLocale | None = None) -> TypedNumber:
    """The number typed as `text`, with the digits as typed. Raises Refused."""
    number = decimal_reading(text)
    sign = (locale or QLocale()).decimalPoint()
    if reads_two_ways(text) and sign not in text:
        thousands = plain(Decimal(re.sub(r"[.,]", "", _with_plain_digits(text).strip())), locale)
        raise Refused(
            messages.READS_TWO_WAYS.format(
                text=quoted(text.strip()), thousands=thousands, decimals=plain(number, locale)
            )
        )
    return number


def decimal_reading(text: str) -> TypedNumber:
    """The number typed as `text`, a lone comma or point taken for the decimal sign. Raises Refused."""
    if text.strip() in _ZEROS:
        return TypedNumber("0")
    try:
        return parse_number(_with_plain_digits(text)).number
    except NotANumber as wrong:
        raise Refused(str(wrong)) from None


def _with_plain_digits(text: str) -> str:
    """Digits of every script as 0 to 9."""
    return "".join(str(unicodedata.decimal(c)) if c.isdecimal() else c for c in text)


def reads_two_ways(text: str) -> bool:
    """True for 52,000 or 1.234: a decimal, or thousands."""
    try:
        return bool(parse_number(_with_plain_digits(text)).remark)
    except NotANumber:
        return False


def plain(number: Decimal, locale: QLocale | None = None) -> str:
    """`number` to be edited or copied: all its digits, the locale's decimal sign, nothing else."""
    return format(number, "f").replace(".", (locale or QLocale()).decimalPoint())


def shown(number: Decimal, locale: QLocale | None = None) -> str:
    """`number` in a cell; zero is a dash."""
    if number == 0:
        return NIL
    whole, _, part = format(abs(number), "f").partition(".")
    part = part.rstrip("0")
    if len(whole) >= _GROUPED_FROM:
        whole = re.sub(r"(?<=\d)(?=(?:\d{3})+$)", NARROW_SPACE, whole)
    sign = "\u2212" if number < 0 else ""
    return sign + whole + ((locale or QLocale()).decimalPoint() + part if part else "")
