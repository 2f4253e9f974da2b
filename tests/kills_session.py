"""The program under fire in `tests/kills.py`: somebody edits, saves and prints without a pause.

Started as `python -m tests.kills_session PLAN`; writes what it did, with the time, to the file KILLS_JOURNAL.
"""

from __future__ import annotations

import os
import random
import sys
import time
from dataclasses import replace
from decimal import Decimal
from pathlib import Path

from PySide6.QtCore import QTimer

from desktop import start
from desktop.answers import Status
from desktop.rail import OUTPUT, PAGES
from desktop.window import Window

PAUSES = (5, 150)  # ms between actions


class Hands:
    """Does something to the window at random, again and again."""

    def __init__(self, window: Window) -> None:
        self.window = window
        self._draw = random.Random(os.environ["KILLS_SEED"])
        self._journal = os.open(os.environ["KILLS_JOURNAL"], os.O_WRONLY | os.O_CREAT | os.O_APPEND)
        self._rest = Path(os.environ["KILLS_REST"])
        self._resting = False
        self._edits = 0
        self._timer = QTimer(window, singleShot=True)
        self._timer.timeout.connect(self._act)
        window.answers.changed.connect(self._answered)

    def _answered(self) -> None:
        if self.window.answers.status is Status.READY and not self._timer.isActive():
            self._next()

    def _act(self) -> None:
        if self._rest.exists():
            self._pause()
            return
        self._resting = False
        self._draw.choices((self._edit, self._save, self._print, self._look), (70, 10, 10, 10))[0]()
        self._next()

    def _pause(self) -> None:
        """One more edit, then hands off until the judge has seen the answer to it."""
        if not self._resting:
            self._resting = True
            self._edit()
        elif self.window.answers.status is Status.READY and not self.window.answers.stale:
            self._note("answered")
        self._next()

    def _next(self) -> None:
        self._timer.start(self._draw.randint(*PAUSES))

    def _edit(self) -> None:
        plan = self.window.document.plan
        self._edits += 1
        first, *others = plan.works
        changed = replace(
            first, amounts=tuple(Decimal(self._draw.randint(30_000, 70_000)) for _ in plan.phases)
        )
        title = f"edit {self._edits}"
        self.window.document.edit(title, replace(plan, title=title, works=(changed, *others)))
        self._note(f"typed {self._edits}")

    def _save(self) -> None:
        edits = self._edits
        self.window.document.save()
        self._note(f"saved {edits}")

    def _print(self) -> None:
        page = self.window.page(OUTPUT)
        page.write_pdf(Path(os.environ["KILLS_PDF"]))
        self._note("printed")

    def _look(self) -> None:
        self.window.show_page(self._draw.randrange(len(PAGES)))

    def _note(self, what: str) -> None:
        os.write(self._journal, f"{time.time():.4f} {what}\n".encode())


def main() -> int:
    """Start the window as the program does, and put hands on it."""
    opened = start.open_window

    def with_hands(*given) -> Window:
        window = opened(*given)
        window.files.open_leftovers = lambda: False  # the judge reads them; nobody is there to be asked
        window.hands = Hands(window)
        return window

    start.open_window = with_hands
    return start.run(Path(sys.argv[1]))


if __name__ == "__main__":
    sys.exit(main())
