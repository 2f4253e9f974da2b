"""Numbers as people and spreadsheets write them, with either decimal sign, made into exact decimals.

A lone comma or point is the decimal sign; where both stand, the last one is; one that stands several times
groups thousands, as spaces and apostrophes do. Whatever could be meant otherwise is said, never hidden.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from decimal import Decimal

from solver.exact import ALLOWED_SIZE, LONGEST_TEXT, has_allowed_size, typed_number
from solver.review import quoted

_SPACES = "\u0020\u00a0\u2007\u2009\u202f"
_APOSTROPHES = "'\u2019\u02bc"
_MINUS = "-\u2212\u2013"
_SHAPE = re.compile(r"(?P<sign>[+-]?)(?P<body>[0-9][0-9.,_]*|[.,][0-9]+)(?P<power>[eE][+-]?[0-9]{1,3})?\Z")
_GROUPS = re.compile(r"[0-9]{1,3}(?:_[0-9]{3})+\Z")


class NotANumber(Exception):
    """The text is no number; the message says what it is and what is allowed."""


@dataclass(frozen=True)
class Numeral:
    """A number that was read; `remark` says how where it could have been meant otherwise."""

    number: Decimal
    remark: str = ""


def parse_number(text: str) -> Numeral:
    """The number written as `text`. Raises NotANumber, also for NaN and infinity."""
    shown = quoted(text.strip())
    if len(text) > 4 * LONGEST_TEXT:
        raise NotANumber(f"{shown} is too long for a number; {ALLOWED_SIZE}")
    match = _SHAPE.match(_with_plain_signs(text))
    if match is None or "_" in text:
        raise NotANumber(f"{shown} is not a number; allowed are digits with one decimal sign")
    whole, part = _split(match["body"], shown)
    sign = "-" if match["sign"] == "-" else ""
    plain = sign + (whole.lstrip("0") or "0") + (f".{part}" if part else "") + (match["power"] or "")
    number = typed_number(plain)
    if number is None or not has_allowed_size(number):
        raise NotANumber(f"{shown} cannot be used; {ALLOWED_SIZE}")
    return Numeral(number, _remark(match["body"], number, shown))


def _with_plain_signs(text: str) -> str:
    """One form of minus; spaces and apostrophes between digits become an underscore."""
    plain = text.strip().strip(_SPACES)
    if plain[:1] in _MINUS and plain:
        plain = "-" + plain[1:].lstrip(_SPACES)
    return re.sub(f"(?<=[0-9])[{_SPACES}{_APOSTROPHES}](?=[0-9])", "_", plain)


def _split(body: str, shown: str) -> tuple[str, str]:
    """Whole digits and decimals of `body`, thousands checked to be groups of three."""
    last = max(body.rfind(","), body.rfind("."))
    if last < 0:
        return _ungrouped(body, shown), ""
    sign, other = body[last], "." if body[last] == "," else ","
    if body.count(sign) > 1:
        if other in body:
            raise NotANumber(f"{shown} is not a number; it has more than one decimal sign")
        return _ungrouped(body.replace(sign, "_"), shown), ""
    whole, part = body[:last], body[last + 1 :]
    if not part.isdigit() and part:
        raise NotANumber(f"{shown} is not a number; thousands cannot be set apart after the decimal sign")
    return _ungrouped(whole.replace(other, "_"), shown), part


def _ungrouped(whole: str, shown: str) -> str:
    if "_" in whole and not _GROUPS.match(whole):
        raise NotANumber(f"{shown} is not a number; thousands must be set apart in groups of three digits")
    return whole.replace("_", "")


def _remark(body: str, number: Decimal, shown: str) -> str:
    """`1.234` may have been meant as a thousand; it is read as a little more than one."""
    signs = [c for c in body if c in ".,"]
    ambiguous = len(signs) == 1 and re.fullmatch(r"[1-9][0-9]{0,2}[.,][0-9]{3}", body)
    if not ambiguous:
        return ""
    meant = body.replace(signs[0], "")
    return f"{shown} is read as {number} with decimals, not as {meant}"
