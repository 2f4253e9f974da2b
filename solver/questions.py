"""Every question that can be asked about a plan, by name; the worker and the commands read this table."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from solver.plan import Plan
from solver.solve import Heard, solve

Options = Mapping[str, Any]


class BadOption(ValueError):
    """An option of a question is missing or not allowed; the message is one sentence."""


@dataclass(frozen=True)
class Question:
    """`ask(plan, options, heard)` gives a frozen answer of class `answer`. Options are JSON values."""

    name: str
    ask: Callable[[Plan, Options, Heard], Any]


def _solve(plan: Plan, options: Options, heard: Heard) -> Any:
    return solve(plan, seconds=options.get("seconds"), heard=heard)


QUESTIONS: Mapping[str, Question] = {q.name: q for q in (Question("solve", _solve),)}
