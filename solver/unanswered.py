"""Why a question about a plan has no answer, although the plan has no problems."""

from __future__ import annotations

from typing import Any


class Unanswered(ValueError):
    """The message tells people why, over one or several lines; `document` tells machines."""

    def __init__(self, says: str, document: dict[str, Any]) -> None:
        super().__init__(says)
        self.document = document


class NoExactCrew(Unanswered):
    """The plan has no exact crew to start from, or none that was proved in time."""


class Unsettled(Unanswered):
    """The time given was not enough to be sure of an answer."""

    def __init__(self, says: str) -> None:
        super().__init__(says, {"unsettled": says})
