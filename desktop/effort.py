"""How long the window looks for the exact crew, and how close is close enough; remembered."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QSettings

SECONDS = 60  # time limit of one solve; then the best crew found is shown with its bound
FEWEST_SECONDS, MOST_SECONDS = 1, 86_400
MOST_TOLERANCE = 50.0
_SECONDS, _TOLERANCE = "solve/seconds", "solve/tolerance"


@dataclass(frozen=True)
class Effort:
    """`seconds` limits one solve; `tolerance` is the gap, in % of the cost, at which it stops (0: proved)."""

    seconds: float = SECONDS
    tolerance: float = 0.0


def stored_effort() -> Effort:
    """What was chosen last; what is missing or makes no sense is as at the first start."""
    seconds = _stored(_SECONDS, SECONDS, FEWEST_SECONDS, MOST_SECONDS)
    return Effort(seconds, _stored(_TOLERANCE, 0.0, 0.0, MOST_TOLERANCE))


def store_effort(effort: Effort) -> None:
    """Remember `effort`."""
    QSettings().setValue(_SECONDS, effort.seconds)
    QSettings().setValue(_TOLERANCE, effort.tolerance)


def _stored(key: str, otherwise: float, low: float, high: float) -> float:
    try:
        value = float(str(QSettings().value(key, otherwise)))
    except ValueError:
        return otherwise
    return value if low <= value <= high else otherwise
