"""What our own search leaves to HiGHS and CBC comes out the same."""

from __future__ import annotations

from math import inf

import numpy as np
import pytest

from solver import inquiry
from solver.engine import EngineName, WholeResult, WholeStatus
from solver.found import Limits, Outcome
from solver.grain import whole_grain
from solver.inquiry import Inquiry
from solver.program import Program
from solver.search import Search
from solver.twoengines import two_engines
from tests.solver.random_plans import random_plan

NOTHING_YET = Outcome(None, -inf, False, 0)


def searched(seed: int) -> Search:
    plan = random_plan(np.random.default_rng(seed), max_categories=4, max_works=2, max_phases=1)
    program = Program(plan, [40] * len(plan.categories))
    return Search(program, grain=whole_grain(program))


@pytest.mark.parametrize("seeds", [range(20), range(20, 40)], ids=str)
def test_a_crew_in_a_box_is_the_same(seeds: range) -> None:
    met = set()
    for seed in seeds:
        search = searched(seed)
        box = search.box()
        heads = search.program.head_count
        box[1][:heads] = np.maximum(box[0][:heads], np.minimum(box[1][:heads], 3))
        own = search.cheapest(Limits(), box=box)
        theirs = two_engines(search, NOTHING_YET, seconds=20.0, box=box)
        assert own.complete
        assert theirs.complete
        assert (own.best is None) == (theirs.best is None)
        if own.best is not None and theirs.best is not None:
            assert theirs.best.objective == pytest.approx(own.best.objective, abs=0.005)
            lots = np.array(theirs.best.lots)
            assert (lots >= box[0][:heads]).all()
            assert (lots <= box[1][:heads]).all()
        met.add(own.best is None)
    assert met == {True, False}


def test_a_question_ends_the_same_where_our_own_search_gets_nowhere(monkeypatch: pytest.MonkeyPatch) -> None:
    for seed in range(12):
        usual = Inquiry().cheapest(searched(seed))
        with monkeypatch.context() as patched:
            for name in ("QUICK", "OWN"):
                patched.setattr(inquiry, name, Limits(nodes=0))
            other = Inquiry().cheapest(searched(seed))
        assert usual.complete
        assert other.complete
        assert (usual.best is None) == (other.best is None)
        if usual.best is not None and other.best is not None:
            assert other.best.objective == pytest.approx(usual.best.objective, abs=0.005)


def test_our_own_search_tries_again_where_the_engines_do_not_decide(monkeypatch: pytest.MonkeyPatch) -> None:
    asked: list[EngineName] = []

    def undecided(_matrix: object, engine: EngineName, **_: object) -> WholeResult:
        asked.append(engine)
        return WholeResult(WholeStatus.NOTHING, inf, -inf, None)

    monkeypatch.setattr("solver.twoengines.whole", undecided)
    monkeypatch.setattr(inquiry, "QUICK", Limits(nodes=0))
    seed = next(s for s in range(40) if searched(s).cheapest(Limits()).best is not None)
    outcome = Inquiry().cheapest(searched(seed))
    assert asked == [EngineName.HIGHS]
    assert outcome.complete
    assert outcome.best is not None


def test_engines_that_disagree_settle_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    costs = {EngineName.HIGHS: 100.0, EngineName.CBC: 101.0}
    monkeypatch.setattr(
        "solver.twoengines.whole",
        lambda _, engine, **__: WholeResult(WholeStatus.OPTIMAL, costs[engine], costs[engine], None),
    )
    assert not two_engines(searched(0), NOTHING_YET, seconds=1.0).complete
