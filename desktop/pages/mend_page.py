"""The page of what is to be mended: why there is no crew and what helps, and entries that do not count."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import partial

from PySide6.QtCore import QSize, Qt, QTimer, Signal
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import QFrame, QHBoxLayout, QPushButton, QScrollArea, QVBoxLayout, QWidget

from desktop import mend_words as say
from desktop.answers import Answers, Status
from desktop.document import Document
from desktop.mending import Entry, conflict_of, problems, refused, said_of
from desktop.messages import CAUTION
from desktop.pages.page_parts import Inside, heading, label, thin_rule
from desktop.pictures.copyable import plain_tip
from desktop.theme import Size, current
from solver.answer import Conflict, Conflicting
from solver.repair import apply_repair, can_repair

_BUTTON = 12  # width of a button, in steps of the grid
_MOST = 100  # entries that are shown; the rest is counted


class MendPage(QWidget):
    """`go_to(place)` asks to show an entry of the plan."""

    go_to = Signal(str)

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._answers = answers
        self._done = ""  # the repair that was made last, while nothing else has changed
        self.says = label()
        self.buttons: list[QPushButton] = []
        self._scroll = QScrollArea()
        self._soon = QTimer(self, singleShot=True, interval=0)
        self._soon.timeout.connect(self._show)
        self._lay_out()
        answers.changed.connect(self._later)
        document.changed.connect(self._later)

    def _lay_out(self) -> None:
        step = current().px(1)
        self._scroll.setWidgetResizable(True)
        self._scroll.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * step, step, 2 * step, step)
        layout.setSpacing(step)
        for part in (self.says, self._scroll, thin_rule(), label(CAUTION, Size.SMALL, "faint")):
            layout.addWidget(part, 1 if part is self._scroll else 0)

    def repair(self, line: Conflicting) -> None:
        """Give way on one line, as one undo step; nothing where the plan has changed meanwhile."""
        if self._answers.stale or self._answers.status is not Status.READY:
            return
        self._document.edit(say.UNDO_STEP.format(line=line.line), apply_repair(self._document.plan, line))
        self._done = say.REPAIRED.format(repair=line.repair)

    # showing

    def _later(self) -> None:
        """Once for all that changed together; a page nobody sees waits until it is seen."""
        if self.isVisible():
            self._soon.start()

    def _show(self) -> None:
        """Everything anew: there are few entries, and they change rarely."""
        held = self._focused()
        self.buttons = []
        inside = Inside()
        rows = QVBoxLayout(inside)
        rows.setContentsMargins(0, 0, current().px(1), 0)
        rows.setSpacing(current().px(1))
        conflict = conflict_of(self._answers)
        wrong, not_counted = problems(self._document, self._answers), refused(self._document)
        if conflict is not None and self._answers.status is not Status.PROBLEMS:
            self._add_conflict(rows, conflict)
        self._add_entries(rows, say.PROBLEMS, wrong)
        self._add_entries(rows, say.REFUSED, not_counted)
        rows.addStretch(1)
        self._scroll.setWidget(inside)
        self.says.setText(self._sentence(conflict, bool(wrong or not_counted)))
        self.says.setVisible(bool(self.says.text()))
        self._focus(held)

    def _sentence(self, conflict: Conflict | None, entries: bool) -> str:
        if conflict is not None:
            return say.UNTIL_THEN if self._answers.stale else ""
        if self._answers.status in (Status.SOLVING, Status.RESTARTING):
            return self._done or say.WAITING
        answer = self._answers.answer
        met = answer is not None and answer.exact is not None and self._answers.status is Status.READY
        said = say.CAN_MEET if met else "" if entries else say.NOTHING
        done, self._done = self._done, self._done if met else ""
        return f"{done} {said}".strip() if met else said

    def _add_conflict(self, rows: QVBoxLayout, conflict: Conflict) -> None:
        plan = self._answers.plan or self._document.plan
        rows.addWidget(heading(say.CONFLICT))
        rows.addWidget(label(say.NOT_WHOLE if conflict.whole_people else say.NOBODY))
        for line in conflict.lines:
            rows.addWidget(thin_rule())
            rows.addWidget(self._line(said_of(plan, line), line))

    def _line(self, said: str, line: Conflicting) -> QWidget:
        if not can_repair(line):
            return _row(said, line.repair, None)
        button = QPushButton(say.APPLY)
        name = say.APPLY_TO.format(repair=line.repair)
        return _row(said, line.repair, self._button(button, name, lambda: self.repair(line)))

    def _add_entries(self, rows: QVBoxLayout, title: str, entries: Sequence[Entry]) -> None:
        if entries:
            rows.addSpacing(current().px(1) if rows.count() else 0)
            rows.addWidget(heading(title))
        for entry in entries[:_MOST]:
            rows.addWidget(thin_rule())
            button = QPushButton(say.GO_THERE)
            name = say.GO_TO.format(where=entry.where)
            go = self._button(button, name, partial(self.go_to.emit, entry.place))
            rows.addWidget(_row(entry.says, "", go))
        if len(entries) > _MOST:
            rows.addWidget(label(say.MORE.format(count=len(entries) - _MOST), tone="faint"))

    def _button(self, button: QPushButton, name: str, do: Callable[[], object]) -> QPushButton:
        button.setAccessibleName(name)
        button.setToolTip(plain_tip(name))
        button.setEnabled(not self._answers.stale or self._answers.status is Status.PROBLEMS)
        button.clicked.connect(lambda _checked=False: do())
        self.buttons.append(button)
        return button

    def _focused(self) -> int:
        return next((at for at, button in enumerate(self.buttons) if button.hasFocus()), -1)

    def _focus(self, at: int) -> None:
        """The focus stays at its place in the list."""
        if at >= 0 and self.buttons:
            self.buttons[min(at, len(self.buttons) - 1)].setFocus()

    def showEvent(self, event: QShowEvent) -> None:
        """Catch up."""
        super().showEvent(event)
        self._show()

    def minimumSizeHint(self) -> QSize:
        """Wrapped texts would ask for the height they need at their narrowest."""
        return QSize(current().px(60), current().px(32))


def _row(said: str, below: str, button: QPushButton | None) -> QWidget:
    """A button, or the room of one, before what it is about."""
    made = QFrame()
    texts = QVBoxLayout()
    texts.setSpacing(0)
    texts.addWidget(label(said))
    if below:
        texts.addWidget(label(below, tone="faint" if button is None else None))
    across = QHBoxLayout(made)
    across.setContentsMargins(0, 0, 0, 0)
    across.setSpacing(current().px(2))
    first: QWidget = QWidget() if button is None else button
    first.setFixedWidth(current().px(_BUTTON))
    across.addWidget(first)
    across.addLayout(texts, 1)
    return made
