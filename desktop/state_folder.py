"""Where the program keeps what is its own: recovery copies, locks, the log."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QStandardPaths


def state_folder(*parts: str) -> Path:
    """The platform's folder for the state of this program, or one inside it; made if it is missing."""
    location = QStandardPaths.StandardLocation.StateLocation
    folder = Path(QStandardPaths.writableLocation(location), *parts)
    folder.mkdir(parents=True, exist_ok=True)
    return folder
