"""The crew the page recommends: the exact one, the best found, or the planner's own."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal

from desktop.page.speech import exact_decimal
from solver.answer import Answer, Crew, CrewReport, LineMargin, Policy
from solver.plan import Plan

ZERO = Decimal(0)


@dataclass(frozen=True)
class Chosen:
    """A crew with what it takes to run it. `cost` is None where the crew is not workable."""

    crew: Crew
    workable: bool
    cost: float | None
    paper_cost: float | None
    overtime: Mapping[str, tuple[float, ...]]
    bought_in: Mapping[str, tuple[float, ...]]
    report: CrewReport | None

    def heads(self, category: str) -> tuple[Decimal, ...]:
        """Head count per phase."""
        return tuple(exact_decimal(n) for n in self.crew[category])

    def lines(self) -> tuple[LineMargin, ...]:
        """Margins of its lines, where it was appraised."""
        return self.report.lines if self.report is not None else ()


def exact_choice(answer: Answer) -> Chosen | None:
    """The exact (or best found) crew of `answer`."""
    if answer.exact is None:
        return None
    found = answer.exact
    report = answer.report(Policy.EXACT)
    return Chosen(found.crew, True, found.cost, found.cost, found.overtime, found.bought_in, report)


def own_choice(answer: Answer) -> Chosen | None:
    """The crew the planner typed, if it was appraised."""
    report = answer.report(Policy.OWN)
    if report is None or report.crew is None:
        return None
    return Chosen(
        report.crew,
        report.workable,
        report.cost,
        report.paper_cost,
        report.overtime,
        report.bought_in,
        report,
    )


def moves(heads: tuple[Decimal, ...], on_books: Decimal) -> tuple[tuple[Decimal, ...], tuple[Decimal, ...]]:
    """Joiners and leavers before each phase."""
    before = (on_books, *heads[:-1])
    joiners = tuple(max(ZERO, now - was) for now, was in zip(heads, before, strict=True))
    leavers = tuple(max(ZERO, was - now) for now, was in zip(heads, before, strict=True))
    return joiners, leavers


def people_per_phase(plan: Plan, chosen: Chosen) -> tuple[Decimal, ...]:
    """Head count of the whole crew in each phase."""
    columns = [chosen.heads(c.name) for c in plan.categories]
    return tuple(sum((heads[t] for heads in columns), ZERO) for t in range(len(plan.phases)))
