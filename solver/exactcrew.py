"""The proved exact crew that later questions start from, or why there is none to start from."""

from __future__ import annotations

from typing import Any

from solver.answer import CrewReport, State, to_json
from solver.search import Found
from solver.solve import Case


class NoExactCrew(ValueError):
    """The plan has no exact crew, or none proved in time. `document` tells the same to machines."""

    def __init__(self, says: str, document: dict[str, Any]) -> None:
        super().__init__(says)
        self.document = document


def exact_crew(case: Case) -> tuple[Found, CrewReport]:
    """The exact crew, proved, with its appraisal. Raises NoExactCrew."""
    proved, report = case.proved, case.exact_report
    if proved.state is State.PROVED and proved.best is not None and report is not None:
        return proved.best, report
    if proved.state is State.IMPOSSIBLE:
        conflict = case.conflict
        lines = [f"  {one.says}" for one in conflict.lines] if conflict else []
        says = "\n".join(["No workable crew exists. These cannot hold together:", *lines])
        raise NoExactCrew(says, {"state": proved.state.value, "conflict": to_json(conflict)})
    says = "The cheapest crew was not proved in the time given; without it this cannot be told."
    raise NoExactCrew(says, {"state": proved.state.value, "conflict": None})
