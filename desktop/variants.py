"""Making a variant of the plan in the window: a plain plan in a file beside it."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QDialog, QWidget

from desktop import family
from desktop import variant_words as say
from desktop.dialogs.question import CANCEL, Choice, ask, tell
from desktop.dialogs.variant_dialog import VariantDialog
from desktop.document import Document
from desktop.files import Files

_WHERE = (Choice("both", say.BOTH), Choice("variant", say.ONLY_VARIANT), CANCEL)


class Variants(QObject):
    """Duplicates the plan in the window. `told(sentence)` reports what went well."""

    told = Signal(str)

    def __init__(self, document: Document, files: Files, window: QWidget) -> None:
        super().__init__(window)
        self._document = document
        self._files = files
        self._window = window

    def duplicate(self) -> None:
        """Ask for a name and go on with the variant; the plan it was made from stays in its file."""
        if self._document.path is None:
            tell(self._window, say.SAVE_FIRST)
            if not self._files.save():
                return
        original = self._document.path
        dialog = VariantDialog(original, self._window) if original is not None else None
        if dialog is None or original is None:
            return
        named = dialog.exec() == QDialog.DialogCode.Accepted
        target, name = dialog.target, dialog.name
        dialog.deleteLater()
        if named and target is not None and self._settled(original):
            self._make(original, target, name)

    def _settled(self, original: Path) -> bool:
        """Whether it is clear where unsaved changes go: in both plans, or only in the variant."""
        if not self._document.modified:
            return True
        more = say.WHERE_MORE.format(only=say.ONLY_VARIANT, name=original.name)
        where = ask(self._window, say.WHERE, more, _WHERE)
        return self._files.save() if where == "both" else where == "variant"

    def _make(self, original: Path, target: Path, name: str) -> None:
        """Write the variant; from now on it is the plan in the window, with its whole history."""
        compared = [original, *family.chosen(original)]
        before = self._document.undo_stack.index()
        titled = replace(self._document.plan, title=self._title(original, name))
        self._document.edit(say.UNDO_STEP, titled)
        if self._files.save_to(target):
            family.choose(target, compared)
            self.told.emit(say.MADE.format(variant=target.name, original=original.name))
        else:
            self._document.undo_stack.setIndex(before)

    def _title(self, original: Path, name: str) -> str:
        """The title of the plan with the variant's name in place of the one it had."""
        base = family.base_of(original)
        before = family.short_name(original, base) if original != base else ""
        title = self._document.plan.title
        plain = title.removesuffix(say.titled("x", before)[1:]) if before else title
        return say.titled(plain, name)
