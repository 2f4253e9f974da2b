"""Reading the values of a document one by one, so that a single run shows every problem.

A value that cannot be read is noted with its place and replaced by a harmless stand-in.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from decimal import Decimal
from types import MappingProxyType
from typing import Any, Final

from solver.exact import ALLOWED_SIZE, typed_number
from solver.phrases import listed
from solver.plan import ONE, Plan, Sense
from solver.review import MOST_ENTRIES, Findings, quoted, review_into, step

MOST_INNER_ENTRIES = 1000  # of amounts, outputs, names in a rule


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
    too_long: bool = False

    def add(self, place: str, says: str) -> None:
        """Note that the value at `place` could not be read."""
        self.found.add(place, says)
        self.unsound.add(place)

    def review(self, plan: Plan) -> None:
        """Add what is wrong with the meaning of `plan`, leaving out whatever is only a stand-in."""
        if self.too_long:
            return
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


def shown(raw: Any) -> str:
    """How `raw` is shown in a sentence."""
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


def number(raw: Any, place: str, notes: Notes) -> Decimal:
    """An exact number; binary floats are refused, they are not what was typed."""
    if isinstance(raw, Decimal):
        return raw
    if isinstance(raw, int) and not isinstance(raw, bool):
        small = typed_number(str(raw)) if raw.bit_length() <= 60 else None
        if small is not None:
            return small
        raw = BadNumber("a huge whole number", f"cannot be used; {ALLOWED_SIZE}")
    if isinstance(raw, BadNumber):
        notes.add(place, f"{raw.text} {raw.why}")
    else:
        hint = " written without quotation marks" if isinstance(raw, str) else ""
        notes.add(place, f"is {shown(raw)}; allowed is a number{hint}")
    return ONE


def number_or_null(raw: Any, place: str, notes: Notes) -> Decimal | None:
    """A number, or null for none."""
    return None if raw is None else number(raw, place, notes)


def text(raw: Any, place: str, notes: Notes) -> str:
    """A text."""
    if isinstance(raw, str):
        return raw
    notes.add(place, f"is {shown(raw)}; allowed is a text in quotation marks")
    return ""


def yes_or_no(raw: Any, place: str, notes: Notes) -> bool:
    """true or false."""
    if isinstance(raw, bool):
        return raw
    notes.add(place, f"is {shown(raw)}; allowed is true or false")
    return False


def sense(raw: Any, place: str, notes: Notes) -> Sense:
    """The direction of a rule."""
    allowed = [s.value for s in Sense]
    if raw in allowed if isinstance(raw, str) else False:
        return Sense(raw)
    near = notes.found.nearest(raw, allowed) if isinstance(raw, str) else ""
    notes.add(place, f"is {shown(raw)}; allowed is {either(allowed)}{near}")
    return Sense.AT_LEAST


def either(texts: list[str]) -> str:
    """`"a", "b" or "c"`."""
    return listed([quoted(t) for t in texts], "or")


def _is_too_long(raw: Any, place: str, notes: Notes) -> bool:
    """Note a list or object beyond all sizes; it is then not looked into, so that it costs no time."""
    most = MOST_ENTRIES.get(place, MOST_INNER_ENTRIES)
    if len(raw) > most:
        notes.add(place or "plan", f"has {len(raw):,} entries; allowed are {most:,}")
        notes.too_long = True
        return True
    return False


def entries_of(raw: Any, place: str, notes: Notes) -> list[Any]:
    """The entries of a list."""
    if isinstance(raw, list | tuple):
        return [] if _is_too_long(raw, place, notes) else list(raw)
    notes.add(place, f"is {shown(raw)}; allowed is a list in square brackets")
    return []


def pairs_of(raw: Any, place: str, notes: Notes) -> Mapping[str, Any]:
    """The pairs of an object, repeated keys noted."""
    if not isinstance(raw, dict) or not all(isinstance(key, str) for key in raw):
        notes.add(place, f"is {shown(raw)}; allowed is an object in curly brackets")
        return {}
    if _is_too_long(raw, place, notes):
        return {}
    for key in getattr(raw, "repeated", ()):
        notes.add(step(place, key), "stands more than once in the same object; allowed is once")
    return raw


def names(raw: Any, place: str, notes: Notes) -> tuple[str, ...]:
    """A list of names."""
    listed = entries_of(raw, place, notes)
    for index, name in enumerate(listed):
        if not isinstance(name, str):
            notes.add(place, f"has {shown(name)} as entry {index + 1}; allowed are names in quotation marks")
    return tuple(name for name in listed if isinstance(name, str))


def names_or_null(raw: Any, place: str, notes: Notes) -> tuple[str, ...] | None:
    """A list of names, or null for all."""
    return None if raw is None else names(raw, place, notes)


def numbers(raw: Any, place: str, notes: Notes) -> tuple[Decimal, ...]:
    """A list of numbers."""
    return tuple(number(x, f"{place}[{i}]", notes) for i, x in enumerate(entries_of(raw, place, notes)))


def numbers_for(raw: Any, place: str, notes: Notes) -> Mapping[str, Decimal]:
    """One number for each name."""
    pairs = pairs_of(raw, place, notes)
    return MappingProxyType({k: number(v, step(place, k), notes) for k, v in pairs.items()})


def lists_for(raw: Any, place: str, notes: Notes) -> Mapping[str, tuple[Decimal, ...]]:
    """One list of numbers for each name."""
    pairs = pairs_of(raw, place, notes)
    return MappingProxyType({k: numbers(v, step(place, k), notes) for k, v in pairs.items()})


def list_of(read: Read) -> Read:
    """A reader of lists whose entries `read` reads."""

    def read_all(raw: Any, place: str, notes: Notes) -> tuple[Any, ...]:
        return tuple(read(x, f"{place}[{i}]", notes) for i, x in enumerate(entries_of(raw, place, notes)))

    return read_all


# objects


def values_of(raw: Any, place: str, keys: Mapping[str, Key], notes: Notes) -> dict[str, Any]:
    """The values of `keys` in the object `raw`, with everything unknown, missing or wrong noted."""
    pairs = pairs_of(raw, place, notes)
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


def object_of(kind: Callable[..., Any], keys: Mapping[str, Key]) -> Read:
    """A reader of objects with `keys`, given to `kind` as keywords."""

    def read(raw: Any, place: str, notes: Notes) -> Any:
        return kind(**values_of(raw, place, keys, notes))

    return read
