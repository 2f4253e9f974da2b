"""What is wrong with a plan: every problem at once, each with its place in the file."""

from __future__ import annotations

import difflib
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from decimal import Decimal

from solver.exact import ALLOWED_SIZE, decimals, has_allowed_size
from solver.phrases import counted
from solver.plan import Budget, Category, Plan, Presence, Ratio, Rule, Sense, Share, Work

MOST_LISTED = 500
MOST_SUGGESTIONS = 25  # looking for a near name costs time, so a hostile file gets no more of them
LONGEST_NAME = 500
LONGEST_NOTE = 100_000
MOST_ENTRIES = {"phases": 1000, "categories": 1000, "works": 1000, "rules": 5000}

MONEY_DECIMALS = 2
RATE_DECIMALS = 4


@dataclass(frozen=True)
class Problem:
    """One thing that keeps a plan from being answered: where it is, and what is allowed there."""

    place: str
    says: str

    def __str__(self) -> str:
        return f"{self.place}: {self.says}"


class PlanProblems(Exception):
    """A plan that cannot be answered as it stands.

    `plan` is the plan as typed where every entry could be read and only its meaning is at fault (so a
    window can open it and show what to mend); None where something could not be read.
    """

    def __init__(self, problems: tuple[Problem, ...], plan: Plan | None = None) -> None:
        super().__init__("\n".join(str(problem) for problem in problems))
        self.problems = problems
        self.plan = plan


@dataclass
class Findings:
    """Problems as they are found; the first 500 are kept, the rest counted."""

    problems: list[Problem] = field(default_factory=list)
    unlisted: int = 0
    suggestions: int = 0

    def add(self, place: str, says: str) -> None:
        """Note one problem."""
        if len(self.problems) < MOST_LISTED:
            self.problems.append(Problem(place, says))
        else:
            self.unlisted += 1

    def nearest(self, name: str, known: Iterable[str]) -> str:
        """`; did you mean "Foreman"?` where a known name is near, else nothing."""
        if self.suggestions >= MOST_SUGGESTIONS or len(name) > LONGEST_NAME:
            return ""
        self.suggestions += 1
        folded = {k.casefold().strip(): k for k in known if len(k) <= LONGEST_NAME}
        near = difflib.get_close_matches(name.casefold().strip(), folded, n=1, cutoff=0.6)
        return f"; did you mean {quoted(folded[near[0]])}?" if near else ""

    def listed(self) -> tuple[Problem, ...]:
        """Everything noted, with a last entry that counts what was not kept."""
        if not self.unlisted:
            return tuple(self.problems)
        return (*self.problems, Problem("plan", f"has {self.unlisted:,} more problems that are not listed"))


def quoted(text: str) -> str:
    """`text` in double quotes, shortened and with control characters made visible."""
    short = text if len(text) <= 60 else text[:57] + "..."
    return '"' + "".join(c if c.isprintable() else f"\\u{ord(c):04x}" for c in short) + '"'


def step(place: str, key: str) -> str:
    """The place of `key` inside the object at `place`."""
    if key.isidentifier():
        return f"{place}.{key}" if place else key
    return f"{place}[{quoted(key)}]"


def review(plan: Plan) -> tuple[Problem, ...]:
    """Every problem of `plan`, in the order of the file; empty if it can be answered."""
    found = Findings()
    review_into(plan, found)
    return found.listed()


def review_into(plan: Plan, found: Findings) -> None:
    """Add every problem of `plan` to `found`; of a plan beyond all sizes only that it is."""
    if not _sizes(plan, found):
        return
    scope = Scope(
        {c.name: c for c in plan.categories},
        {w.name: w for w in plan.works},
        {p.name: p for p in plan.phases},
    )
    for key in ("title", "site", "prepared_by", "currency", "period"):
        _line_of_text(getattr(plan, key), key, found)
    _note(plan.notes, "notes", found)
    _phases(plan, found)
    for key in ("categories", "works", "rules"):
        _names([entry.name for entry in getattr(plan, key)], key, found)
    for index, category in enumerate(plan.categories):
        _category(category, f"categories[{index}]", scope, found)
    for index, work in enumerate(plan.works):
        _work(work, f"works[{index}]", len(plan.phases), found)
    for index, rule in enumerate(plan.rules):
        _RULES[type(rule)](rule, f"rules[{index}]", scope, found)
    _own(plan, scope, found)


@dataclass(frozen=True)
class Scope:
    """The names that can be referred to."""

    categories: Mapping[str, object]
    works: Mapping[str, object]
    phases: Mapping[str, object]


