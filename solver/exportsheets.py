"""What is exported, as plain tables: rows of texts and numbers under headers with units.

The tables of categories, works and rules have the headers the import understands, so that what was written
here can be changed in a spreadsheet and read back.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from typing import Any

from solver.answer import Answer, CrewReport, NearBest, NearCrew, Policy, State
from solver.caution import CAUTION
from solver.plan import Budget, Category, Plan, Presence, Ratio, Rule, Share, Work
from solver.tablecolumns import Meaning, What, meanings

Cell = str | float | Decimal | None


@dataclass(frozen=True)
class Table:
    """A sheet: its name, its header and its rows; `notes` stand below."""

    name: str
    header: tuple[str, ...]
    rows: tuple[tuple[Cell, ...], ...]
    notes: tuple[str, ...] = ()


@dataclass(frozen=True)
class Origin:
    """Where an export comes from: file name, content hash of the plan, program version, time."""

    file: str
    content_hash: str
    version: str
    made: str


def tables(plan: Plan, answer: Answer, near: NearBest | None, origin: Origin) -> tuple[Table, ...]:
    """Every sheet of the workbook."""
    return (
        plan_table(plan),
        *(entries_table(plan, what) for what in What),
        crews_table(plan, answer),
        costs_table(plan, answer),
        lines_table(answer),
        near_table(plan, near),
        method_table(plan, answer, origin),
    )


# the plan


def plan_table(plan: Plan) -> Table:
    """Titles and phases."""
    facts: list[tuple[Cell, ...]] = [
        ("Title", plan.title),
        ("Site", plan.site),
        ("Prepared by", plan.prepared_by),
        ("Notes", plan.notes),
        ("Currency", plan.currency),
        ("Period", plan.period),
    ]
    phases: list[tuple[Cell, ...]] = [(f"Phase: {p.name}", p.periods, plan.period) for p in plan.phases]
    return Table("Plan", ("What", "Value", "Unit"), tuple((*row, None)[:3] for row in facts + phases))


def entries_table(plan: Plan, what: What) -> Table:
    """Categories, works or rules under the headers of the import."""
    columns = meanings(what, plan)
    entries: Mapping[What, Sequence[Any]] = {
        What.CATEGORIES: plan.categories,
        What.WORKS: plan.works,
        What.RULES: plan.rules,
    }
    rows = tuple(tuple(_entry(entry, m) for m in columns) for entry in entries[what])
    return Table(what.value.capitalize(), tuple(m.title for m in columns), rows)


def _entry(entry: Category | Work | Rule, meaning: Meaning) -> Cell:
    if isinstance(entry, Category):
        return _of_category(entry, meaning.key)
    if isinstance(entry, Work):
        return _of_work(entry, meaning.key)
    found: Cell = _of_rule(entry).get(meaning.key)
    return found


def _of_category(category: Category, key: str) -> Cell:
    if key.startswith("output:"):
        return category.output.get(key.removeprefix("output:"))
    if key == "supervision.hours":
        return category.supervision.hours
    if key == "supervision.by":
        return _names(category.supervision.by)
    found: Cell = getattr(category, key)
    return found


def _of_work(work: Work, key: str) -> Cell:
    if key.startswith("amount:"):
        return work.amounts[int(key.removeprefix("amount:"))]
    found: Cell = getattr(work, key)
    return found


def _of_rule(rule: Rule) -> dict[str, Cell]:
    shared: dict[str, Cell] = {"kind": rule.kind, "name": rule.name}
    if isinstance(rule, Budget):
        return {**shared, "number": rule.at_most}
    phases = _names(rule.phases or ())
    if isinstance(rule, Presence):
        people = "; ".join(n if w == 1 else f"{n} = {w:f}" for n, w in rule.weights.items())
        return {**shared, "people": people, "sense": rule.sense, "number": rule.bound, "phases": phases}
    if isinstance(rule, Ratio):
        of, per, most = _names(rule.of), _names(rule.per), rule.at_most
        return {**shared, "people": of, "among": per, "sense": "at most", "number": most, "phases": phases}
    return {**shared, **_of_share(rule), "phases": phases}


def _of_share(rule: Share) -> dict[str, Cell]:
    of, within = _names(rule.of), _names(rule.within)
    return {"people": of, "among": within, "sense": rule.sense, "number": rule.fraction}


def _names(names: Sequence[str]) -> str | None:
    return "; ".join(names) or None


# the answer


def _shown(answer: Answer) -> list[CrewReport]:
    """Crews in the order of the window: the exact one first."""
    order = [Policy.EXACT, Policy.OWN, *(p for p in Policy if p not in (Policy.EXACT, Policy.OWN))]
    found = [report for policy in order if (report := answer.report(policy)) is not None]
    return [report for report in found if report.crew is not None]


def crews_table(plan: Plan, answer: Answer) -> Table:
    """Head counts: one row per category and phase, one column per crew."""
    reports = _shown(answer)
    crews = ("On the books", "Fractional", *(str(r.policy).capitalize() for r in reports))
    header = ("Category", "Phase", *(f"{crew} (people)" for crew in crews))
    rows = [
        (
            category.name,
            phase.name,
            category.on_books if at == 0 else None,
            answer.fractional[category.name][at] if answer.fractional else None,
            *(report.crew[category.name][at] for report in reports if report.crew is not None),
        )
        for category in plan.categories
        for at, phase in enumerate(plan.phases)
    ]
    return Table("Crews", header, tuple(rows), (CAUTION,))


def costs_table(plan: Plan, answer: Answer) -> Table:
    """What each crew costs, and what is broken where it is not workable."""
    money = plan.currency
    header = (
        "Crew",
        "Workable",
        f"Cost ({money})",
        f"Above exact ({money})",
        f"On paper ({money})",
        "People",
        "Joiners",
        "Leavers",
        "Broken lines, or why there is no such crew",
    )
    rows: list[tuple[Cell, ...]] = []
    if answer.floor is not None:
        rows.append(("fractional", "a bound, not a plan", answer.floor, *[None] * 6))
    rows += [_costs(answer, report) for report in answer.crews]
    return Table("Costs", header, tuple(rows))


def _costs(answer: Answer, report: CrewReport) -> tuple[Cell, ...]:
    if report.crew is None:
        return (report.policy, "no crew", *[None] * 6, report.why_none)
    above = None
    if report.cost is not None and answer.exact is not None:
        above = report.cost - answer.exact.cost
    broken = "; ".join(dict.fromkeys(m.line for m in report.lines if m.margin < 0))
    workable = "yes" if report.workable else "no"
    people = (report.people, report.joiners, report.leavers)
    return (report.policy, workable, report.cost, above, report.paper_cost, *people, broken or None)


def lines_table(answer: Answer) -> Table:
    """Margins: room left, or with a minus what is short, in the line's own unit."""
    reports = _shown(answer)
    margins = [{(m.line, m.phase): m.margin for m in report.lines} for report in reports]
    known = {(m.line, m.phase): m for report in reports for m in report.lines}
    header = ("Line", "Kind", "Phase", "Unit", *(f"Margin of {r.policy}" for r in reports))
    rows = tuple(
        (m.line, m.kind, m.phase, m.unit, *(found.get(key) for found in margins)) for key, m in known.items()
    )
    return Table("Lines", header, rows)


