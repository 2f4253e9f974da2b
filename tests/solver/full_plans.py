"""Plans of two phases with every feature at once, most of them solvable."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from decimal import Decimal

import numpy as np

from solver.plan import Budget, Category, Phase, Plan, Presence, Ratio, Rule, Sense, Share, Supervision, Work

NAMES = ("Lead hand", "Fitter", "Learner", "Packer")


def full_plan(rng: np.random.Generator, categories: int = 4, phases: int = 2) -> Plan:
    """Joiners, leavers, opening costs, lots, least-if-any, overtime, settling in, supervision, absence,
    bought-in work and one rule of each kind, all in one plan."""
    names = NAMES[:categories]
    made = tuple(_category(rng, name, names) for name in names)
    lengths = tuple(Phase(f"Phase {t + 1}", _one_of(rng, ["1", "2", "3.5", "8"])) for t in range(phases))
    works = (
        _work(rng, "Planting", made, lengths, None),
        _work(rng, "Crating", made, lengths, Decimal("9.5")),
    )
    plan = Plan(phases=lengths, categories=made, works=works)
    return replace(plan, rules=_rules(rng, names, plan))


def _one_of(rng: np.random.Generator, options: Sequence[str]) -> Decimal:
    return Decimal(options[int(rng.integers(len(options)))])


def _cents(rng: np.random.Generator, low: int, high: int) -> Decimal:
    return Decimal(int(rng.integers(low * 100, high * 100))) / 100


def _category(rng: np.random.Generator, name: str, names: Sequence[str]) -> Category:
    lot = _one_of(rng, ["1", "1", "2", "0.5"])
    leads = name == names[0]
    return Category(
        name=name,
        pay=_cents(rng, 300, 1200),
        hours=_one_of(rng, ["40", "38", "35.5"]),
        on_books=_one_of(rng, ["0", "1", "2.5", "4"]),
        at_least=_one_of(rng, ["0", "0", "1"]),
        at_most=_one_of(rng, ["9", "12.5", "20"]),
        least_if_any=lot * 2 if name == names[-1] else Decimal(0),
        lot=lot,
        join_cost=_cents(rng, 0, 800),
        leave_cost=_cents(rng, 0, 600),
        open_cost=_cents(rng, 0, 900) if name == names[1] else Decimal(0),
        absence=_one_of(rng, ["0", "0.05", "0.12"]),
        overtime_hours=_one_of(rng, ["0", "4", "6"]),
        overtime_rate=_one_of(rng, ["19.5", "31.25", "44.1234"]),
        settling_hours=_one_of(rng, ["0", "4", "10"]),
        supervision=Supervision() if leads else Supervision(_one_of(rng, ["0.5", "2", "4"]), (names[0],)),
        output={"Planting": _cents(rng, 1, 9), "Crating": _cents(rng, 1, 4)},
    )


def _work(
    rng: np.random.Generator,
    name: str,
    categories: Sequence[Category],
    phases: Sequence[Phase],
    price: Decimal | None,
) -> Work:
    best = max(c.output[name] for c in categories)
    amounts = tuple(
        (p.periods * 38 * best * int(rng.integers(4, 60)) / 10).quantize(Decimal(1)) for p in phases
    )
    most = None if price is None else (max(amounts) * _one_of(rng, ["0.1", "0.4", "1"])).quantize(Decimal(1))
    return Work(name, "units", amounts, price, most)


def _rules(rng: np.random.Generator, names: Sequence[str], plan: Plan) -> tuple[Rule, ...]:
    whole = sum((p.periods for p in plan.phases), Decimal(0))
    money = whole * Decimal(int(rng.integers(6_000, 16_000)))
    return (
        Presence("Keys", {names[0]: Decimal(1), names[1]: Decimal("0.5")}, Sense.AT_LEAST, Decimal("1.5")),
        Ratio("Learners", tuple(names[2:]), (names[0], names[1]), _one_of(rng, ["1", "2.5", "3"])),
        Share("Own staff", (names[0],), tuple(names), Sense.AT_LEAST, _one_of(rng, ["0.1", "0.2", "0.25"])),
        Share("Packers", (names[-1],), tuple(names), Sense.AT_MOST, Decimal("0.6"), (plan.phases[-1].name,)),
        Budget("Budget", money),
    )
