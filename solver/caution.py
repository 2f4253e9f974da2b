"""The sentence that stands wherever a crew is recommended."""

from __future__ import annotations

CAUTION = (
    "Not a legal check. Working time, licences and statutory staffing or supervision ratios are set by local "
    "rules; confirm them with whoever is competent before people are put to work."
)
