"""Which window has which file open, so that two windows on one plan are noticed."""

from __future__ import annotations

import hashlib
import os
from pathlib import Path

from PySide6.QtCore import QLockFile

from desktop.state_folder import state_folder


class Claim:
    """Says "this file is open here" until released; the lock of a program that crashed does not count.

    The lock lies in the program's own folder, so it costs nothing beside the plan and works where the
    plan's folder is read-only; windows on two machines do not see each other.
    """

    def __init__(self) -> None:
        self._lock: QLockFile | None = None

    def take(self, path: Path | None) -> bool:
        """Claim `path` in place of what was claimed before; False if another window has it."""
        self.release()
        if path is None:
            return True
        lock = QLockFile(str(_lock_path(path)))
        lock.setStaleLockTime(0)  # only the death of its process makes a lock stale
        if not lock.tryLock(0):
            return lock.error() != QLockFile.LockError.LockFailedError
        self._lock = lock
        return True

    def release(self) -> None:
        """The file is not open here any more."""
        if self._lock is not None:
            self._lock.unlock()
            self._lock = None


def _lock_path(path: Path) -> Path:
    name = os.path.normcase(os.path.realpath(path))
    return state_folder("open") / f"{hashlib.sha256(name.encode('utf-8', 'surrogatepass')).hexdigest()}.lock"
