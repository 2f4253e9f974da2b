"""Light or dark, and how large: chosen once, remembered, applied to the whole program."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from enum import StrEnum

from PySide6.QtCore import QObject, QSettings, Signal
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication

from desktop import theme
from desktop.theme import Theme

_CHOICE, _ZOOM = "look/palette", "look/zoom"
ZOOMS = (0.7, 0.8, 0.9, 1.0, 1.1, 1.25, 1.5, 1.75, 2.0, 2.5)


class Palette(StrEnum):
    """Which palette is wanted."""

    SYSTEM = "system"
    LIGHT = "light"
    DARK = "dark"


_MAKERS: dict[Palette, Callable[[], Theme]] = {
    Palette.SYSTEM: theme.of_system,
    Palette.LIGHT: theme.light,
    Palette.DARK: theme.dark,
}


class Look(QObject):
    """Palette and zoom. `changed` after another one was applied."""

    changed = Signal()

    def __init__(self, app: QApplication, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._app = app
        self._palette = _stored_palette()
        self._zoom = _stored_zoom()
        QGuiApplication.styleHints().colorSchemeChanged.connect(self._follow_system)
        self._apply()

    @property
    def palette(self) -> Palette:
        """The palette that was chosen."""
        return self._palette

    @property
    def zoom(self) -> float:
        """How large the interface is; 1 as designed."""
        return self._zoom

    def choose(self, palette: Palette) -> None:
        """Use `palette` from now on."""
        self._palette = palette
        QSettings().setValue(_CHOICE, palette.value)
        self._apply()

    def zoom_by(self, steps: int) -> None:
        """One step larger (1) or smaller (-1)."""
        nearest = min(range(len(ZOOMS)), key=lambda i: abs(ZOOMS[i] - self._zoom))
        self.zoom_to(ZOOMS[max(0, min(len(ZOOMS) - 1, nearest + steps))])

    def zoom_to(self, zoom: float) -> None:
        """Use this zoom from now on."""
        self._zoom = zoom
        QSettings().setValue(_ZOOM, zoom)
        self._apply()

    def _follow_system(self) -> None:
        if self._palette is Palette.SYSTEM:
            self._apply()

    def _apply(self) -> None:
        wanted = replace(_MAKERS[self._palette](), zoom=self._zoom)
        theme.apply(self._app, wanted)
        self.changed.emit()


def _stored_palette() -> Palette:
    stored = str(QSettings().value(_CHOICE, Palette.SYSTEM.value))
    return Palette(stored) if stored in list(Palette) else Palette.SYSTEM


def _stored_zoom() -> float:
    try:
        stored = float(str(QSettings().value(_ZOOM, 1.0)))
    except ValueError:
        return 1.0
    return min(max(stored, ZOOMS[0]), ZOOMS[-1])
