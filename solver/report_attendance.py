"""The answer of `attend` as plain text."""

from __future__ import annotations

from collections.abc import Mapping

from solver.answer import Attendance, PhaseAttendance, SafeCrew
from solver.caution import CAUTION
from solver.phrases import listed
from solver.plan import Plan
from solver.report import crew_words, number, table

MODEL = (
    "Model: on a working day every person is present independently of the others; a day has its share of the "
    "phase's work; those present work their paid hours, and overtime where the plan allows it; they are "
    "supervised by those present; presence rules, and the rules marked by day, are asked of those present; "
    "bought-in units and the settling-in of joiners are spread evenly over the days."
)


def attend(plan: Plan, answer: Attendance) -> str:
    """Each phase's days, the crew for the wanted chance, crews side by side, and what chances cost."""
    parts = [_phase(plan, phase) for phase in answer.phases]
    parts += [_wanted(plan, answer), _compared(plan, answer), _curve(plan, answer), MODEL, CAUTION]
    return "\n\n".join(parts)


def share(chance: float) -> str:
    """A chance in per cent; never 100 % for less than always, nor 0 % for more than never."""
    percent = 100 * chance
    if 99.95 < percent < 100:
        return "over 99.9 %"
    if 0 < percent < 0.05:
        return "under 0.1 %"
    return f"{percent:.1f}".rstrip("0").rstrip(".") + " %"


def _phase(plan: Plan, phase: PhaseAttendance) -> str:
    error = f" (from {phase.drawn:,} drawn days, standard error {share(phase.error)})" if phase.drawn else ""
    told = [f"{phase.phase}: the exact crew covers {share(phase.covered)} of days{error}."]
    rows = [["Line", "kept on", f"short on average, per {plan.period}"]]
    units = {work.name: work.unit for work in plan.works}
    for line, chance in phase.by_line.items():
        short = phase.expected_short.get(line)
        words = "" if short is None else f"{number(short)} {units.get(line, 'hours')}".strip()
        rows.append([line, share(chance), words])
    told += [table(rows), _survives(phase)]
    told += [
        f"With one {one.category} away, {share(one.stops)} of days are not covered." for one in phase.critical
    ]
    return "\n".join(told)


def _survives(phase: PhaseAttendance) -> str:
    miss = f"; {_people(phase.first_miss)} away stops it" if phase.first_miss else ""
    if phase.survives is None:
        return "Even with everybody there a day is not covered."
    if phase.survives == 0:
        return f"A single absence can stop a day{miss}."
    return f"Whoever it is, {phase.survives} may be away and the day is covered{miss}."


def _people(people: Mapping[str, float]) -> str:
    return listed([f"{number(n)} {name}" for name, n in people.items()])


def _wanted(plan: Plan, answer: Attendance) -> str:
    if answer.wanted is not None:
        return f"For {share(answer.chance)} of days: {_safe(plan, answer.wanted)}"
    beyond = answer.beyond_budget
    return answer.why_none + (f" Without it: {_safe(plan, beyond)}" if beyond is not None else "")


def _safe(plan: Plan, safe: SafeCrew) -> str:
    proof = "proved cheapest" if safe.proved else f"not proved: none costs less than {number(safe.bound)}"
    return (
        f"{crew_words(safe.crew)}: {number(safe.cost)} {plan.currency}, {number(safe.extra)} more than the "
        f"exact crew; covers {share(safe.covered)} ({proof})."
    )


def _compared(plan: Plan, answer: Attendance) -> str:
    rows = [["Crew", "covers", f"Cost, {plan.currency}", "who"]]
    for one in answer.compared:
        cost = "not workable" if one.cost is None else number(one.cost)
        rows.append([one.name, share(one.covered), cost, crew_words(one.crew)])
    return table(rows)


def _curve(plan: Plan, answer: Attendance) -> str:
    rows = [["Cheapest for", "covers", f"Cost, {plan.currency}", "more", "who"]]
    for safe in answer.curve:
        cost = number(safe.cost) + ("" if safe.proved else " (not proved)")
        rows.append(
            [share(safe.wanted), share(safe.covered), cost, number(safe.extra), crew_words(safe.crew)]
        )
    return table(rows)
