"""The long-run check: random plans of every feature against HiGHS, an engine-free checker and brute force.

Run by hand, from the folder of the project:

    python -m tests.long_run --small 20000 --large 500 --processes 2        (hours)
    python -m tests.long_run --small 1000 --large 20                        (minutes)

Small plans are drawn in turn: of any feature; bent towards what breaks solvers (ill-scaled, tied,
degenerate, tight); every feature at once over two phases; boxed, where every crew is looked at. Large ones
have up to 8 categories, 4 works and 4 phases. Plan n is drawn from seed `--seed` + n, so a disagreement
can be repeated alone: `--only small:1234`.

Compared on each: floor and exact cost; the exact crew by the checker; which of equally cheap crews is
taken; every rounding's workability, cost and margins; every break's split. On boxed plans also: the taken
crew, every break's inequality for every workable crew, near-best crews (set and order), room to move
(loosening and saving), all by looking at every crew.
A disagreement in which the other side's crew fails the checker is counted as the other side's.

Prints one line per disagreement as it is found, then the counts; exit code 1 if there was any.
"""

from __future__ import annotations

import argparse
import os
import sys
from collections import Counter
from collections.abc import Callable, Iterator
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass, field
from functools import partial
from time import monotonic
from typing import IO

import numpy as np

from solver.answer import Answer, State
from solver.plan import Plan
from solver.solve import solve
from tests.solver import agreement, checker, hostile_plans, reference, solved
from tests.solver.full_plans import full_plan
from tests.solver.random_plans import random_plan

LARGE = {"max_categories": 8, "max_works": 4, "max_phases": 4}
LARGE_SECONDS = 10.0
SMALL_SECONDS = 10.0


@dataclass
class Case:
    """A plan with its answer, and every workable crew where it is boxed."""

    kind: str
    plan: Plan
    answer: Answer
    workable: solved.Workable | None = None


@dataclass
class Result:
    """What one plan showed: which checks ran, which disagreed and how."""

    name: str
    kind: str
    state: str
    seconds: float
    checks: list[str] = field(default_factory=list)
    disagreements: list[tuple[str, str]] = field(default_factory=list)
    theirs: list[tuple[str, str]] = field(default_factory=list)
    compared: Counter[str] = field(default_factory=Counter)


# ---- drawing ---------------------------------------------------------------------------------------


def _any_feature(rng: np.random.Generator) -> Plan:
    return random_plan(rng)


def _bent(rng: np.random.Generator) -> Plan:
    return hostile_plans.hostile_plan(rng, max_phases=1 + int(rng.integers(2)))


def _large(rng: np.random.Generator) -> Plan:
    return random_plan(rng, **LARGE)


SMALL_KINDS: tuple[tuple[str, Callable[[np.random.Generator], Plan]], ...] = (
    ("any feature", _any_feature),
    ("bent", _bent),
    ("all features", full_plan),
    ("boxed", _any_feature),  # drawn by solved.boxed
)