def _sizes(plan: Plan, found: Findings) -> bool:
    usable = True
    for key, most in MOST_ENTRIES.items():
        count = len(getattr(plan, key))
        if count > most:
            found.add(key, f"has {count:,} entries; allowed are {most:,}")
            usable = False
    return usable


# texts


def _characters(text: str, place: str, allowed: str, found: Findings) -> None:
    bad = next((c for c in text if not (c.isprintable() or c in allowed) and _is_control(c)), None)
    if bad is not None:
        found.add(place, f"{quoted(text)} holds the control character U+{ord(bad):04X}, which is not allowed")


def _is_control(character: str) -> bool:
    code = ord(character)
    return code < 0x20 or 0x7F <= code < 0xA0 or code in (0x2028, 0x2029) or 0xD800 <= code < 0xE000


def _line_of_text(text: str, place: str, found: Findings) -> None:
    if len(text) > LONGEST_NAME:
        found.add(place, f"is {len(text):,} characters long; allowed are {LONGEST_NAME}")
    _characters(text, place, "", found)


def _note(text: str, place: str, found: Findings) -> None:
    if len(text) > LONGEST_NOTE:
        found.add(place, f"is {len(text):,} characters long; allowed are {LONGEST_NOTE:,}")
    _characters(text, place, "\n\t\r", found)


def _names(names: Sequence[str], place: str, found: Findings) -> None:
    first: dict[str, int] = {}
    for index, name in enumerate(names):
        here = f"{place}[{index}].name"
        if not name.strip():
            found.add(here, "is empty; every entry needs a name of its own")
            continue
        _line_of_text(name, here, found)
        before = first.setdefault(name, index)
        if before != index:
            found.add(here, f"{quoted(name)} is already the name of {place}[{before}]")


# numbers


def _number(number: Decimal, place: str, found: Findings) -> bool:
    """Note a number that is negative or of no usable size; True if it is neither."""
    if not has_allowed_size(number):
        shown = format(number, ".3e") if number.is_finite() else str(number)
        found.add(place, f"{shown} cannot be used; {ALLOWED_SIZE}")
        return False
    if number < 0:
        found.add(place, f"{number} is negative; allowed is 0 or more")
        return False
    return True


def _few_decimals(number: Decimal, most: int, place: str, found: Findings) -> None:
    if _number(number, place, found) and decimals(number) > most:
        found.add(place, f"{number} has more than {most} decimals; allowed are at most {most}")


def _money(number: Decimal, place: str, found: Findings) -> None:
    _few_decimals(number, MONEY_DECIMALS, place, found)


def _rate(number: Decimal, place: str, found: Findings) -> None:
    _few_decimals(number, RATE_DECIMALS, place, found)


def _positive(number: Decimal, place: str, found: Findings) -> None:
    if _number(number, place, found) and number == 0:
        found.add(place, f"{number} is not allowed; it must be more than 0")


def _part(number: Decimal, place: str, found: Findings) -> None:
    if _number(number, place, found) and number >= 1:
        found.add(place, f"{number} is not a share; allowed is 0 or more and less than 1 (5 % is 0.05)")


def _fraction(number: Decimal, place: str, found: Findings) -> None:
    if _number(number, place, found) and number > 1:
        found.add(place, f"{number} is not a fraction; allowed is 0 to 1 (25 % is 0.25)")


_CATEGORY_NUMBERS: Mapping[str, Callable[[Decimal, str, Findings], object]] = {
    "on_books": _number,
    "at_least": _number,
    "at_most": _number,
    "least_if_any": _number,
    "lot": _positive,
    "pay": _money,
    "join_cost": _money,
    "leave_cost": _money,
    "open_cost": _money,
    "hours": _number,
    "absence": _part,
    "overtime_hours": _number,
    "overtime_rate": _rate,
    "settling_hours": _number,
    "day_absence": _part,
}


# names that are used


def _known(name: str, known: Mapping[str, object], noun: str, place: str, found: Findings) -> bool:
    if name in known:
        return True
    found.add(place, f"no {noun} is called {quoted(name)}{found.nearest(name, known)}")
    return False


def _references(
    names: Iterable[str], known: Mapping[str, object], noun: str, place: str, found: Findings
) -> None:
    seen: set[str] = set()
    for name in names:
        if name in seen:
            found.add(place, f"{quoted(name)} is named twice")
        elif _known(name, known, noun, place, found):
            seen.add(name)


# the parts of a plan


def _phases(plan: Plan, found: Findings) -> None:
    if not plan.phases:
        found.add("phases", "is empty; a plan has at least one phase")
    _names([phase.name for phase in plan.phases], "phases", found)
    for index, phase in enumerate(plan.phases):
        _positive(phase.periods, f"phases[{index}].periods", found)


