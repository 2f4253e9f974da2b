"""Notices when a plan has become impossible, and when it is a good moment to say so."""

from __future__ import annotations

from PySide6.QtCore import QObject, QTimer, Signal
from PySide6.QtWidgets import QAbstractItemView, QApplication, QWidget

from desktop.answers import Answers, Status
from desktop.document import Document
from desktop.mending import conflict_of

PAUSE = 1500  # ms without an edit or an answer: nobody is taken away from a row half typed


class ConflictWatch(QObject):
    """`impossible` once whenever the plan has become impossible, not while something is being typed.

    A plan that was just opened is told of at once.
    """

    impossible = Signal()

    def __init__(self, document: Document, answers: Answers, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._answers = answers
        self._told = False
        self._edited = False
        self._due = QTimer(self, singleShot=True)
        self._due.timeout.connect(self._tell)
        document.changed.connect(self._on_edit)
        document.replaced.connect(self._on_replaced)
        answers.changed.connect(self._look)

    def _on_replaced(self) -> None:
        self._told = False
        QTimer.singleShot(0, self, self._forget_edits)  # the change that comes with it is no edit

    def _forget_edits(self) -> None:
        self._edited = False

    def _on_edit(self) -> None:
        self._edited = True
        if self._due.isActive():
            self._due.start(PAUSE)

    def _look(self) -> None:
        """An answer came, or the one there is went out of date."""
        if self._answers.stale or self._answers.status is not Status.READY:
            return
        if conflict_of(self._answers) is None:
            self._told = False
            self._due.stop()
        elif not self._told and not self._due.isActive():
            self._due.start(PAUSE if self._edited else 0)

    def _tell(self) -> None:
        if self._answers.stale or conflict_of(self._answers) is None:
            return
        if _busy():
            self._due.start(PAUSE)
            return
        self._told = True
        self.impossible.emit()


def _busy() -> bool:
    """True while a dialog or a menu is open, or a cell is being edited."""
    if QApplication.activeModalWidget() is not None or QApplication.activePopupWidget() is not None:
        return True
    at: QWidget | None = QApplication.focusWidget()
    while at is not None:
        if isinstance(at, QAbstractItemView):
            return bool(at.state() == QAbstractItemView.State.EditingState)
        at = at.parentWidget()
    return False
