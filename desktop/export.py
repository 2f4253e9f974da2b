"""File > Export: the answer as a workbook or a table, the integer program as .lp or .mps."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QFileDialog, QWidget

from desktop import export_words as say
from desktop.answers import Answers, Status, arithmetic
from desktop.dialogs.question import tell
from desktop.document import Document
from desktop.traffic import start_folder
from solver.answer import NearBest
from solver.plan import Plan
from solver.planfile import SUFFIX, CannotSave

NEAR = "near"
WITHIN, MOST = 2.0, 20  # per cent above the best cost, and how many near-best crews a workbook lists


class Export(QObject):
    """Writes what other programs read. `told(sentence)` reports what went well, or what is waited for.

    A workbook lists the near-best crews; where nobody has asked for them yet they are worked out first.
    """

    told = Signal(str)

    def __init__(self, document: Document, answers: Answers, window: QWidget) -> None:
        super().__init__(window)
        self._document = document
        self._answers = answers
        self._window = window
        self._waiting: tuple[Path, Plan] | None = None
        answers.detail_changed.connect(self._on_detail)

    def ask(self) -> None:
        """Let the planner choose a file and a form."""
        start = str(start_folder(self._document) / f"{self._stem()}.xlsx")
        chosen, form = QFileDialog.getSaveFileName(self._window, say.EXPORT, start, ";;".join(say.FORMS))
        if chosen:
            path = Path(chosen)
            self.write(path if path.suffix else path.with_name(path.name + say.FORMS.get(form, ".xlsx")))

    def write(self, path: Path) -> None:
        """Write to `path` in the form its suffix asks for; what stands against it is told."""
        from solver.export import NEED_AN_ANSWER

        self._waiting = None
        needs_answer = path.suffix.lower() in NEED_AN_ANSWER
        if self._answers.status in (Status.EMPTY, Status.PROBLEMS):
            self._refuse(path, say.NO_PLAN)
        elif needs_answer and not self._has_answer():
            self._refuse(path, say.NO_ANSWER)
        elif path.suffix.lower() == ".xlsx" and self._wants_near():
            self._waiting = (path, self._document.plan)
            if self._answers.progress(NEAR) is None:
                self._answers.ask(NEAR, within=WITHIN, most=MOST)
            self.told.emit(say.WAITING.format(name=path.name))
        else:
            self._write(path)

    def _has_answer(self) -> bool:
        answers = self._answers
        return answers.status is Status.READY and not answers.stale and answers.answer is not None

    def _wants_near(self) -> bool:
        """Whether there is a crew to be near to, and nobody has asked for those near it."""
        answer = self._answers.answer
        known = self._answers.detail(NEAR) is not None or bool(self._answers.detail_failure(NEAR))
        return answer is not None and answer.exact is not None and not known

    def _on_detail(self, question: str) -> None:
        """The near-best crews a workbook waits for are there, or never will be."""
        if question != NEAR or self._waiting is None or self._answers.progress(NEAR) is not None:
            return
        (path, plan), self._waiting = self._waiting, None
        if arithmetic(plan) != arithmetic(self._document.plan) or not self._has_answer():
            self.told.emit(say.CHANGED.format(name=path.name))  # no dialog in the way of who is typing
        else:
            self._write(path)

    def _write(self, path: Path) -> None:
        from solver.export import NeedsAnswer, UnknownFormat, export_plan

        answer = self._answers.answer if self._has_answer() else None
        near = self._answers.detail(NEAR)
        source = self._document.path.name if self._document.path else ""
        try:
            export_plan(
                self._document.plan,
                answer,
                path,
                near=near if isinstance(near, NearBest) else None,
                source=source,
            )
        except (UnknownFormat, NeedsAnswer, CannotSave) as why:
            self._refuse(path, str(why))
        else:
            self.told.emit(say.EXPORTED.format(name=path.name))

    def _refuse(self, path: Path, why: str) -> None:
        tell(self._window, say.NOT_WRITTEN.format(name=path.name), why)

    def _stem(self) -> str:
        path = self._document.path
        if path is not None:
            return path.name.removesuffix(SUFFIX)
        kept = "".join(c if c.isalnum() or c in " -_" else " " for c in self._document.plan.title)
        return "-".join(kept.split())[:60] or say.STEM
