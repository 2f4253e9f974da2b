"""Speed, measured by hand: `python -m tests.benchmark PART`, from the root of the repository.

single     one-phase plans beside SciPy's HiGHS solving only the integer program (aims: ratios of 1.0 and 1.6)
family     plans in phases beside HiGHS (highspy) and CP-SAT (ortools), two threads and 10 s each;
           one table, also as CSV (--csv FILE); --sizes 3x1x4,6x3x6 and --seeds 2 make it shorter
questions  cost, room and near together (tests/benchmark_questions.py)
window     start, edit to headline, longest gap while typing (tests/benchmark_window.py)

Ratios of one run are what counts: machines are noisy.
"""

from __future__ import annotations

import argparse
import csv
import json
import os
import resource
import subprocess
import sys
import threading
import time
from collections.abc import Callable, Sequence
from contextlib import suppress
from dataclasses import dataclass
from functools import partial
from math import exp, inf, log
from pathlib import Path
from typing import Any

import numpy as np

from solver.engine import quiet_native_output
from solver.enginehost import matrix_to_json
from solver.plan import Plan
from solver.planfile import read_plan
from solver.program import Program
from solver.proof import Effort, Proved
from solver.race import engines
from solver.solve import Case, solve
from tests.family import SEEDS, SIZES, family_plan
from tests.solver.random_plans import random_plan
from tests.solver.reference import written_out

HERE = Path(__file__).parent
HILLSIDE = HERE.parent / "resources" / "examples" / "hillside.crew.json"
SECONDS = 10.0
THREADS = 2
EARLY = 1.0
# what is proved this soon is run so many times more, by everybody: one run of 20 ms tells little
BLINK = 0.3
AGAIN = 4
PEERS = ("highs", "cp-sat")
COLUMNS = (
    *("size", "seed", "solver", "first_s", "proved_s"),
    *("cost_1s", "bound_1s", "cost_10s", "bound_10s", "memory_mb"),
)


def main(arguments: Sequence[str]) -> None:
    """Run one part."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawTextHelpFormatter)
    parser.add_argument("part", choices=("single", "family", "questions", "window"))
    parser.add_argument("--csv", default=None)
    parser.add_argument("--sizes", default=",".join("x".join(map(str, size)) for size in SIZES))
    parser.add_argument("--seeds", type=int, default=len(SEEDS))
    asked = parser.parse_args(arguments)
    if asked.part in ("questions", "window"):
        command = [sys.executable, "-m", f"tests.benchmark_{asked.part}"]
        raise SystemExit(subprocess.run(command, check=False).returncode)
    with os.fdopen(quiet_native_output(), "w", encoding="utf-8", buffering=1) as out:
        if asked.part == "single":
            print(single(), file=out)
        else:
            sizes = [tuple(int(n) for n in size.split("x")) for size in asked.sizes.split(",")]
            rows = []
            for row in family(sizes, asked.seeds):
                rows.append(row)
                print(shown(row), file=out)
            print(summary(rows), file=out)
            if asked.csv:
                write_csv(rows, asked.csv)


# ---- one phase -------------------------------------------------------------------------------


def single(count: int = 100) -> str:
    """Medians in milliseconds over `count` seeded one-phase plans, and for the hillside example."""
    plans: list[Plan] = []
    seed = 0
    while len(plans) < count:
        plan = random_plan(np.random.default_rng(seed), max_categories=8, max_works=3, max_phases=1)
        seed += 1
        if solve(plan).exact is not None:
            plans.append(plan)
    hillside = read_plan(HILLSIDE)
    return "\n".join(
        (_single_row(f"{count} seeded plans", plans), _single_row("hillside, 30 runs", [hillside] * 30))
    )


def _single_row(name: str, plans: Sequence[Plan]) -> str:
    times = []
    for plan in plans:
        model = written_out(plan, relax=False)
        times.append(
            (_timed(model.solve), _timed(lambda p=plan: Case(p).proved), _timed(lambda p=plan: solve(p)))
        )
    highs, proof, whole = np.median(np.array(times), axis=0) * 1000
    return (
        f"{name}: SciPy's HiGHS {highs:.1f} ms, relaxation and proof {proof:.1f} ms "
        f"(ratio {proof / highs:.2f}), whole answer {whole:.1f} ms (ratio {whole / highs:.2f})"
    )


def _timed(work: Any) -> float:
    began = time.perf_counter()
    work()
    return time.perf_counter() - began


# ---- the family ------------------------------------------------------------------------------


@dataclass(frozen=True)
class Trial:
    """One solver on one plan: [seconds, cost, bound] as they changed, when it was proved (None: not),
    and peak memory of all its processes in MB."""

    trace: list[tuple[float, float, float]]
    proved: float | None
    memory: float

    def at(self, seconds: float) -> tuple[float, float]:
        """Cost and bound known after so many seconds."""
        known = [(cost, bound) for when, cost, bound in self.trace if when <= seconds + 0.3]
        return min((c for c, _ in known), default=inf), max((b for _, b in known), default=-inf)

    def gap(self, seconds: float) -> float:
        """(cost - bound) / cost, in %; 100 while there is no crew or no bound."""
        cost, bound = self.at(seconds)
        return 100.0 if cost == inf or bound == -inf else max(100 * (cost - bound) / cost, 0.0)

    @property
    def first(self) -> float:
        """When the first workable crew was known."""
        return min((when for when, cost, _ in self.trace if cost < inf), default=inf)


@dataclass(frozen=True)
class FamilyRow:
    """One plan with every solver's trial."""

    size: tuple[int, ...]
    seed: int
    trials: dict[str, Trial]


