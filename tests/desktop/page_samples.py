"""Random plans with made-up answers for the printed page: every feature, odd names, huge and tiny numbers.

The answers are consistent in what the page prints (heads, moves, money), not optimal.
"""

from __future__ import annotations

import random
from decimal import Decimal

from solver.answer import (
    Answer,
    Break,
    Conflict,
    Conflicting,
    CrewReport,
    ExactCrew,
    LineKind,
    LineMargin,
    NearBest,
    NearCrew,
    Policy,
    Proof,
    State,
    WholePeopleCost,
)
from solver.plan import Category, Phase, Plan, Presence, Sense, Supervision, Work

# no digits in names: every number on the page is then one of ours
NAMES = (
    "Lead hand",
    "Contract hand",
    "Learner",
    "عامل ماهر في الغابة",
    "مشرف",
    "מנהל עבודה ראשי",
    "领班",
    "高级林业机械操作员和安全监督员",
    "Rigger <b>bold</b> & 'quoted' \"twice\"",
    "Donaudampfschifffahrtselektrizitätenhauptbetriebswerkbauunterbeamter",
    "Keeper of the reserve collections, ceramics and glass, with responsibility for packing and moving",
    "Żółć ąęść",
    "Ω-τεχνίτης",
    "Старший рабочий",
    "A",
    "Supercalifragilistic " * 9,
)
ZERO = Decimal(0)
LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZ"


