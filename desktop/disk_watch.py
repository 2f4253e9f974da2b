"""Notices that the file of the plan was changed by somebody else."""

from __future__ import annotations

import hashlib
from enum import StrEnum
from pathlib import Path

from PySide6.QtCore import QObject

from desktop.document import Document


class OnDisk(StrEnum):
    """What the file is compared with when it was last read or written here."""

    SAME = "same"
    CHANGED = "changed"
    GONE = "gone"


class DiskWatch(QObject):
    """Remembers the content of the document's file. Asked when the window gets the focus and before saving.

    A look costs a `stat`; the content is only read where size or time differ, so a copy tool that sets
    times alone is no change.
    """

    def __init__(self, document: Document, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._stamp: tuple[int, int] | None = None
        self._hash = ""

    def remember(self) -> None:
        """The file is as the document knows it: it was just read or written."""
        path = self._document.path
        self._stamp = _stamp(path) if path else None
        self._hash = _hash(path) if path else ""

    def look(self) -> OnDisk:
        """Compare the file with what was remembered."""
        path = self._document.path
        if path is None or not self._hash:
            return OnDisk.SAME
        stamp = _stamp(path)
        if stamp is None:
            return OnDisk.GONE
        if stamp == self._stamp:
            return OnDisk.SAME
        if _hash(path) != self._hash:
            return OnDisk.CHANGED
        self._stamp = stamp
        return OnDisk.SAME


def _stamp(path: Path) -> tuple[int, int] | None:
    try:
        about = path.stat()
    except OSError:
        return None
    return about.st_mtime_ns, about.st_size


def _hash(path: Path) -> str:
    try:
        return hashlib.sha256(path.read_bytes()).hexdigest()
    except OSError:
        return ""
