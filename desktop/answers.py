"""What the window knows about the plan: the latest answer and whether it still fits.

Pages read properties and listen to `changed`; long questions are asked with `ask` and read with `detail`.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import Any

from PySide6.QtCore import QObject, Signal

from desktop.document import Document
from solver.answer import Answer
from solver.plan import Plan


class Status(StrEnum):
    """What is going on with the current plan.

    SOLVING: being worked on (`answer` may be an older one, then `stale`, or the best found so far).
    READY: `answer` belongs to the current plan. PROBLEMS: `problems` lists them. EMPTY: nothing to solve yet.
    RESTARTING: the solver process was lost and is asked again. FAILED: `failure` says why there is none.
    """

    EMPTY = "empty"
    SOLVING = "solving"
    READY = "ready"
    PROBLEMS = "problems"
    RESTARTING = "restarting"
    FAILED = "failed"


@dataclass(frozen=True)
class PlanProblem:
    """One thing wrong with the plan: where (`categories[2].pay`) and what."""

    place: str
    says: str


@dataclass(frozen=True)
class Progress:
    """How far a long question is: a sentence and a share in 0..1 (None = not known)."""

    says: str
    done: float | None


class Answers(QObject):
    """Answers to the document's plan.

    `changed` is emitted whenever `status`, `answer`, `stale` or `problems` changed; `detail_changed(question)`
    when the result or the progress of a long question changed.
    """

    changed = Signal()
    detail_changed = Signal(str)

    def __init__(self, document: Document, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._answer: Answer | None = None
        self._plan: Plan | None = None
        self._status = Status.EMPTY
        self._problems: tuple[PlanProblem, ...] = ()
        self._failure = ""
        self._details: dict[str, Any] = {}
        self._progress: dict[str, Progress] = {}

    @property
    def status(self) -> Status:
        """What is going on."""
        return self._status

    @property
    def answer(self) -> Answer | None:
        """The latest answer, also when it is out of date; None before the first."""
        return self._answer

    @property
    def plan(self) -> Plan | None:
        """The plan that `answer` belongs to."""
        return self._plan

    @property
    def stale(self) -> bool:
        """True when `answer` belongs to an older plan than the document's."""
        return self._answer is not None and self._plan != self._document.plan

    @property
    def problems(self) -> tuple[PlanProblem, ...]:
        """What is wrong with the plan; empty unless `status` is PROBLEMS."""
        return self._problems

    @property
    def failure(self) -> str:
        """Why there is no answer, in a sentence; empty unless `status` is FAILED."""
        return self._failure

    def receive(self, plan: Plan, answer: Answer) -> None:
        """Take `answer` as the answer to `plan`: the worker's replies arrive here, and tests' answers."""
        self._plan = plan
        self._answer = answer
        self._status = Status.READY
        self.changed.emit()

    def ask(self, question: str, **options: Any) -> None:
        """Ask a long question ("cost", "room", "near", ...) about the current plan; dropped when it changes."""

    def cancel(self, question: str) -> None:
        """Stop working on a long question."""

    def detail(self, question: str) -> Any | None:
        """The result of the latest `ask(question)` for the current plan, None until it is there."""
        return self._details.get(question)

    def progress(self, question: str) -> Progress | None:
        """How far `question` is; None when nobody is working on it."""
        return self._progress.get(question)
