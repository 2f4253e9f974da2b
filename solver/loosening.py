"""What loosening one line brings."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from solver.found import Lots


@dataclass(frozen=True)
class Grown:
    """Where cost slopes, a crew saves more the further the line gives way: `saving` at most, from `by` on."""

    by: Fraction
    saving: float


@dataclass(frozen=True)
class Loosening:
    """`by` (the line's unit) is the least that makes a crew cheaper, the crew `lots`, by `saving` (money).

    `by` None: no cheaper crew however loose; or, where `settled` is False, none found in the time given.
    `settled` False with a crew: a smaller `by` or a larger saving is not ruled out.
    """

    by: Fraction | None
    lots: Lots | None
    saving: float | None
    settled: bool
    grown: Grown | None = None


NOTHING = Loosening(None, None, None, True)
OUT_OF_TIME = Loosening(None, None, None, False)
