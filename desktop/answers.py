"""What the window knows about the plan: the latest answer and whether it still fits.

Pages read properties and listen to `changed`; long questions are asked with `ask` and read with `detail`.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from enum import StrEnum
from typing import Any

from PySide6.QtCore import QElapsedTimer, QObject, QTimer, Signal

from desktop import messages
from desktop.document import Document
from desktop.errand import Errand
from desktop.inquiries import Inquiries
from desktop.replies import Reply
from desktop.understanding import Fractional, Progress
from desktop.workers import Workers
from solver.answer import Answer
from solver.plan import Plan
from solver.planfile import plan_to_document
from solver.review import Problem, review

__all__ = ["Answers", "Fractional", "Progress", "Status"]

PATIENCE = 300  # ms a solve may still run after a newer edit before its process is ended
PAUSE = 250  # ms without an edit that are waited for on plans that take longer than PATIENCE
WORTH_SHOWING = 150  # ms after which the fractional crew is shown ahead of the exact one
SECONDS = 60  # time limit of one solve; then the best crew found is shown with its bound
GRACE = 30  # seconds beyond the limit before a silent process counts as hung


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


def arithmetic(plan: Plan) -> Plan:
    """`plan` without the texts that no answer depends on."""
    return replace(plan, title="", site="", prepared_by="", notes="")


def is_empty(plan: Plan) -> bool:
    """True while there is nothing to solve: nobody to choose from, or nothing asked of them."""
    return not plan.categories or not (plan.works or plan.rules)


class Answers(QObject):
    """Answers to the document's plan, asked for by themselves after every edit.

    `changed` is emitted whenever `status`, `answer`, `stale`, `problems` or `fractional` changed;
    `detail_changed(question)` when the result or the progress of a long question changed. Without
    `workers` nothing is asked, and `receive` is the only source of answers.
    """

    changed = Signal()
    detail_changed = Signal(str)

    def __init__(
        self, document: Document, workers: Workers | None = None, parent: QObject | None = None
    ) -> None:
        super().__init__(parent)
        self._document = document
        self._workers = workers
        self._answer: Answer | None = None
        self._plan: Plan | None = None
        self._stale = False
        self._status = Status.EMPTY
        self._problems: tuple[Problem, ...] = ()
        self._failure = ""
        self._fractional: Fractional | None = None
        self._asked: Plan | None = None
        self._errand: Errand | None = None
        self._since = QElapsedTimer()
        self._slow = False
        self._soon = QTimer(self, singleShot=True)
        self._soon.timeout.connect(self._begin)
        self._floor_due = QTimer(self, singleShot=True)
        self._floor_due.timeout.connect(self.changed)
        self._inquiries = Inquiries(workers, self)
        self._inquiries.changed.connect(self.detail_changed)
        document.changed.connect(self._on_plan_changed)
        self._on_plan_changed()

    @property
    def status(self) -> Status:
        """What is going on."""
        return self._status

    @property
    def busy(self) -> bool:
        """True while a process is at work on an answer."""
        return self._errand is not None

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
        return self._answer is not None and self._stale

    @property
    def problems(self) -> tuple[Problem, ...]:
        """What is wrong with the plan; empty unless `status` is PROBLEMS."""
        return self._problems

    @property
    def failure(self) -> str:
        """Why there is no answer, in a sentence; empty unless `status` is FAILED."""
        return self._failure

    @property
    def fractional(self) -> Fractional | None:
        """The floor of the current plan while its exact answer is being worked on."""
        return self._fractional

    def receive(self, plan: Plan, answer: Answer) -> None:
        """Take `answer` as the final one to `plan`: the worker's replies arrive here, and tests' answers."""
        self._hold(plan, answer)
        self._set(Status.READY)

    def again(self) -> None:
        """Ask anew about the plan as it stands, for instance after a failure."""
        self._asked = None
        self._on_plan_changed()

    def ask(self, question: str, **options: Any) -> None:
        """Ask a long question ("cost", "room", "near", ...); dropped when the plan changes."""
        if self._status not in (Status.EMPTY, Status.PROBLEMS):
            self._inquiries.ask(question, self._request(options))

    def cancel(self, question: str) -> None:
        """Stop working on a long question."""
        self._inquiries.cancel(question)

    def detail(self, question: str) -> Any | None:
        """The result of the latest `ask(question)` for the current plan, None until it is there."""
        return self._inquiries.result(question)

    def detail_failure(self, question: str) -> str:
        """Why the latest `ask(question)` has no result, in a sentence; empty where it has or may get one."""
        return self._inquiries.failure(question)

    def progress(self, question: str) -> Progress | None:
        """How far `question` is; None when nobody is working on it."""
        return self._inquiries.progress(question)

    def close(self) -> None:
        """Stop asking; for the end of the window."""
        self._soon.stop()
        self._floor_due.stop()
        self._drop_errand()
        self._inquiries.drop_all()

    # the plan changed

    def _on_plan_changed(self) -> None:
        plan = self._document.plan
        asked = arithmetic(plan)
        if asked == self._asked:
            self._only_texts_changed(plan)
            return
        self._asked = asked
        self._no_floor()
        self._inquiries.drop_all()
        self._stale = self._plan is None or arithmetic(self._plan) != asked
        if is_empty(plan):
            self._rest(Status.EMPTY)
        elif problems := review(plan):
            self._rest(Status.PROBLEMS, problems)
        elif self._workers is not None:
            self._soon.start(PAUSE if self._slow else 0)
            self._set(Status.SOLVING)
        else:
            self._set(Status.SOLVING if self._stale else Status.READY)

    def _only_texts_changed(self, plan: Plan) -> None:
        if self._answer is not None and not self._stale:
            self._plan = plan
            self.changed.emit()

    def _rest(self, status: Status, problems: tuple[Problem, ...] = ()) -> None:
        """Nothing can be asked about this plan."""
        self._soon.stop()
        self._drop_errand()
        self._set(status, problems=problems)

    def _set(self, status: Status, problems: tuple[Problem, ...] = (), failure: str = "") -> None:
        self._status = status
        self._problems = problems
        self._failure = failure
        self.changed.emit()

    def _hold(self, plan: Plan, answer: Answer) -> None:
        self._plan = plan
        self._answer = answer
        self._stale = arithmetic(plan) != arithmetic(self._document.plan)
        self._no_floor()

    def _no_floor(self) -> None:
        self._floor_due.stop()
        self._fractional = None

    # asking

    def _request(self, options: Mapping[str, Any]) -> dict[str, Any]:
        return {"plan": plan_to_document(self._document.plan), "options": dict(options)}

    def _begin(self) -> None:
        """Ask about the plan, at once if nobody is at work, else when the one at work had its time."""
        if self._workers is None:
            return
        if self._errand is not None:
            left = PATIENCE - self._since.elapsed()
            if left > 0:
                self._soon.start(int(left))
                return
            self._slow = True
            self._drop_errand()
        plan = self._document.plan
        request = self._request({"seconds": SECONDS})
        errand = Errand(self._workers, "solve", request, Answer, (SECONDS + GRACE) * 1000, self)
        errand.heard.connect(lambda reply: self._on_heard(plan, reply))
        errand.ended.connect(lambda reply: self._on_ended(plan, reply))
        errand.restarting.connect(self._on_restarting)
        errand.given_up.connect(self._on_given_up)
        self._errand = errand
        self._since.start()
        errand.start()

    def _drop_errand(self) -> None:
        if self._errand is not None:
            errand, self._errand = self._errand, None
            errand.cancel()

    def _overtaken(self) -> bool:
        """True while a newer plan waits to be asked about: what is heard now is late."""
        return self._soon.isActive()

    def _on_heard(self, plan: Plan, reply: Reply) -> None:
        if self._overtaken():
            return
        if reply.part == "better":
            self._hold(plan, reply.value)
            self._set(Status.SOLVING)
        elif reply.part == "fractional" and reply.value is not None:
            self._fractional = reply.value
            self._floor_due.start(max(0, WORTH_SHOWING - int(self._since.elapsed())))

    def _on_ended(self, plan: Plan, reply: Reply) -> None:
        self._errand = None
        self._slow = self._since.elapsed() > PATIENCE
        if self._workers is not None:
            self._workers.warm_up()
        if self._overtaken():
            self._soon.start(0)
        elif reply.part == "answer":
            self.receive(plan, reply.value)
        elif reply.part == "problems":
            self._set(Status.PROBLEMS, reply.value)
        else:
            self._set(Status.FAILED, failure=messages.no_answer(reply.part, reply.value))

    def _on_restarting(self) -> None:
        if not self._overtaken():
            self._set(Status.RESTARTING)

    def _on_given_up(self, how: str) -> None:
        self._errand = None
        if not self._overtaken():
            self._set(Status.FAILED, failure=messages.SOLVER_LOST.format(how=how))
