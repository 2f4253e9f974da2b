"""Appraising a crew: with its head counts given, the room on every line, what is short, what it costs."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from math import inf

import numpy as np

from solver import heads
from solver.answer import Break, CrewReport, LineKind, LineMargin, Policy
from solver.breaks import budget_break, hours_break, rule_break
from solver.engine import LpStatus, Relaxation
from solver.found import tie_width
from solver.ledger import Counts
from solver.lines import Line
from solver.matrix import Floats, Matrix
from solver.program import Program
from solver.shortfall import SHORT, Aim, Prices, Shortfall

_UNUSED = dict[str, tuple[float, ...]]()


@dataclass(frozen=True)
class PhaseRun:
    """How one phase can be run: shorts per work (hours at best output) and group (hours), running cost."""

    work_short: Floats
    group_short: Floats
    extra: Mapping[int, float]
    running: float
    overtime: Mapping[int, float]
    bought: Mapping[int, float]
    supervision_prices: Prices | None
    work_prices: Prices | None
    running_prices: Prices | None

    @property
    def short(self) -> bool:
        """Whether anything is short."""
        return bool((self.work_short > SHORT).any() or (self.group_short > SHORT).any())


class Appraiser:
    """Appraises crews of one program, in lots. Keeps one small program per phase warm."""

    def __init__(self, program: Program) -> None:
        self.program = program
        self._phases: dict[int, Shortfall] = {}
        self._budgeted: _BudgetedRoom | None = None

    def none(self, policy: Policy, why: str) -> CrewReport:
        """The report of a policy that yields no crew."""
        return CrewReport(policy, None, False, None, None, 0.0, 0.0, 0.0, (), (), _UNUSED, _UNUSED, why)

    def appraise(self, policy: Policy, lots: Counts, fractional: Sequence[float] | None = None) -> CrewReport:
        """Everything about the crew `lots`. `fractional` (lots) is what moves are measured from."""
        program = self.program
        runs = [self._run(t, lots) for t in range(len(program.phases))]
        short = any(run.short for run in runs)
        paper = program.ledger.paper_cost(lots)
        running = 0.0 if short else sum(run.running for run in runs)
        cost = round(float(paper) + running, 6)  # what lies behind is the LP code's rounding
        margins = self._margins(lots, runs, paper, cost, short)
        breaks = self._breaks(lots, fractional, runs, margins, cost)
        workable = not short and all(margin.margin >= 0 for margin in margins)
        joiners, leavers = program.ledger.moves(lots)
        report = CrewReport(
            policy,
            heads.crew_of(program, lots),
            workable,
            cost if workable else None,
            float(paper),
            float(joiners),
            float(leavers),
            float(program.ledger.most_people(lots)),
            tuple(margins),
            tuple(breaks),
            _UNUSED,
            _UNUSED,
            "",
        )
        if not workable:
            return report
        return replace(report, overtime=self._overtime(runs), bought_in=self._bought_in(runs))

    def workable(self, lots: Counts) -> bool:
        """Whether no line is missed; cheaper than a whole appraisal."""
        program = self.program
        if any(line.margin(lots) < 0 for line in program.head_lines):
            return False
        runs = [self._run(t, lots, extras=False) for t in range(len(program.phases))]
        if any(run.short for run in runs):
            return False
        cost = program.ledger.paper_cost(lots)
        return not self._over_budget(cost, float(cost) + sum(run.running for run in runs))

    # ---- one phase ---------------------------------------------------------------------------

    def _run(self, t: int, lots: Counts, extras: bool = True) -> PhaseRun:
        phase = self._phase(t)
        phase.set_heads(self._people(lots, t), self._people(lots, t - 1))
        works, groups = len(phase.work_short), len(phase.group_short)
        nothing = np.zeros(works), np.zeros(groups)
        phase.allow([*phase.work_extra, *phase.group_extra], [inf] * (works + groups))
        running = self._cheapest_run(phase, 0.0)
        if running is None:  # what is met exactly may miss by the last digits of a double
            running = self._cheapest_run(phase, phase.hair)
        if running is None:
            return self._short_run(phase, extras)
        x, prices = phase.x, phase.prices() if self.program.budget_rows else None
        overtime = {j: float(x[c]) for j, c in phase.overtime.items()}
        bought = {k: float(x[c]) for k, c in phase.bought.items()}
        extra = self._extras(phase) if extras else {}
        return PhaseRun(*nothing, extra, running, overtime, bought, None, None, prices)

    def _cheapest_run(self, phase: Shortfall, short: float) -> float | None:
        """The least running cost with at most `short` hours short on each line, None if there is none."""
        works, groups = len(phase.work_short), len(phase.group_short)
        phase.allow([*phase.work_short, *phase.group_short], [short] * (works + groups))
        phase.cap_supervision(short * groups)
        return phase.minimise(Aim.COST)

    def _short_run(self, phase: Shortfall, extras: bool) -> PhaseRun:
        """Supervision short is minimised first, then, with that fixed, work short."""
        works, groups = len(phase.work_short), len(phase.group_short)
        phase.allow([*phase.work_short, *phase.group_short], [inf] * (works + groups))
        phase.cap_supervision(1e12)
        missing, supervision_prices = 0.0, None
        if groups:
            missing = max(phase.minimise(Aim.SUPERVISION) or 0.0, 0.0)
            supervision_prices = phase.prices()
        phase.cap_supervision(missing if missing > SHORT else 0.0)
        if phase.minimise(Aim.WORK) is None:  # the cap of a hair's breadth was a hair too tight
            phase.cap_supervision(missing + SHORT)
            phase.minimise(Aim.WORK)
        x, work_prices = phase.x, phase.prices()
        work_short, group_short = x[phase.work_short], x[phase.group_short]
        phase.allow([*phase.work_short, *phase.group_short], [*work_short, *group_short])
        extra = self._extras(phase) if extras else {}
        supervision = supervision_prices if missing > SHORT else None
        return PhaseRun(work_short, group_short, extra, 0.0, {}, {}, supervision, work_prices, None)

    def _extras(self, phase: Shortfall) -> dict[int, float]:
        """Matrix row -> the most extra of its line with every other line kept (hours)."""
        program, t = self.program, phase.t
        found: dict[int, float] = {}
        for k, column in enumerate(phase.work_extra):
            found[program.work_row[k, t]] = phase.most_extra(column) or 0.0
        for g, column in enumerate(phase.group_extra):
            found[program.group_row[g, t]] = phase.most_extra(column) or 0.0
        return found

    def _phase(self, t: int) -> Shortfall:
        if t not in self._phases:
            self._phases[t] = Shortfall(self.program, t)
        return self._phases[t]

    def _people(self, lots: Counts, t: int) -> list[float]:
        program = self.program
        if t < 0:
            return [float(c.on_books) for c in program.categories]
        return [float(lots[program.head(j, t)] * lot) for j, lot in enumerate(program.lots)]

    # ---- all phases --------------------------------------------------------------------------

    def _overtime(self, runs: Sequence[PhaseRun]) -> dict[str, tuple[float, ...]]:
        return {
            c.name: tuple(_clean(run.overtime[j]) for run in runs)
            for j, c in enumerate(self.program.categories)
            if j in runs[0].overtime
        }

    def _bought_in(self, runs: Sequence[PhaseRun]) -> dict[str, tuple[float, ...]]:
        return {
            w.name: tuple(_clean(run.bought[k]) for run in runs)
            for k, w in enumerate(self.program.plan.works)
            if k in runs[0].bought
        }

    def _margins(
        self, lots: Counts, runs: Sequence[PhaseRun], paper: Fraction, cost: float, short: bool
    ) -> list[LineMargin]:
        program = self.program
        rooms: dict[Line, float] = {h.line: float(h.margin(lots)) for h in program.head_lines}
        for line in program.lines:
            if line.kind is LineKind.BUDGET:
                rooms[line] = self._budget_margin(line, paper, cost)
        for line, room in self._hours_margins(lots, runs, short, rooms):
            rooms[line] = room
        return [LineMargin(x.name, x.kind, x.phase, rooms[x], x.unit) for x in program.lines]

    def _budget_margin(self, line: Line, paper: Fraction, cost: float) -> float:
        at_most = self.program.budget_of[line]
        if not self.program.costs_hours:
            return float(at_most - paper)
        margin = float(at_most) - cost
        return 0.0 if abs(margin) <= tie_width(cost) else margin

    def _over_budget(self, paper: Fraction, cost: float) -> bool:
        return any(self._budget_margin(line, paper, cost) < 0 for line in self.program.budget_of)

    def _hours_margins(
        self, lots: Counts, runs: Sequence[PhaseRun], short: bool, rooms: Mapping[Line, float]
    ) -> list[tuple[Line, float]]:
        """Work and supervision lines: extra where nothing is short, minus the short where it is."""
        program = self.program
        within_budget = not short and all(rooms[line] >= 0 for line in program.budget_of)
        budgeted = within_budget and bool(program.budget_of) and program.costs_hours
        found = []
        for line, row, kind, index, t in program.hours_lines:
            run = runs[t]
            missing = run.work_short[index] if kind is LineKind.WORK else run.group_short[index]
            if missing > SHORT:
                found.append((line, -float(missing) * line.scale))
            elif budgeted:
                found.append((line, self._room_in_budget(row, lots) * line.scale))
            else:
                found.append((line, _clean(run.extra[row]) * line.scale))
        return found

    def _room_in_budget(self, row: int, lots: Counts) -> float:
        if self._budgeted is None:
            self._budgeted = _BudgetedRoom(self.program)
        return _clean(self._budgeted.most_extra(row, lots))

    # ---- breaks ------------------------------------------------------------------------------

    def _breaks(
        self,
        lots: Counts,
        fractional: Sequence[float] | None,
        runs: Sequence[PhaseRun],
        margins: Sequence[LineMargin],
        cost: float,
    ) -> list[Break]:
        program = self.program
        base = [float(n) for n in lots] if fractional is None else fractional
        found = [
            rule_break(program, head, lots, base) for head in program.head_lines if head.margin(lots) < 0
        ]
        for t, run in enumerate(runs):
            found += self._phase_breaks(t, run, lots, base)
        for line, margin in zip(program.lines, margins, strict=True):
            if line.kind is LineKind.BUDGET and margin.margin < 0:
                found.append(budget_break(program, line, lots, base, runs, cost))
        return found

    def _phase_breaks(self, t: int, run: PhaseRun, lots: Counts, base: Sequence[float]) -> list[Break]:
        found = []
        if run.supervision_prices is not None:
            prices, kind = run.supervision_prices, LineKind.SUPERVISION
            freed = self._settled(prices)
            found.append(hours_break(self.program, t, kind, run.group_short, prices, lots, base, freed))
        if run.work_prices is not None and (run.work_short > SHORT).any():
            prices = run.work_prices
            freed = {**self._settled(prices), **self._given_up(t, run, prices)}
            found.append(
                hours_break(self.program, t, LineKind.WORK, run.work_short, prices, lots, base, freed)
            )
        return found

    def _settled(self, prices: Prices) -> dict[str, float]:
        """What hours lent for settling in are worth, per category's settling line."""
        names = self.program.categories
        return {f"{names[j].name}: settling in": -worth for j, worth in prices.settled.items() if worth}

    def _given_up(self, t: int, run: PhaseRun, prices: Prices) -> dict[str, float]:
        """What the supervision nobody gives frees for work, per supervision line."""
        lines = [
            line
            for line, _, kind, _, at in self.program.hours_lines
            if kind is LineKind.SUPERVISION and at == t
        ]
        return {
            line.name: -prices.cap * float(short)
            for line, short in zip(lines, run.group_short, strict=True)
            if short > SHORT and prices.cap < 0
        }


