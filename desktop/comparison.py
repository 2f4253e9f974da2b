"""Several plans worked out one after the other, beside the one in the window."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from enum import StrEnum
from pathlib import Path
from typing import Any

from PySide6.QtCore import QObject, Signal

from desktop import messages
from desktop import variant_words as say
from desktop.answers import arithmetic, is_empty
from desktop.effort import stored_effort
from desktop.errand import Errand
from desktop.replies import Reply
from desktop.tables.own_crew import with_own
from desktop.workers import Workers
from solver.answer import Answer
from solver.plan import Plan
from solver.planfile import PlanProblems, UnreadableFile, content_hash, plan_to_document, read_plan
from solver.tightestline import TightestLine

GRACE = 30  # seconds beyond the limit of one plan before a silent process counts as hung
_SOON = 30_000  # ms a tightest line may take


class Stage(StrEnum):
    """How far a plan is. UNREADABLE, TO_MEND and LOST have a `problem`; DONE has an answer."""

    UNREADABLE = "unreadable"
    TO_MEND = "to mend"
    EMPTY = "empty"
    WAITING = "waiting"
    WORKING = "working"
    LOST = "lost"
    DONE = "done"


@dataclass(frozen=True)
class Compared:
    """One plan of the comparison. `path` None: the one in the window. Equal `content`, equal answer."""

    path: Path | None
    stage: Stage
    plan: Plan | None = None
    content: str = ""
    answer: Answer | None = None
    tightest: str = ""
    problem: str = ""


@dataclass(frozen=True)
class _Read:
    """A file as it was read: when it was written and how large it was then, and what it held."""

    stamp: tuple[int, int] | None
    plan: Plan | None
    stage: Stage
    problem: str = ""
    content: str = ""


class Comparison(QObject):
    """Reads plans and asks about them one at a time; nothing is asked twice about the same plan.

    `changed` when an entry or the progress changed.
    """

    changed = Signal()

    def __init__(self, workers: Workers | None, parent: QObject) -> None:
        super().__init__(parent)
        self._workers = workers
        self._files: dict[Path, _Read] = {}
        self._paths: tuple[Path, ...] = ()
        self._here: tuple[Plan, str, Answer | None] | None = None
        self._answers: dict[str, Answer] = {}
        self._tightest: dict[str, str] = {}
        self._lost: dict[str, str] = {}
        self._errand: Errand | None = None
        self._asked = ""  # the content that is being asked about
        self._paused = True

    @property
    def busy(self) -> bool:
        """True while something is worked out."""
        return self._errand is not None

    @property
    def paths(self) -> tuple[Path, ...]:
        """The files compared with the plan in the window."""
        return self._paths

    def entries(self) -> list[Compared]:
        """The plan in the window, then the files in their order."""
        here = [self._entry(None, *self._here)] if self._here is not None else []
        return [*here, *(self._file_entry(path) for path in self._paths)]

    def progress(self) -> tuple[str, int, int] | None:
        """Which file is worked on, its number and how many there are; None when none is."""
        for at, path in enumerate(self._paths):
            if self.busy and self._files[path].content == self._asked:
                return path.name, at + 1, len(self._paths)
        return None

    def is_incomplete(self) -> bool:
        """Whether something is left to be worked out."""
        return next(self._jobs(), None) is not None

    def show_here(self, plan: Plan, answer: Answer | None) -> None:
        """The plan in the window, with its answer where that belongs to it."""
        self._here = (plan, _content(plan), answer)
        self._go_on()

    def show_files(self, paths: Sequence[Path]) -> None:
        """Compare with these files; those that changed since are read anew."""
        self._paths = tuple(paths)
        for path in self._paths:
            known = self._files.get(path)
            if known is None or known.stamp is None or known.stamp != _stamp(path):
                self._files[path] = _read(path)
        self._go_on()

    def start(self) -> None:
        """Work out what is missing."""
        self._paused = False
        self._lost.clear()
        self._go_on()

    def stop(self) -> None:
        """Work on nothing until started again."""
        self._paused = True
        self._drop()
        self.changed.emit()

    # entries

    def _file_entry(self, path: Path) -> Compared:
        read = self._files[path]
        if read.plan is None or read.stage is not Stage.WAITING:
            return Compared(path, read.stage, problem=read.problem)
        return self._entry(path, read.plan, read.content, self._answers.get(read.content))

    def _entry(self, path: Path | None, plan: Plan, content: str, answer: Answer | None) -> Compared:
        if answer is not None:
            return Compared(path, Stage.DONE, plan, content, answer, self._tightest.get(content, ""))
        if content in self._lost:
            return Compared(path, Stage.LOST, plan, content, problem=self._lost[content])
        if is_empty(plan):
            return Compared(path, Stage.EMPTY, plan, content)
        working = path is None or (self.busy and content == self._asked)
        return Compared(path, Stage.WORKING if working else Stage.WAITING, plan, content)

    # asking

    def _jobs(self) -> Iterator[tuple[str, Compared, dict[str, Any]]]:
        """Everything that is still to be asked: question, about which entry, options."""
        effort = stored_effort()
        limits = {"seconds": effort.seconds, "tolerance": effort.tolerance}
        for entry in self.entries():
            if entry.plan is None:
                continue
            if entry.path is not None and entry.stage in (Stage.WAITING, Stage.WORKING):
                yield "solve", entry, limits
            exact = entry.answer.exact if entry.answer is not None else None
            if exact is not None and entry.content not in self._tightest:
                yield "tightest", entry, {"crew": {n: list(c) for n, c in exact.crew.items()}}

    def _go_on(self) -> None:
        self._drop_if_unwanted()
        if self._errand is None and not self._paused and self._workers is not None:
            job = next(self._jobs(), None)
            if job is not None:
                self._ask(*job)
        self.changed.emit()

    def _ask(self, question: str, entry: Compared, options: dict[str, Any]) -> None:
        assert self._workers is not None
        assert entry.plan is not None
        request = {"plan": plan_to_document(entry.plan), "options": options}
        kind: type[Any] = Answer if question == "solve" else TightestLine
        silence = int(options["seconds"] + GRACE) * 1000 if question == "solve" else _SOON
        errand = Errand(self._workers, question, request, kind, silence, self)
        errand.ended.connect(self._on_ended)
        errand.given_up.connect(self._on_given_up)
        self._errand, self._asked = errand, entry.content
        errand.start()

    def _drop_if_unwanted(self) -> None:
        """What is asked about is no longer compared."""
        wanted = {entry.content for entry in self.entries()}
        if self._errand is not None and self._asked not in wanted:
            self._drop()

    def _drop(self) -> None:
        if self._errand is not None:
            errand, self._errand = self._errand, None
            errand.cancel()

    def _on_given_up(self, how: str) -> None:
        self._lose(messages.SOLVER_LOST.format(how=how))

    def _on_ended(self, reply: Reply) -> None:
        if reply.part != "answer":
            said = reply.value if reply.part != "problems" else say.TO_MEND
            self._lose(messages.no_answer("refused" if reply.part == "problems" else reply.part, said))
            return
        if isinstance(reply.value, Answer):
            self._answers[self._asked] = reply.value
        else:
            self._tightest[self._asked] = reply.value.line
        self._errand = None
        self._go_on()

    def _lose(self, why: str) -> None:
        """This one has no answer; the others are still asked about."""
        self._lost[self._asked] = why
        self._tightest.setdefault(self._asked, "")
        self._errand = None
        self._go_on()


def _content(plan: Plan) -> str:
    """Equal for plans that have the same answer."""
    return content_hash(with_own(arithmetic(plan), {}))


def _stamp(path: Path) -> tuple[int, int] | None:
    try:
        found = path.stat()
    except OSError:
        return None
    return found.st_mtime_ns, found.st_size


def _read(path: Path) -> _Read:
    stamp = _stamp(path)
    try:
        plan = read_plan(path)
    except UnreadableFile as refused:
        return _Read(stamp, None, Stage.UNREADABLE, str(refused))
    except PlanProblems as problems:
        return _Read(stamp, None, Stage.TO_MEND, "; ".join(str(p) for p in problems.problems[:3]))
    return _Read(stamp, plan, Stage.EMPTY if is_empty(plan) else Stage.WAITING, content=_content(plan))
