"""The proved exact crew that later questions start from, or why there is none to start from."""

from __future__ import annotations

from solver.answer import CrewReport, State, to_json
from solver.found import Found
from solver.report import conflict_words
from solver.solve import Case
from solver.unanswered import NoExactCrew


def exact_crew(case: Case) -> tuple[Found, CrewReport]:
    """The exact crew, proved, with its appraisal. Raises NoExactCrew."""
    proved, report = case.proved, case.exact_report
    if proved.state is State.PROVED and proved.best is not None and report is not None:
        return proved.best, report
    document = {"state": proved.state.value, "conflict": to_json(case.conflict)}
    if proved.state is State.IMPOSSIBLE:
        told = "" if case.conflict is None else f"\n{conflict_words(case.conflict)}"
        raise NoExactCrew(f"No workable crew exists.{told}", document)
    says = "The cheapest crew was not proved in the time given; without it this cannot be told."
    raise NoExactCrew(says, document)
