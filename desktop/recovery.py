"""A copy of unsaved changes, kept up to date while typing and offered after a crash."""

from __future__ import annotations

import contextlib
import datetime
import os
import secrets
import threading
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import simplejson
from PySide6.QtCore import QLockFile, QObject, QThreadPool, Signal

from desktop.document import Content, Document, Place, Refusal
from desktop.state_folder import state_folder
from solver.plan import Plan
from solver.planfile import (
    CannotSave,
    PlanProblems,
    UnreadableFile,
    exact_json,
    plan_from_document,
    plan_to_document,
    write_whole,
)

DELAY = 500  # ms from the first unsaved change to its copy; two seconds are promised, also on a busy machine
FOLDER = "recovery"
FORMAT = "full-complement/recovery"


class Recovery(QObject):
    """Writes the copy of one window. `failed(sentence)` when it could not be written.

    Waiting, for the next copy and for the disk, is done in a thread: a window that is busy does not put a
    copy off. Contents are frozen, so the thread may read them; one thread keeps the order.
    """

    failed = Signal(str)

    def __init__(self, document: Document, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._file = state_folder(FOLDER) / f"{os.getpid()}-{secrets.token_hex(4)}.json"
        self._lock = _locked(self._file)
        self._pool = QThreadPool(self)
        self._pool.setMaxThreadCount(1)
        self._unsaved: tuple[Content, Path | None] | None = None
        self._due = False
        self._hurry = threading.Event()
        document.changed.connect(self._on_changed)
        document.renamed.connect(self._on_changed)

    @property
    def file(self) -> Path:
        """Where the copy is."""
        return self._file

    def write(self) -> None:
        """Write the copy now, without waiting for the disk."""
        self._unsaved = self._document.content, self._document.path
        self._hurry.set()
        self._pool.start(self._write)

    def wait(self) -> None:
        """Wait until everything asked for is on the disk."""
        self._hurry.set()
        self._pool.waitForDone()

    def close(self) -> None:
        """Nothing is unsaved any more: the copy goes."""
        self._unsaved = None
        self.wait()
        self._remove()
        if self._lock is not None:
            self._lock.unlock()

    def _on_changed(self) -> None:
        """Keep the copy of what is not saved; the clock starts with the first change after a copy."""
        if not self._document.modified:
            self._unsaved = None
            self._pool.start(self._remove)
            return
        self._unsaved = self._document.content, self._document.path
        if not self._due:
            self._due = True
            self._hurry.clear()
            self._pool.start(self._write_soon)

    def _write_soon(self) -> None:
        self._hurry.wait(DELAY / 1000)
        self._due = False  # before the content is read: what changes from now on gets a copy of its own
        self._write()

    def _write(self) -> None:
        if self._unsaved is None:
            return
        content, path = self._unsaved
        with contextlib.suppress(OSError):  # somebody may have cleared it away; writing tells what is wrong
            self._file.parent.mkdir(parents=True, exist_ok=True)
        try:
            write_whole(self._file, _text(content, path).encode("utf-8"))
        except CannotSave as why:
            self.failed.emit(str(why))

    def _remove(self) -> None:
        """Unless something was typed in the meantime."""
        if self._unsaved is not None:
            return
        with contextlib.suppress(OSError):
            self._file.unlink(missing_ok=True)


@dataclass(frozen=True)
class Leftover:
    """What a window that crashed had not saved: content, the plan's file, when it was typed."""

    file: Path
    content: Content
    path: Path | None
    when: datetime.datetime

    def discard(self) -> None:
        """Forget it."""
        with contextlib.suppress(OSError):
            self.file.unlink(missing_ok=True)


def leftovers() -> list[Leftover]:
    """Copies whose program is gone, the latest first. One that cannot be read stays where it is."""
    found = []
    for file in sorted(state_folder(FOLDER).glob("*.json")):
        lock = _locked(file)
        if lock is None:
            continue  # its window is open
        lock.unlock()
        left = _leftover(file)
        if left is not None:
            found.append(left)
    return sorted(found, key=lambda left: left.when, reverse=True)


def _locked(file: Path) -> QLockFile | None:
    lock = QLockFile(f"{file}.lock")
    lock.setStaleLockTime(0)
    return lock if lock.tryLock(0) else None


def _text(content: Content, path: Path | None) -> str:
    document = {
        "format": FORMAT,
        "path": None if path is None else str(path),
        "when": datetime.datetime.now(datetime.UTC).isoformat(timespec="seconds"),
        "refused": [[*place, refusal.text, refusal.reason] for place, refusal in content.refused.items()],
        "plan": plan_to_document(content.plan),
    }
    text: str = simplejson.dumps(document, use_decimal=True)
    return text + "\n"


def _leftover(file: Path) -> Leftover | None:
    try:
        raw: Any = exact_json(file.read_text(encoding="utf-8"))
        path = None if raw["path"] is None else Path(raw["path"])
        when = datetime.datetime.fromisoformat(raw["when"])
        return Leftover(file, Content(_plan(raw["plan"]), _refused(raw["refused"])), path, when)
    except (OSError, UnreadableFile, PlanProblems, KeyError, TypeError, ValueError):
        return None


def _plan(raw: Any) -> Plan:
    try:
        return plan_from_document(raw)
    except PlanProblems as problems:
        if problems.plan is None:
            raise
        return problems.plan


def _refused(raw: Any) -> Mapping[Place, Refusal]:
    return {(table, name, key): Refusal(text, reason) for table, name, key, text, reason in raw}
