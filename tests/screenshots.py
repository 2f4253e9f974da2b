"""Screenshots: `python -m tests.screenshots [FOLDER] [light|dark]`, from the root of the repository.

Every page that the rail offers, at 1366 x 768 and again at 150 % zoom, for every example plan; needs no
display. A page is pictured when its long question is answered. The folder `screenshots/` is ignored by git.
"""

from __future__ import annotations

import os
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from PySide6.QtWidgets import QApplication

import resources
from desktop.answers import Status
from desktop.document import Document
from desktop.fonts import load_fonts
from desktop.inquiries import KINDS
from desktop.look import Look, Palette
from desktop.rail import PAGES
from desktop.start import name_locale
from desktop.window import Window
from desktop.workers import Workers
from solver.planfile import read_plan

SIZE = (1366, 768)
LOOKS = ((Palette.LIGHT, 1.0), (Palette.DARK, 1.0), (Palette.LIGHT, 1.5), (Palette.DARK, 1.5))
SETTLED = 0.3  # seconds a page may take to ask its own question, and to draw what came of it
LONGEST = 120.0  # seconds one answer may take on a busy machine


def main(folder: Path, palettes: list[str]) -> None:
    """Picture every page of every example, in the named palettes or in all."""
    app = QApplication(["screenshots"])
    load_fonts()
    name_locale()
    folder.mkdir(parents=True, exist_ok=True)
    look, workers, document = Look(app), Workers(), Document()
    window = Window(document, workers, look)
    window.show()
    window.resize(*SIZE)
    for path in resources.example_paths():
        document.new(read_plan(path))
        wait(app, lambda: window.answers.status in (Status.READY, Status.FAILED), LONGEST)
        for palette, zoom in LOOKS:
            if palettes and palette not in palettes:
                continue
            look.choose(palette)
            look.zoom_to(zoom)
            picture_pages(app, window, folder / f"{path.name.split('.')[0]}-{palette}-{round(zoom * 100)}")
    document.undo_stack.setClean()
    window.close()


def picture_pages(app: QApplication, window: Window, stem: Path) -> None:
    """One PNG per page; says so where a page does not fit the screen."""
    for at, page in enumerate(PAGES):
        if window.rail.item(at).isHidden():
            continue
        window.show_page(at)
        wait(app, lambda: False, SETTLED)
        wait(app, lambda: quiet(window), LONGEST)
        wait(app, lambda: False, SETTLED)
        picture = window.grab()
        name = f"{stem}-{at + 1}-{page.title.replace(' ', '-').lower()}.png"
        picture.save(name)
        fits = (picture.width(), picture.height()) == SIZE
        print(name if fits else f"{name}: needs {picture.width()} x {picture.height()}")


def quiet(window: Window) -> bool:
    """True when nobody is at work on a long question."""
    return not any(window.answers.progress(question) for question in KINDS)


def wait(app: QApplication, until: Callable[[], bool], seconds: float) -> None:
    """Let the window work until `until()` or for `seconds`."""
    end = time.monotonic() + seconds
    while not until() and time.monotonic() < end:
        app.processEvents()
        time.sleep(0.002)


if __name__ == "__main__":
    with tempfile.TemporaryDirectory() as settings:  # the planner's own choices stay as they are
        for place in ("XDG_STATE_HOME", "XDG_CONFIG_HOME", "XDG_DATA_HOME"):
            os.environ[place] = settings
        main(Path(sys.argv[1] if len(sys.argv) > 1 else "screenshots"), sys.argv[2:])
