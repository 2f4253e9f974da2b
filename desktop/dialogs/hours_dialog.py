"""The helper for hours and pay of one category: what is typed at the left, every step of it at the right."""

from __future__ import annotations

from collections.abc import Mapping

from PySide6.QtWidgets import QDialog, QDialogButtonBox, QHBoxLayout, QPushButton, QVBoxLayout, QWidget

from desktop import figures
from desktop import hours_words as say
from desktop.dialogs.fitting import fit
from desktop.dialogs.hours_form import HoursForm
from desktop.edits.reckoned import with_reckoning
from desktop.pages.page_parts import heading, label
from desktop.reckoning import Reckoning, Step, reckon
from desktop.tables import numbers
from desktop.tables.column import percent_of
from desktop.tables.numbers import Refused
from desktop.tables.quiet_view import QuietView
from desktop.tables.step_table import StepTable
from desktop.theme import current
from solver.hours import CannotReckon
from solver.plan import Category, Plan


class HoursDialog(QDialog):
    """Closes only over numbers that make a working year; `category` is then the one with the results."""

    def __init__(self, plan: Plan, category: Category, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._plan = plan
        self._before = category
        self.category = category
        self.setWindowTitle(say.TITLE.format(category=category.name))
        self.form = HoursForm(plan, category)
        self.steps = StepTable(self)
        self.view = QuietView(say.STEPS, fitted=False)
        self.outcome = label()
        self.wrong = label(tone="short")
        self.take_button = QPushButton(say.TAKE)
        self._lay_out()
        self.form.changed.connect(self._show)
        self._show()

    def fill(self, texts: Mapping[str, str], *, same_category: bool) -> None:
        """Start from what was typed before."""
        self.form.fill(texts, same_category=same_category)
        self._show()

    def _lay_out(self) -> None:
        self.view.setModel(self.steps)
        self.view.verticalHeader().hide()
        self.view.share_width([1])
        right = QVBoxLayout()
        right.setSpacing(current().px(0.5))
        right.addWidget(heading(say.STEPS))
        right.addWidget(self.view, 1)
        right.addStretch(0)
        across = QHBoxLayout()
        across.setSpacing(current().px(3))
        across.addWidget(self.form)
        across.addLayout(right, 1)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel)
        buttons.addButton(self.take_button, QDialogButtonBox.ButtonRole.AcceptRole)
        buttons.accepted.connect(self.accept)
        buttons.rejected.connect(self.reject)
        whole = QVBoxLayout(self)
        whole.setSpacing(current().px(1))
        whole.addLayout(across, 1)
        for part in (self.outcome, self.wrong, buttons):
            whole.addWidget(part)
        fit(self, 136, 70)

    def _show(self) -> None:
        """The steps of what is typed now, or what is wrong with it."""
        try:
            made, wrong = self._reckoned(), ""
        except Refused as refused:
            made, wrong = None, refused.reason
        except CannotReckon as cannot:
            problem = cannot.problems[0]
            field = say.FIELD_OF.get(problem.place.split("[")[0], problem.place)
            made, wrong = None, say.WRONG.format(field=field, reason=problem.says)
        self.wrong.setText(wrong)
        self.wrong.setVisible(bool(wrong))
        self.outcome.setVisible(made is not None)
        self.take_button.setEnabled(made is not None)
        self.steps.show(made.steps if made else self._hours_alone())
        if made is not None:
            self.category = with_reckoning(self._before, made.hours, made.pay)
            self.outcome.setText(self._outcome(made))

    def _reckoned(self, *, with_pay: bool = True) -> Reckoning:
        return reckon(self.form.entries(with_pay=with_pay), self._plan.period, self._plan.currency)

    def _hours_alone(self) -> tuple[Step, ...]:
        """What is right already while the pay is still being typed."""
        try:
            return self._reckoned(with_pay=False).steps
        except (Refused, CannotReckon):
            return ()

    def _outcome(self, made: Reckoning) -> str:
        """What goes into the plan, and what it replaces."""
        before, after = self._before, self.category
        parts = [
            say.now_was("hours", numbers.shown(after.hours), numbers.shown(before.hours)),
            say.now_was("absence", _percent(after), _percent(before)),
        ]
        if made.pay is not None:
            parts.append(say.now_was("pay", figures.money(after.pay), figures.money(before.pay)))
        return say.outcome(before.name, tuple(parts))


def _percent(category: Category) -> str:
    share = percent_of(category.absence)  # in a sentence zero is a number, not a dash
    return f"{numbers.shown(share) if share else '0'}{figures.NBSP}%"
