"""`python -m solver export PLAN OUT`: the answer as .xlsx or .csv, or the integer program as .lp or .mps."""

from __future__ import annotations

from pathlib import Path

from solver.answer import NearBest
from solver.export import NEED_AN_ANSWER, export_plan
from solver.nearbest import near_best
from solver.plan import Plan
from solver.solve import solve
from solver.unanswered import Unanswered

WITHIN, MOST = 2.0, 20  # per cent above the best cost, and how many near-best crews a workbook lists


def export(plan: Plan, source: str, out: str) -> str:
    """Write `out` from the plan read from `source`, and say so.

    Raises UnknownFormat, CannotSave, EngineFailure.
    """
    target = Path(out)
    suffix = target.suffix.lower()
    answer = solve(plan) if suffix in NEED_AN_ANSWER else None
    near = _near(plan) if suffix == ".xlsx" else None
    export_plan(plan, answer, target, near=near, source=Path(source).name)
    return f"Wrote {target.name}."


def _near(plan: Plan) -> NearBest | None:
    """Near-best crews; None for a plan that has no proved crew to be near to."""
    try:
        return near_best(plan, within=WITHIN, most=MOST)
    except Unanswered:
        return None
