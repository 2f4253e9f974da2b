"""A page about a long question: asked when the page is seen, with progress, cancel and ask again."""

from __future__ import annotations

from typing import Any

from PySide6.QtWidgets import QHBoxLayout, QProgressBar, QPushButton, QWidget

from desktop import question_words as say
from desktop.answers import Answers, Status
from desktop.document import Document
from desktop.pages.page_parts import AnswerPage, label
from desktop.tables.own_crew import with_own
from desktop.theme import current
from solver.answer import State
from solver.plan import Plan


class QuestionPage(AnswerPage):
    """Asks `question` about the plan of a ready answer, and shows what comes of it.

    Subclasses give `options` (what to ask with), `show_detail` (None: nothing known) and may add to `body`.
    """

    question = ""

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(answers, parent)
        self.document = document
        self.says = label(tone="faint")
        self.bar = QProgressBar()
        self.bar.setTextVisible(False)
        self.bar.setAccessibleName(say.PROGRESS)
        self.cancel_button = QPushButton(say.CANCEL)
        self.ask_button = QPushButton(say.ASK)
        self._cancelled = False
        self._kept: tuple[Plan, Any] | None = None
        self._lay_out_bar()
        self.cancel_button.clicked.connect(self.cancel)
        self.ask_button.clicked.connect(self.ask)
        answers.detail_changed.connect(self._on_detail)
        document.changed.connect(self._on_plan)

    def _lay_out_bar(self) -> None:
        line = QHBoxLayout()
        line.setSpacing(current().px(1))
        line.addWidget(self.says, 1)
        for widget in (self.bar, self.cancel_button, self.ask_button):
            line.addWidget(widget)
        self.bar.setFixedWidth(current().px(20))
        self.bar.setFixedHeight(current().px(1))
        self.body.addLayout(line)

    def options(self) -> dict[str, Any]:
        """What the question is asked with."""
        return {}

    def show_detail(self, detail: Any | None) -> None:
        """Fill the body from the result; None where there is none."""
        raise NotImplementedError

    def can_ask(self) -> bool:
        """Whether there is an exact crew that the question is about."""
        answer = self.answers.answer
        ready = self.answers.status is Status.READY and not self.answers.stale
        return ready and answer is not None and answer.exact is not None

    def ask(self) -> None:
        """Ask now."""
        self._cancelled = False
        self._kept = None
        if self.can_ask():
            self.answers.ask(self.question, **self.options())
            self.refresh()

    def cancel(self) -> None:
        """Stop working on it until asked again."""
        self._cancelled = True
        self.answers.cancel(self.question)
        self.refresh()

    def known(self) -> Any | None:
        """The result for the plan as it stands. The planner's own crew does not change it."""
        found = self.answers.detail(self.question)
        plan = with_own(self.document.plan, {})
        if found is not None:
            self._kept = (plan, found)
        return self._kept[1] if self._kept is not None and self._kept[0] == plan else None

    def show_answer(self) -> None:
        """Ask where nothing is known yet, and show how far it is."""
        known = self.known()
        progress = self.answers.progress(self.question)
        failure = self.answers.detail_failure(self.question)
        if self._should_ask(known, progress, failure):
            self.answers.ask(self.question, **self.options())
            return
        self._show_progress(known, failure)
        self.show_detail(known)

    def _should_ask(self, known: object, progress: object, failure: str) -> bool:
        idle = known is None and progress is None and not failure and not self._cancelled
        return idle and self.isVisible() and self.can_ask()

    def _show_progress(self, known: object, failure: str) -> None:
        progress = self.answers.progress(self.question)
        working = progress is not None
        self.bar.setVisible(working)
        self.cancel_button.setVisible(working)
        self.ask_button.setVisible(not working and known is None and self.can_ask())
        if progress is not None and progress.done is not None:
            self.bar.setRange(0, 100)
            self.bar.setValue(round(100 * progress.done))
        else:
            self.bar.setRange(0, 0 if working else 1)
        text = progress.says if progress else failure or self._idle_text(known)
        self.says.setText(text)
        self.says.setVisible(bool(text))

    def _idle_text(self, known: object) -> str:
        if known is not None:
            return ""
        if self._cancelled or self.can_ask():
            return say.CANCELLED if self._cancelled else ""
        answer = self.answers.answer
        impossible = answer is not None and answer.state is State.IMPOSSIBLE
        return say.NEEDS_MENDING if impossible else say.NEEDS_CREW

    def _on_detail(self, question: str) -> None:
        if question == self.question:
            self.refresh()

    def _on_plan(self) -> None:
        self._cancelled = False
