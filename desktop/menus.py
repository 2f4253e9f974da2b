"""The menus of the window: what they hold, and what their entries call."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial
from pathlib import Path

from PySide6.QtGui import QAction, QActionGroup, QKeySequence
from PySide6.QtWidgets import QMenu, QMenuBar, QWidget

import resources
from desktop import messages, recent, variant_words
from desktop.dialogs.about_dialog import about_dialog
from desktop.dialogs.help_dialog import help_dialog
from desktop.export import Export
from desktop.files import Files
from desktop.look import Look, Palette
from desktop.rail import PageSpec
from desktop.traffic import Traffic
from desktop.variants import Variants

Keys = QKeySequence.StandardKey
_PALETTES = {Palette.SYSTEM: "As the &system", Palette.LIGHT: "&Light", Palette.DARK: "&Dark"}


def add(
    menu: QMenu, text: str, do: Callable[[], object], keys: QKeySequence.StandardKey | str | None = None
) -> QAction:
    """One entry of `menu`."""
    action = menu.addAction(text)
    if isinstance(keys, str):
        action.setShortcut(keys)
    elif keys is not None:
        action.setShortcuts(keys)
    action.triggered.connect(lambda _checked=False: do())
    return action


@dataclass(frozen=True)
class WindowActions:
    """What entries of the File menu ask of the window."""

    print_page: Callable[[], object]
    save_pdf: Callable[[], object]
    close: Callable[[], object]


def fill_file_menu(
    menu: QMenu, files: Files, variants: Variants, traffic: Traffic, export: Export, window: WindowActions
) -> None:
    """New, open, save, tables in and out, print, and leave."""
    add(menu, "&New", files.new, Keys.New)
    add(menu, "&Open...", files.ask_and_open, Keys.Open)
    latest = menu.addMenu("Open &recent")
    latest.aboutToShow.connect(lambda: _fill_recent(latest, files))
    examples = menu.addMenu("Open an &example")
    for path in resources.example_paths():
        add(examples, _example_title(path), partial(files.open_example, path))
    menu.addSeparator()
    add(menu, "&Save", files.save, Keys.Save)
    add(menu, "Save &as...", files.save_as, Keys.SaveAs)
    add(menu, variant_words.ACTION, variants.duplicate)
    menu.addSeparator()
    add(menu, "&Import a table...", traffic.import_table, "Ctrl+Shift+I")
    add(menu, "Save a &template workbook...", traffic.save_template)
    add(menu, "E&xport...", export.ask, "Ctrl+E")
    menu.addSeparator()
    add(menu, "&Print the page...", window.print_page, Keys.Print)
    add(menu, "Save the page as P&DF...", window.save_pdf, "Ctrl+Shift+P")
    menu.addSeparator()
    leave = add(menu, "&Quit", window.close, Keys.Quit)
    leave.setMenuRole(QAction.MenuRole.QuitRole)


def _fill_recent(menu: QMenu, files: Files) -> None:
    menu.clear()
    paths = recent.recent()
    for path in paths:
        entry = add(menu, _plain(path.name), partial(files.open, path))
        entry.setStatusTip(str(path))
    if not paths:
        menu.addAction(messages.NO_RECENT).setEnabled(False)
        return
    menu.addSeparator()
    add(menu, "&Clear the list", recent.forget_all)


def _example_title(path: Path) -> str:
    words = path.name.split(".")[0].replace("-", " ")
    return words[:1].upper() + words[1:]


def _plain(text: str) -> str:
    """A name in a menu, where & would underline the next letter."""
    return text.replace("&", "&&")


def fill_view_menu(menu: QMenu, pages: tuple[PageSpec, ...], go: Callable[[int], object], look: Look) -> None:
    """The pages, zoom and palette."""
    for at, page in enumerate(pages):
        add(menu, _plain(page.title), partial(go, at), page.shortcut).setStatusTip(page.tooltip)
    menu.addSeparator()
    add(menu, "Zoom &in", partial(look.zoom_by, 1), Keys.ZoomIn)
    add(menu, "Zoom &out", partial(look.zoom_by, -1), Keys.ZoomOut)
    add(menu, "&Normal size", partial(look.zoom_to, 1.0), "Ctrl+0")
    colours = menu.addMenu("&Colours")
    group = QActionGroup(menu)
    for palette, title in _PALETTES.items():
        action = add(colours, title, partial(look.choose, palette))
        action.setCheckable(True)
        action.setChecked(look.palette is palette)
        group.addAction(action)


def fill_help_menu(menu: QMenu, bar: QMenuBar, window: QWidget) -> None:
    """Help, which tells the keys of all menus of `bar`, and About."""
    add(menu, "&Words and keys", lambda: help_dialog(window, menu_keys(bar)).exec(), Keys.HelpContents)
    about = add(menu, "&About Full Complement", lambda: about_dialog(window).exec())
    about.setMenuRole(QAction.MenuRole.AboutRole)


def menu_keys(bar: QMenuBar) -> tuple[tuple[str, str], ...]:
    """(keys, entry) of everything in the menus of `bar` that has keys."""
    entries = (action for menu in bar.findChildren(QMenu) for action in menu.actions())
    native = QKeySequence.SequenceFormat.NativeText
    return tuple((e.shortcut().toString(native), e.iconText()) for e in entries if not e.shortcut().isEmpty())


def menu_of(bar: QMenuBar, title: str) -> QMenu:
    """One more menu of `bar`."""
    menu = bar.addMenu(title)
    menu.setToolTipsVisible(True)
    return menu
