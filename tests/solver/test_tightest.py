"""The tightest line of a given crew, as the worker is asked for it."""

from __future__ import annotations

import json
from typing import Any

import numpy as np
import pytest

from solver.nearbest import near_best
from solver.questions import QUESTIONS, BadOption
from solver.solve import Heard
from solver.tightestline import TightestLine
from solver.warmup import TINY
from tests.solver.full_plans import full_plan

ASK = QUESTIONS["tightest"].ask
HEARD: Heard = lambda part, value: None  # noqa: E731 # nobody listens


@pytest.mark.parametrize("seed", range(4))
def test_it_is_the_one_of_the_near_best_list(seed: int) -> None:
    plan = full_plan(np.random.default_rng(seed))
    for near in near_best(plan, within=3.0, most=4).crews:
        crew = json.loads(json.dumps({name: list(counts) for name, counts in near.crew.items()}))
        assert ASK(plan, {"crew": crew}, HEARD) == TightestLine(near.tightest)


def test_of_a_crew_that_breaks_a_line_it_is_that_line() -> None:
    assert ASK(TINY, {"crew": {TINY.categories[0].name: [0]}}, HEARD).line


@pytest.mark.parametrize("crew", [None, 3, {"A": 3}, {"A": [1, 2]}, {"A": [-1]}, {"A": ["x"]}])
def test_it_needs_a_crew(crew: Any) -> None:
    with pytest.raises(BadOption, match="people of each category in each phase"):
        ASK(TINY, {"crew": crew}, HEARD)
