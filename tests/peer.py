"""One peer solving one integer program in a process of its own, for tests/benchmark.py.

Reads {"peer", "seconds", "threads", "matrix"} from standard input and prints, as JSON, what it found:
[seconds, cost or null, bound or null] whenever that changes, whether it is proved, and peak memory in MB.
Peers: "highs" (highspy) and "cp-sat" (ortools' MPSolver interface, which scales continuous columns).
CP-SAT and CBC cannot share a process: their libraries export the same symbols.
"""

from __future__ import annotations

import json
import resource
import sys
import time
from math import isfinite
from typing import Any


def main() -> None:
    """Solve and print."""
    asked = json.load(sys.stdin)
    solve = {"highs": _highs, "cp-sat": _cp_sat}[asked["peer"]]
    found = solve(asked["matrix"], asked["seconds"], asked["threads"])
    found["memory"] = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    print(json.dumps(found))


def _finite(value: float) -> float | None:
    return value if isfinite(value) and abs(value) < 1e29 else None


def _highs(raw: dict[str, Any], seconds: float, threads: int) -> dict[str, Any]:
    import highspy
    import numpy as np

    model, lp = highspy.Highs(), highspy.HighsLp()
    for option, value in (
        ("output_flag", False),
        ("threads", threads),
        ("time_limit", float(seconds)),
        ("mip_rel_gap", 0.0),
        ("mip_abs_gap", 0.0),
    ):
        model.setOptionValue(option, value)
    rows = raw["rows"]
    lp.num_col_, lp.num_row_ = len(raw["cost"]), len(rows)
    lp.col_cost_, lp.col_lower_, lp.col_upper_ = (np.array(raw[k]) for k in ("cost", "lower", "upper"))
    lp.row_lower_ = np.array([rhs if sense != "L" else -np.inf for _, _, sense, rhs in rows])
    lp.row_upper_ = np.array([rhs if sense != "G" else np.inf for _, _, sense, rhs in rows])
    lp.a_matrix_.format_ = highspy.MatrixFormat.kRowwise
    lp.a_matrix_.start_ = np.cumsum([0, *(len(row[0]) for row in rows)])
    lp.a_matrix_.index_ = np.array([c for row in rows for c in row[0]])
    lp.a_matrix_.value_ = np.array([v for row in rows for v in row[1]])
    kinds = highspy.HighsVarType
    lp.integrality_ = [kinds.kInteger if whole else kinds.kContinuous for whole in raw["integer"]]
    model.passModel(lp)
    trace: list[list[float | None]] = []

    def news(event: Any) -> None:
        out = event.data_out
        trace.append(
            [time.perf_counter() - began, _finite(out.mip_primal_bound), _finite(out.mip_dual_bound)]
        )

    model.cbMipImprovingSolution.subscribe(news)
    model.cbMipLogging.subscribe(news)
    began = time.perf_counter()
    model.run()
    ended = time.perf_counter() - began
    info = model.getInfo()
    trace.append([ended, _finite(info.objective_function_value), _finite(info.mip_dual_bound)])
    return {"proved": model.getModelStatus() == highspy.HighsModelStatus.kOptimal, "trace": trace}


def _cp_sat(raw: dict[str, Any], seconds: float, threads: int) -> dict[str, Any]:
    from ortools.linear_solver import pywraplp

    solver = pywraplp.Solver.CreateSolver("SAT")
    solver.SetNumThreads(threads)
    solver.SetTimeLimit(int(seconds * 1000))
    columns = [
        (solver.IntVar if whole else solver.NumVar)(lower, min(upper, 1e6), "")
        for lower, upper, whole in zip(raw["lower"], raw["upper"], raw["integer"], strict=True)
    ]
    infinity = solver.infinity()
    for indices, values, sense, rhs in raw["rows"]:
        row = solver.Constraint(rhs if sense != "L" else -infinity, rhs if sense != "G" else infinity)
        for column, value in zip(indices, values, strict=True):
            row.SetCoefficient(columns[column], value)
    objective = solver.Objective()
    objective.SetMinimization()
    for column, cost in zip(columns, raw["cost"], strict=True):
        objective.SetCoefficient(column, cost)
    began = time.perf_counter()
    status = solver.Solve()
    ended = time.perf_counter() - began
    found = status in (pywraplp.Solver.OPTIMAL, pywraplp.Solver.FEASIBLE)
    cost = _finite(objective.Value()) if found else None
    trace = [[ended, cost, _finite(objective.BestBound())]]
    return {"proved": status == pywraplp.Solver.OPTIMAL, "trace": trace}


if __name__ == "__main__":
    main()
