"""Every rule a plan must keep, each broken alone and reported at its own place."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings

from solver.plan import (
    Budget,
    Category,
    Phase,
    Plan,
    Presence,
    Ratio,
    Sense,
    Share,
    Supervision,
    Work,
)
from solver.review import review
from tests.solver.random_plans import FEATURES, random_plan
from tests.solver.strategies import plans

D = Decimal

LEAD = Category("Lead", D(900), D(38), output={"Planting": D(5)})
LEARNER = Category("Learner", D(600), D(38), supervision=Supervision(D(2), ("Lead",)))
WORK = Work("Planting", "trees", (D(100), D(0)), D("0.1234"), D(5))
PRESENCE = Presence("Tickets", {"Lead": D(1)}, Sense.AT_LEAST, D(1), ("One",))
RATIO = Ratio("Ratio", ("Learner",), ("Lead",), D(3))
SHARE = Share("Share", ("Lead",), ("Lead", "Learner"), Sense.EXACTLY, D("0.25"))
BUDGET = Budget("Budget", D("9999.99"))
GOOD = Plan(
    phases=(Phase("One"), Phase("Two", D("1.5"))),
    categories=(LEAD, LEARNER),
    works=(WORK,),
    rules=(PRESENCE, RATIO, SHARE, BUDGET),
    own={"Lead": (D(1), D(2))},
)


def found(plan: Plan) -> dict[str, str]:
    return {problem.place: problem.says for problem in review(plan)}


def with_lead(**changes: Any) -> Plan:
    return replace(GOOD, categories=(replace(LEAD, **changes), LEARNER))


def with_rule(index: int, **changes: Any) -> Plan:
    rules = list(GOOD.rules)
    rules[index] = replace(rules[index], **changes)
    return replace(GOOD, rules=tuple(rules))


def test_a_good_plan_has_no_problem() -> None:
    assert review(GOOD) == ()
    assert review(Plan()) == ()


@settings(max_examples=60, deadline=None)
@given(plans())
def test_drawn_plans_are_good(plan: Plan) -> None:
    assert review(plan) == ()


def test_random_plans_are_good_reproducible_and_boxed() -> None:
    for seed in range(100):
        plan = random_plan(np.random.default_rng(seed), boxed=True)
        assert review(plan) == ()
        assert plan == random_plan(np.random.default_rng(seed), boxed=True)
        assert all(c.at_most is not None and c.at_most <= 4 * c.lot for c in plan.categories)


def test_random_plans_keep_to_the_features_asked_for() -> None:
    for seed in range(50):
        plan = random_plan(np.random.default_rng(seed), features=frozenset({"ratio"}))
        assert {rule.kind for rule in plan.rules} <= {"ratio"}
        assert len(plan.phases) == 1
        assert all(c.lot == 1 and not c.supervision.by and c.at_most is None for c in plan.categories)
    with pytest.raises(ValueError, match="no such features"):
        random_plan(np.random.default_rng(0), features=FEATURES | {"magic"})


NUMBERS = [
    "on_books",
    "at_least",
    "at_most",
    "least_if_any",
    "lot",
    "pay",
    "join_cost",
    "leave_cost",
    "open_cost",
    "hours",
    "absence",
    "overtime_hours",
    "overtime_rate",
    "settling_hours",
    "day_absence",
]


@pytest.mark.parametrize("key", NUMBERS)
@pytest.mark.parametrize("value", ["-1", "NaN", "Infinity", "-Infinity", "1e13", "1e999", "1e-16"])
def test_category_numbers_are_finite_sized_and_not_negative(key: str, value: str) -> None:
    assert f"categories[0].{key}" in found(with_lead(**{key: D(value)}))


@pytest.mark.parametrize(
    ("changes", "place", "part"),
    [
        ({"lot": D(0)}, "lot", "more than 0"),
        ({"absence": D(1)}, "absence", "less than 1"),
        ({"day_absence": D("1.5")}, "day_absence", "less than 1"),
        ({"at_least": D(3), "at_most": D(2)}, "at_most", "less than at_least, which is 3"),
        ({"pay": D("9.005")}, "pay", "at most 2"),
        ({"join_cost": D("0.001")}, "join_cost", "at most 2"),
        ({"overtime_rate": D("0.00001")}, "overtime_rate", "at most 4"),
        ({"output": {"Planting": D(-1)}}, "output.Planting", "negative"),
        ({"output": {"Plantin": D(1)}}, "output", 'no work is called "Plantin"; did you mean "Planting"?'),
        ({"supervision": Supervision(D(2), ())}, "supervision.by", "name who gives them"),
        ({"supervision": Supervision(D(-2), ("Lead",))}, "supervision.hours", "negative"),
        ({"supervision": Supervision(D(2), ("Boss",))}, "supervision.by", 'no category is called "Boss"'),
        ({"supervision": Supervision(D(2), ("Lead", "Lead"))}, "supervision.by", "named twice"),
        ({"hours_note": "bell \a"}, "hours_note", "U+0007"),
    ],
)
def test_category(changes: dict[str, Any], place: str, part: str) -> None:
    says = found(with_lead(**changes))
    assert list(says) == [f"categories[0].{place}"]
    assert part in says[f"categories[0].{place}"]


@pytest.mark.parametrize(
    "changes",
    [
        {"pay": D("9.00500000") - D("0.005")},
        {"pay": D("1e12")},
        {"absence": D("0.999999999999999")},
        {"hours": D(0)},
        {"pay": D(0)},
        {"at_least": D(2), "at_most": D(2)},
        {"on_books": D("0.3")},
        {"supervision": Supervision(D(2), ("Lead", "Learner"))},
        {"overtime_rate": D("0.0001")},
    ],
)
def test_what_is_allowed_at_the_edge(changes: dict[str, Any]) -> None:
    assert review(with_lead(**changes)) == ()


@pytest.mark.parametrize(
    ("changes", "place", "part"),
    [
        ({"amounts": (D(1),)}, "amounts", "has 1 number; allowed is one per phase, which is 2"),
        ({"amounts": (D(1), D(-1))}, "amounts[1]", "negative"),
        ({"buy_in_price": D("0.00001")}, "buy_in_price", "at most 4"),
        ({"buy_in_most": D(-1)}, "buy_in_most", "negative"),
        ({"unit": "a\nb"}, "unit", "U+000A"),
    ],
)
def test_work(changes: dict[str, Any], place: str, part: str) -> None:
    says = found(replace(GOOD, works=(replace(WORK, **changes),)))
    assert list(says) == [f"works[0].{place}"]
    assert part in says[f"works[0].{place}"]


@pytest.mark.parametrize(
    ("index", "changes", "place", "part"),
    [
        (0, {"weights": {}}, "weights", "at least one"),
        (0, {"weights": {"Laed": D(1)}}, "weights", 'did you mean "Lead"?'),
        (0, {"weights": {"Lead": D(-1)}}, "weights.Lead", "negative"),
        (0, {"bound": D(-1)}, "bound", "negative"),
        (0, {"sense": "atleast"}, "sense", 'did you mean "at least"?'),
        (0, {"phases": ()}, "phases", "null for all"),
        (0, {"phases": ("Three",)}, "phases", 'no phase is called "Three"'),
        (0, {"phases": ("One", "One")}, "phases", "named twice"),
        (1, {"of": ()}, "of", "at least one category"),
        (1, {"per": ("Nobody",)}, "per", "no category"),
        (1, {"at_most": D(-1)}, "at_most", "negative"),
        (2, {"within": ()}, "within", "at least one category"),
        (2, {"fraction": D("1.01")}, "fraction", "0 to 1"),
        (2, {"fraction": D("-0.01")}, "fraction", "negative"),
        (3, {"at_most": D("0.001")}, "at_most", "at most 2"),
        (3, {"name": "Ratio"}, "name", "already the name of rules[1]"),
        (3, {"name": " "}, "name", "is empty"),
    ],
)
def test_rules(index: int, changes: dict[str, Any], place: str, part: str) -> None:
    says = found(with_rule(index, **changes))
    assert list(says) == [f"rules[{index}].{place}"]
    assert part in says[f"rules[{index}].{place}"]


@pytest.mark.parametrize(
    ("changes", "place", "part"),
    [
        ({"phases": ()}, "phases", "at least one phase"),
        ({"phases": (Phase("One"), Phase("Two", D(0)))}, "phases[1].periods", "more than 0"),
        ({"phases": (Phase("One"), Phase("One"))}, "phases[1].name", "already the name of phases[0]"),
        ({"title": "x" * 501}, "title", "501 characters"),
        ({"notes": "x" * 100_001}, "notes", "100,001 characters"),
        ({"notes": "\x00"}, "notes", "U+0000"),
        ({"site": "\ud800"}, "site", "U+D800"),
        ({"own": {"Lead": (D(1),)}}, "own.Lead", "one per phase"),
        ({"own": {"Led": (D(1), D(1))}}, "own", 'did you mean "Lead"?'),
        ({"own": {"Lead": (D(1), D(-1))}}, "own.Lead[1]", "negative"),
        ({"phases": tuple(Phase(str(i)) for i in range(1001))}, "phases", "allowed are 1,000"),
    ],
)
def test_plan(changes: dict[str, Any], place: str, part: str) -> None:
    says = found(replace(GOOD, **changes))
    assert part in says[place]


def test_notes_may_have_several_lines() -> None:
    assert review(replace(GOOD, notes="one\n\ttwo\r\n")) == ()


def test_twins_and_empty_names_are_refused_in_every_list() -> None:
    twins = replace(GOOD, categories=(LEAD, LEARNER, LEAD), works=(WORK, WORK))
    assert set(found(twins)) == {"categories[2].name", "works[1].name"}
    nameless = replace(GOOD, works=(WORK, replace(WORK, name="")))
    assert set(found(nameless)) == {"works[1].name"}


def test_odd_names_in_a_place_are_quoted() -> None:
    says = found(with_lead(output={"Planting": D(1), "Old town\n": D(1)}))
    assert says == {"categories[0].output": 'no work is called "Old town\\u000a"'}
    works = (WORK, replace(WORK, name="Old town"))
    says = found(replace(with_lead(output={"Old town": D(-1)}), works=works))
    assert list(says) == ['categories[0].output["Old town"]']
