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
from desktop.effort import SECONDS, Effort
from desktop.errand import Errand
from desktop.inquiries import Inquiries
from desktop.replies import Reply
from desktop.understanding import Fractional, Progress
from desktop.workers import Workers
from solver.answer import Answer, Crew, State
from solver.plan import Plan
from solver.planfile import plan_to_document
from solver.review import Problem, review

__all__ = ["Answers", "Fractional", "Progress", "Status"]

PATIENCE = 300  # ms a solve may still run after a newer edit before its process is ended
PAUSE = 250  # ms without an edit that are waited for on plans that take longer than PATIENCE
WORTH_SHOWING = 150  # ms after which the fractional crew is shown ahead of the exact one
LONG = 1000  # ms of solving after which people may want to have a say in it
FURTHER = 2  # how many times longer it is looked when it is looked further
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
        self._asked_about = document.plan  # what the errand under way was sent with
        self._errand: Errand | None = None
        self._stopped = False  # the errand only completes the crew that was kept
        self._since = QElapsedTimer()
        self._slow = False
        self._effort = Effort()
        self._seconds: float = SECONDS
        self._long_due = QTimer(self, singleShot=True, interval=LONG)
        self._long_due.timeout.connect(self.changed)
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
    def workers(self) -> Workers | None:
        """The processes that answer; None where answers only come through `receive`."""
        return self._workers

    @property
    def busy(self) -> bool:
        """True while a process is at work on an answer."""
        return self._errand is not None

    @property
    def effort(self) -> Effort:
        """How long is looked for a crew, and how close is close enough."""
        return self._effort

    @property
    def can_stop(self) -> bool:
        """True while better crews than one that is here already are looked for."""
        return self.busy and self._status is Status.SOLVING and self._has_best_found()

    @property
    def can_look_further(self) -> bool:
        """True when the answer is a crew that is not proved cheapest, and nobody is at work on it."""
        ready = self._workers is not None and self._status is Status.READY
        return ready and (self._stopped or not self.busy) and self._has_best_found()

    @property
    def long(self) -> bool:
        """True when the answer that is worked on takes long enough for people to have a say in it."""
        return self.busy and not self._long_due.isActive()

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

    def choose(self, effort: Effort) -> None:
        """Look as long and as far as `effort` says from now on, also for what is being worked on."""
        if effort == self._effort:
            return
        self._effort = effort
        if self.busy and not self._overtaken():
            self._drop_errand()
            self._start(effort.seconds, self._best())

    def stop(self) -> None:
        """Keep the best crew found so far; the process at work can only be ended.

        Another one works out what rounding does beside that crew: the first had not come to it.
        """
        if self.can_stop:
            self._drop_errand()
            self._start(0.0, self._best())
            self._stopped = True
            self._set(Status.READY)

    def look_further(self) -> None:
        """Go on from the best crew found, longer than before; it stays the answer meanwhile."""
        if self.can_look_further:
            self._drop_errand()
            self._start(self._seconds * FURTHER, self._best())
            self._set(Status.SOLVING)

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
        self._long_due.stop()
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

    def _has_best_found(self) -> bool:
        """Whether a crew stands there that fits the plan and is not proved cheapest."""
        return not self.stale and self._best() is not None

    def _best(self) -> Crew | None:
        answer = self._answer
        found = answer is not None and answer.state is State.BEST_FOUND and answer.exact is not None
        return answer.exact.crew if found and answer is not None and answer.exact is not None else None

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
        self._start(self._effort.seconds, self._crew_to_begin_from())

    def _crew_to_begin_from(self) -> Crew | None:
        """The crew of before where only the own crew was changed: what took long is not looked for again."""
        answer, before, now = self._answer, self._plan, arithmetic(self._document.plan)
        if not self._slow or before is None or answer is None or answer.exact is None:
            return None
        return answer.exact.crew if replace(arithmetic(before), own=now.own) == now else None

    def _start(self, seconds: float, start: Crew | None = None) -> None:
        """Ask about the plan as it stands, beginning from the crew `start`."""
        assert self._workers is not None
        self._asked_about = self._document.plan
        self._stopped = False
        self._seconds = seconds or self._seconds
        crew = None if start is None else {name: list(counts) for name, counts in start.items()}
        options = {"seconds": seconds, "tolerance": self._effort.tolerance, "start": crew}
        silence = int((seconds + GRACE) * 1000)
        errand = Errand(self._workers, "solve", self._request(options), Answer, silence, self)
        # no lambdas: the last reference to us must not go while an errand is being destroyed
        errand.heard.connect(self._on_heard)
        errand.ended.connect(self._on_ended)
        errand.restarting.connect(self._on_restarting)
        errand.given_up.connect(self._on_given_up)
        self._errand = errand
        self._since.start()
        self._long_due.start()
        errand.start()

    def _drop_errand(self) -> None:
        if self._errand is not None:
            errand, self._errand = self._errand, None
            self._long_due.stop()
            errand.cancel()

    def _spare(self) -> None:
        """Have a warm process for when the one at work has to be ended."""
        if self._workers is not None:
            self._workers.warm_up()

    def _overtaken(self) -> bool:
        """True while a newer plan waits to be asked about: what is heard now is late."""
        return self._soon.isActive()

    def _on_heard(self, reply: Reply) -> None:
        if self._overtaken():
            return
        if reply.part == "better":
            if not self._has_best_found():
                self._spare()
            self._hold(self._asked_about, self._with_what_is_known(reply.value))
            self._set(Status.READY if self._stopped else Status.SOLVING)
        elif reply.part == "fractional" and reply.value is not None:
            self._fractional = reply.value
            self._floor_due.start(max(0, WORTH_SHOWING - int(self._since.elapsed())))

    def _on_ended(self, reply: Reply) -> None:
        self._errand = None
        self._long_due.stop()
        self._slow = self._since.elapsed() > PATIENCE
        self._spare()
        if self._overtaken():
            self._soon.start(0)
        elif reply.part == "answer":
            self.receive(self._asked_about, self._with_what_is_known(reply.value))
        elif reply.part == "problems":
            self._set(Status.PROBLEMS, reply.value)
        elif not self._stopped:
            self._set(Status.FAILED, failure=messages.no_answer(reply.part, reply.value))

    def _with_what_is_known(self, answer: Answer) -> Answer:
        """`answer` against the best crew and the best bound heard before: neither ever gets worse."""
        before = self._answer
        if before is None or not self._has_best_found() or answer.state is not State.BEST_FOUND:
            return answer
        if before.exact is not None and (answer.exact is None or before.exact.cost < answer.exact.cost):
            bounds = [b for b in (before.bound, answer.bound) if b is not None]
            return replace(before, bound=max(bounds, default=None))
        if before.bound is None or answer.exact is None:
            return answer
        bound = max(before.bound, before.bound if answer.bound is None else answer.bound)
        return replace(answer, bound=min(bound, answer.exact.cost))

    def _on_restarting(self) -> None:
        if not self._overtaken() and not self._stopped:
            self._set(Status.RESTARTING)

    def _on_given_up(self, how: str) -> None:
        self._errand = None
        self._long_due.stop()
        if not self._overtaken() and not self._stopped:
            self._set(Status.FAILED, failure=messages.SOLVER_LOST.format(how=how))
