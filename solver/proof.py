"""The exact crew and what proves it: our own search, else CBC and HiGHS, raced against each other."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from math import ceil, floor, inf
from time import monotonic

import numpy as np

from solver.answer import Proof, State
from solver.engine import EngineName, WholeStatus, whole
from solver.found import Found, Lots, tie_width
from solver.program import Program
from solver.race import Heat, Standing, engines
from solver.rounding import half_up, snapped
from solver.search import Search
from solver.tiebreak import cheapest_preferred, preferred
from solver.tightening import PhaseAlone, PhasesAlone, tightened
from solver.windows import Windows

SECONDS = 60.0
# plans of one phase are our own search's home; beyond it decides soon or leaves it to the engines
OWN_SECONDS = 0.75
OWN_SECONDS_IN_PHASES = 0.25
# which of equally cheap crews, once engines have proved their cost
CHOOSING_SECONDS = 2.0
CENT = 0.01
FEW_HEADS = 24  # our own search meets a crew sooner than one could be mended
# beyond this the rows of the phases alone take longer to find than they are worth (20x8x52: 3.3 s for 0.01 %)
MANY_HEADS = 400


@dataclass(frozen=True)
class Proved:
    """The best whole crew known. State IMPOSSIBLE: there is none. `bound`: none costs less."""

    state: State
    proof: Proof | None
    best: Found | None
    bound: float


@dataclass(frozen=True)
class Effort:
    """How long and how far to go: `tolerance` (a share of the cost) is the gap that is good enough;
    `start` a crew in lots to begin from; `heard` hears of every better crew or bound."""

    seconds: float = SECONDS
    tolerance: float = 0.0
    start: Lots | None = None
    heard: Callable[[Proved], None] | None = None


class Prover:
    """Finds and proves the cheapest whole crew of a program; keeps its search for later questions."""

    def __init__(self, program: Program, search: Search) -> None:
        self.program = program
        self.search = search

    def prove(self, fractional: Sequence[float], effort: Effort) -> Proved:
        """`fractional` is the relaxation's crew in lots."""
        until = monotonic() + effort.seconds
        start = self._first_crew(fractional, effort.start)
        if len(self.program.phases) == 1:
            program, search = self._tightened(self._caps(start))
            own = self._own_search(program, search, start, until)
            return own if _settled(own) else _Contest(self, program, search, own, effort, until).run()
        engines().warm()
        parts = PhasesAlone(self.program)
        if self.program.head_count > MANY_HEADS:
            return self._raced_at_once(start, self._first_crews(parts, fractional, start), effort, until)
        if self.program.head_count > FEW_HEADS:
            start = self._first_of_phases(parts, fractional, start, effort)
        alone = parts.cheapest()
        start = self._joined(alone, start)
        program, search = self._tightened(self._caps(start))
        search = Search(program, tightened(program, alone), grain=search.grain)
        own = self._own_search(program, search, start, until)
        return own if _settled(own) else _Contest(self, program, search, own, effort, until).run()

    def _raced_at_once(
        self, start: Found | None, first: Iterator[Found | None], effort: Effort, until: float
    ) -> Proved:
        """Neither our own search nor rows for the phases are of use in so little time: the engines begin,
        and meanwhile first crews are mended."""
        own = Proved(State.BEST_FOUND, None, start, -inf)
        program, search = self._tightened(self._caps(start))
        return _Contest(self, program, search, own, effort, until, first).run()

    def _joined(self, alone: Sequence[PhaseAlone], start: Found | None) -> Found | None:
        """The cheapest crews of the phases, one after the other, if they are workable and cheaper."""
        parts = [phase.lots for phase in alone if phase.lots is not None]
        if len(parts) < len(self.program.phases):
            return start
        lots = tuple(part[j] for j in range(len(self.program.categories)) for part in parts)
        objective = self.search.evaluate(lots)
        return start if objective is None else _cheaper(start, Found(lots, objective))

    def _first_crew(self, fractional: Sequence[float], given: Lots | None) -> Found | None:
        """The best of the crew to begin from and the fractional one rounded up, where workable."""
        up = tuple(ceil(snapped(v)) for v in fractional)
        found: Found | None = None
        for lots in (given, up):
            objective = None if lots is None else self.search.evaluate(lots)
            if lots is not None and objective is not None:
                found = _cheaper(found, Found(lots, objective))
        return found

    def _first_of_phases(
        self, parts: PhasesAlone, fractional: Sequence[float], start: Found | None, effort: Effort
    ) -> Found | None:
        """A crew for a start, told as soon as it is known."""
        for better in self._first_crews(parts, fractional, start):
            if better is not start and better is not None and effort.heard is not None:
                effort.heard(Proved(State.BEST_FOUND, None, better, self.search.root_bound()))
            start = better
        return start

    def _first_crews(
        self, parts: PhasesAlone, fractional: Sequence[float], start: Found | None
    ) -> Iterator[Found | None]:
        """Ever cheaper: nearest costs least after mending (20x8x52: 3.52 million, up 4.17), down now and then
        less (10x4x12)."""
        for rounding in (half_up, floor, ceil):
            if rounding is ceil and start is not None:
                return
            start = _cheaper(start, self._mended(parts, fractional, rounding))
            yield start

    def _mended(
        self, parts: PhasesAlone, fractional: Sequence[float], rounding: Callable[[float], int]
    ) -> Found | None:
        """The fractional crew rounded, each phase then mended on its own by additions."""
        lots = parts.mended([rounding(snapped(v)) for v in fractional])
        objective = None if lots is None else self.search.evaluate(lots)
        return None if lots is None or objective is None else Found(lots, objective)

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
        switched = {head for heads in self.program.switches.values() for head in heads}
        if all(caps[head] == self.program.matrix.upper[head] for head in switched):
            return self.program, self.search
        program = Program(self.program.plan, caps)
        return program, Search(program, grain=self.search.grain)

    # ---- own search --------------------------------------------------------------------------

    def _own_search(self, program: Program, search: Search, start: Found | None, until: float) -> Proved:
        most = OWN_SECONDS if len(program.phases) == 1 else OWN_SECONDS_IN_PHASES
        outcome = cheapest_preferred(search, max(min(most, until - monotonic()), 0.0), start=start)
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
        best = None if answer.x is None else self.checked(answer.x.tolist())
        return Proved(State.BEST_FOUND, None, best, -inf)

    def checked(self, x: Sequence[float]) -> Found | None:
        """An engine's crew at whole lots, every line checked again; None if it does not stand."""
        lots: Lots = tuple(int(v) for v in np.rint(x[: self.program.head_count]))
        objective = self.search.evaluate(lots)
        return None if objective is None else Found(lots, objective)


