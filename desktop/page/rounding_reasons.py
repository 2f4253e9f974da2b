"""Why not simply round: for each policy its strongest broken line in a sentence, or what it costs more."""

from __future__ import annotations

from desktop.page.recommendation import Labelled
from desktop.page.speech import Speech, count_of
from desktop.page.text import name, sentence
from solver.answer import Answer, Break, CrewReport, LineKind, Policy, State
from solver.phrases import listed
from solver.plan import Plan

LABELS = {  # the order in which they are told: the last ones go first where there is no room
    Policy.NEAREST: "Rounded to nearest",
    Policy.UP: "Rounded up",
    Policy.PATCHED: "Patched",
    Policy.DOWN: "Rounded down",
    Policy.LARGEST_REMAINDER: "Largest remainder",
    Policy.BEST_CORNER: "Best corner",
}
_NOTES = {
    Policy.BEST_CORNER: "the cheapest workable choice of down or up per category",
    Policy.PATCHED: "rounded to nearest, then the cheapest people added",
}


def rounding_reasons(speech: Speech, answer: Answer) -> tuple[Labelled, ...]:
    """One sentence per policy, the most usual first; policies that give the same crew share one."""
    groups: list[list[CrewReport]] = []
    for policy in LABELS:
        report = answer.report(policy)
        if report is None:
            continue
        twin = next((g for g in groups if report.crew is not None and g[0].crew == report.crew), None)
        if twin is None:
            groups.append([report])
        else:
            twin.append(report)
    return tuple(_reason(speech, answer, group) for group in groups)


def _reason(speech: Speech, answer: Answer, group: list[CrewReport]) -> Labelled:
    names = [LABELS[report.policy] for report in group]
    label = listed([names[0], *(n[0].lower() + n[1:] for n in names[1:])])
    notes = [_NOTES[r.policy] for r in group if r.policy in _NOTES]
    note = notes[0] if len(group) == 1 and notes and group[0].crew is not None else ""
    return Labelled(label, _says(speech, answer, group[0]), note)


def _says(speech: Speech, answer: Answer, report: CrewReport) -> str:
    if report.crew is None:
        return sentence(report.why_none) or "There is no such crew."
    if report.workable and report.cost is not None:
        return _dearer(speech, answer, report, report.cost)
    broken = sum(1 for m in report.lines if m.margin < 0)
    strongest = max(report.breaks, key=lambda b: _weight(b, answer), default=None)
    count = f"Breaks {count_of(broken, 'line')}. " if broken > 1 else ""
    return count + (_break_says(speech, answer, report, strongest) if strongest else "It cannot do the job.")


def _dearer(speech: Speech, answer: Answer, report: CrewReport, cost: float) -> str:
    if answer.exact is None:
        return f"Keeps every line at {speech.money(cost)}."
    known = "the exact crew" if answer.state is State.PROVED else "the best crew found"
    if report.crew == answer.exact.crew:
        return f"Leads to {known} here."
    extra = cost - answer.exact.cost
    if abs(extra) < 0.005:
        return f"Keeps every line at the same cost as {known}, with other people."
    share = f" ({speech.percent(100 * abs(extra) / answer.exact.cost)})" if answer.exact.cost else ""
    word = "more" if extra > 0 else "less"
    return f"Keeps every line, but costs {speech.money(abs(extra))}{share} {word} than {known}."


def _weight(miss: Break, answer: Answer) -> float:
    """How strong a break is: what is short, as a share of what the fractional crew brings to the line."""
    if answer.fractional is None:
        return miss.short
    size = sum(abs(a) * max(answer.fractional.get(c, (0.0,))) for c, a in miss.net_worth.items())
    return miss.short / size if size > 0 else miss.short


def _break_says(speech: Speech, answer: Answer, report: CrewReport, miss: Break) -> str:
    lines = listed([name(line, 40) for line in miss.lines[:2]])
    if len(miss.lines) > 2:
        lines = f"{lines} and {count_of(len(miss.lines) - 2, 'more line')}"
    where = f" in {name(miss.phase, 32)}" if miss.phase and len(speech.plan.phases) > 1 else ""
    return f"{lines}{where} {_missed_by(speech, miss)}{_because(speech, answer, report, miss)}."


def _missed_by(speech: Speech, miss: Break) -> str:
    many = len(miss.lines) > 1
    amount = speech.quantity(miss.short, miss.unit)
    if miss.kind in (LineKind.WORK, LineKind.SUPERVISION):
        return f"{'fall' if many else 'falls'} short by {amount}"
    if miss.kind is LineKind.BUDGET:
        return f"is exceeded by {amount}"
    return f"{'are' if many else 'is'} missed by {amount}"


def _because(speech: Speech, answer: Answer, report: CrewReport, miss: Break) -> str:
    """The category whose rounding costs the line most."""
    if answer.fractional is None or report.crew is None or not miss.moves:
        return ""
    who = min(miss.moves, key=lambda c: miss.moves[c])
    at = _phase_at(speech.plan, miss.phase)
    if miss.moves[who] >= 0 or at is None:
        return ""
    was, now = answer.fractional[who][at], report.crew[who][at]
    if speech.people(was) == speech.people(now):
        return ""
    return f", most of it because {name(who, 32)} went from {speech.people(was)} to {speech.people(now)}"


def _phase_at(plan: Plan, phase: str | None) -> int | None:
    if phase is None:
        return 0 if len(plan.phases) == 1 else None
    return next((t for t, p in enumerate(plan.phases) if p.name == phase), None)
