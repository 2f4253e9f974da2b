"""The form of a presence rule."""

from __future__ import annotations

from desktop import messages
from desktop.edits.rules import new_presence
from desktop.rules import words
from desktop.rules.form import RuleForm
from desktop.rules.form_parts import NumberField, SenseBox, WeightTable
from desktop.rules.kind import RuleKind
from solver.plan import Plan, Presence


class PresenceForm(RuleForm):
    """Who is counted, at what weight, against which number."""

    def __init__(self, plan: Plan, rule: Presence) -> None:
        super().__init__(plan, rule)
        self._weights = WeightTable(self.category_names, rule.weights)
        self._sense = SenseBox(rule.sense)
        self._bound = NumberField(messages.PEOPLE, rule.bound)
        self.add(messages.WHO, self._weights)
        self.add(messages.SENSE, self._sense)
        self.add(messages.PEOPLE, self._bound)
        self._phases = self.phase_list(rule.phases)
        for part in (self._weights, self._sense, self._bound, self._phases):
            part.changed.connect(self.changed)

    def rule(self) -> Presence:
        """The rule as typed."""
        return Presence(
            self.name,
            self._weights.weights(),
            self._sense.sense(),
            self._bound.number(),
            self._phases.phases(),
        )


PRESENCE = RuleKind(
    Presence,
    "Presence",
    "So many people of some categories must be there.",
    new_presence,
    words.presence,
    PresenceForm,
)
