"""Big jobs in phases: first crews, stretches of phases made cheaper, and the race that begins at once."""

from __future__ import annotations

import pytest

from solver import proof
from solver.answer import State
from solver.found import Found
from solver.proof import Effort, Prover
from solver.rounding import half_up
from solver.solve import Case, solve
from solver.tightening import PhasesAlone
from solver.windows import Windows
from tests.family import family_plan


def first_crew(case: Case) -> Found:
    assert case.relaxed is not None
    prover = Prover(case.program, case.search)
    crew = prover._mended(PhasesAlone(case.program), case.relaxed.lots, half_up)
    assert crew is not None
    return crew


def padded(case: Case, crew: Found) -> Found:
    """Everyone twice: workable still, as no line of the family limits numbers, and far too dear."""
    lots = tuple(2 * n for n in crew.lots)
    objective = case.search.evaluate(lots)
    assert objective is not None
    return Found(lots, objective)


@pytest.mark.parametrize("seed", range(3))
def test_stretches_make_a_crew_cheaper_until_none_does(seed: int) -> None:
    case = Case(family_plan(3, 1, 8, seed))
    windows = Windows(case.program, case.search)
    start = best = padded(case, first_crew(case))
    assert windows.useful
    for _ in range(400):
        better = windows.step(best)
        if better is None:
            break
        assert better.objective <= best.objective
        assert case.search.evaluate(better.lots) == pytest.approx(better.objective)
        best = better
    else:
        pytest.fail("the rounds come to no end")
    assert best.objective < start.objective
    proved = solve(case.plan, start=None)
    assert proved.state is State.PROVED
    assert proved.exact is not None
    assert proved.exact.cost <= best.objective + 0.005
    assert best.objective <= 1.02 * proved.exact.cost


def test_short_jobs_are_not_cut_into_stretches() -> None:
    case = Case(family_plan(3, 1, 4, 0))
    assert not Windows(case.program, case.search).useful


@pytest.mark.parametrize("seed", range(2))
def test_plans_raced_at_once_end_at_the_same_cost(seed: int, monkeypatch: pytest.MonkeyPatch) -> None:
    plan = family_plan(3, 1, 8, seed)
    usual = solve(plan)
    monkeypatch.setattr(proof, "MANY_HEADS", 10)
    costs = []
    case = Case(plan, effort=Effort(30.0, heard=lambda now: costs.append(now.best)))
    proved = case.proved
    assert proved.state is State.PROVED
    assert proved.best is not None
    assert usual.exact is not None
    assert proved.best.objective == pytest.approx(usual.exact.cost, abs=0.005)
    assert costs, "crews on the way are told"
