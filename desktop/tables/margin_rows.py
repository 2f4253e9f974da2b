"""What the grid of margins shows: a row per line and phase, a column per crew, and totals over time."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from decimal import Decimal

from desktop import crew_words as say
from desktop import figures
from desktop.pictures.margin_bars import is_broken
from desktop.pictures.waterfall_bars import Miss
from solver.answer import Answer, Break, Crew, CrewReport, LineKind, LineMargin, Policy
from solver.plan import Plan

Key = tuple[str, str | None]


@dataclass(frozen=True)
class MarginRow:
    """A line in a phase with its margin per policy, or (line "") a total with a text per policy."""

    title: str
    tip: str
    line: str = ""
    phase: str | None = None
    unit: str = ""
    margins: Mapping[Policy, float] = field(default_factory=dict)
    texts: Mapping[Policy, str] = field(default_factory=dict)
    in_full: Mapping[Policy, str] = field(default_factory=dict)

    @property
    def reach(self) -> float:
        """The largest margin of the line under any crew."""
        return max((abs(m) for m in self.margins.values()), default=0.0)


def margin_columns(answer: Answer) -> tuple[CrewReport, ...]:
    """Every crew of the answer; the own one only where there is one."""
    found = (answer.report(policy) for policy in Policy)
    return tuple(r for r in found if r is not None and (r.policy is not Policy.OWN or r.crew is not None))


def margin_rows(plan: Plan, answer: Answer) -> tuple[MarginRow, ...]:
    """What the crews break and how people come and go, then the lines as the answer names them."""
    columns = margin_columns(answer)
    lines: dict[Key, LineMargin] = {}
    margins: dict[Key, dict[Policy, float]] = {}
    for report in columns:
        for line in report.lines:
            key = (line.line, line.phase)
            lines.setdefault(key, line)
            margins.setdefault(key, {})[report.policy] = line.margin
    shown = [key for key in lines if _worth_a_row(lines[key], margins[key])]
    return (*_totals(plan, columns), *(_line_row(plan, lines[key], margins[key]) for key in shown))


def _worth_a_row(line: LineMargin, margins: Mapping[Policy, float]) -> bool:
    """Limits of a single category are shown only where somebody misses them."""
    return line.kind is not LineKind.BOUND or any(is_broken(m) for m in margins.values())


def _line_row(plan: Plan, line: LineMargin, margins: Mapping[Policy, float]) -> MarginRow:
    name = say.in_phase(line.line, line.phase) if line.phase and len(plan.phases) > 1 else line.line
    title = say.in_unit(name, line.unit)
    return MarginRow(title, say.LINE_TIPS[line.kind], line.line, line.phase, line.unit, margins)


def _totals(plan: Plan, columns: tuple[CrewReport, ...]) -> list[MarginRow]:
    def row(title: str, tip: str, text: Callable[[CrewReport], str]) -> MarginRow:
        texts = {r.policy: text(r) if r.crew is not None else say.NO_CREW for r in columns}
        return MarginRow(title, tip, texts=texts)

    made = [row(say.LINES_BROKEN, say.TIP_LINES_BROKEN, _lines_broken)]
    if len(plan.phases) > 1:
        phases = row(say.PHASES_BROKEN, say.TIP_PHASES_BROKEN, lambda r: _phases_in_short(r, plan))
        in_full = {r.policy: ", ".join(_phases_broken(r, plan)) for r in columns if r.crew is not None}
        made.append(replace(phases, in_full=in_full))
        made.append(row(say.COMING_AND_GOING, say.TIP_COMING_AND_GOING, _coming_and_going))
        title = say.in_unit(say.MOVING_COST, plan.currency)
        made.append(row(title, say.TIP_MOVING_COST, lambda r: figures.money(moving_cost(plan, r.crew or {}))))
    return made


def _lines_broken(report: CrewReport) -> str:
    broken = sum(is_broken(line.margin) for line in report.lines)
    return say.of_lines(broken, len(report.lines)) if broken else say.NONE_BROKEN


def _phases_broken(report: CrewReport, plan: Plan) -> list[str]:
    names = {line.phase for line in report.lines if is_broken(line.margin)}
    broken = [phase.name for phase in plan.phases if phase.name in names]
    return [*broken, say.WHOLE_JOB] if None in names else broken


def _phases_in_short(report: CrewReport, plan: Plan) -> str:
    """The phase where there is one; their number where there are several."""
    broken = _phases_broken(report, plan)
    if len(broken) < 2:
        return "".join(broken) or say.NONE_BROKEN
    return say.of_lines(len(broken), len(plan.phases))


def _coming_and_going(report: CrewReport) -> str:
    if not report.joiners and not report.leavers:
        return figures.NIL
    return f"{figures.change(report.joiners)} {figures.change(-report.leavers)}"


def moving_cost(plan: Plan, crew: Crew) -> Decimal:
    """What joining and leaving costs over all phases, in money; those on the books stand before the first."""
    total = Decimal(0)
    for category in plan.categories:
        before = category.on_books
        for count in crew.get(category.name, ()):
            now = Decimal(repr(float(count)))
            total += category.join_cost * max(Decimal(0), now - before)
            total += category.leave_cost * max(Decimal(0), before - now)
            before = now
    return total


def break_of(report: CrewReport, row: MarginRow) -> Break | None:
    """The break that covers the line of `row` under `report`'s crew."""
    for broken in report.breaks:
        if row.line in broken.lines and broken.phase in (row.phase, None):
            return broken
    return None


def miss_of(plan: Plan, answer: Answer, report: CrewReport, row: MarginRow) -> Miss | None:
    """What the waterfall shows for a broken cell; None where nothing is broken or nothing is known."""
    broken = break_of(report, row)
    if broken is None or report.crew is None or answer.fractional is None:
        return None
    names = [phase.name for phase in plan.phases]
    at = names.index(broken.phase) if broken.phase in names else None
    shown = broken.phase if broken.phase and len(names) > 1 else ""
    return Miss(report.policy, broken, report.crew, answer.fractional, at, shown)
