"""The form of a rule: labelled fields, and the rule they describe."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QCheckBox, QFormLayout, QLabel, QLineEdit, QWidget

from desktop import messages, theme
from desktop.rules.form_parts import PhaseList
from solver.plan import Plan, Rule


class RuleForm(QWidget):
    """Fields for one rule. Subclasses add theirs and give `rule()`; `changed` on every change."""

    changed = Signal()

    def __init__(self, plan: Plan, rule: Rule) -> None:
        super().__init__()
        self.plan = plan
        self._layout = QFormLayout(self)
        self._layout.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.ExpandingFieldsGrow)
        self._layout.setHorizontalSpacing(theme.current().px(2))
        self._name = QLineEdit(rule.name)
        self._name.setAccessibleName(messages.RULE_NAME)
        self._name.textEdited.connect(self.changed)
        self.add(messages.RULE_NAME, self._name)

    @property
    def name(self) -> str:
        """What the rule is called."""
        return " ".join(self._name.text().split())

    @property
    def category_names(self) -> tuple[str, ...]:
        """The categories a rule can name."""
        return tuple(c.name for c in self.plan.categories)

    def add(self, label: str, field: QWidget) -> None:
        """One more field."""
        shown = QLabel(label)
        shown.setTextFormat(Qt.TextFormat.PlainText)
        shown.setBuddy(field)
        self._layout.addRow(shown, field)

    def day_box(self, chosen: bool) -> QCheckBox:
        """The tick that asks the rule of those present on each working day too."""
        box = QCheckBox(messages.BY_DAY)
        box.setChecked(chosen)
        box.toggled.connect(self.changed)
        self.add("", box)
        return box

    def phase_list(self, chosen: tuple[str, ...] | None) -> PhaseList:
        """The list of phases, shown where there is more than one."""
        phases = PhaseList(tuple(p.name for p in self.plan.phases), chosen)
        if len(self.plan.phases) > 1:
            self.add(messages.RULE_PHASES, phases)
        else:
            phases.setParent(self)
            phases.hide()
        return phases

    def rule(self) -> Rule:
        """The rule as the fields describe it. Raises Refused where a number is none."""
        raise NotImplementedError
