"""The traffic with the office: tables in, templates out."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QFileDialog, QWidget

from desktop import import_words as say
from desktop import recent
from desktop.dialogs.question import tell
from desktop.document import Document
from solver.planfile import CannotSave


class Traffic(QObject):
    """What the File menu does with tables. `told(sentence)` reports what went well."""

    told = Signal(str)

    def __init__(self, document: Document, window: QWidget) -> None:
        super().__init__(window)
        self._document = document
        self._window = window

    def import_table(self) -> None:
        """Let the planner choose a table and say what it holds."""
        chosen, _ = QFileDialog.getOpenFileName(
            self._window, say.CHOOSE_TABLE, str(start_folder(self._document)), say.TABLE_FILES
        )
        if chosen:
            self.read(Path(chosen))

    def read(self, path: Path) -> None:
        """Show what was understood of the table at `path`; what cannot be read is told."""
        from desktop.dialogs.import_dialog import ImportDialog
        from solver.tableimport import UnreadableTable, read_table

        try:
            sheets = read_table(path)
        except UnreadableTable as refused:
            tell(self._window, say.NOT_IMPORTED.format(name=path.name), str(refused))
            return
        dialog = ImportDialog(self._document, sheets, path.name, parent=self._window)
        dialog.told.connect(self.told)
        dialog.exec()
        dialog.deleteLater()

    def save_template(self) -> None:
        """Write a workbook with the headers that the import understands."""
        from solver.tableimport import write_template

        start = str(start_folder(self._document) / say.TEMPLATE_NAME)
        chosen, _ = QFileDialog.getSaveFileName(self._window, say.TEMPLATE, start, say.TEMPLATE_FILES)
        if not chosen:
            return
        path = Path(chosen) if Path(chosen).suffix else Path(chosen).with_suffix(".xlsx")
        try:
            write_template(path, self._document.plan)
        except CannotSave as why:
            tell(self._window, say.NOT_WRITTEN.format(name=path.name), str(why))
        else:
            self.told.emit(say.TEMPLATE_SAVED.format(name=path.name))


def start_folder(document: Document) -> Path:
    """Where dialogs start: beside the plan, else beside the latest one."""
    path = document.path or next(iter(recent.recent()), None)
    return path.parent if path else Path.home()
