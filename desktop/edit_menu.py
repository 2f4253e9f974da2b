"""The Edit menu: undo for the plan, everything else for the grid or list that has the focus."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from PySide6.QtCore import QObject
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QApplication, QMenu, QWidget

from desktop import hours_words as say
from desktop.document import Document

Keys = QKeySequence.StandardKey


@dataclass(frozen=True)
class Verb:
    """One entry: the method of the focused widget it calls, its text, its keys, what it does."""

    method: str
    text: str
    keys: QKeySequence.StandardKey | str
    tooltip: str
    argument: int | None = None
    starts_group: bool = False


VERBS = (
    Verb("cut", "Cu&t", Keys.Cut, "Copy the selected cells and clear them", starts_group=True),
    Verb("copy", "&Copy", Keys.Copy, "Copy the selected cells, for a spreadsheet too"),
    Verb("paste", "&Paste", Keys.Paste, "Paste cells, from a spreadsheet too"),
    Verb("clear", "C&lear", Keys.Delete, "Clear the selected cells"),
    Verb("fill_down", "&Fill down", "Ctrl+D", "The topmost selected cell into those below"),
    Verb("insert_row", "&Insert a row", "Ctrl+I", "A new row above the current one", starts_group=True),
    Verb("duplicate_rows", "D&uplicate rows", "Ctrl+Shift+D", "Copies of the selected rows below them"),
    Verb("delete_rows", "&Delete rows", "Ctrl+Del", "Delete the selected rows"),
    Verb("move_rows", "Move up", "Alt+Up", "The selected rows one place up", -1),
    Verb("move_rows", "Move down", "Alt+Down", "The selected rows one place down", 1),
    Verb("work_out_hours", say.ACTION, "Ctrl+Shift+H", say.BUTTON_TIP, starts_group=True),
)


class EditMenu(QObject):
    """Fills a menu; entries that the focused widget cannot do are grey, and leave their keys to it."""

    def __init__(self, menu: QMenu, document: Document) -> None:
        super().__init__(menu)
        stack = document.undo_stack
        undo, redo = stack.createUndoAction(self, "&Undo"), stack.createRedoAction(self, "&Redo")
        undo.setShortcuts(Keys.Undo)
        redo.setShortcuts(Keys.Redo)
        undo.setIconText("Undo")  # the text also names the step
        redo.setIconText("Redo")
        menu.addActions([undo, redo])
        self._actions = [(verb, self._action(verb, menu)) for verb in VERBS]
        app = QApplication.instance()
        if isinstance(app, QApplication):
            app.focusChanged.connect(self._on_focus)
        self._on_focus(None, QApplication.focusWidget())

    @property
    def actions(self) -> list[QAction]:
        """Everything but undo and redo."""
        return [action for _, action in self._actions]

    def _action(self, verb: Verb, menu: QMenu) -> QAction:
        if verb.starts_group:
            menu.addSeparator()
        action = menu.addAction(verb.text)
        action.setShortcuts(verb.keys) if isinstance(verb.keys, Keys) else action.setShortcut(verb.keys)
        action.setStatusTip(verb.tooltip)
        action.triggered.connect(lambda: self._do(verb))
        return action

    def _do(self, verb: Verb) -> None:
        method = _method(QApplication.focusWidget(), verb)
        if method is not None:
            method() if verb.argument is None else method(verb.argument)

    def _on_focus(self, _old: QWidget | None, new: QWidget | None) -> None:
        for verb, action in self._actions:
            action.setEnabled(_method(new, verb) is not None)


def _method(widget: QWidget | None, verb: Verb) -> Callable[..., None] | None:
    """What `widget` does for `verb`: only widgets that say they can edit rows are asked."""
    if widget is None or not getattr(widget, "edits_rows", False):
        return None
    found: Callable[..., None] | None = getattr(widget, verb.method, None)
    return found
