"""What binds: the lines with least room, and what one loosening would save where that is known."""

from __future__ import annotations

from desktop.page.chosen import Chosen
from desktop.page.speech import Speech
from desktop.page.text import name, sentence
from solver.answer import LineKind, LineMargin, LineRoom, Room
from solver.phrases import listed
from solver.plan import Plan

_NO_ROOM = 5e-4  # below what is printed of any margin
_MOST = 6
_PHASES_NAMED = 3


def binding_lines(speech: Speech, chosen: Chosen, room: Room | None) -> tuple[str, ...]:
    """Lines without room, most expensive first where that is known; else the tightest one."""
    kept = [m for m in chosen.lines() if m.margin >= 0]
    savings = {(r.line, r.phase): r.saving or 0.0 for r in room.lines} if room else {}
    tight = [m for m in kept if m.margin < _NO_ROOM]
    tight.sort(key=lambda m: -savings.get((m.line, m.phase), 0.0))
    if tight:
        told = [
            _tight_says(speech, line, [m.phase for m in tight if m.line == line]) for line in _names(tight)
        ]
        return tuple(told[:_MOST]) + _more(len(told) - _MOST)
    works = [(m, share) for m in kept if (share := _share(speech.plan, m)) is not None]
    closest = sorted(works, key=lambda pair: pair[1])[:2]
    leads = ("No line is without room. Closest is ", "Next is ")
    return tuple(lead + _room_says(speech, m) for lead, (m, _) in zip(leads, closest, strict=False))


def _more(count: int) -> tuple[str, ...]:
    return (f"and {count} more",) if count > 0 else ()


def _where(speech: Speech, margin: LineMargin) -> str:
    if margin.phase is None or len(speech.plan.phases) == 1:
        return name(margin.line, 40)
    return f"{name(margin.line, 40)} in {name(margin.phase, 24)}"


def _names(margins: list[LineMargin]) -> list[str]:
    """The lines, each once, in order."""
    return list(dict.fromkeys(m.line for m in margins))


def _tight_says(speech: Speech, line: str, phases: list[str | None]) -> str:
    """One sentence per line, however many phases it is tight in."""
    every = speech.plan.phases
    named = [name(p.name, 24) for p in every if p.name in phases]
    if len(every) == 1 or not named:
        return f"{name(line, 40)}: no room left"
    where = "every phase" if len(named) == len(every) else listed(named)
    if len(named) > _PHASES_NAMED and len(named) < len(every):
        where = f"{len(named)} of {len(every)} phases"
    return f"{name(line, 40)}: no room left in {where}"


def _room_says(speech: Speech, margin: LineMargin) -> str:
    return f"{_where(speech, margin)}: room for {speech.quantity(margin.margin, margin.unit)} more"


def _share(plan: Plan, margin: LineMargin) -> float | None:
    """Room on a work line as a share of its amount."""
    if margin.kind is not LineKind.WORK:
        return None
    work = next((w for w in plan.works if w.name == margin.line), None)
    at = next((t for t, p in enumerate(plan.phases) if p.name == margin.phase), 0)
    amount = float(work.amounts[at]) if work is not None else 0.0
    return margin.margin / amount if amount > 0 else None


def best_loosening(room: Room | None) -> str:
    """The one loosening that saves most, in the solver's sentence; empty where none is known to help."""
    if room is None:
        return ""
    helping = [line for line in room.lines if line.loosen is not None and (line.saving or 0) > 0]
    if not helping:
        return ""
    best: LineRoom = max(helping, key=lambda line: line.saving or 0.0)
    return sentence(best.says)