def small_case(seed: int) -> Case:
    """Small plan number `seed`."""
    kind, draw = SMALL_KINDS[seed % len(SMALL_KINDS)]
    if kind == "boxed":
        plan, answer, workable = solved.boxed.__wrapped__(seed // len(SMALL_KINDS))
        return Case(kind, plan, answer, workable)
    plan = draw(np.random.default_rng(seed))
    return Case(kind, plan, solve(plan, seconds=SMALL_SECONDS))


def large_case(seed: int) -> Case:
    """Large plan number `seed`."""
    plan = _large(np.random.default_rng(seed))
    return Case("large", plan, solve(plan, seconds=LARGE_SECONDS))


# ---- comparing -------------------------------------------------------------------------------------


def floor_equals_highs(case: Case, result: Result) -> None:
    """The relaxation, whose optimum has no tolerance to argue about."""
    reference.CAP = _cap(case)
    found = reference.written_out(case.plan, relax=True).solve()
    floor = float(found.fun) if found.status == 0 else None
    assert agreement.same(case.answer.floor, floor), f"floor {case.answer.floor}, HiGHS {floor}"


def exact_equals_highs(case: Case, result: Result) -> None:
    """The exact cost; of two answers the one whose crew fails the checker is the wrong one."""
    reference.CAP = _cap(case)
    model = reference.written_out(case.plan, relax=False)
    found = model.solve()
    if found.status == 1:  # its time limit
        result.compared["no answer by HiGHS"] += 1
        return
    theirs = float(found.fun) if found.status == 0 else None
    ours = case.answer.exact.cost if case.answer.exact else None
    if agreement.same(ours, theirs):
        return
    says = f"exact {ours} ({case.answer.state}), HiGHS {theirs}"
    if theirs is None or _fails(case.plan, model, found.x, ours):
        result.theirs.append(("exact cost", says))
    else:
        assert case.answer.state is State.BEST_FOUND, says
        result.compared["best found, not the best"] += 1


def _cap(case: Case) -> int:
    """Lots a head count may reach in the reference: small, as its switches are multiplied by it."""
    if case.answer.exact is None:
        return 20_000
    lots = [n / float(c.lot) for c in case.plan.categories for n in case.answer.exact.crew[c.name]]
    return max(2_000, 4 * int(max(lots, default=0)))


def _fails(plan: Plan, model: reference.Model, x: np.ndarray, ours: float | None) -> bool:
    """Whether the crew of the reference breaks a line, or costs no less than ours after all."""
    crew = {
        c.name: tuple(
            round(x[model.index["n", c.name, t]]) * checker.Fraction(c.lot) for t in range(len(plan.phases))
        )
        for c in plan.categories
    }
    cost = checker.cost_if_workable(plan, crew)
    return cost is None or (ours is not None and cost >= ours - max(0.005, 1e-6 * abs(ours)))


def ties_by_goals(case: Case, result: Result) -> None:
    """Which of equally cheap crews is taken."""
    reference.CAP = _cap(case)
    agreement.assert_preferred_crew_by_goals(case.plan, case.answer)


def bound_is_below(case: Case, result: Result) -> None:
    """No crew costs less than the bound, and a proved crew is its own bound."""
    answer = case.answer
    if answer.exact is None or answer.bound is None:
        return
    assert answer.bound <= answer.exact.cost + 0.005, (answer.bound, answer.exact.cost)
    if answer.state is State.PROVED:
        assert agreement.same(answer.bound, answer.exact.cost)


def _of_plan(check: Callable[[Plan, Answer], None]) -> Callable[[Case, Result], None]:
    def compare(case: Case, result: Result) -> None:
        check(case.plan, case.answer)

    return compare


def _of_box(check: Callable[[Plan, Answer, solved.Workable], None]) -> Callable[[Case, Result], None]:
    def compare(case: Case, result: Result) -> None:
        assert case.workable is not None
        check(case.plan, case.answer, case.workable)

    return compare


CHECKS: dict[str, Callable[[Case, Result], None]] = {
    "floor": floor_equals_highs,
    "exact cost": exact_equals_highs,
    "bound": bound_is_below,
    "exact crew": _of_plan(agreement.assert_exact_crew_stands),
    "crews": _of_plan(agreement.assert_crews_are_called_rightly),
    "margins of heads": _of_plan(agreement.assert_margins_of_heads_are_exact),
    "margins of hours": _of_plan(agreement.assert_margins_of_hours_equal_highs),
    "breaks": _of_plan(agreement.assert_breaks_split_exactly),
    "ties by goals": ties_by_goals,
}
BOXED_CHECKS: dict[str, Callable[[Case, Result], None]] = {
    "ties": _of_box(agreement.assert_preferred_crew_is_taken),
    "inequalities": _of_box(agreement.assert_inequalities_hold),
    "near-best": _of_box(agreement.assert_near_crews_are_complete),
    "room": _of_plan(agreement.assert_room_is_exact),
}


def examine(name: str) -> Result:
    """Draw, solve and compare plan `name` ("small:17")."""
    size, _, seed = name.partition(":")
    began = monotonic()
    try:
        case = (small_case if size == "small" else large_case)(int(seed))
    except Exception as failure:  # whatever it is, the run goes on and tells it
        result = Result(name, size, "failed", monotonic() - began, ["solve"])
        result.disagreements.append(("solve", f"{type(failure).__name__}: {failure}"))
        return result
    result = Result(name, case.kind, case.answer.state.value, case.answer.seconds)
    checks = CHECKS if case.workable is None else {**CHECKS, **BOXED_CHECKS}
    for title, check in checks.items():
        result.checks.append(title)
        try:
            check(case, result)
        except AssertionError as disagreement:
            result.disagreements.append((title, str(disagreement) or "see the check"))
        except Exception as failure:
            result.disagreements.append((title, f"{type(failure).__name__}: {failure}"))
    result.compared.update(_counts(case))
    return result


def _counts(case: Case) -> dict[str, int]:
    crews = list(agreement.crews_of(case.answer))
    return {
        "crews": len(crews),
        "margins": sum(len(report.lines) for report in crews),
        "breaks": sum(len(report.breaks) for report in crews),
        "workable crews looked at": len(case.workable or ()),
    }


# ---- the run ---------------------------------------------------------------------------------------


@dataclass
class Tally:
    """Counts over a whole run."""

    plans: Counter[str] = field(default_factory=Counter)
    states: Counter[str] = field(default_factory=Counter)
    checks: Counter[str] = field(default_factory=Counter)
    compared: Counter[str] = field(default_factory=Counter)
    disagreements: Counter[str] = field(default_factory=Counter)
    theirs: Counter[str] = field(default_factory=Counter)
    slowest: tuple[float, str] = (0.0, "")

    def add(self, result: Result) -> None:
        """Count one plan in."""
        self.plans[result.kind] += 1
        self.states[result.state] += 1
        self.checks.update(result.checks)
        self.compared.update(result.compared)
        self.disagreements.update(title for title, _ in result.disagreements)
        self.theirs.update(title for title, _ in result.theirs)
        self.slowest = max(self.slowest, (result.seconds, result.name))

    def lines(self) -> Iterator[str]:
        """The counts as text."""
        yield f"{self.plans.total():,} plans: {_listed(self.plans)}"
        yield f"states: {_listed(self.states)}"
        yield f"compared: {_listed(self.compared)}"
        for title, count in self.checks.items():
            wrong, other = self.disagreements[title], self.theirs[title]
            more = f", {other:,} where the reference is wrong" if other else ""
            yield f"  {title:<18} {count:>8,} plans, {wrong:,} disagreements{more}"
        yield f"slowest solve {self.slowest[0]:.1f} s ({self.slowest[1]})"


def _listed(counts: Counter[str]) -> str:
    return ", ".join(f"{name} {count:,}" for name, count in counts.items())


def run(names: list[str], processes: int, out: IO[str]) -> Tally:
    """Examine all plans, telling disagreements as they come."""
    tally, began = Tally(), monotonic()
    for done, result in enumerate(_results(names, processes), start=1):
        tally.add(result)
        for title, says in result.disagreements:
            print(f"{result.name} ({result.kind}): {title}: {says}", file=out, flush=True)
        for title, says in result.theirs:
            print(f"{result.name} ({result.kind}): the reference is wrong: {title}: {says}", file=out)
        if done % 500 == 0:
            print(f"{done:,} of {len(names):,} plans, {monotonic() - began:.0f} s", file=out, flush=True)
    return tally


def _results(names: list[str], processes: int) -> Iterator[Result]:
    if processes == 1:
        yield from map(examine, names)
        return
    with ProcessPoolExecutor(processes, initializer=_quiet) as pool:
        yield from pool.map(examine, names, chunksize=10)


def _quiet() -> int:
    """Native engines print to standard output; returns a descriptor of the real one."""
    kept, nowhere = os.dup(1), os.open(os.devnull, os.O_WRONLY)
    os.dup2(nowhere, 1)
    os.close(nowhere)
    return kept


def _asked(arguments: list[str]) -> argparse.Namespace:
    whole = partial(int, base=10)
    parser = argparse.ArgumentParser(prog="python -m tests.long_run")
    parser.add_argument("--small", type=whole, default=20_000, metavar="N", help="how many small plans")
    parser.add_argument("--large", type=whole, default=500, metavar="N", help="how many large plans")
    parser.add_argument("--seed", type=whole, default=0, metavar="S", help="seed of the first plan")
    parser.add_argument("--processes", type=whole, default=1, metavar="P")
    parser.add_argument("--only", action="append", metavar="small:N", help="one plan alone; may be repeated")
    return parser.parse_args(arguments)


def main(arguments: list[str]) -> int:
    """Exit code 1 if anything disagreed."""
    asked = _asked(arguments)
    sizes = (("small", asked.small), ("large", asked.large))
    names = asked.only or [f"{size}:{asked.seed + n}" for size, count in sizes for n in range(count)]
    with os.fdopen(_quiet(), "w", encoding="utf-8") as out:
        tally = run(names, asked.processes, out)
        print(*tally.lines(), sep="\n", file=out)
    return 1 if tally.disagreements else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
