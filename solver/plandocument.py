"""The plan as a document of plain dicts, lists, texts and exact numbers, and back.

What a document may hold is data: one table of keys per kind of entry. Reading lists every problem and
goes on with a harmless value in its place, so that one run shows them all.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from decimal import Decimal
from types import MappingProxyType
from typing import Any

from solver import reading
from solver.exact import as_written
from solver.plan import (
    ONE,
    ZERO,
    Budget,
    Category,
    Phase,
    Plan,
    Presence,
    Ratio,
    Rule,
    Sense,
    Share,
    Supervision,
    Work,
)
from solver.reading import Key, Notes
from solver.review import PlanProblems, Problem, quoted

FORMAT = "full-complement/plan"
VERSION = 1

# From version n to n + 1: takes the raw document, gives the raw document. Empty while there is one version.
UPGRADES: dict[int, Callable[[dict[str, Any]], dict[str, Any]]] = {}


class UnreadableFile(Exception):
    """What was given is no plan file at all; the message is one sentence for people."""


_ZERO = Key(reading.number, ZERO)
_NAME = Key(reading.text, stand_in="")
_NUMBER = Key(reading.number, stand_in=ZERO)
_PEOPLE = Key(reading.names, stand_in=())
_IN_PHASES = Key(reading.names_or_null, None)
_BY_DAY = Key(reading.yes_or_no, False)
_SENSE = Key(reading.sense, Sense.AT_LEAST)

PHASE_KEYS = {"name": _NAME, "periods": Key(reading.number, ONE)}
SUPERVISION_KEYS = {"hours": _ZERO, "by": Key(reading.names, ())}
CATEGORY_KEYS = {
    "name": _NAME,
    "on_books": _ZERO,
    "at_least": _ZERO,
    "at_most": Key(reading.number_or_null, None),
    "least_if_any": _ZERO,
    "lot": Key(reading.number, ONE),
    "pay": _NUMBER,
    "join_cost": _ZERO,
    "leave_cost": _ZERO,
    "open_cost": _ZERO,
    "hours": _NUMBER,
    "absence": _ZERO,
    "overtime_hours": _ZERO,
    "overtime_rate": _ZERO,
    "settling_hours": _ZERO,
    "supervision": Key(reading.object_of(Supervision, SUPERVISION_KEYS), Supervision()),
    "output": Key(reading.numbers_for, MappingProxyType({})),
    "day_absence": Key(reading.number_or_null, None),
    "hours_note": Key(reading.text, ""),
}
WORK_KEYS = {
    "name": _NAME,
    "unit": Key(reading.text, "units"),
    "amounts": Key(reading.numbers, stand_in=()),
    "buy_in_price": Key(reading.number_or_null, None),
    "buy_in_most": Key(reading.number_or_null, None),
}
RULE_KEYS: Mapping[type[Rule], Mapping[str, Key]] = {
    Presence: {
        "name": _NAME,
        "weights": Key(reading.numbers_for, stand_in=MappingProxyType({})),
        "sense": _SENSE,
        "bound": _NUMBER,
        "phases": _IN_PHASES,
    },
    Ratio: {
        "name": _NAME,
        "of": _PEOPLE,
        "per": _PEOPLE,
        "at_most": _NUMBER,
        "phases": _IN_PHASES,
        "by_day": _BY_DAY,
    },
    Share: {
        "name": _NAME,
        "of": _PEOPLE,
        "within": _PEOPLE,
        "sense": _SENSE,
        "fraction": _NUMBER,
        "phases": _IN_PHASES,
        "by_day": _BY_DAY,
    },
    Budget: {"name": _NAME, "at_most": _NUMBER},
}
_KINDS: Mapping[str, type[Rule]] = {kind.kind: kind for kind in RULE_KEYS}


def _rule(raw: Any, place: str, notes: Notes) -> Rule:
    named = raw.get("kind") if isinstance(raw, dict) else None
    kind = _KINDS.get(named) if isinstance(named, str) else None
    if kind is not None:
        values = reading.values_of(raw, place, {"kind": Key(reading.text), **RULE_KEYS[kind]}, notes)
        del values["kind"]
        return kind(**values)
    if isinstance(raw, dict):
        near = notes.found.nearest(named, _KINDS) if isinstance(named, str) else ""
        said = f"is {reading.shown(named)}" if "kind" in raw else "is missing"
        notes.add(f"{place}.kind", f"{said}; allowed is {reading.either(list(_KINDS))}{near}")
    else:
        reading.pairs_of(raw, place, notes)
    notes.unsound.add(place)
    return Budget(f"unreadable {place}", ZERO)


PLAN_KEYS = {
    "title": Key(reading.text, ""),
    "site": Key(reading.text, ""),
    "prepared_by": Key(reading.text, ""),
    "notes": Key(reading.text, ""),
    "currency": Key(reading.text, "EUR"),
    "period": Key(reading.text, "week"),
    "phases": Key(reading.list_of(reading.object_of(Phase, PHASE_KEYS)), (Phase("Whole job"),)),
    "categories": Key(reading.list_of(reading.object_of(Category, CATEGORY_KEYS)), ()),
    "works": Key(reading.list_of(reading.object_of(Work, WORK_KEYS)), ()),
    "rules": Key(reading.list_of(_rule), ()),
    "own": Key(reading.lists_for, MappingProxyType({})),
}
_HEAD_KEYS = {"format": Key(reading.text, FORMAT), "version": Key(reading.number, ONE)}


# the whole document


def plan_from_document(document: Any) -> Plan:
    """The plan that `document` describes: dicts, lists, texts, bools, None, ints and Decimals.

    Raises UnreadableFile for another format or a newer version, PlanProblems with every problem listed.
    """
    notes = Notes()
    values = reading.values_of(_of_this_version(document), "", {**_HEAD_KEYS, **PLAN_KEYS}, notes)
    plan = Plan(**{key: values[key] for key in PLAN_KEYS})
    sound = not notes.found.problems
    notes.review(plan)
    problems = tuple(sorted(notes.found.listed(), key=_file_order))
    if problems:
        raise PlanProblems(problems, plan if sound else None)
    return plan


def _file_order(problem: Problem) -> tuple[int, int]:
    """Where a problem stands in the file: which key of the plan, and which entry of its list."""
    key, _, rest = problem.place.replace(".", "[").partition("[")
    index = rest.partition("]")[0]
    place = list(PLAN_KEYS).index(key) if key in PLAN_KEYS else len(PLAN_KEYS)
    return place, int(index) if index.isdecimal() else -1


def _of_this_version(given: Any) -> dict[str, Any]:
    """The document upgraded to the version of today."""
    document: dict[str, Any] = given
    if not isinstance(document, dict):
        raise UnreadableFile(f"This is no plan: it holds {reading.shown(document)}, expected is an object.")
    if document.get("format", FORMAT) != FORMAT:
        other = reading.shown(document["format"])
        raise UnreadableFile(f'This is no plan: its "format" is {other}, expected is {quoted(FORMAT)}.')
    version = _version(document)
    while version < VERSION:
        if version not in UPGRADES:
            raise UnreadableFile(
                f"There is no version {version} of the plan file; this program reads {VERSION}."
            )
        document = {**UPGRADES[version](document), "version": version + 1}
        version += 1
    return document


def _version(document: dict[str, Any]) -> int:
    raw = document.get("version", VERSION)
    if not isinstance(raw, int | Decimal) or isinstance(raw, bool) or raw % 1 != 0:
        says = f"is {reading.shown(raw)}; allowed is a whole number up to {VERSION}"
        raise PlanProblems((Problem("version", says),))
    if raw > VERSION:
        raise UnreadableFile(
            f"This plan was saved by a newer program: its version is {raw}, this program reads versions up "
            f"to {VERSION}. Nothing was changed; please update the program."
        )
    return int(raw)


def plan_to_document(plan: Plan) -> dict[str, Any]:
    """`plan` as dicts, lists, texts and TypedNumbers: what `plan_from_document` reads, without loss."""
    document: dict[str, Any] = {"format": FORMAT, "version": VERSION}
    for key in PLAN_KEYS:
        if key != "own" or plan.own:
            document[key] = _raw(getattr(plan, key))
    return document


_KEYS_OF: Mapping[type[Any], Mapping[str, Key]] = {
    Phase: PHASE_KEYS,
    Supervision: SUPERVISION_KEYS,
    Category: CATEGORY_KEYS,
    Work: WORK_KEYS,
    **RULE_KEYS,
}

# Keys that stand in a document only where they differ from their default.
_WRITTEN_IF_GIVEN: Mapping[str, Any] = {"day_absence": None, "hours_note": "", "by_day": False}


def _raw(value: Any) -> Any:
    if isinstance(value, Decimal):
        return as_written(value)
    if isinstance(value, Sense):
        return value.value
    if isinstance(value, Mapping):
        return {key: _raw(inner) for key, inner in value.items()}
    if isinstance(value, tuple | list):
        return [_raw(inner) for inner in value]
    return _raw_entry(value) if type(value) in _KEYS_OF else value


def _raw_entry(entry: Any) -> dict[str, Any]:
    raw = {"kind": entry.kind} if isinstance(entry, Rule) else {}
    for key in _KEYS_OF[type(entry)]:
        value = getattr(entry, key)
        if key not in _WRITTEN_IF_GIVEN or value != _WRITTEN_IF_GIVEN[key]:
            raw[key] = _raw(value)
    return raw
