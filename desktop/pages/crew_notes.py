"""What stands beside the tally: the lines without room, and how the exact crew is run."""

from __future__ import annotations

from desktop import crew_words as say
from desktop import figures
from solver.answer import Answer, LineMargin, LineRoom, Policy, Room
from solver.plan import Plan

_NO_ROOM = 1e-6
_MOST = 8


def binding_lines(plan: Plan, answer: Answer, room: Room | None) -> list[str]:
    """Lines of the exact crew with no room, most expensive first where `room` is known; "" entries never."""
    report = answer.report(Policy.EXACT)
    if report is None or report.crew is None:
        return []
    tight = [m for m in report.lines if abs(m.margin) <= _NO_ROOM]
    if not tight:
        return [say.NOTHING_BINDS]
    found = {(r.line, r.phase): r for r in room.lines} if room else {}
    order = sorted(tight, key=lambda m: -(_saving(found.get((m.line, m.phase)))))
    told = [_binding(plan, m, found.get((m.line, m.phase))) for m in order[:_MOST]]
    rest = len(order) - _MOST
    return [*told, say.and_more_lines(rest)] if rest > 0 else told


def _saving(room: LineRoom | None) -> float:
    return room.saving or 0.0 if room else 0.0


def _binding(plan: Plan, line: LineMargin, room: LineRoom | None) -> str:
    name = say.in_phase(line.line, line.phase) if line.phase and len(plan.phases) > 1 else line.line
    if room is None or room.loosen is None or not room.saving:
        return name
    amount = figures.quantity(room.loosen, room.unit)
    return say.no_room_saving(name, amount, figures.money(room.saving, plan.currency))


def run_lines(plan: Plan, answer: Answer) -> list[str]:
    """Overtime and bought-in work of the exact crew, in words; empty where there is none."""
    exact = answer.exact
    if exact is None:
        return []
    units = {work.name: work.unit for work in plan.works}
    overtime = [(say.overtime_of(name), "h", hours) for name, hours in exact.overtime.items()]
    bought = [(say.bought_in_of(name), units.get(name, ""), n) for name, n in exact.bought_in.items()]
    return [text for what in overtime + bought for text in _per_phase(plan, *what)]


def _per_phase(plan: Plan, title: str, unit: str, amounts: tuple[float, ...]) -> list[str]:
    """One line per phase with an amount; the phase is named where there are several."""
    several = len(plan.phases) > 1
    made = []
    for phase, amount in zip(plan.phases, amounts, strict=True):
        if amount > _NO_ROOM:
            text = figures.quantity(amount, unit)
            made.append(say.titled(say.in_phase(title, phase.name) if several else title, text))
    return made
