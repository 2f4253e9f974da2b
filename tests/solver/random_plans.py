"""Small random plans of every feature, drawn through one narrow door: `Choices`.

`random_plan(rng)` draws from a numpy generator (thousands a second, reproducible by seed);
`strategies.plans()` draws the same plans through hypothesis, which can shrink them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from decimal import Decimal
from typing import Protocol, TypeVar

import numpy as np

from solver.plan import (
    Budget,
    Category,
    Phase,
    Plan,
    Presence,
    Ratio,
    Rule,
    Sense,
    Share,
    Supervision,
    Work,
)

T = TypeVar("T")

FEATURES = frozenset(
    {
        "ratio",
        "share",
        "presence",
        "budget",
        "lots",
        "least_if_any",
        "bounds",
        "books",
        "moves",
        "open_cost",
        "overtime",
        "settling",
        "supervision",
        "buy_in",
        "phases",
        "absence",
        "ties",
        "zero_pay",
        "unreachable",
    }
)

_CATEGORY_NAMES = ("Lead hand", "Learner", "Packer", "Driver", "Rigger", "Registrar", "Warden", "Fitter")
_WORKS = (("Planting", "trees"), ("Crating", "crates"), ("Fencing", "m"), ("Survey", "plots"))


class Choices(Protocol):
    """Where random decisions come from. The smallest integer and `False` are the plainest choice."""

    def integer(self, low: int, high: int) -> int: ...

    def chance(self, percent: int) -> bool: ...


class NumpyChoices:
    """Decisions drawn from a seeded generator."""

    def __init__(self, rng: np.random.Generator) -> None:
        self._rng = rng

    def integer(self, low: int, high: int) -> int:
        return int(self._rng.integers(low, high + 1))

    def chance(self, percent: int) -> bool:
        return bool(self._rng.random() * 100 < percent)


def random_plan(
    rng: np.random.Generator,
    *,
    max_categories: int = 4,
    max_works: int = 2,
    max_phases: int = 2,
    boxed: bool = False,
    features: frozenset[str] = FEATURES,
) -> Plan:
    """A valid small plan; `boxed` gives every category an at_most of at most 4 lots.

    `features` limits what may occur: a subset of FEATURES.
    """
    choices = NumpyChoices(rng)
    return build_plan(
        choices,
        max_categories=max_categories,
        max_works=max_works,
        max_phases=max_phases,
        boxed=boxed,
        features=features,
    )


def build_plan(
    choices: Choices,
    *,
    max_categories: int = 4,
    max_works: int = 2,
    max_phases: int = 2,
    boxed: bool = False,
    features: frozenset[str] = FEATURES,
) -> Plan:
    """The plan that `choices` decide on."""
    unknown = features - FEATURES
    if unknown:
        raise ValueError(f"no such features: {sorted(unknown)}")
    return _Builder(choices, features, boxed).plan(max_categories, max_works, max_phases)


class _Builder:
    def __init__(self, choices: Choices, features: frozenset[str], boxed: bool) -> None:
        self._choices = choices
        self._features = features
        self._boxed = boxed

    def plan(self, max_categories: int, max_works: int, max_phases: int) -> Plan:
        integer = self._choices.integer
        phases = self._phases(integer(1, max_phases) if "phases" in self._features else 1)
        works = _WORKS[: integer(1, max_works)]
        names = [_name(i) for i in range(integer(1, max_categories))]
        categories = [self._category(name, names, works) for name in names]
        categories = self._tied(categories)
        return Plan(
            phases=phases,
            categories=tuple(categories),
            works=tuple(self._work(work, categories, phases, len(works)) for work in works)
            + self._unreachable(phases),
            rules=tuple(self._rules(categories, phases)),
            title="Random",
        )

    def _may(self, feature: str, percent: int) -> bool:
        return feature in self._features and self._choices.chance(percent)

    def _pick(self, options: Sequence[T]) -> T:
        return options[self._choices.integer(0, len(options) - 1)]

    def _some(self, options: Sequence[T]) -> list[T]:
        """At least one of `options`, in their order."""
        sure = self._choices.integer(0, len(options) - 1)
        return [x for i, x in enumerate(options) if i == sure or self._choices.chance(35)]

    def _phases(self, count: int) -> tuple[Phase, ...]:
        lengths = ["1", "2", "3", "1.5", "8"]
        return tuple(Phase(f"Phase {i + 1}", Decimal(self._pick(lengths))) for i in range(count))

    def _category(self, name: str, names: list[str], works: Sequence[tuple[str, str]]) -> Category:
        integer = self._choices.integer
        lot = Decimal(self._pick(["1", "1", "2", "0.5", "4"])) if "lots" in self._features else Decimal(1)
        moves = "moves" in self._features
        return Category(
            name=name,
            pay=Decimal(0) if self._may("zero_pay", 5) else Decimal(integer(1000, 150_000)) / 100,
            hours=Decimal(self._pick([40, 38, 20, 10])),
            lot=lot,
            on_books=self._on_books(lot),
            **self._bounds(lot),
            least_if_any=lot * integer(2, 3) if self._may("least_if_any", 15) else Decimal(0),
            join_cost=Decimal(integer(0, 900)) if moves and self._choices.chance(40) else Decimal(0),
            leave_cost=Decimal(integer(0, 900)) if moves and self._choices.chance(30) else Decimal(0),
            open_cost=Decimal(integer(1, 3000)) if self._may("open_cost", 15) else Decimal(0),
            absence=Decimal(self._pick(["0", "0.05", "0.125", "0.5"]))
            if self._may("absence", 50)
            else Decimal(0),
            **self._overtime(),
            settling_hours=Decimal(integer(1, 20)) if self._may("settling", 20) else Decimal(0),
            supervision=self._supervision(names),
            output=self._output(works),
        )

    def _on_books(self, lot: Decimal) -> Decimal:
        if not self._may("books", 40):
            return Decimal(0)
        return lot * self._choices.integer(1, 4) + (Decimal("0.5") if self._choices.chance(10) else 0)

    def _bounds(self, lot: Decimal) -> dict[str, Decimal | None]:
        """at_least and at_most; sometimes not whole lots, always with a whole lot between them."""
        most = lot * self._choices.integer(2, 4) if self._boxed or self._may("bounds", 40) else None
        least = lot * self._choices.integer(0, 2) if self._may("bounds", 20) else Decimal(0)
        if most is not None and not self._boxed and self._choices.chance(20):
            most += lot / 2
        return {"at_least": least, "at_most": most}

    def _overtime(self) -> dict[str, Decimal]:
        if not self._may("overtime", 30):
            return {}
        rate = Decimal(self._choices.integer(0, 600_000)) / 10_000
        return {"overtime_hours": Decimal(self._choices.integer(1, 10)), "overtime_rate": rate}

    def _supervision(self, names: list[str]) -> Supervision:
        if not self._may("supervision", 35):
            return Supervision()
        hours = Decimal(self._choices.integer(1, 16)) / 2
        return Supervision(hours, tuple(self._some(names)))

    def _output(self, works: Sequence[tuple[str, str]]) -> dict[str, Decimal]:
        quarters = self._choices.integer
        return {name: Decimal(quarters(1, 80)) / 4 for name, _ in works if not self._choices.chance(25)}

    def _tied(self, categories: list[Category]) -> list[Category]:
        """Sometimes the last category is the first one under another name."""
        if len(categories) < 2 or not self._may("ties", 10):
            return categories
        return [*categories[:-1], replace(categories[0], name=categories[-1].name)]

    def _work(
        self, work: tuple[str, str], categories: list[Category], phases: tuple[Phase, ...], works: int
    ) -> Work:
        name, unit = work
        able = [c for c in categories if name in c.output]
        sold = self._may("buy_in", 15 if able else 80)
        amounts = tuple(self._amount(name, able, sold, phase, works) for phase in phases)
        price = Decimal(self._choices.integer(0, 2_000_000)) / 10_000 if sold else None
        limited = sold and able and self._choices.chance(50)
        most = max(amounts) * self._choices.integer(0, 4) / 4 if limited else None
        return Work(name, unit, amounts, price, most)

    def _amount(self, name: str, able: list[Category], sold: bool, phase: Phase, works: int) -> Decimal:
        """A part of what one able category could do alone with all the people it may have."""
        if not able:
            return Decimal(self._choices.integer(0, 1) * 50 if sold or self._may("unreachable", 20) else 0)
        one = self._pick(able)
        people = one.at_most if one.at_most is not None else Decimal(6)
        most = people * one.hours * (1 - one.absence) * one.output[name] * phase.periods / works
        return (most * self._choices.integer(0, 18) / 20).quantize(Decimal(1)) + 0

    def _unreachable(self, phases: tuple[Phase, ...]) -> tuple[Work, ...]:
        """Sometimes a work nobody does and nobody sells, which is harmless at 0 and else impossible."""
        if not self._may("unreachable", 8):
            return ()
        amount = Decimal(5) if self._choices.chance(30) else Decimal(0)
        return (Work("Blasting", "holes", (amount,) * len(phases)),)

    def _rules(self, categories: list[Category], phases: tuple[Phase, ...]) -> list[Rule]:
        names = [c.name for c in categories]
        rules: list[Rule] = []
        if self._may("ratio", 40):
            most = Decimal(self._choices.integer(0, 16)) / 4
            rules.append(Ratio("Ratio", *self._two_groups(names), most, self._rule_phases(phases)))
        if self._may("share", 40):
            fraction = Decimal(self._pick([0, 2, 4, 5, 6, 8, 10, 13, 16, 20])) / 20
            groups = self._two_groups(names)
            rules.append(Share("Share", *groups, self._sense(), fraction, self._rule_phases(phases)))
        if self._may("presence", 40):
            weights = {name: Decimal(self._pick(["1", "1", "2", "0.5"])) for name in self._some(names)}
            bound = Decimal(self._choices.integer(0, 8)) / 2
            rules.append(Presence("Presence", weights, self._sense(), bound, self._rule_phases(phases)))
        if self._may("budget", 15):
            rules.append(Budget("Budget", self._budget(categories, phases)))
        return rules

    def _two_groups(self, names: list[str]) -> tuple[tuple[str, ...], tuple[str, ...]]:
        return tuple(self._some(names)), tuple(self._some(names))

    def _sense(self) -> Sense:
        return self._pick([Sense.AT_LEAST] * 4 + [Sense.AT_MOST] * 3 + [Sense.EXACTLY])

    def _rule_phases(self, phases: tuple[Phase, ...]) -> tuple[str, ...] | None:
        return (self._pick(phases).name,) if self._choices.chance(25) else None

    def _budget(self, categories: list[Category], phases: tuple[Phase, ...]) -> Decimal:
        each = sum((c.pay for c in categories), Decimal(0)) * sum((p.periods for p in phases), Decimal(0))
        return (each * self._choices.integer(1, 6)).quantize(Decimal("0.01"))


def _name(index: int) -> str:
    again, which = divmod(index, len(_CATEGORY_NAMES))
    return _CATEGORY_NAMES[which] + (f" {again + 1}" if again else "")
