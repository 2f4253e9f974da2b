"""What the solver answers, as frozen values, and their JSON form (the keys of `python -m solver`).

Counts, hours, units and money are floats here: every head count was rounded to lots and every line
re-checked in rational arithmetic before it became one. A crew maps each category of the plan, in plan
order, to its head count per phase.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, fields
from enum import StrEnum
from typing import Any, TypeVar

import cattrs
from cattrs.gen import make_dict_structure_fn, make_dict_unstructure_fn, override

T = TypeVar("T")
Crew = Mapping[str, tuple[float, ...]]


class State(StrEnum):
    """How much is known. `exact` is None when IMPOSSIBLE, and may be None when BEST_FOUND."""

    PROVED = "proved"
    BEST_FOUND = "best found"
    IMPOSSIBLE = "impossible"


class Proof(StrEnum):
    """What stands behind PROVED or IMPOSSIBLE. ONE_ENGINE: the first proof of a race, which the other
    engine had no time to confirm."""

    OWN_SEARCH = "own search"
    TWO_ENGINES = "two engines"
    ONE_ENGINE = "one engine"


class Policy(StrEnum):
    """Where a crew comes from, in the order shown."""

    DOWN = "down"
    NEAREST = "nearest"
    UP = "up"
    LARGEST_REMAINDER = "largest remainder"
    BEST_CORNER = "best corner"
    PATCHED = "patched"
    EXACT = "exact"
    OWN = "own"


class LineKind(StrEnum):
    """What a line is about."""

    WORK = "work"
    SUPERVISION = "supervision"
    PRESENCE = "presence"
    RATIO = "ratio"
    SHARE = "share"
    BUDGET = "budget"
    BOUND = "bound"


@dataclass(frozen=True)
class LineMargin:
    """Room left on a line (>= 0) or what it is short by (< 0), in `unit`. `phase` None: all phases."""

    line: str
    kind: LineKind
    phase: str | None
    margin: float
    unit: str


@dataclass(frozen=True)
class Break:
    """Why a crew is not workable: an inequality every workable crew satisfies and this one misses.

    sum_j net_worth[j] n_j (+ net_worth_before[j] n_j of the phase before) >= need, missed by `short`
    (> 0), of which `given_up` is what unserved supervision frees for work. The miss splits exactly:
    fractional_margin + sum(moves) + sum(given_up) = -short. A missed budget over several phases has one
    break; its `net_worth` is then per category the sum over phases and only `moves` is exact.
    """

    lines: tuple[str, ...]
    kind: LineKind
    phase: str | None
    unit: str
    short: float
    net_worth: Mapping[str, float]
    need: float
    fractional_margin: float
    moves: Mapping[str, float]
    given_up: Mapping[str, float]
    net_worth_before: Mapping[str, float]


@dataclass(frozen=True)
class CrewReport:
    """One crew appraised. `crew` None: the policy has no crew, and `why_none` says why.

    `cost` is None unless workable; `paper_cost` is pay, joining, leaving and opening costs of the head
    counts alone; `joiners` and `leavers` are people over all phases, `people` those of the fullest phase;
    `overtime` hours and `bought_in` units per phase are filled for workable crews. `proved` False: a best
    corner or patched crew that a time limit kept from being proved the cheapest of its kind.
    """

    policy: Policy
    crew: Crew | None
    workable: bool
    cost: float | None
    paper_cost: float | None
    joiners: float
    leavers: float
    people: float
    lines: tuple[LineMargin, ...]
    breaks: tuple[Break, ...]
    overtime: Mapping[str, tuple[float, ...]]
    bought_in: Mapping[str, tuple[float, ...]]
    why_none: str
    proved: bool = True


@dataclass(frozen=True)
class ExactCrew:
    """The exact crew with what it costs and how it is run (hours of overtime, units bought in)."""

    crew: Crew
    cost: float
    joiners: float
    leavers: float
    overtime: Mapping[str, tuple[float, ...]]
    bought_in: Mapping[str, tuple[float, ...]]


@dataclass(frozen=True)
class WholePeopleCost:
    """Exact cost - floor, in money and as % of the exact cost."""

    absolute: float
    percent: float


@dataclass(frozen=True)
class Conflicting:
    """One member of a smallest set of lines that cannot hold together.

    `move` is how far the number behind this line alone must move, in `unit`, before a workable crew exists;
    None when moving it is not enough alone. It is above 0, but for an `exactly` that must go down. `says` is
    the line in the planner's words, `repair` the move. Whole people are a member of kind None.
    """

    line: str
    kind: LineKind | None
    phase: str | None
    unit: str
    move: float | None
    says: str
    repair: str


@dataclass(frozen=True)
class Conflict:
    """Why no crew is workable. `whole_people` True: fractional people could do it."""

    lines: tuple[Conflicting, ...]
    whole_people: bool


@dataclass(frozen=True)
class Answer:
    """All of `solve`. `bound`: no whole crew costs less; `floor` None when no fractional crew exists."""

    state: State
    proof: Proof | None
    floor: float | None
    fractional: Crew | None
    exact: ExactCrew | None
    bound: float | None
    whole_people_cost: WholePeopleCost | None
    crews: tuple[CrewReport, ...]
    conflict: Conflict | None
    seconds: float

    def report(self, policy: Policy) -> CrewReport | None:
        """The crew of `policy`, None if it was not asked for."""
        return next((r for r in self.crews if r.policy == policy), None)


@dataclass(frozen=True)
class CategorySaving:
    """What `category` alone would save if it could be fractional, and with half its lot."""

    category: str
    if_fractional: float
    if_half_lot: float


@dataclass(frozen=True)
class Rung:
    """One rung of the ladder; `cost` None where the crew is not workable, `broken` then names lines."""

    name: str
    cost: float | None
    broken: tuple[str, ...]


@dataclass(frozen=True)
class WholePeopleDetail:
    """Answer of `cost`."""

    floor: float
    exact: float
    absolute: float
    percent: float
    by_category: tuple[CategorySaving, ...]
    ladder: tuple[Rung, ...]


@dataclass(frozen=True)
class LineRoom:
    """Room to move on one line. `loosen` None: no cheaper crew however loose. The dual price is the
    price for fractional people, valid while the line's right-hand side moves within [from, to]
    (None = without limit)."""

    line: str
    kind: LineKind
    phase: str | None
    unit: str
    tighten: float
    loosen: float | None
    saving: float | None
    next_crew: Crew | None
    dual_price: float
    dual_from: float | None
    dual_to: float | None
    says: str


@dataclass(frozen=True)
class PayRange:
    """Pay of `category` in which the exact crew stays cheapest. None: no limit on that side."""

    category: str
    from_: float | None
    to: float | None


@dataclass(frozen=True)
class Room:
    """Answer of `room`; `programs` counts the integer programs solved. `pay` leaves out categories whose
    range was not worked out in the time given."""

    lines: tuple[LineRoom, ...]
    pay: tuple[PayRange, ...]
    programs: int


@dataclass(frozen=True)
class NearCrew:
    """One near-best crew; `over` is its cost above the exact crew's, `tightest` the line with least room."""

    crew: Crew
    cost: float
    over: float
    joiners: float
    leavers: float
    people: float
    tightest: str


