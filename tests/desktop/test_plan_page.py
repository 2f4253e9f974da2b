from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from desktop.answers import Answers, Status
from desktop.document import Document
from desktop.pages.plan_page import PlanPage
from desktop.tables.category_table import HOURS, LIMITS, MOVES
from solver.review import Problem
from tests.desktop import samples

D = Decimal


@pytest.fixture
def made(qtbot):
    document = Document(samples.hillside_plan())
    answers = Answers(document)
    page = PlanPage(document, answers)
    qtbot.addWidget(page)
    page.resize(1210, 620)
    with qtbot.waitActive(page):
        page.show()
        page.activateWindow()
    return document, answers, page


def test_texts_are_written_as_typed_in_one_undo_step(made):
    document, _, page = made
    line = page.fields.line("title")
    line.clear()
    QTest.keyClicks(line, "North slope")
    assert document.plan.title == "North slope"
    document.undo_stack.undo()
    assert document.plan == samples.hillside_plan()
    assert line.text() == "Hillside after the storm"


def test_the_length_of_a_job_without_phases(made):
    document, _, page = made
    page.fields.length.setText("10,5")
    page.fields.length.editingFinished.emit()
    assert document.plan.phases[0].periods == D("10.5")
    page.fields.length.setText("0")
    page.fields.length.editingFinished.emit()
    assert document.plan.phases[0].periods == D("10.5")
    assert page.fields.length_label.text() == "✗ Length, weeks"
    assert "more than 0" in page.fields.length.toolTip()
    document.undo_stack.undo()
    assert page.fields.length.text() == "8"


def test_phases_show_when_there_are_several(made):
    document, _, page = made
    assert not page.phases.isVisible()
    assert page.fields.length.isVisible()
    page.add_phase()
    assert page.phases.isVisible()
    assert not page.fields.length.isVisible()
    titles = [c.title for c in page.works.model().columns]
    assert titles[:4] == ["Work", "Unit", "Whole job", "Phase 1"]
    document.undo_stack.undo()
    assert not page.phases.isVisible()
    assert "Amount" in [c.title for c in page.works.model().columns]


def test_more_columns_are_shown_on_demand_and_remembered(made, qtbot):
    document, answers, page = made
    columns = lambda: [c.key for c in page.categories_model.columns]  # noqa: E731
    assert "lot" not in columns()
    page._group_buttons[LIMITS].click()
    assert columns()[2:6] == ["at_least", "at_most", "least_if_any", "lot"]
    again = PlanPage(document, answers)
    qtbot.addWidget(again)
    assert "lot" in [c.key for c in again.categories_model.columns]
    page._group_buttons[LIMITS].click()
    assert "lot" not in columns()


def test_hidden_columns_that_hold_something_are_marked(made):
    document, _, page = made
    texts = {key: button.text() for key, button in page._group_buttons.items()}
    assert texts[LIMITS].endswith("•")  # the fencing gang comes in lots of four
    assert texts[MOVES].endswith("•")
    assert not texts[HOURS].endswith("•")
    plain = tuple(replace(c, lot=D(1), join_cost=D(0)) for c in document.plan.categories)
    document.edit("x", replace(document.plan, categories=plain))
    assert not page._group_buttons[LIMITS].text().endswith("•")


@pytest.mark.parametrize(
    ("place", "where"),
    [
        ("categories[1].pay", lambda page: page.categories),
        ("categories[3].lot", lambda page: page.categories),
        ("works[0].unit", lambda page: page.works),
        ("rules[1].bound", lambda page: page.rules),
        ("currency", lambda page: page.fields.line("currency")),
        ("phases[0].periods", lambda page: page.fields.length),
    ],
)
def test_going_to_a_problem_opens_and_focuses_its_place(place, where, made):
    _, _, page = made
    page.show_place(place)
    assert where(page).hasFocus()


def test_problems_are_marked_in_their_cells(made):
    _, answers, page = made
    answers._set(Status.PROBLEMS, (Problem("works[0].unit", "is odd"),))
    model = page.works.model()
    assert model.index(0, 1).data() == "! trees"
    answers._set(Status.SOLVING)
    assert model.index(0, 1).data() == "trees"


def test_nothing_scrolls_sideways_at_the_size_of_a_small_laptop(made):
    _, _, page = made
    for view in (page.categories, page.works, page.rules):
        assert view.horizontalScrollBar().maximum() == 0


def test_notes_are_written_with_the_plan(made):
    document, _, page = made
    QTest.keyClicks(page.fields.notes, "Two lines")
    assert document.plan.notes == "Two lines"
    document.undo_stack.undo()
    assert page.fields.notes.toPlainText() == ""


def test_views_have_names_for_screen_readers(made):
    _, _, page = made
    names = [view.accessibleName() for view in (page.categories, page.works, page.phases, page.rules)]
    assert names == ["Categories", "Works", "Phases", "Rules"]
    assert page.fields.line("currency").accessibleName() == "Currency"
    assert Qt.FocusPolicy.TabFocus in page.categories.focusPolicy()
