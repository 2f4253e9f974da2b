"""The exact crew and what proves it: our own search, else CBC and HiGHS agreeing to the cent."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import ceil, floor, inf
from time import monotonic

import numpy as np

from solver.answer import Proof, State
from solver.engine import EngineName, WholeResult, WholeStatus, whole
from solver.program import Program
from solver.rounding import snapped
from solver.search import Found, Lots, Search, tie_width
from solver.tiebreak import cheapest_preferred, preferred

OWN_SECONDS = 2.0
CENT = 0.01


@dataclass(frozen=True)
class Proved:
    """The best whole crew known. State IMPOSSIBLE: there is none. `bound`: none costs less."""

    state: State
    proof: Proof | None
    best: Found | None
    bound: float


class Prover:
    """Finds and proves the cheapest whole crew of a program; keeps its search for later questions."""

    def __init__(self, program: Program, search: Search) -> None:
        self.program = program
        self.search = search

    def prove(self, fractional: Sequence[float], seconds: float | None) -> Proved:
        """`fractional` is the relaxation's crew in lots; `seconds` limits everything, None is 60."""
        until = monotonic() + (60.0 if seconds is None else seconds)
        start = self._rounded_up(fractional)
        caps = self._caps(start)
        program, search = self._tightened(caps)
        own = self._own_search(program, search, start, until)
        if own.state is not State.BEST_FOUND:
            return own
        return self._two_engines(program, search, own, until)

    def _rounded_up(self, fractional: Sequence[float]) -> Found | None:
        lots = tuple(ceil(snapped(v)) for v in fractional)
        objective = self.search.evaluate(lots)
        return None if objective is None else Found(lots, objective)

    def _caps(self, start: Found | None) -> list[int]:
        """No crew as cheap as `start` has more of anyone than its money pays for."""
        program = self.program
        caps = [int(v) for v in program.matrix.upper[: program.head_count]]
        if start is None:
            return caps
        budget = start.objective + tie_width(start.objective)
        for i in range(program.head_count):
            pay = program.matrix.cost[i]
            if pay > 0:
                caps[i] = max(min(caps[i], floor(budget / pay)), int(program.matrix.lower[i]))
        return caps

    def _tightened(self, caps: list[int]) -> tuple[Program, Search]:
        """Switches need close limits on head counts; without switches the warm program will do."""
        if not self.program.switches:
            return self.program, self.search
        program = Program(self.program.plan, caps)
        return program, Search(program, grain=self.search.grain)

    # ---- own search --------------------------------------------------------------------------

    def _own_search(self, program: Program, search: Search, start: Found | None, until: float) -> Proved:
        outcome = cheapest_preferred(search, min(OWN_SECONDS, until - monotonic()), start=start)
        if not outcome.complete:
            return Proved(State.BEST_FOUND, None, outcome.best, outcome.bound)
        if outcome.best is None:
            return self._impossible(program)
        return Proved(State.PROVED, Proof.OWN_SEARCH, outcome.best, outcome.best.objective)

    def _impossible(self, program: Program) -> Proved:
        """The search found nothing; a second engine must agree before people are told so."""
        answer = whole(program.matrix, EngineName.HIGHS, seconds=10.0)
        if answer.status is WholeStatus.INFEASIBLE:
            return Proved(State.IMPOSSIBLE, Proof.TWO_ENGINES, None, inf)
        return Proved(State.BEST_FOUND, None, self._checked(answer), -inf)

    # ---- two engines -------------------------------------------------------------------------

    def _two_engines(self, program: Program, search: Search, own: Proved, until: float) -> Proved:
        best = own.best
        first = self._ask(program, EngineName.HIGHS, None, until)
        best = _cheaper(best, self._checked(first))
        start = None if best is None else self._start(search, best)
        second = self._ask(program, EngineName.CBC, start, until)
        best = _cheaper(best, self._checked(second))
        infeasible = {first.status, second.status} == {WholeStatus.INFEASIBLE}
        if best is None and infeasible:
            return Proved(State.IMPOSSIBLE, Proof.TWO_ENGINES, None, inf)
        bound = max(first.bound, second.bound, own.bound)
        if best is not None and _agree(best, first, second):
            best = preferred(program, best, min(2.0, max(until - monotonic(), 0.5)))
            return Proved(State.PROVED, Proof.TWO_ENGINES, best, best.objective)
        return Proved(State.BEST_FOUND, None, best, min(bound, best.objective) if best else bound)

    def _ask(
        self, program: Program, engine: EngineName, start: Sequence[float] | None, until: float
    ) -> WholeResult:
        return whole(program.matrix, engine, seconds=max((until - monotonic()) / 2, 0.5), start=start)

    def _checked(self, answer: WholeResult) -> Found | None:
        """An engine's crew at whole lots, every line checked again; None if it does not stand."""
        if answer.x is None:
            return None
        lots: Lots = tuple(int(v) for v in np.rint(answer.x[: self.program.head_count]))
        objective = self.search.evaluate(lots)
        return None if objective is None else Found(lots, objective)

    def _start(self, search: Search, best: Found) -> list[float] | None:
        if search.evaluate(best.lots) is None:
            return None
        return [float(v) for v in search.relaxation.x]


def _cheaper(a: Found | None, b: Found | None) -> Found | None:
    if a is None or b is None:
        return a or b
    return b if b.objective < a.objective - tie_width(a.objective) else a


def _agree(best: Found, first: WholeResult, second: WholeResult) -> bool:
    """Both engines proved, and both mean the cost of the crew that stood the check, to the cent."""
    proved = first.status is WholeStatus.OPTIMAL and second.status is WholeStatus.OPTIMAL
    near = all(
        abs(r.objective - best.objective) < CENT / 2 + 1e-9 * abs(best.objective) for r in (first, second)
    )
    return proved and near
