"""The line on which a crew has least room."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from solver.answer import CrewReport, Policy
from solver.appraisal import Appraiser
from solver.heads import lots_of
from solver.ledger import Counts
from solver.lines import HeadLine, Line
from solver.loosened import is_settling
from solver.matrix import RowSense
from solver.plan import Plan
from solver.program import Program
from solver.tightestline import TightestLine


def tightest(program: Program, lots: Counts, report: CrewReport) -> str:
    """The line whose room is the smallest share of what it asks of the crew (of what it allows the crew).

    Empty where no line asks for anything. `exactly` rules never have room and are left out. Of equals the
    one that stands first in `report`, works before bounds.
    """
    heads = {id(head.line): head for head in program.head_lines}
    best: tuple[float, bool, str] | None = None
    for line, margin in zip(program.lines, report.lines, strict=True):
        asked = _asked(program, line, heads.get(id(line)), lots)
        if asked <= 0:
            continue
        where = f" in {line.phase}" if line.phase is not None and len(program.phases) > 1 else ""
        candidate = (round(margin.margin / asked, 9), id(line) in heads, f"{line.name}{where}")
        if best is None or candidate[:2] < best[:2]:
            best = candidate
    return "" if best is None else best[2]


def _asked(program: Program, line: Line, head: HeadLine | None, lots: Counts) -> float:
    """What the line asks of the crew, or allows it, in its unit; 0 where room means nothing."""
    if is_settling(line) or (head is not None and head.sense is RowSense.EQUAL):
        return 0.0
    if head is not None:
        others = sum(-a * lots[i] for i, a in head.terms if a < 0)
        return float(head.rhs + others) / head.divisor
    if line in program.budget_of:
        return float(program.budget_of[line])
    assert line.row is not None
    row = program.matrix.rows[line.row]
    drawn = sum(
        -coef * float(lots[column])
        for column, coef in zip(row.columns, row.coefs, strict=True)
        if column < program.head_count and coef < 0
    )
    return (row.rhs + drawn) * line.scale


def tightest_line(plan: Plan, crew: Mapping[str, Sequence[float]]) -> TightestLine:
    """The line on which `crew` (people per category and phase) has least room. Categories left out are 0."""
    program = Program(plan)
    lots = lots_of(program, crew)
    report = Appraiser(program).appraise(Policy.OWN, lots)
    return TightestLine(tightest(program, lots, report))
