"""Answers as plain text for people at a terminal."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from decimal import Decimal

from solver.answer import Answer, Break, Conflict, Crew, CrewReport, State
from solver.caution import CAUTION
from solver.plan import Plan


def number(value: float, digits: int = 2) -> str:
    """A number with the digits that matter; zero is a dash."""
    text = f"{value:,.{digits}f}"
    text = text.rstrip("0").rstrip(".") if "." in text else text
    return "-" if text in ("0", "-0") else text


def figure(value: float | Decimal) -> str:
    """A number in a sentence: every digit it has, thousands set apart, zero as 0."""
    text = format(Decimal(repr(value)) if isinstance(value, float) else value, ",f")
    return text.rstrip("0").rstrip(".") if "." in text else text


def table(rows: Iterable[Sequence[str]]) -> str:
    """Columns set apart by two spaces, the first left, the others right."""
    grid = [list(row) for row in rows]
    widths = [max(len(row[i]) for row in grid) for i in range(len(grid[0]))] if grid else []
    return "\n".join(_table_row(row, widths) for row in grid)


def _table_row(row: Sequence[str], widths: Sequence[int]) -> str:
    first, *others = (cell.rjust(width) for cell, width in zip(row, widths, strict=True))
    return "  ".join([first.strip().ljust(widths[0]), *others]).rstrip()


def crew_words(crew: Crew) -> str:
    """3 Lead hand, 7 Contract hand; per phase 2/3/1."""
    words = []
    for name, counts in crew.items():
        if any(counts):
            words.append(f"{'/'.join(number(n) for n in counts)} {name}")
    return ", ".join(words) or "nobody"


def solve(plan: Plan, answer: Answer) -> str:
    """The headline, the crews side by side, and what each breaks."""
    parts = [_headline(plan, answer)]
    if answer.conflict is not None:
        parts.append(conflict_words(answer.conflict))
    if answer.fractional is not None:
        parts.append(_crews(plan, answer))
        parts += [_breaks(report) for report in answer.crews if report.breaks]
    parts.append(CAUTION)
    return "\n\n".join(parts)


def _headline(plan: Plan, answer: Answer) -> str:
    if answer.state is State.IMPOSSIBLE:
        return "No workable crew exists."
    if answer.exact is None:
        return "No crew found in the time given; more time may find one."
    words = f"{crew_words(answer.exact.crew)}: {number(answer.exact.cost)} {plan.currency}"
    if answer.floor is not None and answer.whole_people_cost is not None:
        gap = answer.whole_people_cost
        words += (
            f"\nFloor {number(answer.floor)}, whole-people cost {number(gap.absolute)} "
            f"({number(gap.percent)} %)"
        )
    if answer.state is State.PROVED:
        return f"{words}\nProved cheapest ({answer.proof})."
    above = answer.exact.cost - (answer.bound or 0.0)
    return f"{words}\nBest found, at most {number(above)} {plan.currency} above the cheapest possible."


def conflict_words(conflict: Conflict) -> str:
    """What cannot hold together, each member with its repair."""
    lines = [f"  {c.says} - {c.repair}" for c in conflict.lines]
    return "\n".join(["These cannot hold together:", *lines])


def _crews(plan: Plan, answer: Answer) -> str:
    assert answer.fractional is not None
    shown = [r for r in answer.crews if r.crew is not None]
    rows = [["", "fractional", *(r.policy.value for r in shown)]]
    for name, counts in answer.fractional.items():
        cells = ["/".join(number(n) for n in r.crew[name]) for r in shown if r.crew is not None]
        rows.append([name, "/".join(number(n) for n in counts), *cells])
    costs = [number(r.cost) if r.cost is not None else "broken" for r in shown]
    rows.append([f"Cost, {plan.currency}", number(answer.floor or 0.0), *costs])
    missing = [f"No {r.policy.value} crew. {r.why_none}" for r in answer.crews if r.crew is None]
    return "\n".join([table(rows), *missing])


def _breaks(report: CrewReport) -> str:
    return "\n".join([f"{report.policy.value} breaks", *(f"  {_break(b)}" for b in report.breaks)])


def _break(one: Break) -> str:
    where = f" in {one.phase}" if one.phase else ""
    worst = sorted((m, name) for name, m in one.moves.items() if m < 0)[:3]
    through = ", ".join(f"{name} {number(move)}" for move, name in worst)
    return f"{', '.join(one.lines)}{where}: {number(one.short)} {one.unit} short" + (
        f" (through {through})" if through else ""
    )
