from dataclasses import replace
from decimal import Decimal

import pytest

from desktop.document import Content, Document, Refusal
from solver.plan import Category, Plan
from solver.planfile import CannotSave, PlanProblems, UnreadableFile, read_plan

D = Decimal
PLAN = Plan(title="One", categories=(Category("Lead hand", D(980), D(38)),))


@pytest.fixture
def document(qapp):
    return Document(PLAN)


def test_an_edit_is_one_undo_step_with_its_text(document, qtbot):
    with qtbot.waitSignal(document.changed):
        document.edit("Change title", replace(PLAN, title="Two"))
    assert document.plan.title == "Two"
    assert document.undo_stack.undoText() == "Change title"
    document.undo_stack.undo()
    assert document.plan == PLAN
    document.undo_stack.redo()
    assert document.plan.title == "Two"


def test_an_edit_that_changes_nothing_is_no_step(document):
    document.edit("Change title", replace(PLAN, title="One"))
    assert document.undo_stack.count() == 0
    assert not document.modified


def test_steps_with_one_merge_key_are_undone_together(document):
    for title in ("T", "Tw", "Two"):
        document.edit("Change title", replace(PLAN, title=title), merge="title")
    document.edit("Change site", replace(document.plan, site="S"), merge="site")
    assert document.undo_stack.count() == 2
    document.undo_stack.undo()
    document.undo_stack.undo()
    assert document.plan == PLAN


def test_merging_back_to_the_start_leaves_no_step(document):
    document.edit("Change title", replace(PLAN, title="T"), merge="title")
    document.edit("Change title", PLAN, merge="title")
    assert document.undo_stack.count() == 0
    assert not document.modified
    assert document.plan == PLAN


def test_refused_entries_are_undone_too(document):
    place = ("categories", "Lead hand", "pay")
    document.edit("Type", PLAN, refused={place: Refusal("12o", "is not a number")})
    assert document.refused[place].text == "12o"
    document.undo_stack.undo()
    assert not document.refused
    document.undo_stack.redo()
    assert document.refused[place].reason == "is not a number"


def test_modified_until_saved_and_back_at_the_saved_state(document, tmp_path):
    path = tmp_path / "one.crew.json"
    document.edit("Change title", replace(PLAN, title="Two"))
    assert document.modified
    document.save(path)
    assert not document.modified
    assert document.path == path
    document.undo_stack.undo()
    assert document.modified
    document.undo_stack.redo()
    assert not document.modified
    assert read_plan(path).title == "Two"


def test_save_and_reopen_gives_the_same_plan(document, tmp_path):
    document.save(tmp_path / "one.crew.json")
    other = Document()
    other.open(tmp_path / "one.crew.json")
    assert other.plan == PLAN
    assert other.undo_stack.count() == 0


def test_a_file_that_cannot_be_read_leaves_everything_alone(document, tmp_path):
    bad = tmp_path / "bad.crew.json"
    bad.write_bytes(b'{"format": "full-complement/plan", "ver')
    document.edit("Change title", replace(PLAN, title="Two"))
    with pytest.raises(UnreadableFile, match=r"cut off|quotation mark"):
        document.open(bad)
    assert document.plan.title == "Two"
    assert document.undo_stack.count() == 1
    assert bad.read_bytes() == b'{"format": "full-complement/plan", "ver'


def test_a_plan_with_problems_opens_where_its_entries_can_be_shown(document, tmp_path):
    path = tmp_path / "negative.crew.json"
    path.write_text('{"categories": [{"name": "A", "pay": -5, "hours": 38}]}')
    document.open(path)
    assert document.plan.categories[0].pay == -5
    path.write_text('{"categories": [{"name": "A", "pay": "five", "hours": 38}]}')
    with pytest.raises(PlanProblems):
        document.open(path)


def test_saving_where_nothing_can_be_written_is_a_sentence(document, tmp_path):
    with pytest.raises(CannotSave, match="does not exist"):
        document.save(tmp_path / "gone" / "one.crew.json")
    assert document.path is None
    with pytest.raises(ValueError, match="needs a path"):
        document.save()


def test_a_recovered_plan_counts_as_unsaved(document, tmp_path):
    document.recover(Content(PLAN, {("a", "b", "c"): Refusal("x", "y")}), tmp_path / "x.crew.json")
    assert document.modified
    assert document.path == tmp_path / "x.crew.json"
