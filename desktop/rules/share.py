"""The form of a share rule."""

from __future__ import annotations

from desktop import messages
from desktop.edits.rules import new_share
from desktop.rules import words
from desktop.rules.form import RuleForm
from desktop.rules.form_parts import NumberField, SenseBox, TickList
from desktop.rules.kind import RuleKind
from solver.plan import Plan, Share


class ShareForm(RuleForm):
    """A part of some people, in per cent, are of certain categories."""

    def __init__(self, plan: Plan, rule: Share) -> None:
        super().__init__(plan, rule)
        self._sense = SenseBox(rule.sense)
        self._fraction = NumberField(messages.SHARE_PERCENT, rule.fraction, per_cent=True)
        self._within = TickList(messages.SHARE_WITHIN, self.category_names, rule.within)
        self._of = TickList(messages.SHARE_OF, self.category_names, rule.of)
        self.add(messages.SENSE, self._sense)
        self.add(messages.SHARE_PERCENT, self._fraction)
        self.add(messages.SHARE_WITHIN, self._within)
        self.add(messages.SHARE_OF, self._of)
        self._by_day = self.day_box(rule.by_day)
        self._phases = self.phase_list(rule.phases)
        for part in (self._sense, self._fraction, self._within, self._of, self._phases):
            part.changed.connect(self.changed)

    def rule(self) -> Share:
        """The rule as typed."""
        return Share(
            self.name,
            self._of.names(),
            self._within.names(),
            self._sense.sense(),
            self._fraction.number(),
            self._phases.phases(),
            self._by_day.isChecked(),
        )


SHARE = RuleKind(
    Share,
    "Share",
    "A part of the people must be, or may be at most, of some categories.",
    new_share,
    words.share,
    ShareForm,
)
