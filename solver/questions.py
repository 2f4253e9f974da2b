"""Every question that can be asked about a plan, by name; the worker and the commands read this table."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from math import isfinite
from typing import Any

from solver.attendance import attend
from solver.crewmap import crew_map
from solver.nearbest import near_best
from solver.plan import Plan
from solver.room import room
from solver.solve import Heard, solve
from solver.steps import steps
from solver.tightest import tightest_line
from solver.wholecost import whole_cost

Options = Mapping[str, Any]
MOST_WORKLOAD = 1e12
LONGEST = 1_000_000  # seconds


class BadOption(ValueError):
    """An option of a question is missing or not allowed; the message is one sentence."""


@dataclass(frozen=True)
class Question:
    """`ask(plan, options, heard)` gives a frozen answer of class `answer`. Options are JSON values."""

    name: str
    ask: Callable[[Plan, Options, Heard], Any]


def _solve(plan: Plan, options: Options, heard: Heard) -> Any:
    return solve(
        plan,
        seconds=_seconds(options),
        tolerance=_tolerance(options),
        start=options.get("start"),
        heard=heard,
    )


def _tolerance(options: Options) -> float:
    """The gap that is good enough, given in per cent of the cost."""
    percent = options.get("tolerance") or 0.0
    if not isinstance(percent, (int, float)) or not 0 <= percent <= 100:
        raise BadOption(f"tolerance: {percent!r} will not do: allowed is a per cent from 0 to 100.")
    return float(percent) / 100


def _cost(plan: Plan, options: Options, heard: Heard) -> Any:
    return whole_cost(plan, seconds=_seconds(options), heard=heard)


def _room(plan: Plan, options: Options, heard: Heard) -> Any:
    return room(plan, seconds=_seconds(options), heard=heard)


def _near(plan: Plan, options: Options, heard: Heard) -> Any:
    within, most = options.get("within", 2.0), options.get("most", 20)
    if not _is_number(within) or not 0 <= within <= 1000:
        raise BadOption(f"{_shown(within)} is no usable per cent of the best cost; allowed is 0 to 1000.")
    if not _is_number(most) or most != int(most) or not 1 <= most <= 1000:
        raise BadOption(f"{_shown(most)} is no usable number of crews; allowed is 1 to 1000.")
    seconds = _seconds(options)
    return near_best(plan, within=float(within), most=int(most), seconds=seconds, heard=heard)


def _steps(plan: Plan, options: Options, heard: Heard) -> Any:
    work = options.get("work")
    names = [w.name for w in plan.works]
    if work == "all" and work not in names:
        work = None
    if work is not None and work not in names:
        known = ", ".join(names) or "none"
        raise BadOption(f"No work is called “{work}”; the plan's works are: {known}.")
    low, high = (_workload(options.get(name), name) for name in ("from", "to"))
    return steps(plan, work, low, high, seconds=options.get("seconds"), heard=heard)


def _workload(value: Any, name: str) -> Decimal | None:
    if value is None:
        return None
    if not _is_number(value) or not 0 <= value <= MOST_WORKLOAD or (name == "to" and value == 0):
        raise BadOption(f"{value} is no usable workload for “{name}”; allowed is 0 to {MOST_WORKLOAD:.0e}.")
    return Decimal(str(value))


def _map(plan: Plan, options: Options, heard: Heard) -> Any:
    names = [category.name for category in plan.categories]
    phases = [phase.name for phase in plan.phases]
    across, up, phase = options.get("x"), options.get("y"), options.get("phase", phases[0])
    for name in (across, up):
        if name not in names:
            raise BadOption(f"No category is called “{name}”; the plan's are: {', '.join(names)}.")
    if across == up:
        raise BadOption("The crew map needs two different categories.")
    if phase not in phases:
        raise BadOption(f"No phase is called “{phase}”; the plan's are: {', '.join(phases)}.")
    return crew_map(plan, str(across), str(up), str(phase))


def _tightest(plan: Plan, options: Options, heard: Heard) -> Any:
    crew = options.get("crew")
    if not isinstance(crew, Mapping) or not all(_is_counts(plan, counts) for counts in crew.values()):
        raise BadOption("The tightest line is that of a crew: people of each category in each phase.")
    return tightest_line(plan, crew)


def _is_counts(plan: Plan, counts: Any) -> bool:
    return (
        isinstance(counts, (list, tuple))
        and len(counts) == len(plan.phases)
        and all(_is_number(n) and n >= 0 for n in counts)
    )


def _attend(plan: Plan, options: Options, heard: Heard) -> Any:
    chance = options.get("chance", 0.95)
    if not _is_number(chance) or not 0 < chance < 100 or chance == 1:
        raise BadOption(f"{chance} is no usable chance; allowed is a share of days above 0 and below 1, "
                        "or per cent above 1 and below 100.")  # fmt: skip
    share = float(chance) if chance < 1 else float(chance) / 100
    return attend(plan, share, seconds=_seconds(options), heard=heard)


def _seconds(options: Options) -> float | None:
    seconds = options.get("seconds")
    if seconds is None:
        return None
    if not _is_number(seconds) or not 0 <= seconds <= LONGEST:
        raise BadOption(f"{seconds} is no usable number of seconds; allowed is 0 to {LONGEST:,}.")
    return float(seconds)


def _shown(value: Any) -> str:
    return f"{value:g}" if _is_number(value) else str(value)


def _is_number(value: Any) -> bool:
    return isinstance(value, (int, float)) and not isinstance(value, bool) and isfinite(value)


QUESTIONS: Mapping[str, Question] = {
    q.name: q
    for q in (
        Question("solve", _solve),
        Question("cost", _cost),
        Question("room", _room),
        Question("near", _near),
        Question("steps", _steps),
        Question("map", _map),
        Question("tightest", _tightest),
        Question("attend", _attend),
    )
}
