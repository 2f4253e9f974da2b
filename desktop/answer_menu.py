"""The Answer menu: stop looking, look further, how long and how close."""

from __future__ import annotations

from PySide6.QtWidgets import QMenu, QWidget

from desktop import messages
from desktop.answers import Answers
from desktop.dialogs.effort_dialog import EffortDialog
from desktop.effort import store_effort, stored_effort
from desktop.menus import add

STOP_KEYS, FURTHER_KEYS, EFFORT_KEYS = "Ctrl+.", "Ctrl+Shift+L", "Ctrl+Shift+T"


class AnswerMenu:
    """Fills a menu; what has no use now is grey. The effort chosen last is used from the start."""

    def __init__(self, menu: QMenu, answers: Answers, window: QWidget) -> None:
        self._answers = answers
        self._window = window
        answers.choose(stored_effort())
        self.stop = add(menu, "&Stop here", answers.stop, STOP_KEYS)
        self.further = add(menu, "Look &further", answers.look_further, FURTHER_KEYS)
        menu.addSeparator()
        self.effort = add(menu, "&Time and tolerance...", self.choose_effort, EFFORT_KEYS)
        self.stop.setToolTip(messages.STOP_HERE_TIP.format(keys=STOP_KEYS))
        self.further.setToolTip(messages.LOOK_FURTHER_TIP.format(keys=FURTHER_KEYS))
        answers.changed.connect(self._show)
        self._show()

    def choose_effort(self) -> None:
        """Ask how long and how close, and use it at once."""
        dialog = EffortDialog(self._answers.effort, self._window)
        if dialog.exec():
            store_effort(dialog.effort)
            self._answers.choose(dialog.effort)
        dialog.deleteLater()

    def _show(self) -> None:
        self.stop.setEnabled(self._answers.can_stop)
        self.further.setEnabled(self._answers.can_look_further)
