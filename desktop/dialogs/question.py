"""Questions with a few answers, and sentences to be acknowledged."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QMessageBox, QWidget

from desktop import messages

Role = QMessageBox.ButtonRole


@dataclass(frozen=True)
class Choice:
    """One answer: its key and the text of its button."""

    key: str
    text: str
    role: QMessageBox.ButtonRole = Role.AcceptRole


CANCEL = Choice("cancel", messages.CANCEL, Role.RejectRole)


def ask(parent: QWidget | None, text: str, more: str, choices: tuple[Choice, ...]) -> str:
    """The key of the chosen answer; the first is the default, "cancel" where the box was closed."""
    box = QMessageBox(parent)
    box.setWindowTitle(messages.PROGRAM)
    box.setIcon(QMessageBox.Icon.Question)
    box.setTextFormat(Qt.TextFormat.PlainText)
    box.setText(text)
    box.setInformativeText(more)
    buttons = {choice.key: box.addButton(choice.text, choice.role) for choice in choices}
    box.setDefaultButton(buttons[choices[0].key])
    box.exec()
    clicked = box.clickedButton()
    box.deleteLater()
    return next((key for key, button in buttons.items() if button is clicked), CANCEL.key)


def tell(parent: QWidget | None, text: str, more: str = "") -> None:
    """Say `text` and wait until it was read."""
    ask(parent, text, more, (Choice("ok", messages.OK),))
