"""Help: the words of the program and its keys."""

from __future__ import annotations

from html import escape

from PySide6.QtWidgets import QDialog, QDialogButtonBox, QTextBrowser, QVBoxLayout, QWidget

from desktop import messages, theme
from desktop.help_text import KEYS, WORDS


class TextDialog(QDialog):
    """A text to read, scrolled, with a button to close it."""

    def __init__(self, title: str, html: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle(title)
        self.text = QTextBrowser()
        self.text.setHtml(html)
        self.text.setOpenLinks(False)
        self.text.setAccessibleName(title)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.addWidget(self.text)
        layout.addWidget(buttons)
        self.resize(theme.current().px(80), theme.current().px(68))


def help_dialog(parent: QWidget | None) -> TextDialog:
    """The Help dialog."""
    words = _table(WORDS)
    keys = _table(KEYS)
    html = (
        f"<h3>{messages.HELP_WORDS}</h3>{words}<h3>{messages.HELP_KEYS}</h3>{keys}<p>{messages.CAUTION}</p>"
    )
    return TextDialog(messages.HELP, html, parent)


def _table(rows: tuple[tuple[str, str], ...]) -> str:
    cells = "".join(
        f'<tr><td style="padding-right:16px"><b>{escape(word)}</b></td><td>{escape(meaning)}</td></tr>'
        for word, meaning in rows
    )
    return f'<table cellspacing="4">{cells}</table>'
