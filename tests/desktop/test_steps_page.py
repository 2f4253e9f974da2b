from dataclasses import replace
from math import isnan

import pytest
from PySide6.QtCore import Qt

from desktop import question_words as say
from desktop.pages.steps_page import StepsPage, typed_amount
from desktop.pictures.stairs import cost_at, floor_at, holds_sentence, point_path, stair_path, step_at
from desktop.tables.numbers import Refused
from solver.answer import FloorPoint, RoundedPoint, Step
from tests.desktop import samples
from tests.desktop.detail_samples import steps_detail
from tests.desktop.test_question_pages import make as make

NB = "\u00a0"


@pytest.fixture
def page(make):
    page, _, answers = make(StepsPage)
    answers.give("steps", steps_detail())
    yield page
    page.close()


def test_the_first_work_is_asked_over_half_to_twice_today(make):
    page, _, answers = make(StepsPage)
    assert answers.asked == [("steps", {"work": "Planting", "from": 26000.0, "to": 104000.0})]
    page.work.setCurrentIndex(0)
    assert page.options() == {"work": None, "from": 50.0, "to": 200.0}
    page.close()


def test_reading_the_staircase():
    steps = steps_detail()
    assert step_at(steps.steps, 53400) == 3
    assert step_at(steps.steps, 53401) == 4
    assert step_at(steps.steps, 25000) is None
    assert cost_at(steps.steps, 52000) == 97000
    assert cost_at(steps.steps, 59700) == pytest.approx(106000 + 750)
    assert cost_at(steps.steps, 1) is None
    assert floor_at(steps.floor, 26000) == 64000
    xs, ys = stair_path(steps.steps)
    assert len(xs) == len(ys) == 2 * len(steps.steps)
    assert xs == sorted(xs)


def test_a_bend_within_a_step_and_a_gap_in_the_rounding():
    bent = Step(0, 10, samples.crew(1, 1, 1, 1, 0), 40, 10, tuple(map(FloorPoint, (0, 6, 10), (10, 10, 40))))
    assert cost_at((bent,), 5) == 10
    assert cost_at((bent,), 8) == pytest.approx(25)
    assert stair_path((bent,)) == ([0, 6, 10], [10, 10, 40])
    xs, ys = point_path((RoundedPoint(1, 20.0), RoundedPoint(2, None), RoundedPoint(3, 30.0)))
    assert xs == [1, 2, 3]
    assert ys[0] == 20
    assert isnan(ys[1])


def test_how_long_a_crew_holds(qapp):
    plan, steps = samples.hillside_plan(), steps_detail()
    assert holds_sentence(plan, steps, 52000) == (
        f"Holds up to 53,400{NB}trees; then +1{NB}Contract hand, for EUR{NB}9,000 more."
    )
    assert "end of the range" in holds_sentence(plan, steps, 104000)


def test_the_page_starts_at_todays_workload(page):
    assert page.picture.amount == 52000
    assert page.sentence.text().startswith(f"At 52,000{NB}trees: 3{NB}Lead hand")
    assert page.view.currentIndex().row() == 3
    assert page.table.index(4, 4).data() == f"+1{NB}Contract hand"
    assert page.accuracy.text() == say.STEPS_UNPROVED


def test_the_workload_moves_by_keyboard(page, qtbot):
    page.picture.setFocus()
    qtbot.keyClick(page.picture, Qt.Key.Key_Up)
    assert page.picture.amount == 53400
    qtbot.keyClick(page.picture, Qt.Key.Key_Right)
    assert page.picture.amount == pytest.approx(53400 + 780)
    assert page.view.currentIndex().row() == 4
    qtbot.keyClick(page.picture, Qt.Key.Key_End)
    assert page.picture.amount == 104000
    qtbot.keyClick(page.picture, Qt.Key.Key_Right)
    assert page.picture.amount == 104000


def test_the_workload_is_typed(page, qtbot):
    page.amount.setText("60 000")
    qtbot.keyClick(page.amount, Qt.Key.Key_Return)
    assert page.picture.amount == 60000
    page.amount.setText("lots")
    qtbot.keyClick(page.amount, Qt.Key.Key_Return)
    assert page.amount.text() == "lots"
    assert "lots" in page.sentence.text()
    assert page.picture.amount == 60000


def test_a_range_that_no_crew_serves_is_told(page, qtbot):
    none = replace(steps_detail(), steps=(), ends="No crew does even the smallest workload.")
    page.answers.give("steps", none)
    assert page.sentence.text() == say.BEYOND_STEPS
    assert none.ends in page.accuracy.text()
    page.amount.setText("60000")
    qtbot.keyClick(page.amount, Qt.Key.Key_Return)
    assert page.sentence.text() == say.BEYOND_STEPS


def test_a_range_must_begin_below_its_end(page, qtbot):
    asked = len(page.answers.asked)
    page.low.setValue(250)
    qtbot.waitUntil(lambda: page.sentence.text() == say.NO_RANGE)
    assert len(page.answers.asked) == asked


def test_thousands_are_understood_where_only_they_make_sense():
    steps = steps_detail()
    assert typed_amount("52,000", steps) == 52000
    assert typed_amount("52.000 trees", steps) == 52000
    assert typed_amount("52000", steps) == 52000
    with pytest.raises(Refused):
        typed_amount("", steps)


def test_the_marker_is_dragged(page):
    page.picture._marker.setValue(30000)
    assert page.picture.amount == 30000
    page.picture._marker.setValue(1)
    assert page.picture.amount == 26000


def test_the_staircase_has_words_and_a_table(page):
    assert page.picture.accessibleName() == "Cost over workload"
    assert "7 steps" in page.picture.accessibleDescription()
    assert page.picture.rows()[1][0] == f"26,000{NB}trees"
    assert len(page.picture.rows()) == 8
