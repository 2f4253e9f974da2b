"""What counts as a proof: our own search, or engines whose crews stand the check and whose costs agree."""

from __future__ import annotations

from collections.abc import Callable
from decimal import Decimal
from math import inf
from typing import Any

import numpy as np
import pytest

from solver import proof
from solver.answer import Proof, State
from solver.engine import EngineName, WholeResult, WholeStatus
from solver.plan import Category, Plan, Presence, Sense, Work
from solver.race import Heat, Standing
from solver.solve import solve

CBC, HIGHS = EngineName.CBC, EngineName.HIGHS
BEST = 800.0  # two gangs of four


def plan() -> Plan:
    """75 hours for gangs of four at 100 each, 10 hours a person: eight people."""
    gang = Category("Gang", Decimal(100), Decimal(10), lot=Decimal(4), output={"Work": Decimal(1)})
    return Plan(categories=(gang,), works=(Work("Work", "h", (Decimal(75),)),))


class FakeRace:
    """Stands in for the engines: `says(standing, on_crew)` writes down what they found."""

    def __init__(self, says: Callable[[Standing, Any], None]) -> None:
        self._says = says

    def warm(self) -> None:
        """Nothing to start."""

    def run(self, heat: Heat, standing: Standing) -> Standing:
        self._says(standing, heat.on_crew)
        return standing


@pytest.fixture
def race(monkeypatch: pytest.MonkeyPatch) -> Callable[..., None]:
    """No time for our own search; the engines say what the test wants."""
    monkeypatch.setattr(proof, "OWN_SECONDS", 0.0)

    def use(says: Callable[[Standing, Any], None]) -> None:
        monkeypatch.setattr(proof, "engines", lambda: FakeRace(says))

    return use


def proving(**costs: float) -> Callable[[Standing, Any], None]:
    def says(standing: Standing, on_crew: Any) -> None:
        assert on_crew([2.0, *[20.0] * 3]) == pytest.approx(BEST)
        standing.proofs.update({EngineName[name]: cost for name, cost in costs.items()})
        standing.bound = max(costs.values())

    return says


def test_both_engines_agreeing_to_the_cent_prove(race: Callable[..., None]) -> None:
    race(proving(CBC=BEST + 0.004, HIGHS=BEST - 0.004))
    answer = solve(plan())
    assert (answer.state, answer.proof) == (State.PROVED, Proof.TWO_ENGINES)
    assert answer.exact is not None
    assert answer.exact.cost == BEST


@pytest.mark.parametrize("other", [BEST - 0.02, BEST + 0.02, 400.0, 1200.0])
def test_engines_that_disagree_prove_nothing(race: Callable[..., None], other: float) -> None:
    race(proving(CBC=other, HIGHS=BEST))
    answer = solve(plan())
    assert (answer.state, answer.proof) == (State.BEST_FOUND, None)
    assert answer.bound is not None
    assert answer.bound <= BEST


def test_a_crew_that_breaks_a_line_is_not_taken_from_an_engine(race: Callable[..., None]) -> None:
    def says(standing: Standing, on_crew: Any) -> None:
        assert on_crew([1.0, *[20.0] * 3]) is None  # four people do 40 of 75 hours
        standing.proofs.update({CBC: 400.0, HIGHS: 400.0})

    race(says)
    answer = solve(plan())
    assert answer.state is State.BEST_FOUND
    assert answer.exact is not None
    assert answer.exact.cost == BEST  # the fractional crew rounded up


def test_one_engine_calling_it_impossible_is_not_enough(race: Callable[..., None]) -> None:
    budget = Presence("Nobody", {"Gang": Decimal(1)}, Sense.AT_MOST, Decimal(7))
    short = Plan(categories=plan().categories, works=plan().works, rules=(budget,))
    assert solve(short).state is State.IMPOSSIBLE
    tight = Plan(
        categories=plan().categories,
        works=plan().works,
        rules=(Presence("Odd", {"Gang": Decimal(1)}, Sense.EXACTLY, Decimal("7.6")),),
    )
    race(lambda standing, _: standing.infeasible.add(CBC))
    assert solve(tight).state is State.BEST_FOUND
    race(lambda standing, _: standing.infeasible.update({CBC, HIGHS}))
    answer = solve(tight)
    assert (answer.state, answer.proof) == (State.IMPOSSIBLE, Proof.TWO_ENGINES)


class TestASecondOpinion:
    """Our own search finding nothing is told only when HiGHS finds nothing either, or else both engines."""

    def tight(self) -> Plan:
        odd = Presence("Odd", {"Gang": Decimal(1)}, Sense.EXACTLY, Decimal("7.6"))
        return Plan(categories=plan().categories, works=plan().works, rules=(odd,))

    def test_agreeing(self) -> None:
        answer = solve(self.tight())
        assert (answer.state, answer.proof) == (State.IMPOSSIBLE, Proof.TWO_ENGINES)

    @pytest.mark.parametrize(
        "second",
        [
            WholeResult(WholeStatus.OPTIMAL, 760.0, 760.0, np.array([1.9, 75.0])),
            WholeResult(WholeStatus.NOTHING, inf, -inf, None),
        ],
        ids=["disagreeing", "out of time"],
    )
    def test_missing(self, second: WholeResult, monkeypatch: pytest.MonkeyPatch) -> None:
        monkeypatch.setattr(proof, "whole", lambda *_, **__: second)
        monkeypatch.setattr(proof, "engines", lambda: FakeRace(lambda *_: None))
        answer = solve(self.tight())
        assert (answer.state, answer.proof, answer.exact) == (State.BEST_FOUND, None, None)
        both = FakeRace(lambda standing, _: standing.infeasible.update({CBC, HIGHS}))
        monkeypatch.setattr(proof, "engines", lambda: both)
        assert solve(self.tight()).state is State.IMPOSSIBLE
