"""A kind of rule as data."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from desktop.rules.form import RuleForm
from solver.plan import Plan, Rule


@dataclass(frozen=True)
class RuleKind:
    """What it is called, how a new one starts, what it says and how it is edited."""

    of: type[Rule]
    title: str
    tooltip: str
    new: Callable[[Plan], Rule]
    sentence: Callable[..., str]
    form: Callable[..., RuleForm]
