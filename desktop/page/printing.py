"""The page on a printer of the system."""

from __future__ import annotations

from PySide6.QtPrintSupport import QPrintDialog, QPrinter
from PySide6.QtWidgets import QDialog, QWidget

from desktop.page.layout import Sheet
from desktop.page.pdf import CannotPaint, paint_on


def ask_printer(sheet: Sheet, *, grey: bool, title: str, parent: QWidget) -> QPrinter | None:
    """The printer chosen in the system's dialog, set for one sheet; None when the planner thought better."""
    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setDocName(title)
    printer.setPageSize(sheet.paper.qt)
    printer.setFullPage(True)
    printer.setColorMode(QPrinter.ColorMode.GrayScale if grey else QPrinter.ColorMode.Color)
    dialog = QPrintDialog(printer, parent)
    dialog.setOption(QPrintDialog.PrintDialogOption.PrintPageRange, False)
    accepted = dialog.exec() == QDialog.DialogCode.Accepted
    return printer if accepted else None


def print_sheet(sheet: Sheet, printer: QPrinter, *, grey: bool) -> bool:
    """Print `sheet`; False when the printer did not take it."""
    printer.setFullPage(True)
    try:
        paint_on(printer, sheet, grey=grey)
    except CannotPaint:
        return False
    return printer.printerState() != QPrinter.PrinterState.Error
