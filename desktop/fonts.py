"""The bundled font, made known to Qt, which ships none."""

from __future__ import annotations

from PySide6.QtGui import QFontDatabase, QGuiApplication

import resources

_LOADED = "fullComplementFonts"


def load_fonts() -> None:
    """Make the bundled font available to the running application; once is enough."""
    app = QGuiApplication.instance()
    if app is None or app.property(_LOADED):
        return
    for bold in (False, True):
        QFontDatabase.addApplicationFont(str(resources.font_path(bold)))
    app.setProperty(_LOADED, True)
