"""About: versions and licences of what is shipped."""

from __future__ import annotations

import platform
from html import escape
from importlib import metadata

from PySide6.QtCore import qVersion
from PySide6.QtWidgets import QWidget

import resources
from desktop import messages
from desktop.dialogs.help_dialog import TextDialog
from desktop.state_folder import state_folder
from solver.version import program_version

# what the program is made with: distribution -> its licence in words
PARTS = {
    "mip": "EPL 2.0",
    "cbcbox": "EPL 2.0",
    "highsbox": "MIT",
    "numpy": "BSD 3-Clause",
    "simplejson": "MIT or AFL 2.1",
    "cattrs": "MIT",
    "PySide6-Essentials": "LGPL 3.0",
    "pyqtgraph": "MIT",
    "XlsxWriter": "BSD 2-Clause",
    "python-calamine": "MIT",
}


def about_dialog(parent: QWidget | None) -> TextDialog:
    """The About dialog."""
    rows = "".join(
        f"<tr><td>{escape(n)}</td><td>{escape(v)}</td><td>{escape(t)}</td></tr>" for n, v, t in parts()
    )
    texts = "".join(
        f"<h4>{escape(name)}</h4><pre style='white-space:pre-wrap'>{escape(text)}</pre>"
        for name, text in resources.licence_texts().items()
    )
    html = (
        f"<h3>{messages.PROGRAM} {escape(program_version())}</h3><p>{escape(messages.ABOUT)}</p>"
        f"<p>{escape(messages.KEPT_IN.format(folder=state_folder()))}</p>"
        f'<table cellspacing="4">{rows}</table>{texts}'
    )
    return TextDialog(messages.ABOUT_TITLE, html, parent)


def parts() -> list[tuple[str, str, str]]:
    """(name, version, licence) of everything the program is made with."""
    python = ("Python", platform.python_version(), "PSF 2.0")
    return [python, ("Qt", qVersion(), "LGPL 3.0"), *((n, _version(n), text) for n, text in PARTS.items())]


def _version(name: str) -> str:
    try:
        return metadata.version(name)
    except metadata.PackageNotFoundError:
        return messages.NOT_INSTALLED
