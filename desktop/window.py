"""The window: menus, the rail, the headline above every page, and what happens on closing."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QEvent, QPoint, QSettings, Qt
from PySide6.QtGui import QCloseEvent, QIcon
from PySide6.QtWidgets import (
    QAbstractItemView,
    QApplication,
    QHBoxLayout,
    QHeaderView,
    QMainWindow,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

import resources
from desktop import messages
from desktop.answer_menu import AnswerMenu
from desktop.answers import Answers
from desktop.conflict_watch import ConflictWatch
from desktop.document import Document
from desktop.edit_menu import EditMenu
from desktop.export import Export
from desktop.files import Files
from desktop.headline import HeadlineBar
from desktop.look import Look
from desktop.mending import is_anything
from desktop.menus import WindowActions, add, fill_file_menu, fill_help_menu, fill_view_menu, menu_of
from desktop.pages.page_parts import thin_rule
from desktop.rail import MEND, OUTPUT, PAGES, PageSpec, PageStack, Rail
from desktop.recovery import Recovery
from desktop.traffic import Traffic
from desktop.variants import Variants
from desktop.workers import Workers

_GEOMETRY = "window/geometry"
_TOLD = 8000  # ms a sentence stands at the foot


class Window(QMainWindow):
    """One document with its answers, seen through pages."""

    def __init__(
        self, document: Document, workers: Workers, look: Look, pages: tuple[PageSpec, ...] = PAGES
    ) -> None:
        super().__init__()
        self.setObjectName("window")
        self._look = look
        self._workers = workers
        self._pages = pages
        self.document = document
        self.answers = Answers(document, workers, self)
        self.recovery = Recovery(document, self)
        self.files = Files(document, self.recovery, self)
        self.variants = Variants(document, self.files, self)
        self.traffic = Traffic(document, self)
        self.export = Export(document, self.answers, self)
        self.headline = HeadlineBar(document, self.answers)
        self.rail = Rail(pages)
        self.stack = PageStack(pages, document, self.answers)
        self.watch = ConflictWatch(document, self.answers, self)
        self.setWindowIcon(QIcon(str(resources.icon_path())))
        self._lay_out()
        self._fill_menus()
        self._connect()
        self._restore()
        self.show_page(0)
        self._name_window()

    def show_page(self, at: int) -> QWidget:
        """Bring a page to the front, made on first sight."""
        self.rail.setCurrentRow(at)
        return self.stack.show_page(at)

    def page(self, title: str) -> QWidget:
        """The page called `title`, in front."""
        return self.show_page([page.title for page in self._pages].index(title))

    def go_to(self, place: str) -> None:
        """Show the entry of the plan that a problem is about."""
        page = self.page("Plan")
        show = getattr(page, "show_place", None)
        if show is not None:
            show(place)

    def show_what_helps(self) -> None:
        """Show why there is no crew; the keys stay with the rail, so that none makes a repair unseen."""
        self.page(MEND)
        self.rail.setFocus()

    def print_page(self) -> None:
        """Print the recommendation, if there is one to print."""
        self._put_out("print_button")

    def save_pdf(self) -> None:
        """Write the recommendation to a PDF file, if there is one."""
        self._put_out("pdf_button")

    def _put_out(self, name: str) -> None:
        page = self.page(OUTPUT)
        button: QPushButton = getattr(page, name)
        if button.isEnabled():
            button.click()
        else:
            self.tell(messages.NOTHING_TO_PRINT)

    def tell(self, sentence: str) -> None:
        """A sentence at the foot for a while."""
        self.statusBar().showMessage(sentence, _TOLD)

    def next_part(self) -> None:
        """Give the focus to the next part: the rail, then the grids and lists of the page."""
        page = self.stack.currentWidget() or self.stack
        inside = page.findChildren(QAbstractItemView)
        usable = [v for v in inside if v.isVisible() and v.isEnabled() and not isinstance(v, QHeaderView)]
        parts = [self.rail, *sorted(usable, key=lambda view: _reading_order(view, page))]
        here = next((at for at, part in enumerate(parts) if part.hasFocus()), 0)
        part = parts[(here + 1) % len(parts)]
        part.setFocus(Qt.FocusReason.ShortcutFocusReason)
        if not part.currentIndex().isValid() and part.model() is not None:
            part.setCurrentIndex(part.model().index(0, 0))

    def _lay_out(self) -> None:
        middle = QWidget()
        down = QVBoxLayout(middle)
        down.setContentsMargins(0, 0, 0, 0)
        down.setSpacing(0)
        down.addWidget(self.headline)
        down.addWidget(thin_rule())
        across = QHBoxLayout()
        across.setSpacing(0)
        across.addWidget(self.rail)
        across.addWidget(self.stack, 1)
        down.addLayout(across, 1)
        self.setCentralWidget(middle)
        self.statusBar()  # from the start, so that nothing moves when something is told

    def _fill_menus(self) -> None:
        bar = self.menuBar()
        pages = WindowActions(self.print_page, self.save_pdf, self.close)
        fill_file_menu(menu_of(bar, "&File"), self.files, self.variants, self.traffic, self.export, pages)
        self.edit_menu = EditMenu(menu_of(bar, "&Edit"), self.document)
        view = menu_of(bar, "&View")
        fill_view_menu(view, self._pages, self.show_page, self._look)
        add(view, "Next &part of the page", self.next_part, "F6")
        self.answer_menu = AnswerMenu(menu_of(bar, "&Answer"), self.answers, self)
        fill_help_menu(menu_of(bar, "&Help"), bar, self)

    def _connect(self) -> None:
        self.rail.currentRowChanged.connect(self.show_page)
        self.headline.go_to.connect(self.go_to)
        self.headline.mend.connect(self.show_what_helps)
        self.watch.impossible.connect(self.show_what_helps)
        for changed in (self.answers.changed, self.document.changed, self.rail.currentRowChanged):
            changed.connect(self._offer_mending)
        self.stack.shown.connect(self._on_page)
        self.files.told.connect(self.tell)
        self.variants.told.connect(self.tell)
        self.traffic.told.connect(self.tell)
        self.export.told.connect(self.tell)
        self.recovery.failed.connect(lambda why: self.tell(messages.NO_RECOVERY_COPY.format(why=why)))
        self.document.renamed.connect(self._name_window)
        self.document.changed.connect(self._name_window)
        self._look.changed.connect(self.rail.fit)

    def _on_page(self, page: QWidget) -> None:
        """A page that can remark on entries, or lead to one, or to another plan, is heard, once."""
        if page.property("heard"):
            return
        heard: dict[str, Callable[..., object]] = {
            "remarked": self.tell,
            "go_to": self.go_to,
            "duplicate_wanted": self.variants.duplicate,
            "open_wanted": self.files.open,
        }
        for name, hear in heard.items():
            said = getattr(page, name, None)
            if said is not None:
                said.connect(hear)
        page.setProperty("heard", True)

    def _offer_mending(self) -> None:
        self.rail.offer(is_anything(self.document, self.answers))

    def _name_window(self) -> None:
        self.setWindowTitle(f"{self.files.name}[*] \u2013 {messages.PROGRAM}")
        self.setWindowModified(self.document.modified)

    def _restore(self) -> None:
        self.resize(1200, 700)
        stored = QSettings().value(_GEOMETRY)
        if stored is not None:
            self.restoreGeometry(stored)

    def changeEvent(self, event: QEvent) -> None:
        """Back from another program: was the file changed there?"""
        super().changeEvent(event)
        came = event.type() == QEvent.Type.ActivationChange and self.isActiveWindow()
        if came and QApplication.activeModalWidget() is None and hasattr(self, "files"):
            self.files.look_at_disk()

    def closeEvent(self, event: QCloseEvent) -> None:
        """Save first? Then everything is put away."""
        if not self.files.may_go():
            event.ignore()
            return
        QSettings().setValue(_GEOMETRY, self.saveGeometry())
        self.answers.close()
        self.recovery.close()
        self.files.close()
        self._workers.close()
        event.accept()


def _reading_order(view: QWidget, page: QWidget) -> tuple[int, int]:
    """From top to bottom, then from left to right."""
    at = view.mapTo(page, QPoint(0, 0))
    return at.y(), at.x()
