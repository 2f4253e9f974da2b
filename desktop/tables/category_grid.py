"""The grid of categories, which can also work out hours and pay of the current one."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtWidgets import QDialog, QWidget

from desktop import hours_words as say
from desktop.document import Document, Refusals
from desktop.edits.sequences import replaced
from desktop.tables.category_table import CATEGORIES
from desktop.tables.grid import Grid
from desktop.tables.grid_model import GridModel

_KEYS = ("hours", "absence", "pay")


class CategoryGrid(Grid):
    """A grid whose rows are kinds of workers."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(GridModel(document, CATEGORIES, parent), parent)
        self._document = document
        self._typed: dict[str, dict[str, str]] = {}  # what was typed into the helper, by category
        self._last: dict[str, str] = {}

    def work_out_hours(self) -> None:
        """Ask for contract, leave and pay of the current category; one undo step puts the results in."""
        row = self.currentIndex().row()
        if not 0 <= row < len(self._document.plan.categories):
            self.remarked.emit(say.CHOOSE_CATEGORY)
            return
        from desktop.dialogs.hours_dialog import HoursDialog  # not before it is needed

        category = self._document.plan.categories[row]
        dialog = HoursDialog(self._document.plan, category, self.window())
        known = self._typed.get(category.name)
        if known or self._last:
            dialog.fill(known or self._last, same_category=known is not None)
        if dialog.exec() == QDialog.DialogCode.Accepted:
            self._last = self._typed[category.name] = dialog.form.texts()
            plan = self._document.plan
            new = replace(plan, categories=replaced(plan.categories, row, dialog.category))
            given = _KEYS if dialog.form.pay.isChecked() else _KEYS[:2]
            self._document.edit(
                say.UNDO_STEP.format(category=category.name), new, refused=self._without(category.name, given)
            )
        dialog.deleteLater()

    def _without(self, name: str, keys: tuple[str, ...]) -> Refusals:
        gone = {("categories", name, key) for key in keys}
        return {place: refusal for place, refusal in self._document.refused.items() if place not in gone}
