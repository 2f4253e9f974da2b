"""The exact integer program as text that other solvers read: .lp and .mps, every number in full precision.

The least value of the objective is the exact cost. Numbers are written with the 17 digits that give the same
double back. (Own writers: those of the engines keep five decimals and rename what they do not like.)
Formats: "LP file format" as CPLEX and HiGHS read it; free MPS.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from solver.lines import Column
from solver.matrix import Matrix, Row, RowSense
from solver.plan import Plan
from solver.program import Program
from solver.programnames import Named, column_names, one_line, row_names

_SIGNS = {RowSense.AT_LEAST: ">=", RowSense.AT_MOST: "<=", RowSense.EQUAL: "="}
_TERMS_PER_LINE = 3  # some readers take no more than 255 letters in a line


def lp_text(plan: Plan) -> str:
    """The program of `plan` in the LP format."""
    program = _program(plan)
    columns, rows = column_names(program), row_names(program)
    matrix = program.matrix
    parts: list[str] = [f"\\ {line}" for line in _about(plan, columns, rows)]
    parts += ["Minimize", " cost:", *_terms(range(matrix.width), matrix.cost, columns), "Subject To"]
    for row, named in zip(matrix.rows, rows, strict=True):
        parts += [f" {named.name}:", *_terms(row.columns, row.coefs, columns)]
        parts.append(f"  {_SIGNS[row.sense]} {number(row.rhs)}")
    parts += ["Bounds", *_lp_bounds(matrix, columns)]
    whole = [named.name for named, integer in zip(columns, matrix.integer, strict=True) if integer]
    return "\n".join([*parts, "General", *(f" {name}" for name in whole), "End", ""])


def mps_text(plan: Plan) -> str:
    """The program of `plan` in the free MPS format."""
    program = _program(plan)
    columns, rows = column_names(program), row_names(program)
    parts = [f"* {line}" for line in _about(plan, columns, rows)]
    parts += ["NAME crew", "ROWS", " N cost"]
    parts += [f" {row.sense} {named.name}" for row, named in zip(program.matrix.rows, rows, strict=True)]
    parts += ["COLUMNS", *_mps_columns(program.matrix, columns, rows), "RHS"]
    rhs = ((row.rhs, named.name) for row, named in zip(program.matrix.rows, rows, strict=True))
    parts += [f" limit {name} {number(value)}" for value, name in rhs if value]
    return "\n".join([*parts, "BOUNDS", *_mps_bounds(program.matrix, columns), "ENDATA", ""])


def _program(plan: Plan) -> Program:
    """The program of `plan`; one without any column gets one that is 0, since no format can say nothing."""
    program = Program(plan)
    if not program.columns:
        program.columns.append(Column("n", "nobody", None, plan.phases[0].name))
        program.matrix.add_column(0.0, 0.0, 0.0)
    return program


def number(value: float) -> str:
    """The shortest text that gives the same double back."""
    return repr(float(value)) if value != int(value) or abs(value) >= 1e16 else str(int(value))


def _about(plan: Plan, columns: Sequence[Named], rows: Sequence[Named]) -> Iterator[str]:
    """Comment lines: what the file is, and what every name stands for."""
    yield f"The exact crew of {one_line(plan.title) or 'a plan'}: least cost in {one_line(plan.currency)}"
    yield "Names as the planner typed them:"
    for named in (*columns, *rows):
        yield f"{named.name} = {named.means}"


def _terms(at: Sequence[int], coefs: Sequence[float], columns: Sequence[Named]) -> list[str]:
    """A linear expression over a few lines; an empty one as 0 times the first column."""
    pairs = [(coef, columns[i].name) for i, coef in zip(at, coefs, strict=True) if coef]
    pairs = pairs or [(0.0, columns[0].name)]
    told = [f"{'-' if coef < 0 else '+'} {number(abs(coef))} {name}" for coef, name in pairs]
    return [
        "  " + " ".join(told[start : start + _TERMS_PER_LINE])
        for start in range(0, len(told), _TERMS_PER_LINE)
    ]


def _lp_bounds(matrix: Matrix, columns: Sequence[Named]) -> Iterator[str]:
    for named, lower, upper in zip(columns, matrix.lower, matrix.upper, strict=True):
        most = f" <= {number(upper)}" if math.isfinite(upper) else " <= +inf"
        yield f" {number(lower)} <= {named.name}{most}"


def _mps_columns(matrix: Matrix, columns: Sequence[Named], rows: Sequence[Named]) -> Iterator[str]:
    """Column by column, whole ones between markers."""
    entries: list[list[str]] = [[] for _ in columns]
    for i, cost in enumerate(matrix.cost):
        if cost:
            entries[i].append(f" {columns[i].name} cost {number(cost)}")
    for row, named in zip(matrix.rows, rows, strict=True):
        _enter(row, named, columns, entries)
    inside = False
    for i, integer in enumerate(matrix.integer):
        if integer != inside:
            yield f" MARK{i} 'MARKER' '{'INTORG' if integer else 'INTEND'}'"
            inside = integer
        yield from entries[i] or [f" {columns[i].name} cost 0"]
    if inside:
        yield " MARKEND 'MARKER' 'INTEND'"


def _enter(row: Row, named: Named, columns: Sequence[Named], entries: list[list[str]]) -> None:
    for i, coef in zip(row.columns, row.coefs, strict=True):
        if coef:
            entries[i].append(f" {columns[i].name} {named.name} {number(coef)}")


def _mps_bounds(matrix: Matrix, columns: Sequence[Named]) -> Iterator[str]:
    """Both bounds of every column: readers do not agree what a missing one of an integer means."""
    for named, lower, upper in zip(columns, matrix.lower, matrix.upper, strict=True):
        yield f" LO bound {named.name} {number(lower)}"
        if math.isfinite(upper):
            yield f" UP bound {named.name} {number(upper)}"
        else:
            yield f" PL bound {named.name}"
