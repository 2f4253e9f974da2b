"""The dialog that names a variant."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtWidgets import QDialog, QDialogButtonBox, QLabel, QLineEdit, QPushButton, QVBoxLayout, QWidget

from desktop import messages, theme
from desktop import variant_words as say
from desktop.family import NoVariantName, variant_path
from desktop.pages.page_parts import label


class VariantDialog(QDialog):
    """Closes only over a name that can name a file; `target` is then that file, `name` what was typed."""

    def __init__(self, path: Path, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._path = path
        self.target: Path | None = None
        self.setWindowTitle(say.NAME_TITLE)
        self.line = QLineEdit()
        self.line.setAccessibleName(say.NAME)
        self.line.setPlaceholderText(say.NAME_HINT)
        self.says = label(tone="faint")
        self.accept_button = QPushButton(messages.OK)
        title = QLabel(say.NAME)
        title.setBuddy(self.line)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel)
        buttons.addButton(self.accept_button, QDialogButtonBox.ButtonRole.AcceptRole)
        buttons.accepted.connect(self.accept)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        for part in (title, self.line, self.says, buttons):
            layout.addWidget(part)
        self.setMinimumWidth(theme.current().px(60))
        self.line.textChanged.connect(self._show)
        self._show()

    @property
    def name(self) -> str:
        """What the variant is called."""
        return " ".join(self.line.text().split())

    def _show(self) -> None:
        """The file it would get, or why it cannot be called so."""
        try:
            self.target = variant_path(self._path, self.line.text())
            said, tone = say.FILE.format(file=self.target.name), "faint"
        except NoVariantName as refused:
            self.target = None
            said, tone = str(refused), "short" if self.name else "faint"
        self.says.setText(said)
        theme.dress(self.says, tone=tone)
        self.accept_button.setEnabled(self.target is not None)
