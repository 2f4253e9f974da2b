"""Long questions about the plan, one after the other in a process of their own."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from PySide6.QtCore import QObject, Signal

from desktop import messages
from desktop.errand import Errand
from desktop.replies import Reply
from desktop.understanding import Progress
from desktop.workers import Workers
from solver import answer
from solver.mapanswer import CrewMap

SILENCE = 300_000  # ms a long question may be worked on without a word before it counts as hung

# question -> the class of its answer; one that is not here is handed on as plain dicts and lists
KINDS: Mapping[str, type[Any]] = {
    "cost": answer.WholePeopleDetail,
    "room": answer.Room,
    "near": answer.NearBest,
    "steps": answer.Steps,
    "map": CrewMap,
    "attend": answer.Attendance,
}


class Inquiries(QObject):
    """Asks long questions one at a time, so that the headline always finds a free processor.

    `changed(question)` when the result, the failure or the progress of a question changed.
    """

    changed = Signal(str)

    def __init__(self, workers: Workers | None, parent: QObject) -> None:
        super().__init__(parent)
        self._workers = workers
        self._waiting: dict[str, dict[str, Any]] = {}
        self._running = ""
        self._errand: Errand | None = None
        self._results: dict[str, Any] = {}
        self._failures: dict[str, str] = {}
        self._progress: dict[str, Progress] = {}

    def result(self, question: str) -> Any | None:
        """The answer to `question`, None until it is there."""
        return self._results.get(question)

    def failure(self, question: str) -> str:
        """Why there is no answer, in a sentence."""
        return self._failures.get(question, "")

    def progress(self, question: str) -> Progress | None:
        """How far `question` is; None when nobody is working on it."""
        return self._progress.get(question)

    def ask(self, question: str, request: dict[str, Any]) -> None:
        """Ask `question`, in place of the same question asked before."""
        self._forget(question)
        self._waiting[question] = request
        self._progress[question] = Progress(messages.WAITING_FOR_TURN, None)
        self.changed.emit(question)
        self._next()

    def cancel(self, question: str) -> None:
        """Stop working on `question`."""
        if question in self._progress:
            self._forget(question)
            self.changed.emit(question)
            self._next()

    def drop_all(self) -> None:
        """Forget every question and answer: they belong to an older plan."""
        for question in {*self._results, *self._failures, *self._progress}:
            self._forget(question)
            self.changed.emit(question)

    def _forget(self, question: str) -> None:
        for store in (self._waiting, self._results, self._failures, self._progress):
            store.pop(question, None)
        if question == self._running and self._errand is not None:
            errand, self._errand, self._running = self._errand, None, ""
            errand.cancel()

    def _next(self) -> None:
        if self._workers is None or self._errand is not None or not self._waiting:
            return
        question = next(iter(self._waiting))
        request = self._waiting.pop(question)
        errand = Errand(self._workers, question, request, KINDS.get(question), SILENCE, self)
        errand.heard.connect(self._on_heard)
        errand.ended.connect(self._on_ended)
        errand.given_up.connect(self._on_given_up)
        self._errand, self._running = errand, question
        self._progress[question] = Progress(messages.WORKING, None)
        self.changed.emit(question)
        errand.start()

    def _on_heard(self, reply: Reply) -> None:
        if isinstance(reply.value, Progress):
            self._progress[self._running] = reply.value
            self.changed.emit(self._running)

    def _on_ended(self, reply: Reply) -> None:
        question = self._running
        if reply.part == "answer":
            self._results[question] = reply.value
        else:
            self._failures[question] = messages.no_answer(reply.part, reply.value)
        self._finish(question)

    def _on_given_up(self, how: str) -> None:
        self._failures[self._running] = messages.SOLVER_LOST.format(how=how)
        self._finish(self._running)

    def _finish(self, question: str) -> None:
        self._errand, self._running = None, ""
        self._progress.pop(question, None)
        self.changed.emit(question)
        self._next()
