"""The chance that a crew covers a day, phase by phase: exact sums over attendance, or common draws."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import inf, sqrt

import numpy as np

from solver.coverage import Bools, Coverage
from solver.day import Day, Days
from solver.matrix import Floats
from solver.program import Program
from solver.turnout import Turnout, Turnouts

# all patterns of attendance are looked at up to this many, beyond that days are drawn
MOST_PATTERNS = 60_000
DRAWS = 20_000
# boxes of crews are judged by patterns that leave this much of each category's chance out
ROUGH = 1e-4
ROUGH_PATTERNS = 8_000
# chances closer than this are equal: rarest patterns left out, rounding of sums
SAME = 1e-10
# a box of crews with more heads than this is not worth a bound
MOST_HEADS = 400


@dataclass(frozen=True)
class Chance:
    """A chance with its standard error (0: exact)."""

    value: float
    error: float


class Chances:
    """Chances of crews of one program. In a phase whose exact crew has too many patterns every crew is
    judged by the same drawn days."""

    def __init__(self, program: Program, *, most_patterns: int = MOST_PATTERNS, draws: int = DRAWS) -> None:
        self.program = program
        self.days = Days(program)
        self.coverage = Coverage(program)
        self._all = Turnouts(most_patterns, draws)
        self._rough = Turnouts(ROUGH_PATTERNS, draws, ROUGH)
        self._draws = Turnouts(0, draws)
        self._drawn: set[int] = set()
        self._known: dict[tuple[int, bytes, bytes, bytes], Chance] = {}
        self._boxes: dict[tuple[int, bytes, bytes, bytes], float] = {}

    def settle(self, lots: Sequence[int]) -> None:
        """Decide, by this crew, in which phases days are drawn instead of enumerated."""
        for t in range(len(self.program.phases)):
            if self.turnout(self.days.of(t, lots)).drawn:
                self._drawn.add(t)

    def turnout(self, day: Day) -> Turnout:
        """Who may turn up on the day."""
        kind = self._draws if day.t in self._drawn else self._all
        return kind.of(day, self.coverage.relevant(day))

    def of_day(self, day: Day, needed: float = -inf) -> Chance:
        """The chance that the day is covered; where it is below `needed`, a value below that will do."""
        key = (day.t, day.heads.tobytes(), day.hours.tobytes(), day.demand.tobytes())
        known = self._known.get(key)
        if known is None:
            turnout = self.turnout(day)
            maybe = self.coverage.maybe(day, turnout.patterns)
            most = float(turnout.weights @ maybe)
            if most < needed - SAME:
                return Chance(most, 0.0)
            maybe[maybe] = self.coverage.hours_kept(day, turnout.patterns[maybe])
            known = self._known[key] = chance_of(turnout, maybe)
        return known

    def of(self, lots: Sequence[int]) -> list[Chance]:
        """The chance of a covered day in each phase."""
        return [self.of_day(self.days.of(t, lots)) for t in range(len(self.program.phases))]

    def least(self, lots: Sequence[int], needed: float = -inf) -> float:
        """The chance in the worst phase; where it is below `needed`, a value below that will do."""
        worst = 1.0
        for t in range(len(self.program.phases)):
            worst = min(worst, self.of_day(self.days.of(t, lots), needed).value)
            if worst < needed - SAME:
                break
        return worst

    def most_in(self, t: int, lower: Floats, upper: Floats, spent: float) -> float:
        """No crew between `lower` and `upper` (lots) that leaves at most `spent` money for bought-in work has
        a greater chance in phase t than this."""
        mine = [self.program.head(j, t) for j in range(len(self.program.categories))]
        if (upper[mine] * self.days.per_lot).max(initial=0.0) > MOST_HEADS:
            return 1.0
        day = self.days.easiest(t, [int(v) for v in upper], spent)
        key = (t, lower[mine].tobytes(), upper[mine].tobytes(), day.demand.tobytes())
        if key not in self._boxes:
            self._boxes[key] = self._bound(day, lower[mine] < upper[mine])
        return self._boxes[key]

    def _bound(self, day: Day, open_: Bools) -> float:
        drawn = day.t in self._drawn
        kind = self._draws if drawn else self._rough
        turnout = kind.of(day, self.coverage.relevant(day))
        if turnout.drawn and not drawn:
            return 1.0  # an estimate is no bound
        maybe = self.coverage.maybe(day, turnout.patterns, open_)
        return float(turnout.weights @ maybe) + max(1.0 - float(turnout.weights.sum()), 0.0)


def chance_of(turnout: Turnout, covered: Bools) -> Chance:
    """The weight of the covered patterns, with its standard error where days were drawn."""
    value = float(turnout.weights @ covered)
    if not turnout.drawn:
        return Chance(min(value, 1.0), 0.0)
    # two covered and two uncovered days more (Agresti & Coull, The American Statistician 52 (1998)
    # 119-126): no error of nothing where every drawn day was covered
    fair = (value * turnout.drawn + 2) / (turnout.drawn + 4)
    return Chance(value, sqrt(fair * (1 - fair) / (turnout.drawn + 4)))


def mean_error(weights: Floats, values: Floats, drawn: int, most: float) -> float:
    """Standard error of a mean over drawn days; 0 where all patterns were looked at.

    As for chances, two days more are counted, on which the value is `most`: what was never drawn may still
    happen.
    """
    if not drawn:
        return 0.0
    mean = (drawn * float(weights @ values) + 2 * most) / (drawn + 2)
    squares = (drawn * float(weights @ np.square(values)) + 2 * most**2) / (drawn + 2)
    return sqrt(max(squares - mean**2, 0.0) / (drawn + 2))
