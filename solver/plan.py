"""The plan: what a crew planner asks, as frozen values.

Every number is an exact decimal, never a binary float. Hours are per period and person, money is in
currency units, amounts of work are per phase. Reading, checking and writing are in `planfile`.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from decimal import Decimal
from enum import StrEnum
from types import MappingProxyType
from typing import ClassVar

ZERO = Decimal(0)
ONE = Decimal(1)


class Sense(StrEnum):
    """Direction of a presence or share rule."""

    AT_LEAST = "at least"
    AT_MOST = "at most"
    EXACTLY = "exactly"


@dataclass(frozen=True)
class Phase:
    """A stretch of `periods` equal periods."""

    name: str
    periods: Decimal = ONE


@dataclass(frozen=True)
class Supervision:
    """Hours per period one person takes from any of the categories named in `by`."""

    hours: Decimal = ZERO
    by: tuple[str, ...] = ()


@dataclass(frozen=True)
class Category:
    """A kind of worker.

    `pay`, `hours`, `overtime_hours` are per period and person; `overtime_rate` is money per hour;
    `join_cost`, `leave_cost` money per person; `open_cost` money once; `settling_hours` are lost per
    joiner in the phase of joining; `absence` is a share of paid hours in [0, 1);
    `day_absence` is the chance of being away on a day where it differs from `absence`;
    `output` maps a work to units per attended hour.
    """

    name: str
    pay: Decimal
    hours: Decimal
    on_books: Decimal = ZERO
    at_least: Decimal = ZERO
    at_most: Decimal | None = None
    least_if_any: Decimal = ZERO
    lot: Decimal = ONE
    join_cost: Decimal = ZERO
    leave_cost: Decimal = ZERO
    open_cost: Decimal = ZERO
    absence: Decimal = ZERO
    overtime_hours: Decimal = ZERO
    overtime_rate: Decimal = ZERO
    settling_hours: Decimal = ZERO
    supervision: Supervision = Supervision()
    output: Mapping[str, Decimal] = field(default_factory=lambda: MappingProxyType({}))
    day_absence: Decimal | None = None
    hours_note: str = ""


@dataclass(frozen=True)
class Work:
    """Something to be delivered: `amounts[t]` units in phase t.

    `buy_in_price` is money per unit bought in, None where nobody sells it; `buy_in_most` is the most
    units that can be bought in one phase, None for no limit.
    """

    name: str
    unit: str
    amounts: tuple[Decimal, ...]
    buy_in_price: Decimal | None = None
    buy_in_most: Decimal | None = None


@dataclass(frozen=True)
class Presence:
    """sum of weights x head counts {>=, <=, =} bound, in each of `phases` (names; None = every)."""

    kind: ClassVar[str] = "presence"
    name: str
    weights: Mapping[str, Decimal]
    sense: Sense
    bound: Decimal
    phases: tuple[str, ...] | None = None


@dataclass(frozen=True)
class Ratio:
    """people of `of` <= at_most x people of `per`. `by_day`: also asked of those present on a day."""

    kind: ClassVar[str] = "ratio"
    name: str
    of: tuple[str, ...]
    per: tuple[str, ...]
    at_most: Decimal
    phases: tuple[str, ...] | None = None
    by_day: bool = False


@dataclass(frozen=True)
class Share:
    """people of `of` {>=, <=, =} fraction x people of `within`. `by_day` as for Ratio."""

    kind: ClassVar[str] = "share"
    name: str
    of: tuple[str, ...]
    within: tuple[str, ...]
    sense: Sense
    fraction: Decimal
    phases: tuple[str, ...] | None = None
    by_day: bool = False


@dataclass(frozen=True)
class Budget:
    """The whole cost over all phases <= at_most (money)."""

    kind: ClassVar[str] = "budget"
    name: str
    at_most: Decimal


Rule = Presence | Ratio | Share | Budget


@dataclass(frozen=True)
class Plan:
    """One document. `period` is the planner's word for the unit of time (week, month, ...).

    `own` is the crew the planner typed: head counts per phase of the categories it names.
    """

    phases: tuple[Phase, ...] = (Phase("Whole job"),)
    categories: tuple[Category, ...] = ()
    works: tuple[Work, ...] = ()
    rules: tuple[Rule, ...] = ()
    title: str = ""
    site: str = ""
    prepared_by: str = ""
    notes: str = ""
    currency: str = "EUR"
    period: str = "week"
    own: Mapping[str, tuple[Decimal, ...]] = field(default_factory=lambda: MappingProxyType({}))

    def category(self, name: str) -> Category:
        """The category called `name`; KeyError if there is none."""
        for category in self.categories:
            if category.name == name:
                return category
        raise KeyError(name)

    def supervising_groups(self) -> tuple[tuple[str, ...], ...]:
        """The distinct sets of supervising categories, each in plan order, first asked for first."""
        order = {c.name: i for i, c in enumerate(self.categories)}
        found: dict[tuple[str, ...], None] = {}
        for category in self.categories:
            if category.supervision.hours > 0 and category.supervision.by:
                found.setdefault(tuple(sorted(set(category.supervision.by), key=order.__getitem__)))
        return tuple(found)
