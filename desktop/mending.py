"""What is to be mended in a plan, as data: problems, refused entries, lines that cannot hold together."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from desktop import mend_words as say
from desktop.answers import Answers, Status
from desktop.document import Document
from desktop.places import TABLES, in_words
from solver.answer import Conflict, Conflicting, State
from solver.plan import Plan


@dataclass(frozen=True)
class Entry:
    """One entry to be mended: where it is, as problems name places, and a sentence about it."""

    place: str
    where: str
    says: str


def conflict_of(answers: Answers) -> Conflict | None:
    """Why the plan has no crew, None where it has one or nobody knows."""
    answer = answers.answer
    return answer.conflict if answer is not None and answer.state is State.IMPOSSIBLE else None


def problems(document: Document, answers: Answers) -> list[Entry]:
    """Entries that make no plan."""
    if answers.status is not Status.PROBLEMS:
        return []
    plan = document.plan
    return [
        Entry(p.place, (where := in_words(plan, p.place)), say.entry(where, p.says)) for p in answers.problems
    ]


def refused(document: Document) -> list[Entry]:
    """Entries that were typed and do not count, in the order they were typed."""
    return list(_refused(document))


def is_anything(document: Document, answers: Answers) -> bool:
    """True where the page has something to show for the plan as it stands."""
    impossible = conflict_of(answers) is not None and not answers.stale
    return impossible or bool(document.refused) or answers.status is Status.PROBLEMS


def said_of(plan: Plan, line: Conflicting) -> str:
    """A line in the planner's words, with its phase where there are several."""
    said = line.says
    if not said.startswith(line.line):  # names stay as they were typed
        said = said[:1].upper() + said[1:]
    several = line.phase is not None and len(plan.phases) > 1
    return say.line_in(said, line.phase or "") if several else said


def _refused(document: Document) -> Iterator[Entry]:
    plan = document.plan
    for (key, name, column_key), refusal in document.refused.items():
        table = next((t for t in TABLES if t.key == key), None)
        if table is None or name not in table.names(plan):
            continue
        row = table.names(plan).index(name)
        column = next((c for c in table.columns(plan) if c.key == column_key), None)
        if column is not None:
            where = f"{name}, {column.title}"
            yield Entry(column.place(row), where, say.refused(where, refusal.text, refusal.reason))
