"""What the answer pages have in common: headings, plain labels, the caution, looking out of date."""

from __future__ import annotations

from PySide6.QtCore import QEvent, Qt, QTimer
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import (
    QFrame,
    QGraphicsOpacityEffect,
    QLabel,
    QScrollArea,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from desktop import crew_words as say
from desktop.answers import Answers, Status
from desktop.messages import CAUTION
from desktop.theme import Size, current, dress

_FADE_AFTER = 400  # ms: an answer that comes at once never makes the page flicker
_FADED = 0.6


def label(text: str = "", size: Size | None = None, tone: str | None = None) -> QLabel:
    """A label that shows `text` as typed, wraps, and can be read and copied by keyboard."""
    made = QLabel(text)
    made.setTextFormat(Qt.TextFormat.PlainText)
    made.setWordWrap(True)
    made.setTextInteractionFlags(
        Qt.TextInteractionFlag.TextSelectableByMouse | Qt.TextInteractionFlag.TextSelectableByKeyboard
    )
    made.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Minimum)
    return dress(made, size, tone)


def heading(text: str) -> QLabel:
    """The title of a part of a page."""
    made = QLabel(text)
    made.setTextFormat(Qt.TextFormat.PlainText)
    made.setProperty("weight", "bold")
    made.setSizePolicy(QSizePolicy.Policy.Preferred, QSizePolicy.Policy.Fixed)
    return made


def thin_rule() -> QFrame:
    """A thin line across."""
    made = QFrame()
    made.setFrameShape(QFrame.Shape.HLine)
    made.setFrameShadow(QFrame.Shadow.Plain)
    return made


def _scrolling(inside: QWidget) -> QScrollArea:
    made = QScrollArea()
    made.setWidget(inside)
    made.setWidgetResizable(True)
    made.setFocusPolicy(Qt.FocusPolicy.NoFocus)
    return made


class Inside(QWidget):
    """As high as its content is at its width; Qt would take what wrapped texts need at their narrowest."""

    def event(self, event: QEvent) -> bool:
        """Follow the content and the width."""
        done = super().event(event)
        layout = self.layout()
        if layout is not None and event.type() in (QEvent.Type.LayoutRequest, QEvent.Type.Resize):
            high = layout.totalHeightForWidth(self.width()) if layout.hasHeightForWidth() else 0
            if high != self.minimumHeight():
                self.setMinimumHeight(high)
        return done


class AnswerPage(QWidget):
    """A page about the answer: a scrolled body, what to do where there is none, the caution at the foot.

    Subclasses fill `body` and give `show_answer`; it is called with a fresh or an older answer in `answers`.
    """

    def __init__(self, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.answers = answers
        self.notice = label(size=Size.BODY, tone="faint")
        self.inside = Inside()
        self.body = QVBoxLayout(self.inside)
        self.caution = label(CAUTION, Size.SMALL, "faint")
        self._holder = _scrolling(self.inside)
        self._fade = QGraphicsOpacityEffect(self.inside)
        self._fade.setOpacity(_FADED)
        self._fade.setEnabled(False)
        self.inside.setGraphicsEffect(self._fade)
        self._fade_soon = QTimer(self, singleShot=True, interval=_FADE_AFTER)
        self._fade_soon.timeout.connect(self._look_old)
        self._lay_out()
        answers.changed.connect(self.refresh)

    def _lay_out(self) -> None:
        theme = current()
        outer = QVBoxLayout(self)
        outer.setContentsMargins(theme.px(2), theme.px(1), theme.px(2), theme.px(1))
        outer.setSpacing(theme.px(1))
        outer.addWidget(self.notice)
        outer.addWidget(self._holder, 1)
        outer.addWidget(thin_rule())
        outer.addWidget(self.caution)
        self.body.setContentsMargins(0, 0, theme.px(1), theme.px(1))
        self.body.setSpacing(theme.px(1.5))

    def refresh(self) -> None:
        """Show what `answers` holds now; a page nobody sees waits until it is seen."""
        if not self.isVisible():
            return
        self._holder.setVisible(self.answers.answer is not None)
        if not self.answers.stale:
            self._fade_soon.stop()
            self._fade.setEnabled(False)
        elif not self._fade_soon.isActive() and not self._fade.isEnabled():
            self._fade_soon.start()
        self._show_notice()
        self.show_answer()

    def _look_old(self) -> None:
        """Fade what still belongs to the plan before the last change, and say so."""
        self._fade.setEnabled(self.answers.stale)
        self._show_notice()

    def _show_notice(self) -> None:
        text = self.notice_text()
        self.notice.setText(text)
        self.notice.setVisible(bool(text))

    def notice_text(self) -> str:
        """What to do next where there is nothing to show, or what is wrong with what is shown."""
        answer, status = self.answers.answer, self.answers.status
        if status is Status.EMPTY:
            return say.NOTICE_EMPTY
        if status is Status.PROBLEMS:
            return say.NOTICE_PROBLEMS
        if status is Status.FAILED:
            return self.answers.failure
        if answer is None:
            return say.NOTICE_FIRST
        return say.NOTICE_STALE if self.answers.stale and self._fade.isEnabled() else ""

    def show_answer(self) -> None:
        """Fill the body from `answers`."""
        raise NotImplementedError

    def showEvent(self, event: QShowEvent) -> None:
        """Catch up."""
        super().showEvent(event)
        self.refresh()

    def changeEvent(self, event: QEvent) -> None:
        """Follow the theme."""
        super().changeEvent(event)
        touched = event.type() in (QEvent.Type.PaletteChange, QEvent.Type.FontChange)
        if touched and self.isVisible():
            self.retouch()

    def retouch(self) -> None:
        """Follow a change of theme or zoom."""
        self.show_answer()
