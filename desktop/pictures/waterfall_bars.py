"""How the miss of a line is built up, bar by bar: pure data for the waterfall and its sentence."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from desktop import crew_words as say
from desktop import figures
from solver.answer import Break, Crew, Policy

_NOTHING = 1e-6  # moves below this many units are rounding noise of the fractional crew
_IN_SENTENCE = 3


class BarKind(StrEnum):
    """What a bar of the waterfall stands for."""

    START = "fractional margin"
    MOVE = "move"
    GIVEN_UP = "given up"
    END = "rounded margin"


@dataclass(frozen=True)
class Bar:
    """One bar from `start` to `end` in the line's unit. `was` and `now` are head counts of a MOVE."""

    kind: BarKind
    name: str
    start: float
    end: float
    was: float | None = None
    now: float | None = None

    @property
    def size(self) -> float:
        """What the bar adds (> 0) or takes (< 0)."""
        return self.end - self.start


@dataclass(frozen=True)
class Miss:
    """A broken line of one crew: the break and the head counts it came from, in phase `at` (None: all).

    `phase` is named in the sentence where the plan has several.
    """

    policy: Policy
    broken: Break
    crew: Crew
    fractional: Crew
    at: int | None
    phase: str = ""


def waterfall_bars(miss: Miss) -> tuple[Bar, ...]:
    """Fractional margin, one bar per category that moved, one per line given up, and the margin left.

    The bars chain: each starts where the one before ends, and the last runs from 0 to what is left.
    """
    broken = miss.broken
    level = float(broken.fractional_margin)
    made = [Bar(BarKind.START, say.FRACTIONAL_MARGIN, 0.0, level)]
    for name, move in broken.moves.items():
        if abs(move) > _NOTHING:
            made.append(Bar(BarKind.MOVE, name, level, level + move, *_counts(miss, name)))
            level += move
    for line, freed in broken.given_up.items():
        if abs(freed) > _NOTHING:
            made.append(Bar(BarKind.GIVEN_UP, line, level, level + freed))
            level += freed
    return (*made, Bar(BarKind.END, ", ".join(broken.lines), 0.0, -float(broken.short)))


def _counts(miss: Miss, name: str) -> tuple[float | None, float | None]:
    """Head counts of a category before and after, where there is one phase to read them from."""
    phases = range(len(miss.crew[name])) if miss.at is None else [miss.at]
    if len(phases) != 1:
        return None, None
    return miss.fractional[name][phases[0]], miss.crew[name][phases[0]]


def waterfall_sentence(miss: Miss) -> str:
    """The bars in one plain sentence or two."""
    broken = miss.broken
    bars = waterfall_bars(miss)
    moves = sorted((b for b in bars if b.kind is BarKind.MOVE), key=lambda b: -abs(b.size))
    most = len(moves) if len(moves) <= _IN_SENTENCE + 1 else _IN_SENTENCE
    told = [_move_words(bar, miss) for bar in moves[:most]]
    rest = sum(b.size for b in moves[most:])
    if abs(rest) > _NOTHING:
        told.append(say.others_move(*_amount(rest, broken.unit)))
    given = [
        say.given_up(_quantity(bar.size, broken.unit), bar.name)
        for bar in bars
        if bar.kind is BarKind.GIVEN_UP
    ]
    short = say.counted(_quantity(broken.short, broken.unit), broken.unit)
    end = say.left_short(say.listed(broken.lines), short, miss.phase)
    verb = "" if miss.policy is Policy.OWN else say.ROUNDING
    return say.miss_sentence(verb, say.listed(told), [_start_words(broken), *given], end)


def _move_words(bar: Bar, miss: Miss) -> str:
    effect = _amount(bar.size, miss.broken.unit)
    if bar.was is None or bar.now is None:
        return say.move_over_phases(bar.name, *effect)
    was, now = figures.people(bar.was), figures.people(bar.now)
    if miss.policy is Policy.OWN:
        return say.move_instead(bar.name, was, now, *effect)
    if bar.now == 0:
        return say.move_to_none(bar.name, was, *effect)
    words = say.move_down if bar.now < bar.was else say.move_up
    return words(bar.name, was, now, *effect)


def _amount(size: float, unit: str) -> tuple[bool, str]:
    """Whether it gives, and how much."""
    return size > 0, _quantity(abs(size), unit)


def _quantity(amount: float, unit: str) -> str:
    """`amount` in `unit`, hours in short: how they are counted is told once, at the end."""
    return figures.quantity(amount, say.short_unit(unit))


def _start_words(broken: Break) -> str:
    start = float(broken.fractional_margin)
    if abs(start) <= max(_NOTHING, 1e-3 * broken.short):
        return ""
    return say.fractional_room(_quantity(start, broken.unit))
