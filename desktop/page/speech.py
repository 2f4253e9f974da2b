"""How the page words numbers, crews and lines: one locale, one currency, one plan."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal

from PySide6.QtCore import QLocale

from desktop import figures
from desktop.page.text import name
from solver.phrases import noun
from solver.plan import Plan

Number = figures.Number
_PERIODS = {
    "hour",
    "shift",
    "day",
    "week",
    "fortnight",
    "month",
    "quarter",
    "season",
    "term",
    "year",
    "period",
}


@dataclass(frozen=True)
class Speech:
    """Numbers and names of one plan as the page writes them."""

    plan: Plan
    locale: QLocale

    def people(self, x: Number) -> str:
        """A head count; 0 for nobody, where a dash would be odd in a sentence."""
        return figures.people(x, self.locale) if x else "0"

    def money(self, x: Number) -> str:
        """Money with the plan's currency."""
        shown = figures.money(x, "", self.locale)
        return f"{name(self.plan.currency, 12)}{figures.NBSP}{'0' if shown == figures.NIL else shown}"

    def number(self, x: Number) -> str:
        """A number of the plan with all the digits it was typed with."""
        exact = x if isinstance(x, Decimal) else Decimal(repr(float(x)))
        return figures.number(exact, max(0, -int(exact.normalize().as_tuple().exponent)), self.locale)

    def quantity(self, x: Number, unit: str) -> str:
        """An amount in its unit; money where the unit is the currency."""
        if unit == self.plan.currency:
            return self.money(x)
        shown = figures.quantity(x, "", self.locale)
        unit = "person" if unit == "people" and shown == "1" else unit
        return f"{shown}{figures.NBSP}{name(unit, 24)}" if unit else shown

    def quantity_as_typed(self, x: Number, unit: str) -> str:
        """An amount with all its digits, in its unit."""
        return f"{self.number(x)}{figures.NBSP}{name(unit, 16)}" if unit else self.number(x)

    def percent(self, x: Number) -> str:
        """A percentage already in per cent."""
        return figures.percent(x, self.locale)

    def periods(self, x: Number) -> str:
        """8 weeks, 1 month; words of other languages are not given an English plural."""
        period = self.plan.period.strip()
        word = name(period, 16)
        plural = word + "s" if period.lower() in _PERIODS and x != 1 else word
        return f"{self.number(x)}{figures.NBSP}{plural}"


def count_of(count: int, one: str, many: str = "") -> str:
    """1 line, 3 lines."""
    return f"{count} {noun(count, one, many)}"


def exact_decimal(x: Number) -> Decimal:
    """The shortest decimal that is `x`."""
    return x if isinstance(x, Decimal) else Decimal(repr(float(x)))
