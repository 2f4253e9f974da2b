"""Numbers as people and spreadsheets write them, with either decimal sign, made into exact decimals.

The one reader of typed numbers: of cells and fields in the window and of imported tables. A lone comma or
point is the decimal sign; where both stand, the last one is; one that stands several times groups thousands,
as spaces and apostrophes do, but one sign groups the whole number. What could be meant otherwise is said.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from solver.exact import ALLOWED_SIZE, LONGEST_TEXT, TypedNumber, typed_number
from solver.review import quoted

_ONE_FORM = str.maketrans(
    {
        **dict.fromkeys("\u00a0\u2007\u2009\u202f", " "),
        **dict.fromkeys("\u2019\u02bc", "'"),
        **dict.fromkeys("\u2212\u2013", "-"),
    }
)
_SHAPE = re.compile(r"(?P<sign>[+-]?) *(?P<body>[0-9][0-9., ']*|[.,][0-9]+)(?P<power>[eE][+-]?[0-9]{1,3})?\Z")
_GROUPS = re.compile(r"[1-9][0-9]{0,2}(?P<sign>[., '])[0-9]{3}(?:(?P=sign)[0-9]{3})*\Z")


class NotANumber(Exception):
    """The text is no number; the message says what it is and what is allowed."""


@dataclass(frozen=True)
class Numeral:
    """A number that was read; `remark` says how where it could have been meant otherwise."""

    number: TypedNumber
    remark: str = ""


def parse_number(text: str) -> Numeral:
    """The number written as `text`, digits as typed. Raises NotANumber, also for NaN and infinity."""
    shown = quoted(text.strip())
    if len(text) > 4 * LONGEST_TEXT:
        raise NotANumber(f"{shown} is not a number that can be used; {ALLOWED_SIZE}")
    match = _SHAPE.match(text.strip().translate(_ONE_FORM))
    if match is None:
        raise NotANumber(f"{shown} is not a number; allowed are digits with one decimal sign")
    whole, part = _split(match["body"], shown)
    sign = "-" if match["sign"] == "-" else ""
    plain = sign + (whole.lstrip("0") or "0") + (f".{part}" if part else "") + (match["power"] or "")
    number = typed_number(plain)
    if number is None:
        raise NotANumber(f"{shown} is not a number that can be used; {ALLOWED_SIZE}")
    return Numeral(number, _remark(match["body"], number, shown))


def _split(body: str, shown: str) -> tuple[str, str]:
    """Whole digits and decimals of `body`, thousands checked to be groups of three."""
    sign = next((c for c in reversed(body) if c in ",."), "")
    if not sign or body.count(sign) > 1:
        return _ungrouped(body, shown), ""
    whole, _, part = body.partition(sign)
    if part and not part.isdigit():
        raise NotANumber(f"{shown} is not a number; thousands cannot be set apart after the decimal sign")
    return _ungrouped(whole, shown) if whole else "", part


def _ungrouped(whole: str, shown: str) -> str:
    if whole.isdigit():
        return whole
    groups = _GROUPS.match(whole)
    if groups is None:
        raise NotANumber(f"{shown} is not a number; thousands must be set apart in groups of three digits")
    return whole.replace(groups["sign"], "")


def _remark(body: str, number: TypedNumber, shown: str) -> str:
    """`1.234` may have been meant as a thousand; it is read as a little more than one."""
    if re.fullmatch(r"[1-9][0-9]{0,2}[.,][0-9]{3}", body) is None:
        return ""
    meant = re.sub(r"[.,]", "", body)
    return f"{shown} is read as {number} with decimals, not as {meant}"
