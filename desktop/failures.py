"""What nobody expected: written to the log, told once with details that can be copied."""

from __future__ import annotations

import logging
import sys
import traceback
from logging.handlers import RotatingFileHandler
from pathlib import Path
from types import TracebackType

from PySide6.QtCore import QMessageLogContext, Qt, QtMsgType, qInstallMessageHandler
from PySide6.QtWidgets import QApplication, QMessageBox

from desktop import messages
from desktop.state_folder import state_folder
from solver.version import program_version

LOG_FILE = "full-complement.log"
_LARGEST_LOG = 1_000_000  # bytes; one older log is kept
_LEVELS = {QtMsgType.QtDebugMsg: logging.DEBUG, QtMsgType.QtInfoMsg: logging.INFO}

_log = logging.getLogger("desktop")


def log_path() -> Path:
    """Where the log is."""
    return state_folder() / LOG_FILE


def start_log() -> None:
    """Write what the program and Qt say to the log file; without a place for it, to nowhere."""
    try:
        handler = RotatingFileHandler(log_path(), maxBytes=_LARGEST_LOG, backupCount=1, encoding="utf-8")
    except OSError:
        return
    handler.setFormatter(logging.Formatter("%(asctime)s %(levelname)s %(name)s: %(message)s"))
    logging.getLogger().addHandler(handler)
    logging.getLogger().setLevel(logging.INFO)
    qInstallMessageHandler(_from_qt)
    _log.info("Full Complement %s started, Python %s", program_version(), sys.version.split()[0])


def _from_qt(kind: QtMsgType, _where: QMessageLogContext, text: str) -> None:
    logging.getLogger("qt").log(_LEVELS.get(kind, logging.WARNING), "%s", text)


class FailureReporter:
    """The program's excepthook: one dialog at a time, however often something goes wrong."""

    def __init__(self) -> None:
        self._telling = False

    def install(self) -> None:
        """Hear of every exception that nobody caught."""
        sys.excepthook = self.report

    def report(self, kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        """Log the exception and tell the planner."""
        if issubclass(kind, KeyboardInterrupt):
            sys.__excepthook__(kind, error, trace)
            return
        details = "".join(traceback.format_exception(kind, error, trace))
        _log.error("unexpected error\n%s", details)
        if not self._telling and QApplication.instance() is not None:
            self._telling = True
            try:
                failure_box(details).exec()
            finally:
                self._telling = False


def failure_box(details: str) -> QMessageBox:
    """The dialog: what it means for the plan, where the log is, and the details to copy."""
    box = QMessageBox()
    box.setWindowTitle(messages.PROGRAM)
    box.setIcon(QMessageBox.Icon.Warning)
    box.setTextFormat(Qt.TextFormat.PlainText)
    box.setText(messages.UNEXPECTED)
    box.setInformativeText(messages.UNEXPECTED_MORE.format(log=log_path()))
    box.setDetailedText(details)
    copy = box.addButton(messages.COPY_DETAILS, QMessageBox.ButtonRole.ActionRole)
    copy.clicked.disconnect()
    copy.clicked.connect(lambda: QApplication.clipboard().setText(details))
    box.setDefaultButton(box.addButton(messages.GO_ON, QMessageBox.ButtonRole.AcceptRole))
    return box
