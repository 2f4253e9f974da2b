"""Starting the window: the solver process first, so that it warms up while the window is built."""

from __future__ import annotations

import logging
import signal
import sys
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QLocale, QTimer
from PySide6.QtWidgets import QApplication

import resources
from desktop import messages, recent
from desktop.workers import Workers

if TYPE_CHECKING:
    from desktop.answers import Answers
    from desktop.window import Window

_log = logging.getLogger("desktop")
_SIGNALS = 500  # ms between looks for signals, which Python misses while Qt waits


def run(plan: Path | None) -> int:
    """Open the window with `plan`, or that of last time, or an example; returns the exit code."""
    app = QApplication.instance() or QApplication(sys.argv[:1])
    assert isinstance(app, QApplication)
    app.setOrganizationName("full-complement")  # the folder of the settings
    app.setApplicationName("full-complement")
    app.setApplicationDisplayName(messages.PROGRAM)
    app.setDesktopFileName("full-complement")
    name_locale()
    workers = Workers()
    window = open_window(app, workers, plan)
    for number in (signal.SIGINT, signal.SIGTERM):
        signal.signal(number, lambda *_: app.quit())
    heartbeat = QTimer()
    heartbeat.timeout.connect(lambda: None)
    heartbeat.start(_SIGNALS)
    code = int(app.exec())
    workers.close()
    window.deleteLater()
    return code


def name_locale() -> None:
    """Where the system names no language ("C"), numbers are still grouped: 52,000."""
    if QLocale().language() == QLocale.Language.C:
        QLocale.setDefault(QLocale(QLocale.Language.English, QLocale.Country.UnitedKingdom))


def open_window(app: QApplication, workers: Workers, plan: Path | None) -> Window:
    """The window, on the screen, with a plan in it. What is heavy is imported while the solver warms up."""
    from desktop.document import Document
    from desktop.failures import FailureReporter, start_log
    from desktop.fonts import load_fonts
    from desktop.look import Look
    from desktop.window import Window

    start_log()
    FailureReporter().install()
    load_fonts()
    window = Window(Document(), workers, Look(app))
    note_first_answer(window.answers)
    window.show()
    # once the window is there, so that questions have something to stand on
    QTimer.singleShot(0, window, lambda: first_plan(window, plan))
    return window


def note_first_answer(answers: Answers) -> None:
    """One line of the log when the first answer is there: how long a start takes on machines we never see."""
    from desktop.answers import Status

    def note() -> None:
        if answers.status is Status.READY:
            answers.changed.disconnect(note)
            _log.info("first answer")

    answers.changed.connect(note)


def first_plan(window: Window, plan: Path | None) -> None:
    """Put the first plan into the window: what a crash left, what was asked for, the last one, an example."""
    if window.files.open_leftovers():
        return
    if plan is not None:
        window.files.open(plan)
        return
    last = next(iter(recent.recent()), None)
    if last is not None and last.exists():
        window.files.open(last)
    else:
        window.files.open_example(resources.example_paths()[0])
    if last is not None and not last.exists():
        recent.forget(last)
        window.tell(messages.LAST_PLAN_GONE.format(name=last.name))
