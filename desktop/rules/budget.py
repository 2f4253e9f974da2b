"""The form of a budget."""

from __future__ import annotations

from desktop import messages
from desktop.edits.rules import new_budget
from desktop.rules import words
from desktop.rules.form import RuleForm
from desktop.rules.form_parts import NumberField
from desktop.rules.kind import RuleKind
from solver.plan import Budget, Plan


class BudgetForm(RuleForm):
    """The most the whole job may cost."""

    def __init__(self, plan: Plan, rule: Budget) -> None:
        super().__init__(plan, rule)
        self._at_most = NumberField(messages.AT_MOST, rule.at_most, plan.currency)
        self.add(f"{messages.AT_MOST} ({plan.currency})", self._at_most)
        self._at_most.changed.connect(self.changed)

    def rule(self) -> Budget:
        """The rule as typed."""
        return Budget(self.name, self._at_most.number())


BUDGET = RuleKind(
    Budget,
    "Budget",
    "The whole job, all phases together, costs at most so much.",
    new_budget,
    words.budget,
    BudgetForm,
)
