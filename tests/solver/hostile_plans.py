"""Random plans bent towards what breaks solvers: ill-scaled, tied, degenerate, tight to the last digit."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from decimal import ROUND_HALF_EVEN, Decimal

import numpy as np

from solver.plan import Category, Plan, Presence, Ratio, Share, Supervision, Work
from solver.review import review
from tests.solver.random_plans import random_plan

Bend = Callable[[np.random.Generator, Plan], Plan]
CENT = Decimal("0.01")
TINIEST = Decimal("1e-9")


def hostile_plan(rng: np.random.Generator, **shape: object) -> Plan:
    """A valid plan, bent one to three times."""
    plan = random_plan(rng, **shape)  # type: ignore[arg-type]
    for _ in range(int(rng.integers(1, 4))):
        bent = BENDS[int(rng.integers(len(BENDS)))](rng, plan)
        if not review(bent):
            plan = bent
    return plan


def _each(plan: Plan, change: Callable[[Category], Category]) -> Plan:
    return replace(plan, categories=tuple(change(c) for c in plan.categories))


def _pick(rng: np.random.Generator, options: list[str]) -> Decimal:
    return Decimal(options[int(rng.integers(len(options)))])


def _some(rng: np.random.Generator) -> bool:
    return bool(rng.random() < 0.5)


def _money(value: Decimal) -> Decimal:
    return min(max(value.quantize(CENT, ROUND_HALF_EVEN), CENT), Decimal(10_000_000))


def ill_scaled_pay(rng: np.random.Generator, plan: Plan) -> Plan:
    """Pay from a cent to ten million, each category on its own."""
    scales = ["0.00001", "0.001", "1", "1000", "100000"]
    return _each(plan, lambda c: replace(c, pay=_money(c.pay * _pick(rng, scales))))


def ill_scaled_work(rng: np.random.Generator, plan: Plan) -> Plan:
    """Units so small or so large that amounts run from 1 to 1e9; the people needed stay the same."""
    scale = {w.name: _pick(rng, ["0.0001", "0.01", "1000", "1000000", "10000000"]) for w in plan.works}
    works = tuple(_scaled_work(w, scale[w.name]) for w in plan.works)

    def change(c: Category) -> Category:
        return replace(c, output={k: out * scale[k] for k, out in c.output.items()})

    return replace(_each(plan, change), works=works)


def _scaled_work(w: Work, scale: Decimal) -> Work:
    price = None if w.buy_in_price is None else (w.buy_in_price / scale).quantize(Decimal("0.0001"))
    most = None if w.buy_in_most is None else w.buy_in_most * scale
    return replace(w, amounts=tuple(a * scale for a in w.amounts), buy_in_price=price, buy_in_most=most)


def more_people(rng: np.random.Generator, plan: Plan) -> Plan:
    """Work for hundreds or thousands of people."""
    scale = _pick(rng, ["7", "30", "300"])
    works = tuple(replace(w, amounts=tuple(a * scale for a in w.amounts)) for w in plan.works)
    return replace(_each(plan, lambda c: replace(c, at_most=None)), works=works)


def odd_hours(rng: np.random.Generator, plan: Plan) -> Plan:
    """Hours and absences that no binary float holds, up to 99 % absent."""
    hours, absences = ["37.7", "0.1", "7.3", "38.123", "160"], ["0.99", "0.1", "0.3333", "0.077", "0"]
    return _each(plan, lambda c: replace(c, hours=_pick(rng, hours), absence=_pick(rng, absences)))


def odd_lots(rng: np.random.Generator, plan: Plan) -> Plan:
    """Lots of a tenth, a quarter, three tenths, 25 or 1000; bounds no longer whole lots."""

    def change(c: Category) -> Category:
        lot = _pick(rng, ["0.1", "0.25", "0.3", "3", "25", "1000"])
        most = None if c.at_most is None else max(c.at_most, lot) + lot / 3 // TINIEST * TINIEST
        return replace(c, lot=lot, at_most=most, on_books=c.on_books + _pick(rng, ["0", "0.37", "1.5"]))

    return _each(plan, change)


def clones(rng: np.random.Generator, plan: Plan) -> Plan:
    """Every category is the first one under another name."""
    first = plan.categories[0]
    return _each(plan, lambda c: replace(first, name=c.name))


def near_clones(rng: np.random.Generator, plan: Plan) -> Plan:
    """Every category is the first one but for a cent of pay or the last digit of an output."""
    first = plan.categories[0]

    def change(c: Category) -> Category:
        pay = max(first.pay + _pick(rng, ["-0.01", "0", "0.01"]), Decimal(0))
        output = {
            k: max(out + _pick(rng, ["-0.0001", "0", "0.0001"]), Decimal(0))
            for k, out in first.output.items()
        }
        return replace(first, name=c.name, pay=pay, output=output)

    return _each(plan, change)


def supervision_cycle(rng: np.random.Generator, plan: Plan) -> Plan:
    """Everyone is supervised: by themselves, by the next, or by all; sometimes by more than they have."""
    names = [c.name for c in plan.categories]
    share = _pick(rng, ["0.05", "0.3", "0.5", "1"])
    way = int(rng.integers(3))

    def change(c: Category) -> Category:
        i = names.index(c.name)
        by = [(c.name,), (names[(i + 1) % len(names)],), tuple(names)][way]
        return replace(c, supervision=Supervision(c.hours * (1 - c.absence) * share, by))

    return _each(plan, change)


def odd_rules(rng: np.random.Generator, plan: Plan) -> Plan:
    """Ratios such as 0.333333 and 0, shares 0 and 1 and a third, weights with decimals."""
    rules = []
    for rule in plan.rules:
        if isinstance(rule, Ratio):
            rule = replace(rule, at_most=_pick(rng, ["0", "0.333333", "0.142857", "2.1", "0.1"]))
        elif isinstance(rule, Share):
            rule = replace(rule, fraction=_pick(rng, ["0", "1", "0.333333", "0.1", "0.7"]))
        elif isinstance(rule, Presence):
            weights = {n: _pick(rng, ["0.1", "0.7", "1.3", "0", "0.000001", "1000"]) for n in rule.weights}
            rule = replace(rule, weights=weights, bound=_pick(rng, ["0", "0.3", "2.1", "7", "1000"]))
        rules.append(rule)
    return replace(plan, rules=tuple(rules))


def nothing_to_do(rng: np.random.Generator, plan: Plan) -> Plan:
    """Amounts of 0, in some phases or all."""
    works = tuple(
        replace(w, amounts=tuple(Decimal(0) if _some(rng) else a for a in w.amounts)) for w in plan.works
    )
    return replace(plan, works=works)


def free_of_charge(rng: np.random.Generator, plan: Plan) -> Plan:
    """Some cost nothing at all."""
    nothing = Decimal(0)

    def change(c: Category) -> Category:
        if _some(rng):
            return c
        return replace(c, pay=nothing, join_cost=nothing, leave_cost=nothing, overtime_rate=nothing)

    return _each(plan, change)


def tight(rng: np.random.Generator, plan: Plan) -> Plan:
    """Each amount is exactly what a whole number of people of one category deliver."""

    def amount(w: Work, t: int) -> Decimal:
        able = [c for c in plan.categories if c.output.get(w.name)]
        if not able:
            return w.amounts[t]
        c = able[int(rng.integers(len(able)))]
        each = plan.phases[t].periods * c.hours * (1 - c.absence) * c.output[w.name] * c.lot
        return each * int(rng.integers(0, 8))

    works = tuple(
        replace(w, amounts=tuple(amount(w, t) for t in range(len(plan.phases)))) for w in plan.works
    )
    return replace(plan, works=works)


def odd_periods(rng: np.random.Generator, plan: Plan) -> Plan:
    """Phases of a tenth of a period, or of a thousand."""
    lengths = ["0.1", "0.333", "1", "52", "1000"]
    return replace(plan, phases=tuple(replace(p, periods=_pick(rng, lengths)) for p in plan.phases))


def odd_minimums(rng: np.random.Generator, plan: Plan) -> Plan:
    """At-least and least-if-any that are no whole lots."""

    def change(c: Category) -> Category:
        least = _pick(rng, ["0", "0.5", "1.7", "2.01"])
        return replace(c, at_least=least, least_if_any=_pick(rng, ["0", "2.5", "3.99"]), at_most=None)

    return _each(plan, change)


BENDS: tuple[Bend, ...] = (
    ill_scaled_pay,
    ill_scaled_work,
    more_people,
    odd_hours,
    odd_lots,
    clones,
    near_clones,
    supervision_cycle,
    odd_rules,
    nothing_to_do,
    free_of_charge,
    tight,
    odd_periods,
    odd_minimums,
)
