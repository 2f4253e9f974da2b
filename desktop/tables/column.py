"""A column of a grid as data: what it is called, where its values are and what may be typed."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass
from decimal import Decimal
from enum import StrEnum

from desktop import messages
from desktop.tables import numbers
from desktop.tables.numbers import Refused
from solver.exact import TypedNumber
from solver.plan import Plan
from solver.review import quoted

_SHORT = 11  # characters of a title that stay in one line

Value = str | Decimal | tuple[str, ...] | None


class Kind(StrEnum):
    """How values are typed and shown."""

    TEXT = "text"
    NUMBER = "number"
    PERCENT = "percent"  # a share in the plan, per cent in the cell
    NAMES = "names"


@dataclass(frozen=True)
class Column:
    """One column.

    `get(plan, row)` and `put(plan, row, value)` read and set the value; `place(row)` is what problems call
    it; clearing a cell gives it `blank`; `optional`: nothing typed means no value, shown as `none_shown`;
    `choices(plan)` lists the names that may be typed; `group` "" is always visible; `note(plan, row)`
    adds where a value came from to its tooltip.
    """

    key: str
    title: str
    unit: str
    tooltip: str
    kind: Kind
    get: Callable[[Plan, int], Value]
    put: Callable[[Plan, int, Value], Plan]
    place: Callable[[int], str]
    blank: Value = None
    optional: bool = False
    none_shown: str = ""
    choices: Callable[[Plan], tuple[str, ...]] | None = None
    group: str = ""
    note: Callable[[Plan, int], str] | None = None

    @property
    def header(self) -> str:
        """Title, in two lines where it is long, over unit."""
        title = in_two_lines(self.title) if self.is_number else self.title
        return f"{title}\n{self.unit}" if self.unit else title

    @property
    def is_number(self) -> bool:
        """True where values stand at the right."""
        return self.kind in (Kind.NUMBER, Kind.PERCENT)

    def shown(self, value: Value) -> str:
        """`value` in a cell."""
        if value is None:
            return self.none_shown
        if isinstance(value, tuple):
            return ", ".join(value)
        return numbers.shown(self._scaled(value)) if isinstance(value, Decimal) else value

    def plain(self, value: Value) -> str:
        """`value` to be edited or copied."""
        if value is None:
            return ""
        if isinstance(value, tuple):
            return "; ".join(value)
        return numbers.plain(self._scaled(value)) if isinstance(value, Decimal) else value

    def read(self, plan: Plan, text: str) -> Value:
        """The value typed as `text`. Raises Refused."""
        typed = text.strip()
        if self.kind is Kind.TEXT:
            return " ".join(typed.split())
        if self.kind is Kind.NAMES:
            return self._names(plan, typed)
        if not typed or typed == self.none_shown:
            return None if self.optional else self.blank
        if self.kind is Kind.PERCENT:
            return share_of(numbers.parse(typed.removesuffix("%")))
        return numbers.parse(typed)

    def _scaled(self, value: Decimal) -> Decimal:
        return percent_of(value) if self.kind is Kind.PERCENT else value

    def _names(self, plan: Plan, typed: str) -> tuple[str, ...]:
        """Names apart by semicolons or, where no name has one in it, commas; each once."""
        known = {name.casefold(): name for name in (self.choices(plan) if self.choices else ())}
        found: dict[str, None] = {}
        for piece in filter(None, (p.strip() for p in re.split(r"[;\n]", typed))):
            whole = piece.casefold() in known
            for name in [piece] if whole else filter(None, (p.strip() for p in piece.split(","))):
                if name.casefold() not in known:
                    raise Refused(messages.NO_SUCH_CATEGORY.format(name=quoted(name)))
                found[known[name.casefold()]] = None
        return tuple(found)


def in_two_lines(title: str) -> str:
    """`title` cut at the space that makes its longer line shortest; short titles stay in one line."""
    cuts = [at for at, character in enumerate(title) if character == " "]
    if len(title) <= _SHORT or not cuts:
        return title
    cut = min(cuts, key=lambda at: max(at, len(title) - at - 1))
    return f"{title[:cut]}\n{title[cut + 1 :]}"


def share_of(percent: Decimal) -> Decimal:
    """The share that `percent` per cent are, exactly: 5 -> 0.05."""
    return TypedNumber(format(percent.scaleb(-2), "f"))


def percent_of(share: Decimal) -> Decimal:
    """The per cent that `share` is, exactly: 0.05 -> 5."""
    return share.scaleb(2)
