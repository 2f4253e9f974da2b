"""The one document of a window: a frozen plan, where it is kept, and its undo stack.

Every change of the plan is one undo command; modified means that the stack is not at its clean index.
"""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QUndoCommand, QUndoStack

from solver.plan import Plan


class PlanCommand(QUndoCommand):
    """Old plan, new plan, text. Commands in a row with the same merge key become one."""

    def __init__(self, document: Document, old: Plan, new: Plan, text: str, merge: str | None) -> None:
        super().__init__(text)
        self._document = document
        self._old = old
        self._new = new
        self._merge = merge

    def redo(self) -> None:
        """Put the new plan in place."""
        self._document.put(self._new)

    def undo(self) -> None:
        """Put the old plan back."""
        self._document.put(self._old)

    def id(self) -> int:
        """Equal for commands that may become one."""
        return -1 if self._merge is None else hash(self._merge) & 0x3FFFFFFF

    def mergeWith(self, other: QUndoCommand) -> bool:
        """Take over the new plan of `other`."""
        if not isinstance(other, PlanCommand) or other._merge != self._merge:
            return False
        self._new = other._new
        self.setObsolete(self._new == self._old)
        return True


class Document(QObject):
    """The plan, its file and its history.

    `changed` is emitted after every change of the plan (edit, undo, redo, new, open); `renamed` when the
    path or the modified mark changed; `replaced` when another plan took the place of the old one, with an
    empty history (before `changed`).
    """

    changed = Signal()
    renamed = Signal()
    replaced = Signal()

    def __init__(self, plan: Plan | None = None, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._plan = Plan() if plan is None else plan
        self._path: Path | None = None
        self._stack = QUndoStack(self)
        self._stack.cleanChanged.connect(self.renamed)

    @property
    def plan(self) -> Plan:
        """The plan as it stands."""
        return self._plan

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

    def edit(self, text: str, new_plan: Plan, merge: str | None = None) -> None:
        """Make `new_plan` the plan, as one undo step called `text`; nothing happens if it is the same.

        Steps in a row with the same `merge` key are undone together.
        """
        if new_plan != self._plan:
            self._stack.push(PlanCommand(self, self._plan, new_plan, text, merge))

    def new(self, plan: Plan | None = None, *, unsaved: bool = False) -> None:
        """Start afresh from `plan` (an empty one by default) without a file."""
        self._replace(Plan() if plan is None else plan, None)
        if unsaved:
            self._stack.resetClean()

    def open(self, path: Path) -> None:
        """Read the plan at `path`. Raises UnreadableFile or PlanProblems; the document is then untouched."""
        from solver.planfile import read_plan

        self._replace(read_plan(path), Path(path))

    def save(self, path: Path | None = None) -> None:
        """Write the plan to `path` (None: where it was). Raises OSError; ValueError without any path."""
        from solver.planfile import save_plan

        target = path or self._path
        if target is None:
            raise ValueError("a plan without a file needs a path to be saved")
        save_plan(self._plan, target)
        self._path = Path(target)
        self._stack.setClean()
        self.renamed.emit()

    def put(self, plan: Plan) -> None:
        """Set the plan without history. For undo commands only: everybody else calls `edit`."""
        self._plan = plan
        self.changed.emit()

    def _replace(self, plan: Plan, path: Path | None) -> None:
        self._plan = plan
        self._path = path
        self._stack.clear()
        self.replaced.emit()
        self.renamed.emit()
        self.changed.emit()
