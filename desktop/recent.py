"""The plans opened last."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QSettings

_KEY = "recent plans"
MOST = 9


def recent() -> list[Path]:
    """Paths, the latest first."""
    raw = QSettings().value(_KEY, [])
    listed = raw if isinstance(raw, list) else [raw]  # one entry comes back as a text
    return [Path(entry) for entry in listed if isinstance(entry, str) and entry][:MOST]


def remember(path: Path) -> None:
    """`path` was opened or saved."""
    known = [str(path.absolute()), *(str(p) for p in recent() if p != path.absolute())]
    QSettings().setValue(_KEY, known[:MOST])


def forget(path: Path) -> None:
    """`path` is not there any more."""
    QSettings().setValue(_KEY, [str(p) for p in recent() if p != path])


def forget_all() -> None:
    """Clear the list."""
    QSettings().setValue(_KEY, [])
