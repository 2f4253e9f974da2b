"""The stamp of a page: which plan, which program, when."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path

from PySide6.QtCore import QDate, QLocale, QTime

from desktop.page.compose import page_locale
from desktop.page.recommendation import Stamp
from desktop.page.text import plain
from solver.plan import Plan
from solver.planfile import content_hash
from solver.version import program_version

UNSAVED = "plan not saved yet"


def stamp(
    plan: Plan, path: Path | None, when: datetime | None = None, locale: QLocale | None = None
) -> Stamp:
    """The stamp of a page made of `plan`, kept in `path`, at local time `when` (now)."""
    at = when or datetime.now()
    chosen = page_locale(locale)
    day = chosen.toString(QDate(at.year, at.month, at.day), "d MMMM yyyy")
    time = chosen.toString(QTime(at.hour, at.minute), "HH:mm")
    file = plain(path.name) if path is not None else UNSAVED
    return Stamp(file, f"SHA-256 {content_hash(plan)}", program_version(), f"{day}, {time}", day)