@dataclass(frozen=True)
class NearBest:
    """Answer of `near`. `complete`: every whole crew within the limit is listed."""

    crews: tuple[NearCrew, ...]
    complete: bool


@dataclass(frozen=True)
class FloorPoint:
    """A cost at one workload (piecewise linear between points)."""

    amount: float
    cost: float


@dataclass(frozen=True)
class RoundedPoint:
    """Cost of the fractional crew rounded up at one workload; None from here on where it is not workable."""

    amount: float
    cost: float | None


@dataclass(frozen=True)
class Step:
    """Workloads [from, to] that `crew` serves at least cost; `cost` at `to`, `cost_from` at `from`.

    `points`: where overtime or bought-in work bends the cost in between, all corners with both ends.
    """

    from_: float
    to: float
    crew: Crew
    cost: float
    cost_from: float
    points: tuple[FloorPoint, ...] = ()


@dataclass(frozen=True)
class Steps:
    """Answer of `steps`. `work` None: all works scaled, amounts in % of today.

    `exact`: every border is exact and every crew proved; False where the time was not enough for that.
    `ends`: why the staircase stops before the end that was asked for, empty where it does not.
    """

    work: str | None
    unit: str
    today: float
    steps: tuple[Step, ...]
    floor: tuple[FloorPoint, ...]
    rounded_up: tuple[RoundedPoint, ...]
    exact: bool
    ends: str = ""


