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
from functools import cached_property
from itertools import islice
from time import monotonic

from solver import heads
from solver.answer import Attendance, CrewChance, Policy, SafeCrew
from solver.chances import SAME, Chances
from solver.dayrisk import DayRisk
from solver.exactcrew import exact_crew
from solver.found import Found, Limits, Lots
from solver.inquiry import Heard, unheard
from solver.plan import Budget, Plan
from solver.program import Program
from solver.safecrew import Safe, SafeSearch
from solver.solve import Case

SECONDS = 30.0
CURVE = (0.5, 0.6, 0.7, 0.8, 0.85, 0.9, 0.95, 0.98, 0.99)
NEAR_PERCENT = 2
MOST_NEAR = 5
NEAR = Limits(nodes=4_000, seconds=1.0)


def attend(plan: Plan, chance: float, *, seconds: float | None = None, heard: Heard = unheard) -> Attendance:
    """Answer for the wanted chance (0 < chance < 1) of a covered day.

    `seconds` (None: 30) limits the searches for safer crews. Raises NoExactCrew, and EngineFailure if an
    engine breaks. A best crew that is not proved will do to start from.
    """
    case = Case(plan)
    exact = case.proved.best or exact_crew(case)[0]
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
        safe = None if wanted.best is None else self._shown(self._safe, wanted, wanted.best)
        compared = tuple(self._compared(wanted.best))
        curve = tuple(self._curve(wanted))
        simulated = any(phase.drawn for phase in phases)
        return Attendance(chance, phases, safe, why, beyond, compared, curve, simulated)

    def _tell(self, says: str, done: float) -> None:
        self._heard("progress", {"says": says, "done": done})

    @property
    def _left(self) -> float:
        return max(self._until - monotonic(), 0.0)

    # ---- safer crews -------------------------------------------------------------------------

    def _shown(self, search: SafeSearch, safe: Safe, best: Found) -> SafeCrew:
        values = tuple(chance.value for chance in search.chances.of(best.lots))
        extra = max(best.objective - self.exact.objective, 0.0)
        crew = heads.crew_of(search.program, best.lots)
        covered = min(values)
        return SafeCrew(safe.wanted, crew, best.objective, extra, covered, values, safe.proved, safe.bound)

    def _missing(self, wanted: Safe) -> tuple[str, SafeCrew | None]:
        """Why there is no safe crew, and what one would cost without the budget."""
        if wanted.best is not None:
            return "", None
        share = f"{100 * wanted.wanted:g} %"
        if not wanted.proved:
            return f"No crew for {share} of days was found in the time given; more time may find one.", None
        search = self._unbudgeted
        safe = search.cheapest(wanted.wanted, self._left / 2) if search is not self._safe else wanted
        if safe.best is None:
            return f"No workable crew covers {share} of days in every phase.", None
        beyond = self._shown(search, safe, safe.best)
        return f"No workable crew covers {share} of days within the budget.", beyond

    def _curve(self, wanted: Safe) -> list[SafeCrew]:
        """The cheapest crews for rising chances, the budget left aside, beginning with the exact crew."""
        search = self._unbudgeted
        chance = search.chances.least(self.exact.lots)
        curve = [self._shown(search, Safe(chance, self.exact, self.exact.objective, True), self.exact)]
        known = [] if wanted.best is None else [wanted.best]
        while self._left:
            covered = curve[-1].covered
            higher = [c for c in (*CURVE, wanted.wanted) if c > covered + SAME]
            if not higher:
                break
            self._tell("What rising chances cost", 0.2 + 0.8 * covered)
            chance = min(higher)
            safe = wanted if chance == wanted.wanted and wanted.best is not None else None
            safe = safe or search.cheapest(chance, self._left / 2, known)
            if safe.best is None:
                break
            curve.append(self._shown(search, safe, safe.best))
        return curve

    @cached_property
    def _unbudgeted(self) -> SafeSearch:
        """The search of the plan without its budgets."""
        plan = self.case.plan
        rules = tuple(rule for rule in plan.rules if not isinstance(rule, Budget))
        if len(rules) == len(plan.rules):
            return self._safe
        program = Program(replace(plan, rules=rules))
        chances = Chances(program)
        chances.settle(self.exact.lots)
        return SafeSearch(program, chances, self.exact)

    # ---- crews side by side ------------------------------------------------------------------

    def _compared(self, safe: Found | None) -> Iterator[CrewChance]:
        shown = {self.exact.lots}
        yield self._judged(Policy.EXACT.value, self.exact.lots)
        for name, lots in self._roundings():
            shown.add(lots)
            yield self._judged(name, lots)
        for rank, lots in enumerate(self._near(), start=2):
            if lots not in shown:
                yield self._judged(f"near-best {rank}", lots)
        if safe is not None:
            yield self._judged("safe", safe.lots)

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
