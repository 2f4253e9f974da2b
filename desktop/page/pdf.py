"""The page as a PDF file: laid out, painted into memory, then put in place in one step."""

from __future__ import annotations

import os
import sys
from pathlib import Path

from PySide6.QtCore import QBuffer, QIODevice, QMarginsF
from PySide6.QtGui import QGuiApplication, QPagedPaintDevice, QPainter, QPdfWriter

from desktop.fonts import load_fonts
from desktop.page.asking import ask_solver
from desktop.page.compose import recommend
from desktop.page.layout import Sheet, lay_out
from desktop.page.paint import paint_sheet
from desktop.page.paper import paper
from desktop.page.recommendation import Recommendation
from desktop.page.stamp import stamp
from desktop.theme import print_theme
from solver.planfile import read_plan, write_whole

DPI = 96  # the screen's: pictures keep their proportions on every device
SECONDS = 60.0  # what the exact solve may take; the page then says "not proved"


class CannotPaint(Exception):
    """The device does not let itself be painted on: a printer that is gone or refuses."""


def paint_page(painter: QPainter, sheet: Sheet, *, grey: bool = False) -> None:
    """Paint `sheet` with the painter's unit set to points of paper (1/72 inch)."""
    paint_sheet(painter, sheet, print_theme(grey))


def page_bytes(what: Recommendation, *, size: str = "A4", grey: bool = False) -> bytes:
    """The page of `what` as a PDF document. Raises ValueError for an unknown size, PageTooFull."""
    sheet = lay_out(what, paper(size))
    buffer = QBuffer()
    buffer.open(QIODevice.OpenModeFlag.WriteOnly)
    writer = QPdfWriter(buffer)
    writer.setResolution(DPI)
    writer.setTitle(what.title)
    writer.setCreator(f"Full Complement {what.stamp.version}")
    paint_on(writer, sheet, grey=grey)
    return bytes(buffer.data().data())


def paint_on(device: QPdfWriter | QPagedPaintDevice, sheet: Sheet, *, grey: bool = False) -> None:
    """Print `sheet` on a PDF file or printer, filling the paper to its edges. Raises CannotPaint."""
    device.setPageSize(sheet.paper.qt)
    device.setPageMargins(QMarginsF(0, 0, 0, 0))
    painter = QPainter()
    if not painter.begin(device):
        raise CannotPaint
    try:
        scale = device.logicalDpiX() / 72
        painter.scale(scale, scale)
        paint_page(painter, sheet, grey=grey)
    finally:
        painter.end()


def save_page(
    what: Recommendation, out: str | os.PathLike[str], *, size: str = "A4", grey: bool = False
) -> None:
    """Write the page of `what` to `out`, whole or not at all. Raises CannotSave with a sentence."""
    write_whole(Path(out), page_bytes(what, size=size, grey=grey))


def write_page(
    plan_path: str | os.PathLike[str],
    out: str | os.PathLike[str],
    *,
    size: str = "A4",
    grey: bool = False,
    seconds: float = SECONDS,
) -> None:
    """Solve the plan in `plan_path` and write its page to `out`; needs no window and no display.

    Raises UnreadableFile or PlanProblems for the plan, CannotSave for `out`, ValueError for `size`,
    NoAnswer where the solver failed. Every message is a sentence for people.
    """
    paper(size)
    plan = read_plan(plan_path)
    answer, details = ask_solver(plan, seconds)
    app = QGuiApplication.instance() or QGuiApplication(_arguments())
    load_fonts()
    what = recommend(plan, answer, stamp(plan, Path(plan_path)), details=details)
    save_page(what, out, size=size, grey=grey)
    del app


def _arguments() -> list[str]:
    """Qt aborts where there is no display; the page needs none."""
    native = sys.platform in ("win32", "darwin")
    return ["full-complement"] if native else ["full-complement", "-platform", "offscreen"]
