"""Help: the words of the program, its pages, what is proved, and its keys."""

from __future__ import annotations

from html import escape

from PySide6.QtWidgets import QDialog, QDialogButtonBox, QTextBrowser, QVBoxLayout, QWidget

from desktop import messages, theme
from desktop.help_text import KEYS, PAGES, PROOF, WORDS

Rows = tuple[tuple[str, str], ...]


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


def help_dialog(parent: QWidget | None, menu_keys: Rows) -> TextDialog:
    """The Help dialog; `menu_keys` are (keys, entry) of the menus."""
    parts = (
        (messages.HELP_WORDS, WORDS),
        (messages.HELP_PAGES, PAGES),
        (messages.HELP_PROOF, PROOF),
        (messages.HELP_KEYS, (*KEYS, *menu_keys)),
    )
    html = "".join(f"<h3>{escape(title)}</h3>{_table(rows)}" for title, rows in parts)
    return TextDialog(messages.HELP, f"{html}<p>{escape(messages.CAUTION)}</p>", parent)


def _table(rows: Rows) -> str:
    cells = "".join(
        f'<tr><td style="padding-right:16px"><b>{escape(word)}</b></td><td>{escape(meaning)}</td></tr>'
        for word, meaning in rows
    )
    return f'<table cellspacing="4">{cells}</table>'