class _Contest:
    """One race of the engines over a program, and what it proves."""

    def __init__(
        self,
        prover: Prover,
        program: Program,
        search: Search,
        own: Proved,
        effort: Effort,
        until: float,
        first: Iterable[Found | None] = (),
    ) -> None:
        self._prover = prover
        self._program = program
        self._search = search
        self._first = iter(first)
        self._best = own.best
        self._floor = max(own.bound, search.root_bound())
        self._effort = effort
        self._until = until
        self._told: Proved | None = None
        self._windows = Windows(prover.program, prover.search)

    def run(self) -> Proved:
        """Race, and make of it what it proves."""
        standing = Standing(bound=self._floor)
        if self._best is not None:
            standing.objective = self._best.objective
            self._tell(standing)
        heat = Heat(
            self._search.matrix,
            self._start(),
            max(self._until - monotonic(), 0.1),
            self._good_enough,
            self._search.rounded,
            self._crew,
            self._tell,
            self._improve,
        )
        engines().run(heat, standing)
        return self._verdict(standing)

    def _start(self) -> list[float] | None:
        """Every column of the best crew so far, for engines that take a start."""
        if self._best is None or self._search.evaluate(self._best.lots) is None:
            return None
        return [float(v) for v in self._search.relaxation.x[: self._search.matrix.width]]

    def _crew(self, x: Sequence[float]) -> float | None:
        found = self._prover.checked(x)
        if found is not None:
            self._best = _cheaper(self._best, found)
        return None if found is None else found.objective

    def _improve(self, standing: Standing) -> bool:
        """Use the time between the engines' news; False when nothing is left to try."""
        found = next(self._first, None) or self._from_window()
        if found is None:
            return False
        better = _cheaper(self._best, found)
        if better is not None and better is not self._best:
            self._best = better
            standing.objective = min(standing.objective, better.objective)
            self._tell(standing)
        return True

    def _from_window(self) -> Found | None:
        """The crew after its next stretch of phases, None where no stretch is left to try."""
        return self._windows.step(self._best) if self._best is not None and self._windows.useful else None

    def _good_enough(self, standing: Standing) -> bool:
        allowed = self._effort.tolerance * abs(standing.objective)
        return standing.objective < inf and allowed > 0 and standing.objective - standing.bound <= allowed

    def _tell(self, standing: Standing) -> None:
        if self._effort.heard is None or self._best is None:
            return
        now = Proved(State.BEST_FOUND, None, self._best, min(standing.bound, self._best.objective))
        if now != self._told:
            self._told = now
            self._effort.heard(now)

    def _verdict(self, standing: Standing) -> Proved:
        best = self._best
        if best is None:
            if len(standing.infeasible) == len(EngineName):
                return Proved(State.IMPOSSIBLE, Proof.TWO_ENGINES, None, inf)
            return Proved(State.BEST_FOUND, None, None, standing.bound)
        agreeing = [cost for cost in standing.proofs.values() if _same_cost(cost, best.objective)]
        if not agreeing or len(agreeing) < len(standing.proofs):
            return Proved(State.BEST_FOUND, None, best, min(standing.bound, best.objective))
        proof = Proof.TWO_ENGINES if len(agreeing) == len(EngineName) else Proof.ONE_ENGINE
        left = max(self._until - monotonic(), 0.5)
        best = preferred(self._program, best, min(left, CHOOSING_SECONDS))
        return Proved(State.PROVED, proof, best, best.objective)


def _settled(proved: Proved) -> bool:
    return proved.state is not State.BEST_FOUND


def _same_cost(a: float, b: float) -> bool:
    """Equal to the cent."""
    return abs(a - b) < CENT / 2 + 1e-9 * abs(b)


def _cheaper(a: Found | None, b: Found | None) -> Found | None:
    if a is None or b is None:
        return a or b
    return b if b.objective < a.objective - tie_width(a.objective) else a
