"""The headline above every page: the exact crew, what it costs, and how much that is worth."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QObject, QSize, Qt, QTimer, Signal
from PySide6.QtGui import QFontMetrics
from PySide6.QtWidgets import (
    QFrame,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QSizePolicy,
    QSpacerItem,
    QVBoxLayout,
    QWidget,
)

from desktop import messages, theme
from desktop.answer_menu import FURTHER_KEYS, STOP_KEYS
from desktop.answers import Answers
from desktop.document import Document
from desktop.headline_words import Action, Headline, headline
from desktop.pictures.copyable import plain_tip
from desktop.theme import Size

PATIENCE = 150  # ms: an answer that comes at once never makes the headline flicker
_SHARES = (1.0, 0.9, 0.8, 0.7, 0.62)  # of the largest size, for crews of many categories
_BUTTONS = {
    Action.GO_TO: messages.GO_THERE,
    Action.ASK_AGAIN: messages.ASK_AGAIN,
    Action.MEND: messages.WHAT_HELPS,
}


class HeadlineBar(QFrame):
    """Always true: what is out of date looks it within 150 ms, and a fresh answer stands at once.

    `go_to(place)` asks to show an entry of the plan, `mend()` what is to be mended.
    """

    go_to = Signal(str)
    mend = Signal()

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("headline")
        self._document = document
        self._answers = answers
        self._said = headline(document, answers)
        self.crew = _label(Size.LARGE)
        self.facts = _label()
        self.facts.setWordWrap(True)
        self.state = _label()
        self.note = _label(Size.SMALL, "short")
        self.button = QPushButton()
        self.button.clicked.connect(self._act)
        self.stop_button = _button(messages.STOP_HERE, messages.STOP_HERE_TIP, STOP_KEYS)
        self.stop_button.clicked.connect(answers.stop)
        self.further_button = _button(messages.LOOK_FURTHER, messages.LOOK_FURTHER_TIP, FURTHER_KEYS)
        self.further_button.clicked.connect(answers.look_further)
        self._height_of_buttons = QSpacerItem(0, 0)
        self.crew.installEventFilter(self)
        self._soon = QTimer(self, singleShot=True, interval=PATIENCE)
        self._soon.timeout.connect(self._show)
        self._lay_out()
        answers.changed.connect(self._on_changed)
        document.changed.connect(self._on_changed)
        self._show()

    @property
    def said(self) -> Headline:
        """What is shown, as data."""
        return self._said

    def _lay_out(self) -> None:
        step = theme.current().px(1)
        left, right = QVBoxLayout(), QVBoxLayout()
        for widget in (self.crew, self.facts):
            widget.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
            left.addWidget(widget)
        self.state.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.note.setAlignment(Qt.AlignmentFlag.AlignRight)
        below = QHBoxLayout()
        below.addStretch(1)
        below.addItem(self._height_of_buttons)
        for shown in (self.note, self.button, self.stop_button, self.further_button):
            below.addWidget(shown)
        right.addWidget(self.state)
        right.addLayout(below)
        right.addStretch(1)
        whole = QHBoxLayout(self)
        whole.setContentsMargins(2 * step, step, 2 * step, step)
        whole.addLayout(left, 1)
        whole.addSpacing(2 * step)
        whole.addLayout(right)

    def _on_changed(self) -> None:
        """Show what changed, a step back only if nothing better follows at once."""
        coming = headline(self._document, self._answers)
        if coming.loud or not self._said.loud:
            self._soon.stop()
            self._show()
        elif not self._soon.isActive():
            self._soon.start()

    def _show(self) -> None:
        self._said = headline(self._document, self._answers)
        said = self._said
        theme.dress(self.crew, tone=said.tone if said.loud else "faint")
        theme.dress(self.state, tone=said.tone)
        self._fit_crew()
        self.facts.setText(said.facts)
        self.facts.setToolTip("")
        self.state.setText(f"{said.sign} {said.state}")
        self.state.setToolTip(said.tooltip)
        self.note.setText(said.note)
        self.note.setVisible(bool(said.note))
        self.button.setText(_BUTTONS.get(said.action, ""))
        self.button.setVisible(said.action is not Action.NONE)
        self._show_controls()
        self.setAccessibleName(messages.HEADLINE)
        self.setAccessibleDescription(f"{', '.join(said.crew)}. {said.facts}. {said.state}. {said.note}")

    def _show_controls(self) -> None:
        """What there is to be said about a long solve; while one runs the crew keeps its place."""
        answers = self._answers
        wide = max(self.state.minimumWidth(), self.state.sizeHint().width()) if answers.can_stop else 0
        self.state.setMinimumWidth(wide)
        self.stop_button.setVisible(answers.can_stop and answers.long)
        self.further_button.setVisible(answers.can_look_further)
        self._height_of_buttons.changeSize(0, self.stop_button.sizeHint().height())

    def _fit_crew(self) -> None:
        """As many categories as there is room for, and how many are left out."""
        parts = self._said.crew
        room = max(self.crew.width(), theme.current().px(40))
        metrics = self._size_crew(room)
        fitting = (
            n for n in range(len(parts), 1, -1) if metrics.horizontalAdvance(_joined(parts, n)) <= room
        )
        count = next(fitting, 1)
        if count == 1:  # one long name gives way, never the number of those left out
            rest = room - metrics.horizontalAdvance(_joined(("", *parts[1:]), 1))
            parts = (metrics.elidedText(parts[0], Qt.TextElideMode.ElideRight, rest), *parts[1:])
        self.crew.setText(_joined(parts, count))
        self.crew.setToolTip("" if count == len(parts) > 1 else plain_tip(", ".join(self._said.crew)))
        self.crew.setAccessibleName(", ".join(self._said.crew))

    def _size_crew(self, room: int) -> QFontMetrics:
        """As large as all categories have room at, if that is not much smaller than the rest; its metrics."""
        font = theme.current().font(Size.LARGE)
        self.crew.setMinimumHeight(QFontMetrics(font).height())  # nothing below moves with the size
        text, points = _joined(self._said.crew, len(self._said.crew)), font.pointSizeF()
        for share in _SHARES:
            font.setPointSizeF(points * share)
            if QFontMetrics(font).horizontalAdvance(text) <= room:
                break
        else:
            font.setPointSizeF(points)
        style = "" if font.pointSizeF() == points else f"font-size: {font.pointSizeF():.2f}pt;"
        if self.crew.styleSheet() != style:
            self.crew.setStyleSheet(style)
        return QFontMetrics(font)

    def _act(self) -> None:
        if self._said.action is Action.GO_TO:
            self.go_to.emit(self._said.place)
        elif self._said.action is Action.MEND:
            self.mend.emit()
        elif self._said.action is Action.ASK_AGAIN:
            self._answers.again()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Fit the crew into its new width, whether the window or what stands beside it changed."""
        if watched is self.crew and event.type() == QEvent.Type.Resize:
            self._fit_crew()
        return super().eventFilter(watched, event)

    def changeEvent(self, event: QEvent) -> None:
        """Follow the theme and the zoom."""
        super().changeEvent(event)
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.PaletteChange) and hasattr(self, "_soon"):
            self._fit_crew()

    def minimumSizeHint(self) -> QSize:
        """Never the reason why a window cannot be narrower."""
        return QSize(theme.current().px(60), super().minimumSizeHint().height())


def _button(text: str, tip: str, keys: str) -> QPushButton:
    made = QPushButton(text)
    made.setToolTip(tip.format(keys=keys))
    made.setAccessibleDescription(made.toolTip())
    made.hide()
    return made


def _label(size: Size = Size.BODY, tone: str | None = None) -> QLabel:
    made = QLabel()
    made.setTextFormat(Qt.TextFormat.PlainText)
    made.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
    return theme.dress(made, size, tone)


def _joined(parts: tuple[str, ...], count: int) -> str:
    shown = ", ".join(parts[:count])
    left = len(parts) - count
    return f"{shown} {messages.AND_MORE.format(count=left)}" if left else shown
