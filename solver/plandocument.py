"""The plan as a document of plain dicts, lists, texts and exact numbers, and back.

What a document may hold is data: one table of keys per kind of entry. Reading lists every problem and
goes on with a harmless value in its place, so that one run shows them all.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from decimal import Decimal
from types import MappingProxyType
from typing import Any, Final

from solver.exact import ALLOWED_SIZE, as_written, typed_number
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
from solver.review import Findings, PlanProblems, Problem, quoted, review_into, step

FORMAT = "full-complement/plan"
VERSION = 1

# From version n to n + 1: takes the raw document, gives the raw document. Empty while there is one version.
UPGRADES: dict[int, Callable[[dict[str, Any]], dict[str, Any]]] = {}


class UnreadableFile(Exception):
    """What was given is no plan file at all; the message is one sentence for people."""


@dataclass(frozen=True)
class BadNumber:
    """A number that was written but cannot be used, as the reader of the text left it."""

    text: str
    why: str


class RepeatedKeys(dict[str, Any]):
    """An object of the file in which some keys stand more than once; the last value counts."""

    repeated: tuple[str, ...] = ()


@dataclass
class Notes:
    """Problems so far, and the places whose values are only stand-ins."""

    found: Findings = field(default_factory=Findings)
    unsound: set[str] = field(default_factory=set)

    def add(self, place: str, says: str) -> None:
        """Note that the value at `place` could not be read."""
        self.found.add(place, says)
        self.unsound.add(place)

    def review(self, plan: Plan) -> None:
        """Add what is wrong with the meaning of `plan`, leaving out whatever is only a stand-in."""
        meaning = Findings(suggestions=self.found.suggestions)
        review_into(plan, meaning)
        for problem in meaning.problems:
            if not self._is_stand_in(problem.place):
                self.found.add(problem.place, problem.says)
        self.found.unlisted += meaning.unlisted

    def _is_stand_in(self, place: str) -> bool:
        cuts = [i for i, c in enumerate(place) if c in ".["]
        return any(place[:cut] in self.unsound for cut in [*cuts, len(place)])


Read = Callable[[Any, str, Notes], Any]


class _Required:
    """The default of a key that has none."""


REQUIRED: Final = _Required()


@dataclass(frozen=True)
class Key:
    """How the value of one key is read; `stand_in` replaces one that is missing or cannot be read."""

    read: Read
    default: Any = REQUIRED
    stand_in: Any = None


# values


def _shown(raw: Any) -> str:
    if isinstance(raw, BadNumber):
        return raw.text
    if isinstance(raw, str):
        return f"the text {quoted(raw)}"
    if raw is None or isinstance(raw, bool):
        return {None: "null", True: "true", False: "false"}[raw]
    if isinstance(raw, dict):
        return "an object"
    if isinstance(raw, list | tuple):
        return "a list"
    return str(raw)[:40]


def _number(raw: Any, place: str, notes: Notes) -> Decimal:
    if isinstance(raw, Decimal):
        return raw
    if isinstance(raw, int) and not isinstance(raw, bool):
        made = None if raw.bit_length() > 60 else typed_number(str(raw))
        raw = (
            made if made is not None else BadNumber("a huge whole number", f"cannot be used; {ALLOWED_SIZE}")
        )
        if made is not None:
            return made
    if isinstance(raw, BadNumber):
        notes.add(place, f"{raw.text} {raw.why}")
    else:
        hint = " written without quotation marks" if isinstance(raw, str) else ""
        notes.add(place, f"is {_shown(raw)}; allowed is a number{hint}")
    return ONE


def _number_or_null(raw: Any, place: str, notes: Notes) -> Decimal | None:
    return None if raw is None else _number(raw, place, notes)


def _text(raw: Any, place: str, notes: Notes) -> str:
    if isinstance(raw, str):
        return raw
    notes.add(place, f"is {_shown(raw)}; allowed is a text in quotation marks")
    return ""


def _yes_or_no(raw: Any, place: str, notes: Notes) -> bool:
    if isinstance(raw, bool):
        return raw
    notes.add(place, f"is {_shown(raw)}; allowed is true or false")
    return False


def _sense(raw: Any, place: str, notes: Notes) -> Sense:
    allowed = [s.value for s in Sense]
    if raw in allowed if isinstance(raw, str) else False:
        return Sense(raw)
    near = notes.found.nearest(raw, allowed) if isinstance(raw, str) else ""
    notes.add(place, f"is {_shown(raw)}; allowed is {_either(allowed)}{near}")
    return Sense.AT_LEAST


def _either(texts: list[str]) -> str:
    listed = [quoted(t) for t in texts]
    return listed[0] if len(listed) == 1 else ", ".join(listed[:-1]) + " or " + listed[-1]


def _list(raw: Any, place: str, notes: Notes) -> list[Any]:
    if isinstance(raw, list | tuple):
        return list(raw)
    notes.add(place, f"is {_shown(raw)}; allowed is a list in square brackets")
    return []


def _object(raw: Any, place: str, notes: Notes) -> Mapping[str, Any]:
    if not isinstance(raw, dict) or not all(isinstance(key, str) for key in raw):
        notes.add(place, f"is {_shown(raw)}; allowed is an object in curly brackets")
        return {}
    for key in getattr(raw, "repeated", ()):
        notes.add(step(place, key), "stands more than once in the same object; allowed is once")
    return raw


def _names(raw: Any, place: str, notes: Notes) -> tuple[str, ...]:
    listed = _list(raw, place, notes)
    for index, name in enumerate(listed):
        if not isinstance(name, str):
            notes.add(place, f"has {_shown(name)} as entry {index + 1}; allowed are names in quotation marks")
    return tuple(name for name in listed if isinstance(name, str))


def _names_or_null(raw: Any, place: str, notes: Notes) -> tuple[str, ...] | None:
    return None if raw is None else _names(raw, place, notes)


def _numbers(raw: Any, place: str, notes: Notes) -> tuple[Decimal, ...]:
    return tuple(_number(x, f"{place}[{i}]", notes) for i, x in enumerate(_list(raw, place, notes)))


def _by_name(raw: Any, place: str, notes: Notes) -> Mapping[str, Decimal]:
    pairs = _object(raw, place, notes)
    return MappingProxyType({k: _number(v, step(place, k), notes) for k, v in pairs.items()})


def _numbers_by_name(raw: Any, place: str, notes: Notes) -> Mapping[str, tuple[Decimal, ...]]:
    pairs = _object(raw, place, notes)
    return MappingProxyType({k: _numbers(v, step(place, k), notes) for k, v in pairs.items()})


def _entries(read: Read) -> Read:
    def read_all(raw: Any, place: str, notes: Notes) -> tuple[Any, ...]:
        return tuple(read(x, f"{place}[{i}]", notes) for i, x in enumerate(_list(raw, place, notes)))

    return read_all


# objects


def _values(raw: Any, place: str, keys: Mapping[str, Key], notes: Notes) -> dict[str, Any]:
    """The values of `keys` in the object `raw`, with everything unknown, missing or wrong noted."""
    pairs = _object(raw, place, notes)
    for name in pairs:
        if name not in keys:
            near = notes.found.nearest(name, keys)
            notes.add(step(place, name), f"is no key that can stand here{near}; allowed: {', '.join(keys)}")
    was_object = isinstance(raw, dict)
    return {
        name: _value(pairs, name, key, step(place, name), notes if was_object else Notes())
        for name, key in keys.items()
    }


def _value(pairs: Mapping[str, Any], name: str, key: Key, place: str, notes: Notes) -> Any:
    if name in pairs:
        return key.read(pairs[name], place, notes)
    if key.default is REQUIRED:
        notes.add(place, "is missing")
        return key.stand_in
    return key.default


def _made(kind: Callable[..., Any], keys: Mapping[str, Key]) -> Read:
    def read(raw: Any, place: str, notes: Notes) -> Any:
        return kind(**_values(raw, place, keys, notes))

    return read


_ZERO = Key(_number, ZERO)
_NAME = Key(_text, stand_in="")
_NUMBER = Key(_number, stand_in=ZERO)
_PEOPLE = Key(_names, stand_in=())
_IN_PHASES = Key(_names_or_null, None)
_BY_DAY = Key(_yes_or_no, False)
_SENSE = Key(_sense, Sense.AT_LEAST)

PHASE_KEYS = {"name": _NAME, "periods": Key(_number, ONE)}
SUPERVISION_KEYS = {"hours": _ZERO, "by": Key(_names, ())}
CATEGORY_KEYS = {
    "name": _NAME,
    "on_books": _ZERO,
    "at_least": _ZERO,
    "at_most": Key(_number_or_null, None),
    "least_if_any": _ZERO,
    "lot": Key(_number, ONE),
    "pay": _NUMBER,
    "join_cost": _ZERO,
    "leave_cost": _ZERO,
    "open_cost": _ZERO,
    "hours": _NUMBER,
    "absence": _ZERO,
    "overtime_hours": _ZERO,
    "overtime_rate": _ZERO,
    "settling_hours": _ZERO,
    "supervision": Key(_made(Supervision, SUPERVISION_KEYS), Supervision()),
    "output": Key(_by_name, MappingProxyType({})),
    "day_absence": Key(_number_or_null, None),
    "hours_note": Key(_text, ""),
}
WORK_KEYS = {
    "name": _NAME,
    "unit": Key(_text, "units"),
    "amounts": Key(_numbers, stand_in=()),
    "buy_in_price": Key(_number_or_null, None),
    "buy_in_most": Key(_number_or_null, None),
}
RULE_KEYS: Mapping[type[Rule], Mapping[str, Key]] = {
    Presence: {
        "name": _NAME,
        "weights": Key(_by_name, stand_in=MappingProxyType({})),
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
        values = _values(raw, place, {"kind": Key(_text), **RULE_KEYS[kind]}, notes)
        del values["kind"]
        return kind(**values)
    if isinstance(raw, dict):
        near = notes.found.nearest(named, _KINDS) if isinstance(named, str) else ""
        said = f"is {_shown(named)}" if "kind" in raw else "is missing"
        notes.add(f"{place}.kind", f"{said}; allowed is {_either(list(_KINDS))}{near}")
    else:
        _object(raw, place, notes)
    notes.unsound.add(place)
    return Budget(f"unreadable {place}", ZERO)


PLAN_KEYS = {
    "title": Key(_text, ""),
    "site": Key(_text, ""),
    "prepared_by": Key(_text, ""),
    "notes": Key(_text, ""),
    "currency": Key(_text, "EUR"),
    "period": Key(_text, "week"),
    "phases": Key(_entries(_made(Phase, PHASE_KEYS)), (Phase("Whole job"),)),
    "categories": Key(_entries(_made(Category, CATEGORY_KEYS)), ()),
    "works": Key(_entries(_made(Work, WORK_KEYS)), ()),
    "rules": Key(_entries(_rule), ()),
    "own": Key(_numbers_by_name, MappingProxyType({})),
}
_HEAD_KEYS = {"format": Key(_text, FORMAT), "version": Key(_number, ONE)}


# the whole document


def plan_from_document(document: Any) -> Plan:
    """The plan that `document` describes: dicts, lists, texts, bools, None, ints and Decimals.

    Raises UnreadableFile for another format or a newer version, PlanProblems with every problem listed.
    """
    notes = Notes()
    values = _values(_of_this_version(document), "", {**_HEAD_KEYS, **PLAN_KEYS}, notes)
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
        raise UnreadableFile(f"This is not a plan: it holds {_shown(document)} where a plan is expected.")
    if document.get("format", FORMAT) != FORMAT:
        raise UnreadableFile(
            f'This is not a plan: its "format" is {_shown(document["format"])}, expected is {quoted(FORMAT)}.'
        )
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
        says = f"is {_shown(raw)}; allowed is a whole number up to {VERSION}"
        raise PlanProblems((Problem("version", says),))
    if raw > VERSION:
        raise UnreadableFile(
            f"This plan was saved by a newer program: its version is {_shown(raw)}, this program reads "
            f"versions up to {VERSION}. Nothing was changed; please update the program."
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
