"""How long to look and how close is close enough, in a small dialog."""

from __future__ import annotations

from PySide6.QtWidgets import QDialog, QDialogButtonBox, QDoubleSpinBox, QFormLayout, QVBoxLayout, QWidget

from desktop import messages
from desktop.effort import FEWEST_SECONDS, MOST_SECONDS, MOST_TOLERANCE, Effort
from desktop.pages.page_parts import label
from desktop.theme import Size, current


class EffortDialog(QDialog):
    """Two numbers; `effort` is what they say."""

    def __init__(self, effort: Effort, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle(messages.EFFORT)
        self.tolerance = QDoubleSpinBox(decimals=2, maximum=MOST_TOLERANCE, singleStep=0.1)
        self.tolerance.setSuffix(messages.OF_THE_CHEAPEST)
        self.tolerance.setValue(effort.tolerance)
        self.seconds = QDoubleSpinBox(decimals=0, minimum=FEWEST_SECONDS, maximum=MOST_SECONDS, singleStep=10)
        self.seconds.setSuffix(messages.SECONDS_OF_SOLVE)
        self.seconds.setValue(effort.seconds)
        self._lay_out()

    @property
    def effort(self) -> Effort:
        """What is chosen now."""
        return Effort(self.seconds.value(), self.tolerance.value())

    def _lay_out(self) -> None:
        form = QFormLayout()
        form.setVerticalSpacing(current().px(1))
        form.addRow(messages.GOOD_ENOUGH, self.tolerance)
        form.addRow(messages.LOOK_AT_MOST, self.seconds)
        buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        buttons.accepted.connect(self.accept)
        buttons.rejected.connect(self.reject)
        whole = QVBoxLayout(self)
        whole.setSpacing(current().px(1.5))
        whole.addLayout(form)
        whole.addWidget(label(messages.EFFORT_NOTE, Size.SMALL, "faint"))
        whole.addWidget(buttons)
        self.setMinimumWidth(current().px(56))
