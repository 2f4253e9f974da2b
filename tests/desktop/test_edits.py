from decimal import Decimal

import pytest

from desktop.edits import categories, phases, rules, works
from desktop.edits.sequences import first_free, fresh_name, moved
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

D = Decimal


@pytest.fixture
def plan():
    return Plan(
        phases=(Phase("Early", D(2)), Phase("Late", D(3))),
        categories=(
            Category("A", D(1), D(38), absence=D("0.1")),
            Category("B", D(2), D(40), supervision=Supervision(D(6), ("A",)), output={"W": D(3)}),
            Category("C", D(3), D(40), supervision=Supervision(D(1), ("A", "B"))),
        ),
        works=(Work("W", "m", (D(10), D(20))), Work("V", "t", (D(0), D(5)))),
        rules=(
            Presence("P", {"A": D(1), "B": D(2)}, Sense.AT_LEAST, D(1), ("Early",)),
            Ratio("R", ("B",), ("A",), D(3)),
            Share("S", ("C",), ("A", "B", "C"), Sense.AT_MOST, D("0.5"), ("Early", "Late")),
            Budget("M", D(100)),
        ),
        own={"A": (D(1), D(2)), "B": (D(3), D(4))},
    )


def test_renaming_a_category_reaches_every_place(plan):
    after = categories.rename(plan, "A", "Lead")
    assert after.categories[0].name == "Lead"
    assert after.categories[1].supervision.by == ("Lead",)
    assert dict(after.rules[0].weights) == {"Lead": 1, "B": 2}
    assert after.rules[1].per == ("Lead",)
    assert after.rules[2].within == ("Lead", "B", "C")
    assert list(after.own) == ["Lead", "B"]
    assert categories.rename(after, "Lead", "A") == plan


def test_deleting_a_category_takes_it_out_of_everything(plan):
    assert categories.uses(plan, [0]) == (("P", "S"), ("R",), ("B",))
    after = categories.delete(plan, [0])
    assert [c.name for c in after.categories] == ["B", "C"]
    assert after.categories[0].supervision == Supervision()
    assert after.categories[1].supervision == Supervision(D(1), ("B",))
    assert [r.name for r in after.rules] == ["P", "S", "M"]
    assert dict(after.own) == {"B": (3, 4)}
    assert categories.uses(plan, [2]) == ((), ("S",), ())


def test_a_new_category_is_like_the_one_above_and_delivers_nothing(plan):
    after = categories.insert(plan, 1, 2)
    assert [c.name for c in after.categories] == ["A", "Category 1", "Category 2", "B", "C"]
    new = after.categories[1]
    assert (new.pay, new.hours, new.absence, dict(new.output)) == (1, 38, D("0.1"), {})


def test_a_copied_category_has_a_name_of_its_own(plan):
    after = categories.duplicate(plan, [0, 1])
    assert [c.name for c in after.categories] == ["A", "B", "A 2", "B 2", "C"]
    assert after.categories[3].output == plan.categories[1].output


def test_works_are_renamed_copied_and_deleted_with_their_outputs(plan):
    assert dict(works.rename(plan, "W", "X").categories[1].output) == {"X": 3}
    copied = works.duplicate(plan, [0])
    assert [w.name for w in copied.works] == ["W", "W 2", "V"]
    assert dict(copied.categories[1].output) == {"W": 3, "W 2": 3}
    assert works.uses(plan, [0]) == ("B",)
    assert dict(works.delete(plan, [0]).categories[1].output) == {}
    assert works.insert(plan, 2).works[2] == Work("Work 1", "t", (D(0), D(0)))


def test_amounts_and_the_own_crew_follow_the_phases(plan):
    added = phases.insert(plan, 1)
    assert [p.name for p in added.phases] == ["Early", "Phase 1", "Late"]
    assert added.works[0].amounts == (10, 0, 20)
    assert added.own["A"] == (1, 1, 2)
    swapped = phases.move(plan, [0], 1)
    assert swapped.works[0].amounts == (20, 10)
    assert swapped.own["B"] == (4, 3)
    copied = phases.duplicate(plan, [0])
    assert copied.works[0].amounts == (10, 10, 20)


def test_a_deleted_phase_takes_its_rules_along(plan):
    assert phases.uses(plan, [0]) == (("W",), ("P",))
    after = phases.delete(plan, [0])
    assert [r.name for r in after.rules] == ["R", "S", "M"]
    assert after.rules[1].phases == ("Late",)
    assert after.works[1].amounts == (5,)
    assert phases.delete(plan, [0, 1]) == plan
    assert phases.rename(plan, "Early", "First").rules[0].phases == ("First",)


def test_rules_are_added_copied_moved_and_deleted(plan):
    after = rules.add(plan, rules.new_budget(plan))
    assert after.rules[-1].name == "Budget"
    assert rules.add(after, rules.new_budget(plan)).rules[-1].name == "Budget 2"
    assert [r.name for r in rules.duplicate(plan, [0, 2]).rules] == ["P", "R", "S", "P 2", "S 2", "M"]
    assert [r.name for r in rules.move(plan, [3], -1).rules] == ["P", "R", "M", "S"]
    assert [r.name for r in rules.delete(plan, [0, 3]).rules] == ["R", "S"]


@pytest.mark.parametrize(
    ("indices", "by", "result"),
    [([0], -1, "abcd"), ([1, 2], -1, "bcad"), ([1, 2], 1, "adbc"), ([3], 1, "abcd")],
)
def test_moving(indices, by, result):
    assert "".join(moved("abcd", indices, by)) == result


def test_names_that_nobody_has():
    assert fresh_name("Hand 2", {"Hand 2", "Hand"}) == "Hand 3"
    assert first_free("Work", {"Work 1"}) == "Work 2"
