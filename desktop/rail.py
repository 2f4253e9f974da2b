"""The pages of the window: which there are, and the rail at the left that leads to them."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from importlib import import_module

from PySide6.QtCore import QSize, Qt, Signal
from PySide6.QtWidgets import QListWidget, QListWidgetItem, QStackedWidget, QWidget

from desktop import mend_words, messages, theme, variant_words
from desktop.answers import Answers
from desktop.document import Document

Factory = Callable[[Document, Answers], QWidget]


@dataclass(frozen=True)
class PageSpec:
    """One page: its title, what it is for, the keys that lead to it, and where its class is.

    The module is imported when the page is first shown, so that the window is there sooner. One that is
    there `on_demand` stands in the rail only while it has something to show.
    """

    title: str
    tooltip: str
    shortcut: str
    module: str
    name: str
    on_demand: bool = False

    def make(self, document: Document, answers: Answers) -> QWidget:
        """A new page."""
        factory: Factory = getattr(import_module(self.module), self.name)
        return factory(document, answers)


_HOME = "desktop.pages"
MEND = mend_words.TITLE
OUTPUT = "The page"  # what is signed: printed and written to PDF from here

PAGES: tuple[PageSpec, ...] = (
    PageSpec("Plan", "What is asked", "Ctrl+1", f"{_HOME}.plan_page", "PlanPage"),
    PageSpec(MEND, mend_words.TOOLTIP, "Ctrl+Shift+M", f"{_HOME}.mend_page", "MendPage", on_demand=True),
    PageSpec("Crew", "Who, and how many", "Ctrl+2", f"{_HOME}.crew_page", "CrewPage"),
    PageSpec("Rounding", "What rounding breaks, and why", "Ctrl+3", f"{_HOME}.rounding_page", "RoundingPage"),
    PageSpec("Whole people", "What whole people cost", "Ctrl+4", f"{_HOME}.cost_page", "CostPage"),
    PageSpec("Room", "How far each line can move", "Ctrl+5", f"{_HOME}.room_page", "RoomPage"),
    PageSpec("Near best", "Other good crews", "Ctrl+6", f"{_HOME}.near_page", "NearPage"),
    PageSpec("Workload", "The crew at other workloads", "Ctrl+7", f"{_HOME}.steps_page", "StepsPage"),
    PageSpec("Crew map", "All whole crews of two categories", "Ctrl+8", f"{_HOME}.map_page", "MapPage"),
    PageSpec(
        "Attendance",
        "Will enough of them be there?",
        "Ctrl+Shift+A",
        f"{_HOME}.attendance_page",
        "AttendancePage",
    ),
    PageSpec(
        variant_words.TITLE,
        variant_words.TOOLTIP,
        "Ctrl+Shift+R",
        f"{_HOME}.variants_page",
        "VariantsPage",
    ),
    PageSpec(OUTPUT, "As it is printed", "Ctrl+9", f"{_HOME}.preview_page", "PreviewPage"),
)


class Rail(QListWidget):
    """Titles of the pages, one above the other."""

    def __init__(self, pages: Sequence[PageSpec], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("rail")
        self.setAccessibleName(messages.PAGES)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self._on_demand = [at for at, page in enumerate(pages) if page.on_demand]
        for page in pages:
            item = QListWidgetItem(page.title, self)
            item.setToolTip(f"{page.tooltip} ({page.shortcut})")
        self.setCurrentRow(0)
        self.offer(False)
        self.fit()

    def offer(self, wanted: bool) -> None:
        """Show or hide the pages that are there on demand; the one in front stays."""
        for at in self._on_demand:
            self.item(at).setHidden(not wanted and at != self.currentRow())

    def fit(self) -> None:
        """As wide as the longest title, after the zoom changed."""
        self.setFixedWidth(self.sizeHintForColumn(0) + theme.current().px(1))

    def sizeHint(self) -> QSize:
        """Narrow: pages need the width."""
        return QSize(self.width(), theme.current().px(30))


class PageStack(QStackedWidget):
    """The pages themselves, each made when it is first shown. `shown(page)` when another one is."""

    shown = Signal(QWidget)

    def __init__(
        self, pages: Sequence[PageSpec], document: Document, answers: Answers, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._pages = pages
        self._document = document
        self._answers = answers
        self._made: dict[int, QWidget] = {}

    def show_page(self, at: int) -> QWidget:
        """Bring the page at `at` to the front."""
        if at not in self._made:
            page = self._pages[at].make(self._document, self._answers)
            self._made[at] = page
            self.addWidget(page)
        self.setCurrentWidget(self._made[at])
        self.shown.emit(self._made[at])
        return self._made[at]

    def made(self, title: str) -> QWidget | None:
        """The page called `title`, None while nobody has looked at it."""
        found = (at for at, page in enumerate(self._pages) if page.title == title)
        return self._made.get(next(found, -1))
