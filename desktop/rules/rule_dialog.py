"""The dialog in which one rule is made or changed."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QLabel, QVBoxLayout, QWidget

from desktop import messages, theme
from desktop.edits import rules
from desktop.rules.kind import RuleKind
from desktop.rules.kinds import sentence
from desktop.tables.numbers import Refused
from solver.plan import Plan, Rule
from solver.review import quoted, review


class RuleDialog(QDialog):
    """A form with the sentence it makes below; it closes only over a rule that can stand in the plan.

    `index` is the rule's place in the plan, None for a new one.
    """

    def __init__(
        self, plan: Plan, kind: RuleKind, rule: Rule, index: int | None, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._plan = plan
        self._index = index
        self.rule = rule
        self.setWindowTitle(messages.RULE_TITLE.format(kind=kind.title.lower()))
        self.form = kind.form(plan, rule)
        self.says = _line(self)
        self.wrong = _line(self)
        theme.dress(self.wrong, tone="short")
        self._buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        self._buttons.accepted.connect(self.accept)
        self._buttons.rejected.connect(self.reject)
        self.form.changed.connect(self._show)
        layout = QVBoxLayout(self)
        for part in (self.form, self.says, self.wrong, self._buttons):
            layout.addWidget(part)
        self.setMinimumWidth(theme.current().px(56))
        self._show()

    def _show(self) -> None:
        """The sentence as it would stand in the list, and what is wrong with it."""
        wrong = self._take()
        self.says.setText(sentence(self.rule, self._plan))
        self.wrong.setText(wrong)

    def _take(self) -> str:
        """Read the form; what is wrong with it, "" where it can stand."""
        try:
            rule: Rule = self.form.rule()
        except Refused as refused:
            return refused.reason
        self.rule = rule
        return self._problem(rule)

    def _problem(self, rule: Rule) -> str:
        others = [r.name for i, r in enumerate(self._plan.rules) if i != self._index]
        if rule.name in others:
            return messages.NAME_TAKEN.format(name=quoted(rule.name))
        index = len(self._plan.rules) if self._index is None else self._index
        after = rules.put(self._plan, index, rule)
        place = f"rules[{index}]"
        return next((messages.rule_problem(p, place) for p in review(after) if p.place.startswith(place)), "")

    def accept(self) -> None:
        """Close if the rule can stand; else say why not, with everything typed left as it is."""
        wrong = self._take()
        if wrong:
            self.wrong.setText(wrong)
            self.form.setFocus()
        else:
            super().accept()


def _line(parent: QWidget) -> QLabel:
    made = QLabel(parent)
    made.setTextFormat(Qt.TextFormat.PlainText)
    made.setWordWrap(True)
    return made