def family(sizes: Sequence[tuple[int, ...]], seeds: int) -> Any:
    """Every plan of the family, ours first; yields rows."""
    engines().warm()
    solve(family_plan(2, 1, 2, 0))  # a warm worker, as the window has it
    time.sleep(1.0)
    for size in sizes:
        for seed in range(seeds):
            plan = family_plan(*size, seed)
            raw = matrix_to_json(Program(plan).matrix)
            runs: dict[str, Callable[[], Trial]] = {"here": partial(_here, plan)}
            runs |= {peer: partial(_peer, peer, raw) for peer in PEERS}
            yield FamilyRow(size, seed, {name: _typical(run) for name, run in runs.items()})


def _typical(run: Callable[[], Trial]) -> Trial:
    """A trial; where it is over in a blink, the median one of several."""
    trials = [run()]
    if (trials[0].proved or inf) < BLINK:
        trials += [run() for _ in range(AGAIN)]
    return sorted(trials, key=lambda trial: trial.proved or inf)[len(trials) // 2]


def _here(plan: Plan) -> Trial:
    trace: list[tuple[float, float, float]] = []
    proofs: list[float] = []
    began = time.perf_counter()

    def heard(now: Proved) -> None:
        when = time.perf_counter() - began
        cost = inf if now.best is None else now.best.objective
        trace.append((when, cost, now.bound))
        if cost - now.bound < 0.005 and not proofs:
            proofs.append(when)  # one engine's proof: what the peers' times are as well

    case = Case(plan, effort=Effort(SECONDS, heard=heard))
    with _EnginePeaks() as peaks:
        began = time.perf_counter()
        proved = case.proved
        ended = time.perf_counter() - began
    trace.append((ended, inf if proved.best is None else proved.best.objective, proved.bound))
    if proved.proof is not None and not proofs:
        proofs.append(ended)
    return Trial(trace, proofs[0] if proofs else None, peaks.total())


class _EnginePeaks:
    """Watches the peak memory of the engines' processes: they are killed when a race ends."""

    def __init__(self) -> None:
        self._peaks: dict[int, float] = {}
        self._over = threading.Event()
        self._thread = threading.Thread(target=self._watch, daemon=True)

    def __enter__(self) -> _EnginePeaks:
        self._thread.start()
        return self

    def __exit__(self, *_: object) -> None:
        self._over.set()
        self._thread.join()

    def total(self) -> float:
        """Peak of this process and of the largest processes of the two engines, MB."""
        here = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
        return here + sum(sorted(self._peaks.values())[-len(engines().hosts) :])

    def _watch(self) -> None:
        while not self._over.wait(0.1):
            for host in engines().hosts.values():
                pid = host.pid
                with suppress(OSError, StopIteration):
                    lines = Path(f"/proc/{pid}/status").read_text(encoding="utf-8").splitlines()
                    line = next(x for x in lines if x.startswith("VmHWM"))
                    self._peaks[pid or 0] = int(line.split()[1]) / 1024


def _peer(name: str, raw: dict[str, Any]) -> Trial:
    request = json.dumps({"peer": name, "seconds": SECONDS, "threads": THREADS, "matrix": raw})
    done = subprocess.run(
        [sys.executable, str(HERE / "peer.py")], input=request, capture_output=True, text=True, check=True
    )
    found = json.loads(done.stdout.strip().splitlines()[-1])
    trace = [
        (when, inf if cost is None else cost, -inf if bound is None else bound)
        for when, cost, bound in found["trace"]
    ]
    return Trial(trace, trace[-1][0] if found["proved"] else None, found["memory"])


def shown(row: FamilyRow) -> str:
    """One line: first crew, proof, gap after 1 s and 10 s, memory, per solver."""
    cells = ["x".join(map(str, row.size)) + f" seed {row.seed}"]
    for name, trial in row.trials.items():
        proved = "-" if trial.proved is None else f"{trial.proved:.2f} s"
        cells.append(
            f"{name}: first {trial.first:.2f} s, proved {proved}, gap {trial.gap(EARLY):.2f} / "
            f"{trial.gap(SECONDS):.3f} %, {trial.memory:.0f} MB"
        )
    return " | ".join(cells)


def summary(rows: Sequence[FamilyRow]) -> str:
    """The ratios the issue asks for."""
    proof_ratios, gap_ratios, missed, worse = [], [], 0, 0
    for row in rows:
        here = row.trials["here"]
        peers = [row.trials[name] for name in PEERS]
        times = [trial.proved for trial in peers if trial.proved is not None]
        if times:
            missed += here.proved is None or here.proved > SECONDS
            proof_ratios.append((here.proved or SECONDS) / min(times))
        elif here.proved is None:
            best = min(trial.gap(SECONDS) for trial in peers)
            gap_ratios.append(max(here.gap(SECONDS), 1e-4) / max(best, 1e-4))
            worse += here.gap(SECONDS) > best + 0.05
    first = max(row.trials["here"].first for row in rows)
    memory = max(row.trials["here"].memory for row in rows)
    return "\n".join(
        (
            f"proved by a peer: {len(proof_ratios)}, of these not here within {SECONDS:g} s: {missed}; "
            f"time to proof / best peer {_geometric_mean(proof_ratios):.2f}",
            f"proved by nobody: {len(gap_ratios)}; gap at {SECONDS:g} s / best peer "
            f"{_geometric_mean(gap_ratios):.2f}, worse by more than 0.05 points on {worse}",
            f"slowest first crew {first:.2f} s, most memory {memory:.0f} MB",
        )
    )


def _geometric_mean(values: Sequence[float]) -> float:
    return exp(sum(map(log, values)) / len(values)) if values else 1.0


def write_csv(rows: Sequence[FamilyRow], path: str) -> None:
    """The table as CSV, one line per plan and solver."""
    with open(path, "w", newline="", encoding="utf-8") as file:
        writer = csv.writer(file)
        writer.writerow(COLUMNS)
        for row in rows:
            for name, trial in row.trials.items():
                early, late = trial.at(EARLY), trial.at(SECONDS)
                size = "x".join(map(str, row.size))
                writer.writerow(
                    (size, row.seed, name, trial.first, trial.proved, *early, *late, trial.memory)
                )


if __name__ == "__main__":
    main(sys.argv[1:])
