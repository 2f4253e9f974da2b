"""The form of a ratio rule."""

from __future__ import annotations

from desktop import messages
from desktop.edits.rules import new_ratio
from desktop.rules import words
from desktop.rules.form import RuleForm
from desktop.rules.form_parts import NumberField, TickList
from desktop.rules.kind import RuleKind
from solver.plan import Plan, Ratio


class RatioForm(RuleForm):
    """At most so many of some for each of others."""

    def __init__(self, plan: Plan, rule: Ratio) -> None:
        super().__init__(plan, rule)
        self._at_most = NumberField(messages.AT_MOST, rule.at_most)
        self._of = TickList(messages.RATIO_OF, self.category_names, rule.of)
        self._per = TickList(messages.RATIO_PER, self.category_names, rule.per)
        self.add(messages.AT_MOST, self._at_most)
        self.add(messages.RATIO_OF, self._of)
        self.add(messages.RATIO_PER, self._per)
        self._by_day = self.day_box(rule.by_day)
        self._phases = self.phase_list(rule.phases)
        for part in (self._at_most, self._of, self._per, self._phases):
            part.changed.connect(self.changed)

    def rule(self) -> Ratio:
        """The rule as typed."""
        return Ratio(
            self.name,
            self._of.names(),
            self._per.names(),
            self._at_most.number(),
            self._phases.phases(),
            self._by_day.isChecked(),
        )


RATIO = RuleKind(
    Ratio,
    "Ratio",
    "At most so many of some categories for each of others.",
    new_ratio,
    words.ratio,
    RatioForm,
)
