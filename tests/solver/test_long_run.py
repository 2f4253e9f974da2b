"""The long-run check itself: it runs, and it notices."""

from __future__ import annotations

import io
from dataclasses import replace

import pytest

from solver.answer import Answer
from tests import long_run
from tests.solver import solved


def test_a_few_plans_of_every_kind_agree() -> None:
    out = io.StringIO()
    tally = long_run.run([f"small:{n}" for n in range(8)] + ["large:1"], 1, out)
    assert out.getvalue() == ""
    assert not tally.disagreements
    assert tally.plans == {"any feature": 2, "bent": 2, "all features": 2, "boxed": 2, "large": 1}
    assert tally.checks["exact cost"] == 9
    assert tally.checks["room"] == 2
    assert "9 plans" in next(tally.lines())


def test_what_disagreed_once_agrees() -> None:
    """Equally cheap within six hundredths of a cent: the program and the checker need not draw one line."""
    out = io.StringIO()
    assert not long_run.run(["small:1009249"], 1, out).disagreements, out.getvalue()


def _dearer(answer: Answer) -> Answer:
    assert answer.exact is not None
    return replace(answer, exact=replace(answer.exact, cost=answer.exact.cost + 1), bound=answer.bound)


def _lower_floor(answer: Answer) -> Answer:
    assert answer.floor is not None
    return replace(answer, floor=answer.floor - 1)


def _other_margin(answer: Answer) -> Answer:
    crews = []
    for report in answer.crews:
        lines = tuple(replace(line, margin=line.margin + 1) for line in report.lines)
        crews.append(replace(report, lines=lines))
    return replace(answer, crews=tuple(crews))


def _unbroken(answer: Answer) -> Answer:
    return replace(answer, crews=tuple(replace(report, breaks=()) for report in answer.crews))


@pytest.mark.parametrize(
    ("spoil", "noticed"),
    [
        (_dearer, {"exact cost", "exact crew", "bound"}),
        (_lower_floor, {"floor"}),
        (_other_margin, {"margins of hours", "breaks"}),
        (_unbroken, {"breaks"}),
    ],
)
def test_a_wrong_answer_is_noticed(spoil, noticed: set[str], monkeypatch: pytest.MonkeyPatch) -> None:
    seed = next(s for s in range(50) if solved.full(s)[1].exact and _breaks(solved.full(s)[1]))
    plan, answer = solved.full(seed)
    spoiled = long_run.Case("all features", plan, spoil(answer))
    monkeypatch.setattr(long_run, "small_case", lambda _: spoiled)
    result = long_run.examine("small:0")
    assert {title for title, _ in result.disagreements} >= noticed


def _breaks(answer: Answer) -> bool:
    return any(report.breaks for report in answer.crews)


def test_a_failure_of_the_solver_is_told_and_the_run_goes_on(monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(_: int) -> None:
        raise ZeroDivisionError("a defect")

    monkeypatch.setattr(long_run, "small_case", broken)
    result = long_run.examine("small:0")
    assert result.disagreements == [("solve", "ZeroDivisionError: a defect")]
