"""New, open, save, and every question that belongs to them."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QFileDialog, QWidget

from desktop import messages, recent
from desktop.claim import Claim
from desktop.dialogs.question import CANCEL, Choice, Role, ask, tell
from desktop.disk_watch import DiskWatch, OnDisk
from desktop.document import Document
from desktop.recovery import Leftover, Recovery, leftovers
from solver.plan import Plan
from solver.planfile import SUFFIX, CannotSave, PlanProblems, UnreadableFile, read_plan

_SAVE_FIRST = (
    Choice("save", messages.SAVE),
    Choice("drop", messages.DONT_SAVE, Role.DestructiveRole),
    CANCEL,
)
_ELSEWHERE = (Choice("copy", messages.OPEN_COPY), Choice("open", messages.OPEN_ANYWAY), CANCEL)
_CHANGED = (Choice("again", messages.READ_AGAIN), Choice("keep", messages.KEEP_MINE, Role.RejectRole))
_REPLACE = (
    Choice("elsewhere", messages.SAVE_AS),
    Choice("replace", messages.REPLACE_IT, Role.DestructiveRole),
    CANCEL,
)
_RECOVER = (
    Choice("recover", messages.RECOVER),
    Choice("later", messages.LATER, Role.RejectRole),
    Choice("discard", messages.DISCARD, Role.DestructiveRole),
)


class Files(QObject):
    """What the File menu does with the document. `told(sentence)` reports what went well."""

    told = Signal(str)

    def __init__(self, document: Document, recovery: Recovery, window: QWidget) -> None:
        super().__init__(window)
        self._document = document
        self._recovery = recovery
        self._window = window
        self._claim = Claim()
        self._watch = DiskWatch(document, self)
        self._asking = False

    @property
    def name(self) -> str:
        """What the plan is called in questions and in the title of the window."""
        path = self._document.path
        return path.name if path else self._document.plan.title or messages.UNTITLED

    # starting

    def new(self) -> None:
        """An empty plan."""
        if self.may_go():
            self._start(Plan())

    def open_example(self, path: Path) -> None:
        """A copy of an example: it is saved under a name of its own."""
        if self.may_go():
            self._read(lambda: self._start(read_plan(path)), path)

    def ask_and_open(self) -> None:
        """Let the planner choose a file."""
        chosen, _ = QFileDialog.getOpenFileName(
            self._window, messages.OPEN, self._folder(), messages.PLAN_FILES
        )
        if chosen:
            self.open(Path(chosen))

    def open(self, path: Path) -> bool:
        """Open `path`; True if it is open now. Whatever is wrong is told, and nothing else changes."""
        if not self.may_go():
            return False
        if not self._claim.take(path):
            return self._open_elsewhere(path)
        return self._open_here(path)

    def open_leftovers(self) -> bool:
        """Offer what a crash left behind; True if one of them is in the window now."""
        for left in leftovers():
            chosen = ask(self._window, *_left_words(left), _RECOVER)
            if chosen == "discard":
                left.discard()
            elif chosen == "recover":
                self._document.recover(left.content, left.path)
                self._claim.take(left.path)
                self._recovery.write()
                self._recovery.wait()
                left.discard()  # only now: there is always one copy
                return True
        return False

    # saving

    def save(self) -> bool:
        """Save where the plan was; True if it is saved now."""
        if self._document.path is None:
            return self.save_as()
        if self._watch.look() is not OnDisk.CHANGED:
            return self._write(self._document.path)
        question = messages.CHANGED_ON_DISK.format(name=self.name)
        chosen = ask(self._window, question, messages.CHANGED_ON_DISK_SAVE, _REPLACE)
        if chosen == "replace":
            return self._write(self._document.path)
        return self.save_as() if chosen == "elsewhere" else False

    def save_as(self) -> bool:
        """Let the planner choose a file to save to; True if it is saved now."""
        start = str(Path(self._folder()) / _file_name(self._document))
        chosen, _ = QFileDialog.getSaveFileName(self._window, messages.SAVE_AS, start, messages.PLAN_FILES)
        return bool(chosen) and self._write(with_suffix(Path(chosen)))

    def save_to(self, path: Path) -> bool:
        """Save to `path`, where the plan is kept from now on; True if it is saved now."""
        return self._write(path)

    def may_go(self) -> bool:
        """True if the plan in the window may be replaced or closed: nothing to save, saved, or given up."""
        if not self._document.modified:
            return True
        question = messages.SAVE_FIRST.format(name=self.name)
        chosen = ask(self._window, question, messages.SAVE_FIRST_MORE, _SAVE_FIRST)
        return self.save() if chosen == "save" else chosen == "drop"

    def look_at_disk(self) -> None:
        """The window got the focus: was the file changed meanwhile?"""
        found = OnDisk.SAME if self._asking else self._watch.look()
        if found is OnDisk.GONE:
            self.told.emit(messages.GONE_FROM_DISK.format(name=self.name))
        elif found is OnDisk.CHANGED:
            self._asking = True
            question = messages.CHANGED_ON_DISK.format(name=self.name)
            chosen = ask(self._window, question, messages.CHANGED_ON_DISK_MORE, _CHANGED)
            self._asking = False
            if chosen == "again":
                self._read_again()
            self._watch.remember()

    def close(self) -> None:
        """The window closes."""
        self._claim.release()

    # parts

    def _start(self, plan: Plan) -> None:
        self._claim.release()
        self._document.new(plan)
        self._watch.remember()

    def _open_here(self, path: Path) -> bool:
        if not self._read(lambda: self._document.open(path), path):
            self._claim.take(self._document.path)
            return False
        self._watch.remember()
        recent.remember(path)
        return True

    def _open_elsewhere(self, path: Path) -> bool:
        question = messages.OPEN_ELSEWHERE.format(name=path.name)
        chosen = ask(self._window, question, messages.OPEN_ELSEWHERE_MORE, _ELSEWHERE)
        if chosen == "copy":
            return self._read(lambda: self._document.new(read_plan(path), unsaved=True), path)
        if chosen == "open":
            return self._open_here(path)
        self._claim.take(self._document.path)
        return False

    def _read(self, read: Callable[[], None], path: Path) -> bool:
        try:
            read()
        except UnreadableFile as refused:
            tell(self._window, messages.NOT_OPENED.format(name=path.name), str(refused))
        except PlanProblems as problems:
            shown = messages.listed_lines(tuple(str(p) for p in problems.problems))
            tell(self._window, messages.NOT_OPENED.format(name=path.name), shown)
        else:
            return True
        return False

    def _read_again(self) -> None:
        path = self._document.path
        if path is not None:
            self._read(
                lambda: self._document.edit(messages.READ_FROM_DISK, read_plan(path), refused={}), path
            )

    def _write(self, path: Path) -> bool:
        try:
            self._document.save(path)
        except CannotSave as why:
            tell(self._window, messages.NOT_SAVED, str(why))
            return False
        self._claim.take(path)
        self._watch.remember()
        recent.remember(path)
        self.told.emit(messages.saved(path.name, len(self._document.refused)))
        return True

    def _folder(self) -> str:
        path = self._document.path or next(iter(recent.recent()), None)
        return str(path.parent) if path else str(Path.home())


def with_suffix(path: Path) -> Path:
    """`path` with the suffix of a plan file where it has none."""
    return path if path.suffix else path.with_name(path.name + SUFFIX)


def _file_name(document: Document) -> str:
    if document.path:
        return document.path.name
    kept = "".join(c if c.isalnum() or c in " -_" else " " for c in document.plan.title)
    return "-".join(kept.split())[:60] + SUFFIX if kept.strip() else f"plan{SUFFIX}"


def _left_words(left: Leftover) -> tuple[str, str]:
    name = left.path.name if left.path else left.content.plan.title or messages.UNTITLED
    when = f"{left.when.astimezone():%d.%m.%Y %H:%M}"
    return messages.LEFT_BEHIND.format(name=name), messages.LEFT_BEHIND_MORE.format(when=when)
