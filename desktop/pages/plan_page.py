"""The Plan page: what is asked, in fields, grids and sentences."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from PySide6.QtCore import QSettings, Qt, QTimer, Signal
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import (
    QBoxLayout,
    QHBoxLayout,
    QLabel,
    QLayout,
    QScrollArea,
    QSplitter,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from desktop import hours_words, messages, theme
from desktop.answers import Answers
from desktop.document import Document
from desktop.edits import phases
from desktop.pages.page_parts import heading, label, thin_rule
from desktop.pages.plan_fields import PlanFields
from desktop.rules.rule_list import RuleList
from desktop.tables.category_grid import CategoryGrid
from desktop.tables.category_table import CATEGORIES
from desktop.tables.grid import Grid
from desktop.tables.grid_model import GridModel
from desktop.tables.phase_table import PHASES
from desktop.tables.table import Table
from desktop.tables.work_table import WORKS

_GROUPS = "plan page/columns"
_LEAST, _MOST = 16, 50  # height of a grid, beside others and in a page that scrolls
_WIDE = 110  # steps of the grid from which works and rules stand side by side


class PlanPage(QWidget):
    """Fields, the grids of categories and works, the rules, and the phases where there are several.

    `remarked(sentence)` tells what a planner should know about an entry.
    """

    remarked = Signal(str)

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._answers = answers
        self.fields = PlanFields(document)
        self.categories = CategoryGrid(document, self)
        self.categories.remarked.connect(self.remarked)
        self.works = self._grid(WORKS)
        self.phases = self._grid(PHASES)
        self.rules = RuleList(document)
        self.rules.remarked.connect(self.remarked)
        self._share_soon = QTimer(self, singleShot=True, interval=0)
        self._share_soon.timeout.connect(self._share_width)
        self._group_buttons: dict[str, QToolButton] = {}
        self._whole = QSplitter(Qt.Orientation.Vertical)
        self._below = QSplitter(Qt.Orientation.Horizontal)
        self._first_phase = self._phase_button()
        keep = self._first_phase.sizePolicy()
        keep.setRetainSizeWhenHidden(True)  # the headings of the parts stay in line
        self._first_phase.setSizePolicy(keep)
        self._phase_part = _part(PHASES.title, [self._phase_button()], self.phases)
        self._lay_out()
        self._restore_groups()
        document.changed.connect(self._follow)
        document.changed.connect(self._share_height)
        answers.changed.connect(self._show_problems)
        document.replaced.connect(self._share_soon.start)
        self._follow()
        self._show_problems()
        self._share_soon.start()

    def show_place(self, place: str) -> None:
        """Go to the entry a problem is about, opening the columns it is in."""
        group = self.categories_model.hidden_group_of(place)
        if group:
            self._group_buttons[group].setChecked(True)
        for part in (self.fields, self.categories, self.works, self.phases, self.rules):
            if part.show_place(place):
                return
        self.categories.setFocus()

    @property
    def categories_model(self) -> GridModel:
        """The model of the grid of categories."""
        model = self.categories.model()
        assert isinstance(model, GridModel)
        return model

    def add_phase(self) -> None:
        """One more phase at the end; the only one so far keeps its amounts."""
        plan = self._document.plan
        self._document.edit(messages.INSERT_ROW.format(noun="phase"), phases.insert(plan, len(plan.phases)))
        self.phases.setFocus()
        self.phases.setCurrentIndex(self.phases.model().index(len(plan.phases), 0))

    # parts

    def _grid(self, table: Table) -> Grid:
        grid = Grid(GridModel(self._document, table, self), self)
        grid.remarked.connect(self.remarked)
        return grid

    def _lay_out(self) -> None:
        step = theme.current().px(1)
        below = self._below
        below.addWidget(self._phase_part)
        below.addWidget(_part(WORKS.title, [self._first_phase], self.works))
        below.addWidget(_part(messages.RULES, [self._rule_button()], self.rules))
        for at, share in enumerate((0, 0, 1)):
            below.setStretchFactor(at, share)
            below.setCollapsible(at, False)
        whole = self._whole
        self._category_head = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        whole.addWidget(self._categories_part())
        whole.addWidget(below)
        for at, share in enumerate((5, 4)):
            whole.setStretchFactor(at, share)
            whole.setCollapsible(at, False)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * step, step, 2 * step, step)
        layout.setSpacing(step)
        layout.addWidget(self.fields)
        scroll = QScrollArea()
        scroll.setWidget(whole)
        scroll.setWidgetResizable(True)
        scroll.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        layout.addWidget(scroll, 1)
        layout.addWidget(thin_rule())
        layout.addWidget(label(messages.CAUTION, theme.Size.SMALL, "faint"))

    def _categories_part(self) -> QWidget:
        """Heading and hours; what else can be seen beside them or, in a narrow window, below."""
        hours = _button(hours_words.BUTTON, hours_words.BUTTON_TIP)
        hours.clicked.connect(self.categories.work_out_hours)
        first, more = _line([heading(CATEGORIES.title)], [hours]), _line([], self._category_buttons())
        self._category_head.addLayout(first, 1)
        self._category_head.addLayout(more)
        return _below_head(self._category_head, self.categories)

    def _category_buttons(self) -> list[QWidget]:
        more = theme.dress(QLabel(messages.MORE_COLUMNS), theme.Size.SMALL, "faint")
        made: list[QWidget] = [more]
        for key, title, tooltip in CATEGORIES.groups:
            button = _button(title, tooltip)
            button.setCheckable(True)
            button.toggled.connect(self._on_groups)
            self._group_buttons[key] = button
            made.append(button)
        notes = _button(messages.NOTES, messages.NOTES_HINT)
        notes.setCheckable(True)
        notes.toggled.connect(self.fields.notes.setVisible)
        return [*made, notes]

    def _phase_button(self) -> QToolButton:
        button = _button(messages.ADD_PHASE, messages.ADD_PHASE_TIP)
        button.clicked.connect(self.add_phase)
        return button

    def _rule_button(self) -> QToolButton:
        button = _button(messages.ADD_RULE, messages.ADD_RULE_TIP)
        button.setPopupMode(QToolButton.ToolButtonPopupMode.InstantPopup)
        button.setMenu(self.rules.menu())
        return button

    # following

    def _on_groups(self) -> None:
        chosen = [key for key, button in self._group_buttons.items() if button.isChecked()]
        self.categories_model.show_groups(chosen)
        self._share_soon.start()
        QSettings().setValue(_GROUPS, " ".join(chosen))
        self._mark_used_groups()

    def _restore_groups(self) -> None:
        chosen = str(QSettings().value(_GROUPS, "")).split()
        for key, button in self._group_buttons.items():
            button.setChecked(key in chosen)

    def _follow(self) -> None:
        several = len(self._document.plan.phases) > 1
        if several == self._phase_part.isHidden():
            self._phase_part.setVisible(several)
            self._first_phase.setVisible(not several)
            self._share_width()
        self._mark_used_groups()

    def _share_height(self) -> None:
        """Grids below one another are as high as they are, since the page scrolls."""
        stacked = self._below.orientation() == Qt.Orientation.Vertical
        most = theme.current().px(_MOST if stacked else _LEAST)
        for view in (self.categories, self.works, self.phases, self.rules):
            view.setMinimumHeight(min(view.whole_height(), most))

    def _share_width(self) -> None:
        """Shares of the room: grids side by side are as wide as they are, the rules take the rest."""
        self._share_height()
        if self._below.orientation() == Qt.Orientation.Vertical:
            return
        above = self.categories.whole_height()
        below = max(self.works.whole_height(), self.rules.whole_height())
        self._whole.setSizes([above, below])  # in proportion to what each would need
        whole = self._below.width()
        phases_wide = self.phases.whole_width() if not self._phase_part.isHidden() else 0
        works_wide = min(self.works.whole_width(), whole * 3 // 4 - phases_wide)
        self._below.setSizes([phases_wide, works_wide, whole - phases_wide - works_wide])

    def _mark_used_groups(self) -> None:
        """A dot where hidden columns hold something, so that nobody overlooks a limit."""
        plan = self._document.plan
        titles = {key: title for key, title, _ in CATEGORIES.groups}
        for key, button in self._group_buttons.items():
            columns = [c for c in CATEGORIES.columns(plan) if c.group == key]
            rows = range(len(plan.categories))
            used = any(c.get(plan, row) not in (c.blank, 0) for c in columns for row in rows)
            button.setText(f"{titles[key]} \u2022" if used else titles[key])
            button.setAccessibleDescription(messages.COLUMNS_USED if used else "")

    def _show_problems(self) -> None:
        problems: Mapping[str, str] = {p.place: p.says for p in reversed(self._answers.problems)}
        for grid in (self.categories, self.works, self.phases):
            model = grid.model()
            if isinstance(model, GridModel):
                model.show_problems(problems)
        self.rules.rule_model.show_problems(problems)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Side by side where there is room, else one below the other in a page that scrolls."""
        super().resizeEvent(event)
        wide = self.width() >= theme.current().px(_WIDE)
        self._below.setOrientation(Qt.Orientation.Horizontal if wide else Qt.Orientation.Vertical)
        direction = QBoxLayout.Direction
        self._category_head.setDirection(direction.LeftToRight if wide else direction.TopToBottom)
        self._share_soon.start()


def _button(title: str, tooltip: str) -> QToolButton:
    made = QToolButton()
    made.setText(title)
    made.setToolTip(tooltip)
    made.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    return made


def _part(title: str, buttons: Sequence[QWidget], view: QWidget) -> QWidget:
    """A heading with its buttons over a view."""
    return _below_head(_line([heading(title)], buttons), view)


def _line(left: Sequence[QWidget], right: Sequence[QWidget]) -> QHBoxLayout:
    """Widgets at the left and at the right of a line."""
    made = QHBoxLayout()
    for widget in left:
        made.addWidget(widget)
    made.addStretch(1)
    for widget in right:
        made.addWidget(widget)
    return made


def _below_head(head: QLayout, view: QWidget) -> QWidget:
    made = QWidget()
    layout = QVBoxLayout(made)
    layout.setContentsMargins(0, 0, 0, 0)
    layout.setSpacing(theme.current().px(0.5))
    layout.addLayout(head)
    layout.addWidget(view, 1)
    return made
