"""How the days of one phase may go wrong for a crew: which lines are short, by how much, through whom."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from solver.answer import Critical, LineKind, PhaseAttendance
from solver.chances import Chances, chance_of, mean_error
from solver.coverage import Bools
from solver.day import Day
from solver.lines import Line
from solver.matrix import Floats, Ints
from solver.shortfall import SHORT
from solver.turnout import Turnout

# days rarer than this are not asked how short they are
UNHEARD_OF = 1e-14
# sets of absences looked at for one number of people away
MOST_SETS = 4_000


@dataclass(frozen=True)
class _Shorts:
    """Of every pattern: hours at best output short per work, supervision hours short per group."""

    works: Floats
    groups: Floats


class DayRisk:
    """Everything about the days of crews of one program."""

    def __init__(self, chances: Chances) -> None:
        self.chances = chances
        self.program = chances.program
        self._coverage = chances.coverage

    def of(self, t: int, lots: Sequence[int]) -> PhaseAttendance:
        """Phase t with the crew `lots`."""
        day = self.chances.days.of(t, lots)
        turnout = _merged(self.chances.turnout(day))
        hours = self._coverage.hours_kept(day, turnout.patterns)
        covered = self._coverage.rules_kept(day, turnout.patterns) & hours
        chance = chance_of(turnout, covered)
        shorts = self._shorts(day, turnout, hours)
        survives, miss = self._survived(day)
        return PhaseAttendance(
            phase=self.program.phases[t].name,
            covered=chance.value,
            error=chance.error,
            by_line=self._by_line(day, turnout, shorts),
            expected_short=self._expected(t, turnout, shorts),
            expected_error=self._expected_errors(day, turnout, shorts),
            survives=survives,
            first_miss=miss,
            critical=self._critical(day),
            patterns=len(turnout.weights),
            drawn=turnout.drawn,
        )

    # ---- lines -------------------------------------------------------------------------------

    def _shorts(self, day: Day, turnout: Turnout, kept: Bools) -> _Shorts:
        works = np.zeros((len(kept), len(self.program.plan.works)))
        groups = np.zeros((len(kept), len(self.program.groups)))
        for i in np.nonzero(~kept & (turnout.weights > UNHEARD_OF))[0].tolist():
            works[i], groups[i] = self._coverage.shorts(day, turnout.patterns[i])
        return _Shorts(works, groups)

    def _hours_lines(self, t: int, shorts: _Shorts) -> Iterator[tuple[Line, Floats]]:
        """Lines of work and supervision with how short each pattern leaves them, in their units."""
        for line, _, kind, index, at in self.program.hours_lines:
            if at == t:
                column = shorts.works if kind is LineKind.WORK else shorts.groups
                yield line, column[:, index] * line.scale

    def _by_line(self, day: Day, turnout: Turnout, shorts: _Shorts) -> dict[str, float]:
        kept = {
            line.name: float(turnout.weights @ (short <= SHORT * line.scale))
            for line, short in self._hours_lines(day.t, shorts)
        }
        for rule in day.rules:
            one = self._coverage.rule_kept(rule, day, turnout.patterns)
            kept[rule.line.name] = float(turnout.weights @ one)
        return {name: min(chance, 1.0) for name, chance in kept.items()}

    def _expected(self, t: int, turnout: Turnout, shorts: _Shorts) -> dict[str, float]:
        return {line.name: float(turnout.weights @ s) for line, s in self._hours_lines(t, shorts)}

    def _expected_errors(self, day: Day, turnout: Turnout, shorts: _Shorts) -> dict[str, float]:
        errors = {}
        for line, short in self._hours_lines(day.t, shorts):
            errors[line.name] = mean_error(turnout.weights, short, turnout.drawn, self._most(day, line))
        return errors

    def _most(self, day: Day, line: Line) -> float:
        """What the line asks for at most: all its work, or supervision of everybody."""
        for one, _, kind, index, at in self.program.hours_lines:
            if one == line and at == day.t:
                if kind is LineKind.WORK:
                    return float(day.demand[index]) * line.scale
                return float(self._coverage.drawn[index] @ (day.heads * day.size)) * line.scale
        return 0.0

    # ---- who is missed -----------------------------------------------------------------------

    def _critical(self, day: Day) -> tuple[Critical, ...]:
        """Per category, how many days are not covered when one given head of it is away; worst first."""
        found = [
            Critical(category.name, 1.0 - self.chances.of_day(day.without_one(j)).value)
            for j, category in enumerate(self.program.categories)
            if day.heads[j] > 0
        ]
        return tuple(sorted(found, key=lambda one: -one.stops))

    def _survived(self, day: Day) -> tuple[int | None, dict[str, float]]:
        """How many absences, whoever it is, never stop the day, and a likeliest set that does; None where
        even everybody together cannot cover it."""
        relevant = self._coverage.relevant(day)
        for away in range(int(day.heads[relevant].sum()) + 1):
            missing = _sets(day.heads[relevant], away)
            patterns = np.tile(day.heads, (len(missing), 1))
            patterns[:, relevant] -= missing
            covered = self._coverage.covered(day, patterns)
            if not covered.all():
                worst = self._likeliest(day, patterns[~covered])
                return (away - 1 if away else None), self._people(day.heads - worst, day)
            if len(missing) >= MOST_SETS:
                return away, {}
        return int(day.heads.sum()), {}

    def _likeliest(self, day: Day, patterns: Ints) -> Ints:
        with np.errstate(divide="ignore"):
            odds = np.log(day.away) - np.log1p(-day.away)
        absent = day.heads - patterns
        weights = np.where(absent > 0, absent * np.maximum(odds, -1e6), 0.0).sum(axis=1)
        likeliest: Ints = patterns[int(np.argmax(weights))]
        return likeliest

    def _people(self, heads: Ints, day: Day) -> dict[str, float]:
        names = [category.name for category in self.program.categories]
        return {name: float(n * s) for name, n, s in zip(names, heads, day.size, strict=True) if n}


def _merged(turnout: Turnout) -> Turnout:
    """Equal drawn days put together."""
    if not turnout.drawn:
        return turnout
    patterns, counts = np.unique(turnout.patterns, axis=0, return_counts=True)
    return Turnout(patterns, counts / turnout.drawn, turnout.drawn)


def _sets(heads: Ints, away: int) -> Ints:
    """Ways in which `away` heads can be missing, in lexicographic order, at most MOST_SETS."""
    found: list[list[int]] = []
    most = np.append(np.cumsum(heads[::-1])[::-1], 0)

    def choose(chosen: list[int], left: int) -> None:
        k = len(chosen)
        if k == len(heads):
            found.append(chosen)
            return
        for n in range(max(left - int(most[k + 1]), 0), min(left, int(heads[k])) + 1):
            if len(found) >= MOST_SETS:
                return
            choose([*chosen, n], left - n)

    choose([], away)
    return np.array(found, dtype=np.intp).reshape(len(found), len(heads))