def tag(number: int) -> str:
    """A short ending that tells names apart without a digit."""
    return LETTERS[number // 26] + LETTERS[number % 26]


class Sample:
    """One random plan and its answer; the same seed gives the same sample."""

    def __init__(self, seed: int, shape: tuple[int, int] | None = None) -> None:
        """`shape`: categories and phases, drawn where it is not given."""
        self.seed = seed
        self._shape = shape
        self._draw = random.Random(seed)
        self.plan = self._plan()
        self.answer = self._answer()
        self.near = self._near()

    # the plan

    def _pick(self, *values: str) -> Decimal:
        return Decimal(self._draw.choice(values))

    def _plan(self) -> Plan:
        draw = self._draw
        count = draw.choice((1, 2, 3, 4, 5, 6, 8, 12, 20, 30, 40))
        spans = draw.choice((1, 1, 1, 2, 3, 4, 6, 12))
        count, spans = self._shape or (count, spans)
        works = tuple(self._work(k, spans) for k in range(draw.choice((1, 2, 5, 9))))
        names = [f"{draw.choice(NAMES)} {tag(j)}" for j in range(count)]
        return Plan(
            phases=tuple(
                Phase(f"{draw.choice(NAMES[:9])} {tag(t)}", self._pick("1", "2.5", "8", "52"))
                for t in range(spans)
            ),
            categories=tuple(self._category(n, names, works) for n in names),
            works=works,
            rules=(Presence("First aid", {names[0]: Decimal(1)}, Sense.AT_LEAST, Decimal(1)),),
            title=draw.choice(("", "Replanting", "搬迁计划", "A title that goes on and on " * 12)),
            site=draw.choice(("", "North slope", "الموقع الشمالي")),
            prepared_by=draw.choice(("", "M. Okafor", "Anneliese von und zu Sonnenfeld-Hohenberg " * 3)),
            currency=draw.choice(("EUR", "£", "CHF", "ريال")),
            period=draw.choice(("week", "month", "Woche")),
        )

    def _work(self, number: int, spans: int) -> Work:
        amounts = tuple(self._pick("0", "0.004", "1", "52000", "987654321.5") for _ in range(spans))
        price = self._draw.choice((None, Decimal("0.01"), Decimal("19.5")))
        return Work(f"{self._draw.choice(NAMES[:9])} work {tag(number)}", "m³", amounts, price)

    def _category(self, name: str, names: list[str], works: tuple[Work, ...]) -> Category:
        draw = self._draw
        return Category(
            name,
            pay=self._pick("0", "0.01", "980", "1234.56", "9999999.99"),
            hours=self._pick("38", "37.5", "0.25"),
            on_books=self._pick("0", "0", "1", "7", "1200"),
            lot=self._pick("1", "1", "1", "0.5", "4"),
            join_cost=self._pick("0", "300", "0.01"),
            leave_cost=self._pick("0", "900"),
            open_cost=self._pick("0", "0", "5000"),
            absence=self._pick("0", "0.05", "0.125"),
            overtime_hours=self._pick("0", "4"),
            overtime_rate=self._pick("0", "31.4159"),
            supervision=Supervision(self._pick("0", "3.5"), (draw.choice(names),)),
            output={work.name: self._pick("0.0004", "3", "21.5", "1000000") for work in works[:2]},
        )

    # the answer

    def _crew(self, largest: int) -> dict[str, tuple[float, ...]]:
        draw = self._draw
        return {
            c.name: tuple(float(c.lot) * draw.randint(0, largest) for _ in self.plan.phases)
            for c in self.plan.categories
        }

    def _answer(self) -> Answer:
        draw = self._draw
        if draw.random() < 0.08:
            return self._impossible()
        exact = self._crew(draw.choice((1, 4, 4, 12, 300, 1_000_000)))
        fractional = {n: tuple(max(0.0, x - draw.random()) for x in crew) for n, crew in exact.items()}
        overtime = {c.name: self._floats(0, 0, 12.5) for c in self.plan.categories if c.overtime_hours}
        bought = {w.name: self._floats(0, 0, 40) for w in self.plan.works if w.buy_in_price is not None}
        proved = draw.random() < 0.7
        bare = ExactCrew(exact, 0.0, *moves(self.plan, exact), overtime, bought)
        cost = float(total_cost(self.plan, bare))
        floor = cost * draw.choice((1.0, 0.98, 0.4))
        done = ExactCrew(exact, cost, bare.joiners, bare.leavers, overtime, bought)
        return Answer(
            state=State.PROVED if proved else State.BEST_FOUND,
            proof=draw.choice(list(Proof)) if proved else None,
            floor=floor,
            fractional=fractional,
            exact=done,
            bound=cost if proved else floor,
            whole_people_cost=WholePeopleCost(cost - floor, 100 * (cost - floor) / cost if cost else 0.0),
            crews=tuple(self._report(policy, exact, cost) for policy in Policy),
            conflict=None,
            seconds=0.1,
        )

    def _floats(self, *values: float) -> tuple[float, ...]:
        return tuple(float(self._draw.choice(values)) for _ in self.plan.phases)

    def _report(self, policy: Policy, exact: dict[str, tuple[float, ...]], cost: float) -> CrewReport:
        draw = self._draw
        kind = "workable" if policy is Policy.EXACT else draw.choice(("workable", "broken", "broken", "none"))
        if kind == "none" and policy is not Policy.OWN:
            why = "No such crew: the line forbids it."
            return CrewReport(policy, None, False, None, None, 0, 0, 0, (), (), {}, {}, why)
        crew = exact if policy is Policy.EXACT else self._crew(3)
        workable = kind == "workable"
        lines = tuple(self._margin(work, workable) for work in self.plan.works)
        return CrewReport(
            policy=policy,
            crew=crew,
            workable=workable,
            cost=(cost if policy is Policy.EXACT else cost * 1.031) if workable else None,
            paper_cost=cost,
            joiners=moves(self.plan, crew)[0],
            leavers=moves(self.plan, crew)[1],
            people=max((sum(n[t] for n in crew.values()) for t in range(len(self.plan.phases))), default=0),
            lines=lines,
            breaks=() if workable else (self._break(crew),),
            overtime={},
            bought_in={},
            why_none="",
        )

    def _margin(self, work: Work, workable: bool) -> LineMargin:
        phase = self._draw.choice(self.plan.phases).name
        margin = self._draw.choice((0.0, 12.5, 4100.0)) if workable else -31.5
        return LineMargin(work.name, LineKind.WORK, phase, margin, work.unit)

    def _break(self, crew: dict[str, tuple[float, ...]]) -> Break:
        draw = self._draw
        lines = tuple(w.name for w in self.plan.works[: draw.choice((1, 2, 4))])
        phase = draw.choice(self.plan.phases).name
        moved = {name: draw.choice((-20.25, 3.5)) for name in crew}
        worth = dict.fromkeys(crew, 36.1)
        kind = draw.choice(list(LineKind))
        return Break(lines, kind, phase, "m³", draw.choice((0.004, 31.5, 8e8)), worth, 99, 0.0, moved, {}, {})

    def _impossible(self) -> Answer:
        phase = self.plan.phases[0].name
        lines = tuple(
            Conflicting(w.name, LineKind.WORK, phase, "m³", 41, f"{w.name}: all of it", "41 m³ less")
            for w in self.plan.works
        )
        conflict = Conflict(lines, self._draw.random() < 0.5)
        crews = tuple(
            CrewReport(p, None, False, None, None, 0, 0, 0, (), (), {}, {}, "Nobody can.") for p in Policy
        )
        return Answer(State.IMPOSSIBLE, Proof.OWN_SEARCH, None, None, None, None, None, crews, conflict, 0.1)

    # what is worked out beside it

    def _near(self) -> NearBest | None:
        """Two other crews, or none."""
        exact = self.answer.exact
        if exact is None or self._draw.random() < 0.5:
            return None
        crews = [NearCrew(exact.crew, exact.cost, 0.0, exact.joiners, exact.leavers, 5.0, "")]
        for at in range(3):
            other = self._crew(4)
            joiners, leavers = moves(self.plan, other)
            over = at * 17.25
            crews.append(NearCrew(other, exact.cost + over, over, joiners, leavers, 9.0, "First aid"))
        return NearBest(tuple(crews), True)


def moves(plan: Plan, crew: dict[str, tuple[float, ...]]) -> tuple[float, float]:
    """Joiners and leavers over all phases."""
    joined = left = 0.0
    for category in plan.categories:
        before = float(category.on_books)
        for now in crew[category.name]:
            joined += max(0.0, now - before)
            left += max(0.0, before - now)
            before = now
    return joined, left


def total_cost(plan: Plan, found: ExactCrew) -> Decimal:
    """The cost of a crew by the formula of the plan, term by term."""
    total = ZERO
    for c in plan.categories:
        before = c.on_books
        for phase, count in zip(plan.phases, found.crew[c.name], strict=True):
            now = Decimal(repr(count))
            total += phase.periods * c.pay * now
            total += c.join_cost * max(ZERO, now - before) + c.leave_cost * max(ZERO, before - now)
            before = now
        total += c.open_cost if any(found.crew[c.name]) else ZERO
        total += c.overtime_rate * sum(Decimal(repr(v)) for v in found.overtime.get(c.name, ()))
    for w in plan.works:
        total += (w.buy_in_price or ZERO) * sum(Decimal(repr(v)) for v in found.bought_in.get(w.name, ()))
    return total
