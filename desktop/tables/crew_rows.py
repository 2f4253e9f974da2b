"""What the table of all crews shows: where crews come from as columns, categories and totals as rows."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from enum import IntEnum

from desktop import crew_words as say
from desktop import figures
from desktop.figures import Number
from solver.answer import Answer, CrewReport, Policy, State
from solver.plan import Category, Plan


@dataclass(frozen=True)
class CrewColumn:
    """One crew: the fractional one (`policy` None, no report) or the crew of a policy."""

    title: str
    tip: str
    policy: Policy | None
    crew: Mapping[str, tuple[Number, ...]] | None
    report: CrewReport | None
    floor: float | None = None

    @property
    def name(self) -> str:
        """The title on one line."""
        return self.title.replace("\n", " ")

    @property
    def own(self) -> bool:
        """Whether the planner types here."""
        return self.policy is Policy.OWN


class RowKind(IntEnum):
    """Counts are per category and phase, totals per crew."""

    COUNT = 0
    TOTAL = 1


@dataclass(frozen=True)
class CrewRow:
    """One row: a title, what it means, and its text in each column."""

    kind: RowKind
    title: str
    tip: str
    text: Callable[[CrewColumn], str]
    category: Category | None = None
    at: int = 0


def crew_columns(plan: Plan, answer: Answer | None) -> tuple[CrewColumn, ...]:
    """The fractional crew, then every policy in the order of `Policy`, then the own crew."""
    floor = answer.floor if answer else None
    fractional = answer.fractional if answer else None
    made = [CrewColumn(say.FRACTIONAL, say.TIP_FRACTIONAL, None, fractional, None, floor)]
    for policy in Policy:
        report = answer.report(policy) if answer else None
        crew = plan.own or None if policy is Policy.OWN else report.crew if report else None
        title, tip = crew_heading(policy, answer)
        made.append(CrewColumn(title, tip, policy, crew, report, floor))
    return tuple(made)


def crew_heading(policy: Policy, answer: Answer | None) -> tuple[str, str]:
    """Title and meaning of a column; a crew is called exact only where it is proved."""
    if policy is Policy.EXACT and answer is not None and answer.state is State.BEST_FOUND:
        return say.BEST_FOUND, say.TIP_BEST_FOUND
    return say.policy_title(policy), say.POLICY_TIPS[policy]


def count_rows(plan: Plan) -> list[CrewRow]:
    """A row per category and phase."""
    several = len(plan.phases) > 1
    made = []
    for category in plan.categories:
        lot = figures.people(category.lot)
        for at, phase in enumerate(plan.phases):
            title = say.in_phase(category.name, phase.name) if several else category.name
            tip = say.count_tip(category.name, lot, phase.name if several else "")
            made.append(CrewRow(RowKind.COUNT, title, tip, _count(category.name, at), category, at))
    return made


def _count(name: str, at: int) -> Callable[[CrewColumn], str]:
    def text(column: CrewColumn) -> str:
        counts = column.crew.get(name) if column.crew else None
        return figures.people(counts[at]) if counts and at < len(counts) else ""

    return text


def _of_report(get: Callable[[CrewReport], str]) -> Callable[[CrewColumn], str]:
    return lambda column: get(column.report) if column.report and column.report.crew is not None else ""


def total_rows(plan: Plan, exact_cost: float | None) -> list[CrewRow]:
    """What crews come to, told against the exact one."""

    def total(title: str, tip: str, text: Callable[[CrewColumn], str]) -> CrewRow:
        return CrewRow(RowKind.TOTAL, title, tip, text)

    unit = plan.currency
    made = [
        total(say.PEOPLE, say.TIP_PEOPLE, _people(plan)),
        total(say.in_unit(say.COST, unit), say.TIP_COST, _cost),
        total(say.in_unit(say.MORE, unit), say.TIP_MORE, _more(exact_cost)),
        total(say.VERDICT, say.TIP_VERDICT, _verdict),
        total(say.JOINERS, say.TIP_JOINERS, _of_report(lambda r: figures.people(r.joiners))),
        total(say.LEAVERS, say.TIP_LEAVERS, _of_report(lambda r: figures.people(r.leavers))),
    ]
    if any(c.overtime_hours for c in plan.categories):
        made.append(total(say.OVERTIME, say.TIP_OVERTIME, _of_report(_overtime)))
    if any(w.buy_in_price is not None for w in plan.works):
        made.append(total(say.BOUGHT_IN, say.TIP_BOUGHT_IN, _of_report(lambda r: _bought_in(r, plan))))
    return made


def _people(plan: Plan) -> Callable[[CrewColumn], str]:
    """Head count; over several phases the largest of them."""

    def text(column: CrewColumn) -> str:
        if not column.crew:
            return ""
        per_phase = [
            sum(n[at] for n in column.crew.values() if at < len(n)) for at in range(len(plan.phases))
        ]
        return figures.people(max(per_phase, default=0))

    return text


def _cost(column: CrewColumn) -> str:
    if column.policy is None:
        return figures.money(column.floor) if column.floor is not None else ""
    cost = column.report.cost if column.report else None
    return figures.money(cost) if cost is not None else ""


def _more(exact_cost: float | None) -> Callable[[CrewColumn], str]:
    def text(column: CrewColumn) -> str:
        cost = column.report.cost if column.report else None
        if cost is None or exact_cost is None or column.policy is Policy.EXACT:
            return ""
        more = figures.money(cost - exact_cost)
        return more if cost - exact_cost < 0.005 else f"+{more}"

    return text


def _overtime(report: CrewReport) -> str:
    return figures.number(sum(sum(hours) for hours in report.overtime.values()), 1)


def _bought_in(report: CrewReport, plan: Plan) -> str:
    units = {work.name: work.unit for work in plan.works}
    bought = {name: sum(amounts) for name, amounts in report.bought_in.items() if sum(amounts) > 0}
    return ", ".join(figures.quantity(n, units.get(name, "")) for name, n in bought.items()) or figures.NIL


def _verdict(column: CrewColumn) -> str:
    """Workable, or what is broken; why there is no crew is told in the tooltip."""
    report = column.report
    if report is None:
        return "" if column.policy is not None else say.A_BOUND
    if report.crew is None:
        return say.NO_CREW
    if report.workable:
        return say.WORKABLE
    broken = dict.fromkeys(line for b in report.breaks for line in b.lines)
    return say.breaks_lines(list(broken))