def _category(category: Category, place: str, scope: Scope, found: Findings) -> None:
    for key, check in _CATEGORY_NUMBERS.items():
        number = getattr(category, key)
        if number is not None:
            check(number, f"{place}.{key}", found)
    most = category.at_most
    if most is not None and not most.is_nan() and not category.at_least.is_nan() and most < category.at_least:
        found.add(f"{place}.at_most", f"{most} is less than at_least, which is {category.at_least}")
    _supervision(category, f"{place}.supervision", scope, found)
    for name, output in category.output.items():
        if _known(name, scope.works, "work", f"{place}.output", found):
            _number(output, step(f"{place}.output", name), found)
    _note(category.hours_note, f"{place}.hours_note", found)


def _supervision(category: Category, place: str, scope: Scope, found: Findings) -> None:
    asked = category.supervision
    usable = _number(asked.hours, f"{place}.hours", found)
    if usable and asked.hours > 0 and not asked.by:
        found.add(f"{place}.by", f"is empty, but {asked.hours} hours are asked for; name who gives them")
    _references(asked.by, scope.categories, "category", f"{place}.by", found)


def _work(work: Work, place: str, phases: int, found: Findings) -> None:
    _line_of_text(work.unit, f"{place}.unit", found)
    _one_per_phase(work.amounts, f"{place}.amounts", phases, found)
    if work.buy_in_price is not None:
        _rate(work.buy_in_price, f"{place}.buy_in_price", found)
    if work.buy_in_most is not None:
        _number(work.buy_in_most, f"{place}.buy_in_most", found)


def _one_per_phase(numbers: Sequence[Decimal], place: str, phases: int, found: Findings) -> None:
    if len(numbers) != phases:
        found.add(
            place, f"has {counted(len(numbers), 'number')}; allowed is one per phase, which is {phases}"
        )
    for index, number in enumerate(numbers):
        _number(number, f"{place}[{index}]", found)


def _rule_phases(phases: tuple[str, ...] | None, place: str, scope: Scope, found: Findings) -> None:
    if phases is None:
        return
    if not phases:
        found.add(f"{place}.phases", "is empty; name the phases the rule holds in, or null for all of them")
    _references(phases, scope.phases, "phase", f"{place}.phases", found)


def _people(names: tuple[str, ...], place: str, scope: Scope, found: Findings) -> None:
    if not names:
        found.add(place, "is empty; name at least one category")
    _references(names, scope.categories, "category", place, found)


def _presence(rule: Presence, place: str, scope: Scope, found: Findings) -> None:
    if not rule.weights:
        found.add(f"{place}.weights", "is empty; give at least one category a weight")
    for name, weight in rule.weights.items():
        if _known(name, scope.categories, "category", f"{place}.weights", found):
            _number(weight, step(f"{place}.weights", name), found)
    _sense(rule.sense, place, found)
    _number(rule.bound, f"{place}.bound", found)
    _rule_phases(rule.phases, place, scope, found)


def _ratio(rule: Ratio, place: str, scope: Scope, found: Findings) -> None:
    _people(rule.of, f"{place}.of", scope, found)
    _people(rule.per, f"{place}.per", scope, found)
    _number(rule.at_most, f"{place}.at_most", found)
    _rule_phases(rule.phases, place, scope, found)


def _share(rule: Share, place: str, scope: Scope, found: Findings) -> None:
    _people(rule.of, f"{place}.of", scope, found)
    _people(rule.within, f"{place}.within", scope, found)
    _sense(rule.sense, place, found)
    _fraction(rule.fraction, f"{place}.fraction", found)
    _rule_phases(rule.phases, place, scope, found)


def _budget(rule: Budget, place: str, _scope: Scope, found: Findings) -> None:
    _money(rule.at_most, f"{place}.at_most", found)


def _sense(sense: str, place: str, found: Findings) -> None:
    allowed = [s.value for s in Sense]
    if sense not in allowed:
        listed = ", ".join(quoted(s) for s in allowed)
        found.add(
            f"{place}.sense", f"{quoted(sense)} is no sense{found.nearest(sense, allowed)}; allowed: {listed}"
        )


_RULES: Mapping[type[Rule], Callable[..., None]] = {
    Presence: _presence,
    Ratio: _ratio,
    Share: _share,
    Budget: _budget,
}


def _own(plan: Plan, scope: Scope, found: Findings) -> None:
    for name, counts in plan.own.items():
        if _known(name, scope.categories, "category", "own", found):
            _one_per_phase(counts, step("own", name), len(plan.phases), found)