def near_table(plan: Plan, near: NearBest | None) -> Table:
    """Near-best crews, cheapest first."""
    money = plan.currency
    several = len(plan.phases) > 1
    counts = [
        f"{c.name}, {p.name} (people)" if several else f"{c.name} (people)"
        for c in plan.categories
        for p in plan.phases
    ]
    header = (f"Cost ({money})", f"Above exact ({money})", "People", "Joiners", "Leavers", "Tightest line")
    if near is None:
        return Table("Near-best", (*header, *counts), (), ("Not worked out.",))
    rows = tuple(_near(plan, crew) for crew in near.crews)
    note = "These are all crews within the limit." if near.complete else "There are more within the limit."
    return Table("Near-best", (*header, *counts), rows, (note,))


def _near(plan: Plan, crew: NearCrew) -> tuple[Cell, ...]:
    heads = [n for c in plan.categories for n in crew.crew[c.name]]
    return (crew.cost, crew.over, crew.people, crew.joiners, crew.leavers, crew.tightest, *heads)


def method_table(plan: Plan, answer: Answer, origin: Origin) -> Table:
    """How it was found, how sure it is, and where it comes from."""
    gap = answer.whole_people_cost
    exact = answer.exact.cost if answer.exact else None
    money = plan.currency
    rows: list[tuple[Cell, ...]] = [
        ("State", answer.state, None),
        ("Proof", answer.proof or "none", None),
        ("Floor: cost of the fractional crew", answer.floor, money),
        ("No whole crew costs less than", answer.bound, money),
        ("Cost of the exact crew" if answer.state is State.PROVED else "Cost of the best crew", exact, money),
        ("Whole-people cost", gap.absolute if gap else None, money),
        ("Whole-people cost, share of the exact cost", gap.percent if gap else None, "%"),
        ("Seconds worked", answer.seconds, "s"),
        ("Plan file", origin.file, None),
        ("Content of the plan", origin.content_hash, None),
        ("Program", f"Full Complement {origin.version}", None),
        ("Time", origin.made, None),
    ]
    if answer.conflict is not None:
        rows += [(f"Cannot hold together: {c.says}", c.repair, None) for c in answer.conflict.lines]
    return Table("Method", ("What", "Value", "Unit"), tuple(rows), (_METHOD, CAUTION))


_METHOD = (
    "The floor is the optimum of the linear relaxation; the exact crew is the optimum over whole lots of "
    "people; every line of it was checked again in exact arithmetic. The integer program itself can be "
    "exported as .lp or .mps and checked with any solver."
)
