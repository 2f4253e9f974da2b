"""How much of the recommendation is printed, and the order in which detail goes when the page is full.

The order: air and type size (never below 8 pt) - outputs and other assumptions - the tally's counts per
phase - of more than 12 phases all but the fullest - the tally's rows - near-best crews - reasons against the
less usual roundings - binding lines - rows of the table, which then share one line ("and 7 more categories").
Decision, totals, costs, caution, signatures and origin always stay.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

ALL = 10**6
SMALLEST = 8.0  # points; nothing on the page is smaller


@dataclass(frozen=True)
class Detail:
    """Type sizes in points, `air` as a share of the full distances, and the most entries of each block."""

    headline: float = 17.0
    body: float = 9.0
    air: float = 1.0
    wording: int = 0
    assumptions: int = ALL
    listed: bool = True
    tally: int = ALL
    compact: bool = False
    alternatives: int = 2
    rounding: int = ALL
    binding: int = ALL
    conflict: int = ALL
    table: int = ALL
    phases: int = ALL
    name_lines: int = 3
    phase_key: bool = True


_DROPS: tuple[dict[str, float | int | bool], ...] = (
    {"air": 0.8},
    {"listed": False},
    {"headline": 15.0, "body": 8.5},
    {"air": 0.65},
    {"assumptions": 12},
    {"tally": 12},
    {"assumptions": 8},
    {"headline": 13.0, "body": 8.0, "air": 0.55},
    {"compact": True},
    {"phases": 24},
    {"phases": 12},
    {"tally": 8},
    {"assumptions": 5},
    {"name_lines": 2},
    {"tally": 6},
    {"assumptions": 3},
    {"alternatives": 1},
    {"tally": 4},
    {"wording": 1},
    {"rounding": 4},
    {"binding": 3},
    {"assumptions": 0},
    {"wording": 2},
    {"tally": 2},
    {"alternatives": 0},
    {"rounding": 3},
    {"tally": 0},
    {"air": 0.45},
    {"binding": 1, "conflict": 12},
    {"table": 30},
    {"table": 24},
    {"wording": 3},
    {"table": 18},
    {"rounding": 2, "conflict": 8},
    {"table": 14},
    {"table": 11},
    {"name_lines": 1},
    {"table": 8, "conflict": 6},
    {"table": 6},
    {"phases": 8},
    {"rounding": 1, "conflict": 4},
    {"table": 4},
    {"phase_key": False},
    {"phases": 6},
    {"table": 3},
    {"table": 2, "conflict": 2},
    {"binding": 0, "rounding": 0},
    {"table": 1},
    {"phases": 3},
    {"phases": 1},
)


def _stages() -> tuple[Detail, ...]:
    made = [Detail()]
    for drop in _DROPS:
        made.append(replace(made[-1], **drop))  # type: ignore[arg-type]
    return tuple(made)


STAGES = _stages()  # from the fullest page to the barest
