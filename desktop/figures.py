"""Numbers as people read them: the digits that matter, in the user's locale; zero is a dash.

Every function takes a float or Decimal and an optional QLocale (the default one otherwise). Minus signs are
the true sign U+2212, units follow a no-break space.
"""

from __future__ import annotations

from decimal import ROUND_HALF_UP, Decimal

from PySide6.QtCore import QLocale

Number = float | int | Decimal

NIL = "–"
NBSP = "\u00a0"
MINUS = "\u2212"
_DIGITS_THAT_MATTER = 3
_ONE_OF = {"people": "person", "hours": "hour"}  # units the program names itself
_NOTHING = Decimal("5e-7")  # below the snap of the rounding policies: solver noise, not people


def _decimal(x: Number) -> Decimal:
    return x if isinstance(x, Decimal) else Decimal(repr(float(x)))


def _rounded(x: Number, places: int) -> Decimal:
    return _decimal(x).quantize(Decimal(1).scaleb(-places), ROUND_HALF_UP)


def _plain(x: Decimal, places: int, locale: QLocale | None) -> str:
    """`x` with at most `places` decimals, trailing zeros dropped, grouped as the locale does.

    Digits are taken from the Decimal, so that a long amount is never passed through a binary float.
    """
    chosen = locale or QLocale()
    whole, _, part = f"{abs(x):.{places}f}".partition(".")
    part = part.rstrip("0")
    text = chosen.toString(int(whole)) if len(whole) < 19 else whole
    return text + (chosen.decimalPoint() + part if part else "")


def _places_that_matter(x: Decimal, most: int) -> int:
    """Decimals that keep three digits of `x`, at most `most`."""
    return max(0, min(most, _DIGITS_THAT_MATTER - 1 - x.adjusted()))


def number(x: Number, places: int | None = None, locale: QLocale | None = None) -> str:
    """`x` with `places` decimals at most (None: three digits that matter); zero is a dash."""
    exact = _decimal(x)
    if abs(exact) < _NOTHING:
        return NIL
    shown = _places_that_matter(exact, 6) if places is None else places
    rounded = _rounded(exact, shown)
    if rounded == 0:  # too small for these places, but not nothing: its first digit
        shown = -exact.adjusted()
        rounded = _rounded(exact, shown)
    return (MINUS if rounded < 0 else "") + _plain(rounded, shown, locale)


def people(x: Number, locale: QLocale | None = None) -> str:
    """A head count: 9.41, 12, 0.5; a dash for nobody."""
    return number(x, 2, locale)


def change(x: Number, locale: QLocale | None = None) -> str:
    """A change of head count, hours or units with its sign: +2, −0.5; a dash for none."""
    text = number(x, 2 if abs(_decimal(x)) < 100 else 0, locale)
    return text if text == NIL or text.startswith(MINUS) else "+" + text


def quantity(x: Number, unit: str = "", locale: QLocale | None = None) -> str:
    """An amount in a unit: 31 h, 12,480 trees, 0.52 h; a dash for zero."""
    exact = _decimal(x)
    if abs(exact) < _NOTHING:
        return NIL
    text = number(exact, 0 if abs(exact) >= 100 else _places_that_matter(exact, 2), locale)
    named = _ONE_OF.get(unit, unit) if text.lstrip(MINUS) == "1" else unit
    return f"{text}{NBSP}{named}" if unit else text


def signed(x: Number, unit: str = "", locale: QLocale | None = None) -> str:
    """As `quantity` with + before what is positive: margins and moves."""
    text = quantity(x, unit, locale)
    return text if text == NIL or text.startswith(MINUS) else "+" + text


def money(x: Number, currency: str = "", locale: QLocale | None = None) -> str:
    """Money, cents only where there are any: EUR 12,480 or EUR 12.50; a dash for none."""
    cents = _rounded(x, 2)
    if cents == 0:
        return NIL
    chosen = locale or QLocale()
    whole = cents == cents.to_integral_value()
    text = _plain(cents, 0, chosen) if whole else _with_cents(cents, chosen)
    sign = MINUS if cents < 0 else ""
    return f"{currency}{NBSP}{sign}{text}" if currency else sign + text


def _with_cents(cents: Decimal, locale: QLocale) -> str:
    whole, part = f"{abs(cents):.2f}".split(".")
    text = locale.toString(int(whole)) if len(whole) < 19 else whole
    return f"{text}{locale.decimalPoint()}{part}"


def percent(x: Number, locale: QLocale | None = None) -> str:
    """A percentage already in per cent: 2.4 %, 0.35 %; a dash for zero."""
    exact = _decimal(x)
    text = number(exact, max(1, min(2, _places_that_matter(exact, 2))) if abs(exact) < 10 else 1, locale)
    return text if text == NIL else f"{text}{NBSP}%"
