"""The answer of `room` as plain text."""

from __future__ import annotations

from solver.answer import LineRoom, PayRange, Room
from solver.caution import CAUTION
from solver.plan import Plan
from solver.report import figure, number, table
from solver.roomwords import NO_CHEAPER, upwards

HEADER = [
    "",
    "can tighten",
    "least loosening",
    "saving",
    "price for fractional people",
    "holds from",
    "to",
]


def room(plan: Plan, answer: Room) -> str:
    """The lines in a table, a sentence for each, and the ranges of pay."""
    rows = [HEADER, *(_row(plan, line) for line in answer.lines)]
    parts = [table(rows) if answer.lines else "The plan has no line."]
    parts += ["\n".join(_sentences(plan, answer)), _pay(plan, answer), CAUTION]
    return "\n\n".join(part for part in parts if part)


def _sentences(plan: Plan, answer: Room) -> list[str]:
    """A sentence for each line worth talking about, and one for all the others."""
    told = [_says(plan, line) for line in answer.lines if not line.says.startswith(NO_CHEAPER)]
    if len(told) < len(answer.lines):
        told.append("Where none helps, no cheaper crew is workable however far the line gives way.")
    return told


def _says(plan: Plan, line: LineRoom) -> str:
    """The line's sentence; one about a loosening names the line itself."""
    return line.says if line.loosen is not None else f"{_name(plan, line)}: {line.says}"


def _name(plan: Plan, line: LineRoom) -> str:
    return f"{line.line} in {line.phase}" if line.phase and len(plan.phases) > 1 else line.line


def _row(plan: Plan, line: LineRoom) -> list[str]:
    name = f"{_name(plan, line)}, {line.unit}" if line.unit else _name(plan, line)
    loosen = "none helps" if line.loosen is None else figure(upwards(line.loosen))
    saving = "" if line.saving is None else number(line.saving)
    ends = (_end(line.dual_from), _end(line.dual_to))
    return [name, number(line.tighten), loosen, saving, number(line.dual_price), *ends]


def _end(value: float | None) -> str:
    return "no limit" if value is None else number(value)


def _pay(plan: Plan, answer: Room) -> str:
    missing = [c.name for c in plan.categories if c.name not in {one.category for one in answer.pay}]
    left = f"Pay not worked out in the time given: {', '.join(missing)}." if missing else ""
    if not answer.pay:
        return left
    title = f"The exact crew stays cheapest while pay, {plan.currency} a {plan.period}, is"
    rows = table([["", "from", "to"], *(_pay_row(one) for one in answer.pay)])
    return "\n".join(part for part in (title, rows, left) if part)


def _pay_row(one: PayRange) -> list[str]:
    return [one.category, _end(one.from_), _end(one.to)]
