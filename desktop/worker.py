"""One solver process, seen from the window."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import simplejson
from PySide6.QtCore import QObject, QProcess, QTimer, Signal

import solver
from desktop.replies import Flooded, ReplyReader

_LAST_WORDS = 8_000  # bytes of the error stream that are kept for the log


def worker_command() -> tuple[str, ...]:
    """How a solver process is started: the bundle starts itself, everything else starts Python."""
    return solver_command("worker")


def solver_command(verb: str) -> tuple[str, ...]:
    """The command that runs `verb` of the solver, from `solver_folder()`."""
    if getattr(sys, "frozen", False):
        return (sys.executable, f"--{verb}")
    return (sys.executable, "-m", "solver", verb)


def solver_folder() -> str:
    """The folder `python -m` looks in first: ours, never the user's, which may hold a json.py of its own."""
    return str(Path(solver.__file__).parents[1])


class Worker(QObject):
    """A running solver process.

    `replied(Reply)` for every record it writes; `lost(how)` once, when it ended or had to be ended without
    having been asked to.
    """

    replied = Signal(object)
    lost = Signal(str)

    def __init__(self, command: Sequence[str] | None = None, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._reader = ReplyReader()
        self._last_words = b""
        self._served = 0
        self._process = QProcess(self)
        self._process.setProgram((command or worker_command())[0])
        self._process.setArguments(list((command or worker_command())[1:]))
        self._process.setWorkingDirectory(solver_folder())
        self._process.readyReadStandardOutput.connect(self._read)
        self._process.readyReadStandardError.connect(self._listen)
        self._process.finished.connect(self._on_finished)
        self._process.errorOccurred.connect(self._on_error)
        self._process.start()

    @property
    def alive(self) -> bool:
        """False once the process has ended."""
        return self._process.state() != QProcess.ProcessState.NotRunning

    @property
    def process_id(self) -> int:
        """The system's number of the process, 0 when there is none."""
        return int(self._process.processId())

    @property
    def last_words(self) -> str:
        """The end of what the process wrote on its error stream."""
        return self._last_words.decode("utf-8", "replace")

    @property
    def served(self) -> int:
        """How many requests it was given."""
        return self._served

    def send(self, request: dict[str, Any]) -> None:
        """Hand over one request; replies arrive through `replied`."""
        self._served += 1
        line = simplejson.dumps(request, use_decimal=True) + "\n"
        self._process.write(line.encode("utf-8"))

    def stop(self) -> None:
        """End the process without a word; no signal of this worker is emitted afterwards."""
        self.blockSignals(True)
        if not self.alive:
            self.deleteLater()
            return
        self._process.finished.connect(self.deleteLater)
        self._process.kill()

    def join(self, milliseconds: int) -> None:
        """Wait until the stopped process is gone. For the end of the program."""
        if self.alive:
            self._process.waitForFinished(milliseconds)

    def _read(self) -> None:
        try:
            replies = self._reader.feed(bytes(self._process.readAllStandardOutput().data()))
        except Flooded:
            self._lose("it wrote without end")
            return
        for reply in replies:
            self.replied.emit(reply)

    def _listen(self) -> None:
        heard = self._last_words + bytes(self._process.readAllStandardError().data())
        self._last_words = heard[-_LAST_WORDS:]

    def _on_finished(self, code: int, how: QProcess.ExitStatus) -> None:
        self._lose("it crashed" if how == QProcess.ExitStatus.CrashExit else f"it ended with code {code}")

    def _on_error(self, error: QProcess.ProcessError) -> None:
        if error == QProcess.ProcessError.FailedToStart:
            # queued: a process may fail to start before anybody can listen
            QTimer.singleShot(0, self, lambda: self._lose("it could not be started"))

    def _lose(self, how: str) -> None:
        if not self.signalsBlocked():
            self.lost.emit(how)
            self.stop()
