"""Room to move in sentences a manager understands: what to ask for, which crew then does, what it saves."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from fractions import Fraction
from math import ceil, floor, log10

from solver.answer import Crew, LineKind
from solver.lines import Line
from solver.loosened import is_settling
from solver.loosening import Loosening
from solver.phrases import priced
from solver.plan import Plan, Presence, Ratio, Rule, Sense, Share
from solver.report import crew_words, figure, number

NO_CHEAPER = "No cheaper crew"
MOST_CHANGES = 4
DIGITS = 4  # significant ones of an amount that must not be rounded the wrong way


def says(
    plan: Plan, line: Line, room: float, loosened: Loosening, crew: Crew | None, exact: Crew | None
) -> str:
    """What the least loosening of the line brings, or that none brings anything.

    `room` is the exact crew's margin, `crew` the cheaper crew, `exact` the exact one.
    """
    if is_settling(line):
        return f"Joiners need their settling-in hours; {_spare(line, room)}."
    if loosened.by is None or loosened.saving is None or crew is None or exact is None:
        if not loosened.settled:
            return f"Not worked out in the time given; {_spare(line, room)}."
        return f"{NO_CHEAPER}, however far this gives way; {_spare(line, room)}."
    told = _told(plan, line, loosened, crew, exact)
    return told if loosened.settled else f"{told} Less may do: this was not settled in the time given."


def _spare(line: Line, room: float) -> str:
    if room <= 0:
        return "nothing to spare"
    return f"{counted(downwards(room), line.unit)} to spare"


def _told(plan: Plan, line: Line, loosened: Loosening, crew: Crew, exact: Crew) -> str:
    assert loosened.by is not None
    assert loosened.saving is not None
    by, saving, grown = loosened.by, loosened.saving, loosened.grown
    if grown is not None and grown.saving >= 2 * saving:  # a first cent is no news
        by, saving = grown.by, grown.saving
    asked = _asked(plan, line, by, crew)
    if crew == exact:
        return f"{asked} would save {_money(plan, saving)} with the same people; less of it saves less."
    told = f"{asked} would let you do with {_crew(plan, crew, exact)} and save {_money(plan, saving)}"
    if by == loosened.by:
        return f"{told}."
    return f"{told}; the first saving comes at {_onset(plan, line, loosened.by)}."


def _onset(plan: Plan, line: Line, by: Fraction) -> str:
    if line.kind is not LineKind.SUPERVISION:
        return counted(upwards(float(by)), line.unit)
    return f"{counted(_each_period(plan, line, by), line.unit)} a {plan.period}"


def _money(plan: Plan, amount: float) -> str:
    return priced(number(amount), plan.currency)


def _crew(plan: Plan, crew: Crew, exact: Crew) -> str:
    """The crew; over several phases what changes, since a whole crew would be a table."""
    if len(plan.phases) == 1:
        return crew_words(crew)
    changes = []
    for name, counts in crew.items():
        for phase, now, was in zip(plan.phases, counts, exact[name], strict=True):
            if now != was:
                more = "more" if now > was else "fewer"
                changes.append(f"{number(abs(now - was))} {more} {name} in {phase.name}")
    shown = changes[:MOST_CHANGES]
    left = len(changes) - len(shown)
    return ", ".join(shown) + (f" and {left} more changes" if left else "")


# ---- what to ask for, by kind of line --------------------------------------------------------------


def _asked(plan: Plan, line: Line, by: Fraction, crew: Crew) -> str:
    tell = _ASKED[line.kind]
    return f"{tell(plan, line, by, crew)}{_where(plan, line)}"


def _work(plan: Plan, line: Line, by: Fraction, crew: Crew) -> str:
    return f"{counted(upwards(float(by)), line.unit)} less of {line.name}"


def _supervision(plan: Plan, line: Line, by: Fraction, crew: Crew) -> str:
    each = figure(_each_period(plan, line, by))
    group = line.name.removeprefix("Supervision by ")
    return f"{each} more hours of supervision a {plan.period}, given by others than {group},"


def _each_period(plan: Plan, line: Line, by: Fraction) -> float:
    """Hours of a phase as hours a period."""
    return upwards(float(by / Fraction(plan.phases[_phase(plan, line)].periods)))


def _presence(plan: Plan, line: Line, by: Fraction, crew: Crew) -> str:
    rule = _rule(plan, line)
    assert isinstance(rule, Presence)
    t, bound = _phase(plan, line), Fraction(rule.bound)
    total = sum(float(weight) * crew[name][t] for name, weight in rule.weights.items())
    moved = {Sense.AT_LEAST: float(bound - by), Sense.AT_MOST: float(bound + by)}
    return f"{line.name}: {figure(moved.get(rule.sense, total))} instead of {figure(float(bound))}"


def _ratio(plan: Plan, line: Line, by: Fraction, crew: Crew) -> str:
    rule = _rule(plan, line)
    assert isinstance(rule, Ratio)
    of, per = (_people(plan, line, crew, names) for names in (rule.of, rule.per))
    if not per:
        return f"{line.name}: {counted(float(by), line.unit)} more than the rule gives"
    words = f"{' + '.join(rule.of)} per {' + '.join(rule.per)}"
    return f"{line.name}: {figure(upwards(of / per))} {words} instead of {figure(float(rule.at_most))}"


def _share(plan: Plan, line: Line, by: Fraction, crew: Crew) -> str:
    rule = _rule(plan, line)
    assert isinstance(rule, Share)
    of, within = (_people(plan, line, crew, names) for names in (rule.of, rule.within))
    if not within or rule.sense is Sense.EXACTLY:
        return f"{line.name}: {counted(float(by), line.unit)} off the rule"
    towards = downwards if rule.sense is Sense.AT_LEAST else upwards
    share = figure(towards(100 * of / within))
    return f"{line.name}: {share} % instead of {figure(float(100 * rule.fraction))} %"


def _bound(plan: Plan, line: Line, by: Fraction, crew: Crew) -> str:
    """`Lead hand: at least` and its like, whose number is in whole lots."""
    name, _, asks = line.name.rpartition(": ")
    category = plan.category(name)
    lot = Fraction(category.lot)
    if asks == "at most":
        was = floor(Fraction(category.at_most or 0) / lot) * lot
        return f"At most {figure(float(was + by))} {name} instead of {figure(float(was))}"
    typed = category.at_least if asks == "at least" else category.least_if_any
    was = ceil(Fraction(typed) / lot) * lot
    words = "At least" if asks == "at least" else "None or at least"
    return f"{words} {figure(float(was - by))} {name} instead of {figure(float(was))}"


_ASKED: Mapping[LineKind, Callable[[Plan, Line, Fraction, Crew], str]] = {
    LineKind.WORK: _work,
    LineKind.SUPERVISION: _supervision,
    LineKind.PRESENCE: _presence,
    LineKind.RATIO: _ratio,
    LineKind.SHARE: _share,
    LineKind.BOUND: _bound,
}


# ---- numbers and names -----------------------------------------------------------------------------


def counted(value: float, unit: str) -> str:
    """`1 person`, `2.5 hours`, `3 ha`, `7` where there is no unit."""
    one = {"people": "person", "hours": "hour"}
    return f"{figure(value)} {one.get(unit, unit) if value == 1 else unit}".rstrip()


def upwards(value: float) -> float:
    """`value` with no more digits than people read, never less than it."""
    return _rounded(value, ceil)


def downwards(value: float) -> float:
    """`value` with no more digits than people read, never more than it."""
    return _rounded(value, floor)


def _rounded(value: float, whole: Callable[[float], int]) -> float:
    """To a hundredth, or finer where the value is small; what floating point added does not count."""
    if value <= 0:
        return value
    digits = max(2, DIGITS - 1 - floor(log10(value)))
    step = 10.0**digits
    nearest = round(value * step)
    close = abs(value * step - nearest) <= 1e-6 * max(1.0, abs(nearest))
    return (nearest if close else whole(value * step)) / step


def _where(plan: Plan, line: Line) -> str:
    return f" in {line.phase}" if line.phase is not None and len(plan.phases) > 1 else ""


def _phase(plan: Plan, line: Line) -> int:
    return next(t for t, phase in enumerate(plan.phases) if phase.name == line.phase)


def _people(plan: Plan, line: Line, crew: Crew, names: tuple[str, ...]) -> float:
    t = _phase(plan, line)
    return float(sum((crew[name][t] for name in names), start=0.0))


def _rule(plan: Plan, line: Line) -> Rule:
    return next(rule for rule in plan.rules if rule.name == line.name)