class _BudgetedRoom:
    """The most extra of one line when overtime and bought-in work must stay within the budget."""

    def __init__(self, program: Program) -> None:
        self._program = program
        matrix = Matrix([0.0] * program.matrix.width, program.matrix.lower[:], program.matrix.upper[:])
        matrix.integer = program.matrix.integer[:]
        extra: dict[int, int] = {}
        for _, hours_row, *_ in program.hours_lines:
            extra[hours_row] = matrix.add_column(0.0, 0.0, 0.0)
        of_heads = {head.line.row for head in program.head_lines}  # settled by the crew, kept or not
        for i, row in enumerate(program.matrix.rows):
            if i in extra:
                matrix.add_row([*row.columns, extra[i]], [*row.coefs, -1.0], row.sense, row.rhs)
            elif i not in of_heads:
                matrix.rows.append(row)
        self._extra = extra
        self._relaxation = Relaxation(matrix)

    def most_extra(self, row: int, lots: Counts) -> float:
        """Hours of extra on `row` with the crew `lots`."""
        relaxation, column = self._relaxation, self._extra[row]
        for i, n in enumerate(lots):
            relaxation.set_bounds(i, float(n), float(n))
        for switch, served in self._program.switches.items():
            on = float(any(lots[i] for i in served))
            relaxation.set_bounds(switch, on, on)
        relaxation.set_bounds(column, 0.0, inf)
        relaxation.set_cost(column, -1.0)
        status = relaxation.solve()
        most = -relaxation.objective if status is LpStatus.OPTIMAL else 0.0
        relaxation.set_bounds(column, 0.0, 0.0)
        relaxation.set_cost(column, 0.0)
        return most


def _clean(value: float) -> float:
    """Without the last digits that only floating point put there."""
    return 0.0 if abs(value) < SHORT else value
