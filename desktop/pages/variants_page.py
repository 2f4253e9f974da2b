"""The page of variants: several plans side by side, each a file of its own, worked out one by one."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from PySide6.QtCore import QEvent, QSize, QTimer, Signal
from PySide6.QtGui import QHideEvent, QShowEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QFileDialog,
    QHBoxLayout,
    QHeaderView,
    QProgressBar,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from desktop import family, messages
from desktop import variant_words as say
from desktop.answers import Answers, Status
from desktop.comparison import Compared, Comparison
from desktop.document import Document
from desktop.messages import CAUTION
from desktop.pages.page_parts import label, thin_rule
from desktop.tables.column import in_two_lines
from desktop.tables.quiet_view import QuietView
from desktop.tables.variant_table import VariantTable
from desktop.theme import Size, current
from desktop.traffic import start_folder
from solver.answer import Answer

_ONE_LINE = 20  # letters of a title that stay in one line
_NARROWEST, _WIDEST = 22, 38  # width of a column, in steps of the grid


class VariantsPage(QWidget):
    """`duplicate_wanted()` asks to make a variant, `open_wanted(path)` to open a plan in the window."""

    duplicate_wanted = Signal()
    open_wanted = Signal(object)

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._answers = answers
        self._unsaved: list[Path] = []  # plans compared with one that has no file to remember them by
        self.comparison = Comparison(answers.workers, self)
        self.duplicate_button = _button(say.DUPLICATE, say.DUPLICATE_TIP)
        self.add_button = _button(say.ADD, say.ADD_TIP)
        self.open_button = _button(say.OPEN, say.OPEN_TIP)
        self.leave_button = _button(say.LEAVE_OUT, say.LEAVE_OUT_TIP)
        self.stop_button, self.start_button = QPushButton(say.CANCEL), QPushButton(say.WORK_OUT)
        self.bar = QProgressBar()
        self.hint, self.says, self.problems = label(tone="faint"), label(tone="faint"), label(tone="short")
        self.table = VariantTable(self)
        self.view = QuietView(say.TABLE, fitted=False)
        self._soon = QTimer(self, singleShot=True, interval=0)
        self._soon.timeout.connect(self._look)
        self._set_up()
        self._lay_out()
        self._connect()

    def chosen(self) -> Path | None:
        """The file of the chosen column; None where it is the plan in the window, or nothing is chosen."""
        at = self.view.currentIndex().column()
        compared = self.table.compared
        return compared[at].path if 0 <= at < len(compared) else None

    def add(self, paths: Sequence[Path]) -> None:
        """Compare with these plans too."""
        here = self._document.path
        new = [p for p in paths if p != here and p not in self.comparison.paths]
        self._remember([*self.comparison.paths, *new])

    def leave_out(self) -> None:
        """Compare the chosen plan no longer."""
        gone = self.chosen()
        if gone is not None:
            self._remember([p for p in self.comparison.paths if p != gone])

    def open_chosen(self) -> None:
        """Ask for the chosen plan in the window."""
        path = self.chosen()
        if path is not None:
            self.open_wanted.emit(path)

    # parts

    def _set_up(self) -> None:
        self.view.setModel(self.table)
        self.view.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectColumns)
        self.view.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        across = self.view.horizontalHeader()
        across.setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        self.bar.setTextVisible(False)
        self.bar.setAccessibleName(say.PROGRESS)
        self.bar.setFixedSize(current().px(20), current().px(1))

    def _lay_out(self) -> None:
        step = current().px(1)
        head, line = QHBoxLayout(), QHBoxLayout()
        for button in (self.duplicate_button, self.add_button):
            head.addWidget(button)
        head.addStretch(1)
        for button in (self.open_button, self.leave_button):
            head.addWidget(button)
        line.addWidget(self.says, 1)
        for widget in (self.bar, self.stop_button, self.start_button):
            line.addWidget(widget)
        whole = QVBoxLayout(self)
        whole.setContentsMargins(2 * step, step, 2 * step, step)
        whole.setSpacing(step)
        whole.addLayout(head)
        whole.addWidget(self.hint)
        whole.addLayout(line)
        across = QHBoxLayout()
        across.addWidget(self.view, 1000)
        across.addStretch(1)
        whole.addLayout(across, 1)
        whole.addWidget(self.problems)
        whole.addStretch(0)
        whole.addWidget(thin_rule())
        whole.addWidget(label(CAUTION, Size.SMALL, "faint"))

    def _connect(self) -> None:
        self.duplicate_button.clicked.connect(self.duplicate_wanted)
        self.add_button.clicked.connect(self._ask_and_add)
        self.open_button.clicked.connect(self.open_chosen)
        self.leave_button.clicked.connect(self.leave_out)
        self.stop_button.clicked.connect(self.comparison.stop)
        self.start_button.clicked.connect(self.comparison.start)
        self.view.activated.connect(lambda _index: self.open_chosen())
        self.view.selectionModel().currentColumnChanged.connect(lambda *_: self._show_buttons())
        self.comparison.changed.connect(self._show)
        for changed in (self._answers.changed, self._document.changed, self._document.renamed):
            changed.connect(self._later)

    def _later(self) -> None:
        if self.isVisible():
            self._soon.start()

    # what is compared

    def _others(self) -> list[Path]:
        path = self._document.path
        return self._unsaved if path is None else family.chosen(path)

    def _remember(self, paths: list[Path]) -> None:
        if self._document.path is None:
            self._unsaved = paths
        else:
            family.choose(self._document.path, paths)
        self._look()

    def _ask_and_add(self) -> None:
        start = str(start_folder(self._document))
        chosen, _ = QFileDialog.getOpenFileNames(self, say.CHOOSE, start, messages.PLAN_FILES)
        if chosen:
            self.add([Path(name) for name in chosen])

    def _look(self) -> None:
        """Read what may have changed, and work out what is missing."""
        self.comparison.show_here(self._document.plan, self._answer_here())
        self.comparison.show_files(self._others())

    def _answer_here(self) -> Answer | None:
        ready = self._answers.status is Status.READY and not self._answers.stale
        return self._answers.answer if ready else None

    # showing

    def _show(self) -> None:
        compared = self.comparison.entries()
        titles = [self._title(entry) for entry in compared]
        self.table.show_plans(compared, titles, [str(e.path) if e.path else say.HERE for e in compared])
        self._fit()
        self.hint.setText(say.HOW if self.comparison.paths else say.ALONE)
        wrong = [_problem(entry) for entry in compared if entry.problem]
        self.problems.setText("\n".join(wrong))
        self.problems.setVisible(bool(wrong))
        self._show_progress()
        self._show_buttons()

    def _fit(self) -> None:
        """Columns wide enough for money and its share, near enough to be read across; many of them scroll."""
        self.view.setMaximumWidth(current().px(_WIDEST * (1 + len(self.table.compared))))
        self.view.refit()
        self.view.horizontalHeader().setMinimumSectionSize(current().px(_NARROWEST))

    def _title(self, entry: Compared) -> str:
        here = self._document.path
        path = entry.path or here
        base = family.base_of(here) if here is not None else None
        name = family.short_name(path, base) if path is not None else say.UNSAVED
        if entry.path is not None:
            return in_two_lines(name) if len(name) > _ONE_LINE else name
        changed = self._document.modified and here is not None
        return say.column(name, f"{say.HERE}, {say.CHANGED}" if changed else say.HERE)

    def _show_progress(self) -> None:
        progress = self.comparison.progress()
        busy = self.comparison.busy
        if progress is not None:
            name, at, count = progress
            self.bar.setRange(0, count)
            self.bar.setValue(at - 1)
            self.says.setText(say.asking(name, at, count))
        for widget in (self.bar, self.stop_button):
            widget.setVisible(progress is not None)
        self.says.setVisible(progress is not None)
        paused = not busy and self.comparison.is_incomplete()
        self.start_button.setVisible(paused and self._answers.workers is not None)

    def _show_buttons(self) -> None:
        for button in (self.open_button, self.leave_button):
            button.setEnabled(self.chosen() is not None)

    def showEvent(self, event: QShowEvent) -> None:
        """Catch up, and go on."""
        super().showEvent(event)
        self._look()
        self.comparison.start()

    def hideEvent(self, event: QHideEvent) -> None:
        """Nobody looks: the processor is for others."""
        super().hideEvent(event)
        self.comparison.stop()

    def changeEvent(self, event: QEvent) -> None:
        """Back from another program: were files changed there? And follow theme and zoom."""
        super().changeEvent(event)
        if not self.isVisible():
            return
        if event.type() == QEvent.Type.ActivationChange:
            self._later()
        elif event.type() in (QEvent.Type.PaletteChange, QEvent.Type.FontChange):
            self._fit()

    def minimumSizeHint(self) -> QSize:
        """Wrapped texts would ask for the height they need at their narrowest."""
        return QSize(current().px(60), current().px(32))


def _problem(entry: Compared) -> str:
    """Which plan, and why it is not compared; what cannot be read is named by its sentence already."""
    name = entry.path.name if entry.path else say.HERE
    return entry.problem if entry.problem.startswith(name) else say.problem(name, entry.problem)


def _button(text: str, tip: str) -> QPushButton:
    made = QPushButton(text)
    made.setToolTip(tip)
    return made
