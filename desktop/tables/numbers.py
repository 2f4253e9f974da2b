"""Numbers as they are typed into a grid and shown there.

Typed: a lone comma or point is the decimal sign, whichever it is; where both stand, the last one is, and
the other one groups thousands; spaces and apostrophes group too. Shown: every digit as typed, the locale's
decimal sign, and thousands apart by a narrow space, never by a sign, so that what is shown can be typed back.
"""

from __future__ import annotations

import re
import unicodedata
from decimal import Decimal

from PySide6.QtCore import QLocale

from desktop import messages
from desktop.figures import NIL
from solver.exact import TypedNumber, typed_number
from solver.review import quoted

NARROW_SPACE = "\u202f"
_WRONG = "?"  # what no number can be made of
_GROUPED_FROM = 5  # 3100 reads well as it is, 52 000 does not
_SPACES = re.compile(r"(?<=\d)[\s'\u2019](?=\d{3}(?!\d))")
_MINUS = str.maketrans({"\u2212": "-", "\u2013": "-"})


class Refused(Exception):
    """What was typed does not count; the message says why and what is allowed."""

    @property
    def reason(self) -> str:
        """The sentence."""
        return str(self)


def parse(text: str) -> TypedNumber:
    """The number typed as `text`, with the digits as typed. Raises Refused."""
    typed = _with_plain_digits(text.strip()).translate(_MINUS)
    if typed == "-":
        return TypedNumber("0")  # the dash that zero is shown as
    number = _made(_with_point(_SPACES.sub("", typed).removeprefix("+")))
    if number is None:
        raise Refused(messages.NOT_A_NUMBER.format(text=quoted(text.strip())))
    return number


def _with_plain_digits(text: str) -> str:
    """Digits of every script as 0 to 9."""
    return "".join(str(unicodedata.decimal(c)) if c.isdecimal() else c for c in text)


def _with_point(text: str) -> str:
    """`text` with a point as decimal sign and without grouping; as it is where the grouping is wrong."""
    signs = [c for c in text if c in ".,"]
    if not signs:
        return text
    last = signs[-1]
    if len(signs) == 1:
        return text.replace(last, ".")
    if signs.count(last) > 1:  # 1.234.567: a sign that comes twice groups
        return _ungrouped(text, last) if len(set(signs)) == 1 else _WRONG
    whole, _, part = text.rpartition(last)
    other = "," if last == "." else "."
    return f"{_ungrouped(whole, other)}.{part}"


def _ungrouped(text: str, sign: str) -> str:
    first, *others = text.removeprefix("-").split(sign)
    grouped = 1 <= len(first) <= 3 and others and all(len(group) == 3 for group in others)
    return text.replace(sign, "") if grouped else _WRONG


def _made(text: str) -> TypedNumber | None:
    if text.startswith((".", "-.")):
        text = text.replace(".", "0.", 1)
    negative, digits = ("-", text[1:]) if text.startswith("-") else ("", text)
    digits = re.sub(r"^0+(?=\d)", "", digits).removesuffix(".")
    try:
        return typed_number(negative + digits)
    except ValueError:
        return None


def reads_two_ways(text: str) -> bool:
    """True for 52,000 or 1.234: read as a decimal, though somebody may have meant thousands."""
    return re.fullmatch(r"[-\u2212+]?[1-9]\d{0,2}[.,]\d{3}", text.strip()) is not None


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
