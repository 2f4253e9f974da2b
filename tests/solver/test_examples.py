"""The example plans show what they are there to show."""

from __future__ import annotations

import pytest

import resources
from solver.answer import Answer, Policy, State
from solver.planfile import dump_plan, parse_plan, read_plan
from solver.solve import solve


def answered(name: str) -> Answer:
    (path,) = [p for p in resources.example_paths() if p.name == f"{name}.crew.json"]
    return solve(read_plan(path), seconds=20)


def broken_phases(answer: Answer, policy: Policy) -> set[str | None]:
    report = answer.report(policy)
    assert report is not None
    return {line.phase for line in report.lines if line.margin < -1e-6}


@pytest.mark.parametrize("path", resources.example_paths(), ids=lambda p: p.name)
def test_examples_are_plans_without_problems(path) -> None:
    plan = read_plan(path)
    assert parse_plan(dump_plan(plan)) == plan
    assert plan.title
    assert plan.notes


def test_hillside_is_the_one_that_opens_first() -> None:
    assert resources.example_paths()[0].name == "hillside.crew.json"


def test_museum_store_moves_people_through_its_phases_and_rounds_badly() -> None:
    answer = answered("museum-store")
    assert answer.state is State.PROVED
    assert answer.exact is not None
    assert answer.seconds < 5  # measured 0.1 to 0.2 s
    assert answer.exact.joiners > 0
    assert answer.exact.leavers > 0
    assert len(broken_phases(answer, Policy.NEAREST)) == 3
    up, patched = answer.report(Policy.UP), answer.report(Policy.PATCHED)
    assert up is not None
    assert up.cost is not None
    assert up.cost > 1.1 * answer.exact.cost
    assert patched is not None
    assert patched.cost is not None
    assert patched.cost > 1.03 * answer.exact.cost
    assert answer.whole_people_cost is not None
    assert 1 < answer.whole_people_cost.percent < 4


def test_no_crew_could_be_met_by_fractional_people_only() -> None:
    answer = answered("no-crew")
    assert answer.state is State.IMPOSSIBLE
    assert answer.exact is None
    assert answer.fractional is not None
    assert all(report.workable is False for report in answer.crews)


def test_everything_shipped_is_where_it_is_looked_for() -> None:
    assert resources.font_path().read_bytes()[:4] == b"\0\1\0\0"
    assert resources.font_path(bold=True).read_bytes()[:4] == b"\0\1\0\0"
    assert resources.icon_path().read_bytes()[:4] == b"\x89PNG"
    assert resources.icon_path("svg").read_text("utf-8").startswith("<svg")
    assert {"full-complement", "dejavu-fonts"} <= resources.licence_texts().keys()


def test_hillside_shows_why_rounding_will_not_do() -> None:
    answer = answered("hillside")
    assert answer.state is State.PROVED
    assert answer.exact is not None
    nearest, up, patched = (answer.report(p) for p in (Policy.NEAREST, Policy.UP, Policy.PATCHED))
    assert nearest is not None
    assert up is not None
    assert patched is not None
    assert up.cost is not None
    assert patched.cost is not None
    assert len({line.line for line in nearest.lines if line.margin < -1e-6}) >= 2
    assert up.cost > 1.03 * answer.exact.cost
    assert patched.cost > 1.01 * answer.exact.cost
    assert answer.whole_people_cost is not None
    assert 0.5 < answer.whole_people_cost.percent < 5