@dataclass(frozen=True)
class Critical:
    """`stops`: the chance that a day is not covered when one given head of `category` is away."""

    category: str
    stops: float


@dataclass(frozen=True)
class PhaseAttendance:
    """The days of one phase with the exact crew.

    `covered` is the chance that a day is covered, `by_line` that each line is; `expected_short` is how much
    of a line is left undone on average, in its unit per period. `error` and `expected_error` are standard
    errors where `drawn` days were drawn, 0 where all `patterns` of attendance were looked at. `survives`:
    whoever they are, so many may be away (None: not even everybody together covers the day); `first_miss`
    is a set of people whose absence does stop it, empty where none was found.
    """

    phase: str
    covered: float
    error: float
    by_line: Mapping[str, float]
    expected_short: Mapping[str, float]
    expected_error: Mapping[str, float]
    survives: int | None
    first_miss: Mapping[str, float]
    critical: tuple[Critical, ...]
    patterns: int
    drawn: int


@dataclass(frozen=True)
class CrewChance:
    """A crew and its chance: `covered` in the worst phase, `by_phase` in each."""

    name: str
    crew: Crew
    workable: bool
    cost: float | None
    covered: float
    by_phase: tuple[float, ...]


@dataclass(frozen=True)
class SafeCrew:
    """The cheapest workable crew known whose days are covered with at least the chance `wanted`, `extra`
    dearer than the exact crew. `proved`: none is cheaper; else none costs less than `bound`."""

    wanted: float
    crew: Crew
    cost: float
    extra: float
    covered: float
    by_phase: tuple[float, ...]
    proved: bool
    bound: float


@dataclass(frozen=True)
class Attendance:
    """Answer of `attend`. `wanted` None: `why_none` says why; `beyond_budget` is then what it would take
    without the budget. `curve` holds the cheapest crews for rising chances, the budget left aside, beginning
    with the exact crew; `simulated`: some chances are from drawn days."""

    chance: float
    phases: tuple[PhaseAttendance, ...]
    wanted: SafeCrew | None
    why_none: str
    beyond_budget: SafeCrew | None
    compared: tuple[CrewChance, ...]
    curve: tuple[SafeCrew, ...]
    simulated: bool


def _converter() -> cattrs.Converter:
    """cattrs with `from_` written as `from`: JSON keys are words, Python's keywords are not names."""
    made = cattrs.Converter()
    for cls in (PayRange, Step):
        names: dict[str, Any] = {f.name: override(rename=f.name.rstrip("_")) for f in fields(cls)}
        made.register_unstructure_hook(cls, make_dict_unstructure_fn(cls, made, **names))
        made.register_structure_hook(cls, make_dict_structure_fn(cls, made, **names))
    return made


_CONVERTER = _converter()


def to_json(answer: Any) -> Any:
    """Plain dicts, lists, strings and numbers, with the keys of the commands."""
    return _CONVERTER.unstructure(answer)


def from_json(raw: Any, kind: type[T]) -> T:
    """The answer of class `kind` that `to_json` turned into `raw`."""
    return _CONVERTER.structure(raw, kind)
