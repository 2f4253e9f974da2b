"""Attendance: how often enough of the crew are there, and what a crew that nearly always is costs.

The model, in the words of the plan: on a working day every person is present independently of all others,
away with the category's day absence (where none is given: its absence). A day has its share of the phase's
work. Those present work their paid hours, and overtime up to the category's limit; supervision is given by
those present to those present; presence rules, and the ratio and share rules marked so, are asked of those
present. Bought-in units are those of the crew's cheapest plan, spread evenly over the days, and so is the
settling-in of joiners over the days they attend. A lot of several people is that many people, each present
or away on their own; a lot smaller than one is one person who counts as that much.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace
from itertools import islice
from time import monotonic

from solver import heads
from solver.answer import Attendance, CrewChance, Policy, SafeCrew
from solver.chances import SAME, Chances
from solver.dayrisk import DayRisk
from solver.inquiry import Heard, unheard
from solver.plan import Budget, Plan
from solver.program import Program
from solver.safecrew import Safe, SafeSearch
from solver.search import Found, Limits, Lots
from solver.solve import Case

SECONDS = 30.0
CURVE = (0.5, 0.6, 0.7, 0.8, 0.85, 0.9, 0.95, 0.98, 0.99)
NEAR_PERCENT = 2
MOST_NEAR = 5
NEAR = Limits(nodes=4_000, seconds=1.0)


def attend(
    plan: Plan, chance: float, *, seconds: float | None = None, heard: Heard = unheard
) -> Attendance | None:
    """Answer for the wanted chance (0 < chance < 1) of a covered day; None if no crew is known at all.

    `seconds` (None: 30) limits the searches for safer crews. Raises EngineFailure if an engine breaks.
    """
    case = Case(plan)
    exact = case.proved.best
    if exact is None:
        return None
    return _Attending(case, exact, SECONDS if seconds is None else seconds, heard).answer(chance)


class _Attending:
    """One question about one plan."""

    def __init__(self, case: Case, exact: Found, seconds: float, heard: Heard) -> None:
        self.case = case
        self.exact = exact
        self.chances = Chances(case.program)
        self.chances.settle(exact.lots)
        self._safe = SafeSearch(case.program, self.chances, exact)
        self._until = monotonic() + seconds
        self._seconds = seconds
        self._heard = heard

    def answer(self, chance: float) -> Attendance:
        risk = DayRisk(self.chances)
        self._tell("How often the exact crew is enough", 0.0)
        phases = tuple(risk.of(t, self.exact.lots) for t in range(len(self.case.plan.phases)))
        self._tell("The cheapest crew for the wanted chance", 0.1)
        wanted = self._safe.cheapest(chance, self._seconds * 0.5)
        why, beyond = self._missing(wanted)
        safe = self._shown(wanted)
        compared = tuple(self._compared(safe))
        curve = tuple(self._curve(wanted))
        simulated = any(phase.drawn for phase in phases)
        return Attendance(chance, phases, safe, why, beyond, compared, curve, simulated)

    def _tell(self, says: str, done: float) -> None:
        self._heard("progress", {"says": says, "done": done})

    @property
    def _left(self) -> float:
        return max(self._until - monotonic(), 0.0)

    # ---- safer crews -------------------------------------------------------------------------

    def _shown(self, safe: Safe) -> SafeCrew | None:
        if safe.best is None:
            return None
        return _safe_crew(self.case.program, self.chances, safe, safe.best, self.exact.objective)

    def _missing(self, wanted: Safe) -> tuple[str, SafeCrew | None]:
        """Why there is no safe crew, and what one would cost without the budget."""
        if wanted.best is not None:
            return "", None
        share = f"{100 * wanted.wanted:g} %"
        if not wanted.proved:
            return f"No crew for {share} of days was found in the time given; more time may find one.", None
        beyond = self._beyond_budget(wanted.wanted)
        if beyond is None:
            return f"No workable crew covers {share} of days in every phase.", None
        return f"No workable crew covers {share} of days within the budget.", beyond

    def _beyond_budget(self, chance: float) -> SafeCrew | None:
        plan = self.case.plan
        rules = tuple(rule for rule in plan.rules if not isinstance(rule, Budget))
        if len(rules) == len(plan.rules):
            return None
        program = Program(replace(plan, rules=rules))
        chances = Chances(program)
        chances.settle(self.exact.lots)
        safe = SafeSearch(program, chances, self.exact).cheapest(chance, self._left / 2)
        if safe.best is None:
            return None
        return _safe_crew(program, chances, safe, safe.best, self.exact.objective)

    def _curve(self, wanted: Safe) -> Iterator[SafeCrew]:
        """The cheapest crews for rising chances, beginning with the exact crew itself."""
        chance = self.chances.least(self.exact.lots)
        cost = self.exact.objective
        now = self._shown(Safe(chance, self.exact, cost, True))
        known: list[Found] = [] if wanted.best is None else [wanted.best]
        while now is not None:
            yield now
            higher = [c for c in (*CURVE, wanted.wanted) if c > now.covered + SAME]
            if not higher or not self._left:
                return
            self._tell("What rising chances cost", 0.2 + 0.8 * now.covered)
            chance = min(higher)
            safe = wanted if chance == wanted.wanted else self._safe.cheapest(chance, self._left / 2, known)
            now = self._shown(safe)

    # ---- crews side by side ------------------------------------------------------------------

    def _compared(self, safe: SafeCrew | None) -> Iterator[CrewChance]:
        shown = {self.exact.lots}
        yield self._judged(Policy.EXACT.value, self.exact.lots)
        for name, lots in self._roundings():
            shown.add(lots)
            yield self._judged(name, lots)
        for rank, lots in enumerate(self._near(), start=2):
            if lots not in shown:
                yield self._judged(f"near-best, no. {rank}", lots)
        if safe is not None:
            found = _whole(heads.lots_of(self.case.program, safe.crew))
            if found is not None:
                yield self._judged(f"safe to {100 * safe.wanted:g} %", found)

    def _roundings(self) -> Iterator[tuple[str, Lots]]:
        case = self.case
        if case.relaxed is not None:
            crew = case.patched().crew
            patched = None if crew is None else _whole(heads.lots_of(case.program, crew))
            if patched is not None:
                yield Policy.PATCHED.value, patched
            yield Policy.UP.value, case.rounding(Policy.UP)
        own = _whole(heads.lots_of(case.program, case.plan.own)) if case.plan.own else None
        if own is not None:
            yield Policy.OWN.value, own

    def _near(self) -> list[Lots]:
        """The next best crews."""
        cutoff = self.exact.objective * (1 + NEAR_PERCENT / 100) + 1e-6
        crews = self.case.search.in_order(NEAR, cutoff=cutoff)
        return list(islice((f.lots for f in crews if f.lots != self.exact.lots), MOST_NEAR))

    def _judged(self, name: str, lots: Lots) -> CrewChance:
        cost = self.case.search.evaluate(lots)
        values = tuple(chance.value for chance in self.chances.of(lots))
        crew = heads.crew_of(self.case.program, lots)
        return CrewChance(name, crew, cost is not None, cost, min(values), values)


def _whole(lots: Sequence[object]) -> Lots | None:
    """Lots as whole numbers; None for an own crew with part of a lot: nobody can be partly present."""
    whole = tuple(int(n) for n in lots)  # type: ignore[call-overload]
    return whole if all(a == b for a, b in zip(whole, lots, strict=True)) else None


def _safe_crew(program: Program, chances: Chances, safe: Safe, best: Found, exact_cost: float) -> SafeCrew:
    values = tuple(chance.value for chance in chances.of(best.lots))
    return SafeCrew(
        safe.wanted,
        heads.crew_of(program, best.lots),
        best.objective,
        max(best.objective - exact_cost, 0.0),
        min(values),
        values,
        safe.proved,
        safe.bound,
    )
