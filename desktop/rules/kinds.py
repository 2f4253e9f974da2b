"""All kinds of rules."""

from __future__ import annotations

from desktop.rules.budget import BUDGET
from desktop.rules.kind import RuleKind
from desktop.rules.presence import PRESENCE
from desktop.rules.ratio import RATIO
from desktop.rules.share import SHARE
from solver.plan import Plan, Rule

KINDS: tuple[RuleKind, ...] = (PRESENCE, RATIO, SHARE, BUDGET)


def kind_of(rule: Rule) -> RuleKind:
    """The kind of `rule`."""
    return next(kind for kind in KINDS if isinstance(rule, kind.of))


def sentence(rule: Rule, plan: Plan) -> str:
    """What `rule` says, as a sentence without its name."""
    said = kind_of(rule).sentence(rule, plan)
    return said[:1].upper() + said[1:]
