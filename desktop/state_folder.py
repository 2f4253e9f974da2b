"""Where the program keeps what is its own: recovery copies, locks, the log."""

from __future__ import annotations

from contextlib import suppress
from pathlib import Path

from PySide6.QtCore import QStandardPaths


def state_folder(*parts: str) -> Path:
    """The platform's folder for the state of this program, or one inside it; made if it can be.

    Where it cannot be made (a full disk, a home that is read-only) the program works without.
    """
    location = QStandardPaths.StandardLocation.StateLocation
    folder = Path(QStandardPaths.writableLocation(location), *parts)
    with suppress(OSError):
        folder.mkdir(parents=True, exist_ok=True)
    return folder
