"""What the page says, as data: every sentence and number of the recommendation, before any layout.

Sentences are ready to print; head counts and money of the table are exact decimals, so that rows can be
summed when some of them have to share a line.
"""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from enum import StrEnum

from PySide6.QtCore import QLocale

from desktop.page.text import Run
from desktop.pictures.tally_layout import Tally

Words = tuple[Run, ...]


class Standing(StrEnum):
    """What kind of page it is."""

    PROVED = "proved"
    BEST_FOUND = "best found"
    NOTHING_FOUND = "nothing found"
    IMPOSSIBLE = "impossible"


@dataclass(frozen=True)
class Stamp:
    """Where the page comes from: file name, content hash of the plan, program version, local time."""

    file: str
    content_hash: str
    version: str
    made: str
    day: str


@dataclass(frozen=True)
class Banner:
    """What nobody may miss: the crew is not proved, not possible, or the planner's own choice."""

    title: str
    says: str


@dataclass(frozen=True)
class CrewRow:
    """One category of the table; `heads` per phase; `pay` and `one_off` money over all phases."""

    name: str
    now: Decimal
    heads: tuple[Decimal, ...]
    joiners: Decimal
    leavers: Decimal
    pay: Decimal
    one_off: Decimal


@dataclass(frozen=True)
class CrewTable:
    """Now -> recommended. Per phase: `phases` names, people joining and leaving before it.

    `running` are further costs that belong to no category's pay: (what, money).
    """

    phases: tuple[str, ...]
    rows: tuple[CrewRow, ...]
    joiners: tuple[Decimal, ...]
    leavers: tuple[Decimal, ...]
    running: tuple[tuple[str, Decimal], ...]
    total: Decimal


@dataclass(frozen=True)
class Labelled:
    """A sentence after a bold label; `note` explains the label."""

    label: str
    says: str
    note: str = ""


@dataclass(frozen=True)
class Amount:
    """A label and its figure; `strong` for the one that counts."""

    label: str
    value: str
    strong: bool = False


@dataclass(frozen=True)
class Recommendation:
    """The whole page. Empty strings and tuples are left out of it.

    `decisions` are the same decision in fewer and fewer words; `conflict` stands in for the crew where
    none is possible.
    """

    standing: Standing
    title: str
    site: str
    banner: Banner | None
    decisions: tuple[Words, ...]
    consequence: str
    tally: Tally | None
    table: CrewTable | None
    conflict: tuple[Labelled, ...]
    rounding: tuple[Labelled, ...]
    costs: tuple[Amount, ...]
    method: str
    binding: tuple[str, ...]
    loosening: str
    attendance: str
    alternatives: tuple[Labelled, ...]
    assumptions: tuple[Labelled, ...]
    prepared_by: str
    stamp: Stamp
    proof: str
    currency: str
    phase_lengths: tuple[str, ...]
    locale: QLocale
