"""The one document of a window: a frozen plan, where it is kept, and its undo stack.

Every change of the plan is one undo command; modified means that the stack is not at its clean index.
Entries that were typed and refused belong to the document as well, so that undo brings them back too.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from types import MappingProxyType

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoCommand, QUndoStack

from solver.plan import Plan
from solver.planfile import PlanProblems, read_plan, save_plan

Place = tuple[str, str, str]  # table, name of the row, key of the column


@dataclass(frozen=True)
class Refusal:
    """What was typed into a cell and why it does not count."""

    text: str
    reason: str


Refusals = Mapping[Place, Refusal]


@dataclass(frozen=True)
class Content:
    """All that undo goes back to."""

    plan: Plan
    refused: Refusals = field(default_factory=lambda: MappingProxyType({}))


class EditCommand(QUndoCommand):
    """Old content, new content, text. Commands in a row with the same merge key become one."""

    def __init__(self, document: Document, new: Content, text: str, merge: str | None) -> None:
        super().__init__(text)
        self._document = document
        self._old = document.content
        self._new = new
        self._merge = merge

    def redo(self) -> None:
        """Put the new content in place."""
        self._document.put(self._new)

    def undo(self) -> None:
        """Put the old content back."""
        self._document.put(self._old)

    def id(self) -> int:
        """Equal for commands that may become one."""
        return -1 if self._merge is None else hash(self._merge) & 0x3FFFFFFF

    def mergeWith(self, other: QUndoCommand) -> bool:
        """Take over the new content of `other`."""
        if not isinstance(other, EditCommand) or other._merge != self._merge:
            return False
        self._new = other._new
        self.setObsolete(self._new == self._old)
        return True


class Document(QObject):
    """The plan, its file and its history.

    `changed` is emitted after every change of the plan or of the refused entries (edit, undo, redo, new,
    open); `renamed` when the path or the modified mark changed; `replaced` when another plan took the place
    of the old one, with an empty history (before `changed`).
    """

    changed = Signal()
    renamed = Signal()
    replaced = Signal()

    def __init__(self, plan: Plan | None = None, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._content = Content(Plan() if plan is None else plan)
        self._path: Path | None = None
        self._stack = QUndoStack(self)
        self._stack.cleanChanged.connect(self.renamed)

    @property
    def plan(self) -> Plan:
        """The plan as it stands."""
        return self._content.plan

    @property
    def refused(self) -> Refusals:
        """What was typed into cells and does not count, with the reasons."""
        return self._content.refused

    @property
    def content(self) -> Content:
        """Plan and refused entries together."""
        return self._content

    @property
    def path(self) -> Path | None:
        """Where the plan is kept, None until it was saved."""
        return self._path

    @property
    def undo_stack(self) -> QUndoStack:
        """The history; undo and redo through it."""
        return self._stack

    @property
    def modified(self) -> bool:
        """True when there is something to save."""
        return not self._stack.isClean()

    def edit(
        self, text: str, new_plan: Plan, merge: str | None = None, refused: Refusals | None = None
    ) -> None:
        """Make `new_plan` the plan, as one undo step called `text`; nothing happens if nothing differs.

        Steps in a row with the same `merge` key are undone together. `refused` None keeps those there are.
        """
        new = Content(new_plan, self.refused if refused is None else MappingProxyType(dict(refused)))
        if new != self._content:
            self._stack.push(EditCommand(self, new, text, merge))

    def new(self, plan: Plan | None = None, *, unsaved: bool = False) -> None:
        """Start afresh from `plan` (an empty one by default) without a file.

        `unsaved`: it counts as modified, as a recovered plan does.
        """
        self._replace(Content(Plan() if plan is None else plan), None)
        if unsaved:
            self._stack.resetClean()

    def open(self, path: Path) -> None:
        """Read the plan at `path`, also one that cannot be answered yet but whose every entry can be shown.

        Raises UnreadableFile or PlanProblems; the document is then untouched.
        """
        try:
            plan = read_plan(path)
        except PlanProblems as problems:
            if problems.plan is None:
                raise
            plan = problems.plan
        self._replace(Content(plan), Path(path))

    def save(self, path: Path | None = None) -> None:
        """Write the plan to `path` (None: where it was). Raises CannotSave; ValueError without any path."""
        target = path or self._path
        if target is None:
            raise ValueError("a plan without a file needs a path to be saved")
        save_plan(self.plan, target)
        self._path = Path(target)
        self._stack.setClean()
        self.renamed.emit()

    def recover(self, content: Content, path: Path | None) -> None:
        """Take `content`, typed before a crash, as unsaved changes of the plan at `path`."""
        self._replace(content, path)
        self._stack.resetClean()

    def put(self, content: Content) -> None:
        """Set the content without history. For undo commands only: everybody else calls `edit`."""
        self._content = content
        self.changed.emit()

    def _replace(self, content: Content, path: Path | None) -> None:
        self._content = content
        self._path = path
        self._stack.clear()
        self.replaced.emit()
        self.renamed.emit()
        self.changed.emit()
