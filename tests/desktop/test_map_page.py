from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import QPointF, QRectF, QSizeF, Qt

from desktop import theme
from desktop.pages.map_page import MapPage, named_spots
from desktop.pictures.crew_map import CrewMap
from desktop.pictures.crew_spots import CrewSpots, Spot, SpotKind, nearest_spot, next_spot, spot_sentence
from desktop.pictures.name_places import Name, placed
from solver.mapanswer import CrewMap as MapAnswer
from solver.mapanswer import MapPoint
from tests.desktop import samples
from tests.desktop.test_question_pages import make as make
from tests.desktop.test_question_pages import turn_impossible

NB = "\u00a0"


def mapped(across="Contract hand", up="Fencing gang", phase="Whole job"):
    """A hand-made map: crews of at least 15 heads are workable."""
    points = tuple(
        MapPoint(x, y, x + y >= 15, 1000.0 * (x + y), ())
        if x + y >= 15
        else MapPoint(x, y, False, None, ("Planting",))
        for y in range(4, 12)
        for x in range(5, 14)
    )
    polygon = ((7, 8), (15, 0), (15, 14), (1, 14))
    return MapAnswer(across, up, phase, polygon, points, (), ((5, 10), (11, 4)))


@pytest.fixture
def page(make):
    page, _, answers = make(MapPage)
    answers.give("map", mapped())
    yield page
    page.close()


def test_the_two_largest_categories_are_on_the_axes(make):
    page, _, answers = make(MapPage)
    asked = {"x": "Contract hand", "y": "Fencing gang", "phase": "Whole job"}
    assert answers.asked == [("map", asked)]
    assert not page.phase.isVisible()
    page.close()


def test_other_axes_are_asked_for(page, qtbot):
    answers = page.answers
    page.up.setCurrentText("Learner")
    qtbot.waitUntil(lambda: answers.asked[-1][1]["y"] == "Learner")
    count = len(answers.asked)
    page.across.setCurrentText("Learner")
    assert len(answers.asked) == count
    assert page.sentence.text() == "Choose two different categories."


def test_walking_through_the_choices_asks_once(page, qtbot):
    answers = page.answers
    for name in ("Lead hand", "Learner", "First-aider"):
        page.up.setCurrentText(name)
    qtbot.waitUntil(lambda: len(answers.asked) == 2)
    assert answers.asked[-1][1]["y"] == "First-aider"


def test_a_map_being_worked_on_is_given_its_time(page, qtbot):
    answers = page.answers
    page.up.setCurrentText("Learner")
    qtbot.waitUntil(lambda: len(answers.asked) == 2)
    page.up.setCurrentText("Lead hand")
    answers.give("map", mapped(up="Learner"))  # late, but it kept its process
    assert page.picture._shown.up == "Fencing gang"
    qtbot.waitUntil(lambda: len(answers.asked) == 3)
    answers.give("map", mapped(up="Lead hand"))
    assert page.picture._shown.up == "Lead hand"
    assert page.picture.isVisible()


def test_the_last_map_goes_when_another_takes_long(page, qtbot):
    page.up.setCurrentText("Learner")
    assert page.picture.isVisible()
    qtbot.waitUntil(lambda: not page.picture.isVisible())


def test_named_crews_on_one_point_share_it():
    plan, answer = samples.hillside_plan(), samples.hillside_answer()
    spots = named_spots(plan, answer, "Contract hand", "Learner", 0)
    by_point = {(s.x, s.y): s for s in spots}
    assert by_point[9, 6].kind is SpotKind.EXACT
    assert by_point[9, 6].names == ("exact", "down")
    assert by_point[9.41, 6.7].kind is SpotKind.FRACTIONAL
    assert by_point[9, 7].names == ("nearest", "largest remainder", "patched")
    assert by_point[9, 7].kind is SpotKind.PATCHED


def test_the_cursor_starts_on_the_exact_crew_and_moves_by_keyboard(page, qtbot):
    picture = page.picture
    assert (picture.cursor_spot.x, picture.cursor_spot.y) == (9, 8)
    picture.setFocus()
    qtbot.keyClick(picture, Qt.Key.Key_Left)
    qtbot.keyClick(picture, Qt.Key.Key_Down)
    qtbot.keyClick(picture, Qt.Key.Key_Down)
    assert page.sentence.text() == "8 Contract hand and 6 Fencing gang: breaks Planting."
    qtbot.keyClick(picture, Qt.Key.Key_Up)
    assert page.sentence.text() == f"8 Contract hand and 7 Fencing gang: workable, EUR{NB}15,000."


def test_space_makes_the_crew_your_own(page, qtbot):
    page.picture.setFocus()
    qtbot.keyClick(page.picture, Qt.Key.Key_Right)
    qtbot.keyClick(page.picture, Qt.Key.Key_Space)
    own = page.document.plan.own
    assert own["Contract hand"] == (Decimal(10),)
    assert own["Fencing gang"] == (Decimal(8),)
    assert own["Lead hand"] == (Decimal(3),)
    page.document.undo_stack.undo()
    assert page.document.plan.own == {}


def test_the_mouse_finds_the_crew_under_it(page):
    box = page.picture.plot.getPlotItem().getViewBox()
    page.picture._on_hover(box.mapViewToScene(QPointF(11.2, 9.1)))
    assert (page.picture.cursor_spot.x, page.picture.cursor_spot.y) == (11, 9)


def test_walking_the_lattice():
    spots = [Spot(x, y, True) for x in (0, 4, 8) for y in (0, 1)]
    here = Spot(4, 0, True)
    assert next_spot(spots, here, 1, 0) == Spot(8, 0, True)
    assert next_spot(spots, here, 0, 1) == Spot(4, 1, True)
    assert next_spot(spots, here, 0, -1) == here
    assert nearest_spot(spots, 5, 0.4) == here
    assert nearest_spot([], 5, 0.4) is None


def test_the_exact_crew_is_named_in_words(page):
    shown = page.picture._shown
    spot = next(s for s in shown.lattice if (s.x, s.y) == (9, 8))
    assert "exact" in spot_sentence(shown, spot)


def test_the_map_has_words_and_a_table(page):
    assert page.picture.accessibleName() == "Crew map"
    assert page.picture.accessibleDescription().startswith("51 of 72 whole crews")
    head, first, *_ = page.picture.rows()
    assert head == ["Contract hand", "Fencing gang", "Workable", "Cost (EUR)", "Breaks"]
    assert first == ["5", "4", "no", "", "Planting"]


def test_workable_and_broken_crews_differ_in_shape(qtbot, page):
    import pyqtgraph as pg

    items = [i for i in page.picture.plot.getPlotItem().items if isinstance(i, pg.ScatterPlotItem)]
    shapes = {i.opts["symbol"]: len(i.getData()[0]) for i in items}
    assert shapes["x"] == 6 + 5 + 4 + 3 + 2 + 1
    assert {"d", "o", "t", "x"} == set(shapes)


def test_an_empty_map_draws_nothing(qtbot):
    picture = CrewMap()
    qtbot.addWidget(picture)
    assert picture.sentence() == ""
    assert picture.cursor_spot is None


def test_names_keep_out_of_each_others_way():
    room = QRectF(0, 0, 400, 300)
    points = [QPointF(100, 100), QPointF(120, 104), QPointF(395, 150), QPointF(100, 295), QPointF(112, 96)]
    names = [Name(point, QSizeF(90, 14), 8) for point in points]
    rects = placed(names, room)
    for at, rect in enumerate(rects):
        assert room.contains(rect)
        for other in rects[:at]:
            assert not rect.intersects(other)
    assert placed([], room) == []


def test_names_on_the_map_do_not_cover_each_other(page):
    import pyqtgraph as pg

    texts = [i for i in page.picture.plot.getPlotItem().items if isinstance(i, pg.TextItem)]
    rects = [text.mapRectToScene(text.boundingRect()) for text in texts]
    assert len(rects) == 4
    for at, rect in enumerate(rects):
        assert not any(rect.adjusted(1, 1, -1, -1).intersects(other) for other in rects[:at])


def test_the_key_stands_above_the_map(page):
    item = page.picture.plot.getPlotItem()
    key = item.legend.mapRectToScene(item.legend.rect())
    assert key.bottom() <= item.getViewBox().sceneBoundingRect().top() + 1
    assert len(item.legend.items) == 3


def test_what_was_told_of_a_map_goes_with_it(page):
    assert page.sentence.text()
    turn_impossible(page.document, page.answers)
    assert page.sentence.text() == ""


def test_nobody_on_the_map_is_told_in_words():
    spot = Spot(1, 0, True, 10.0, ())
    shown = CrewSpots("Contract hand", "Fencing gang", "EUR", (), (spot,), (), None)
    assert spot_sentence(shown, spot).startswith("1 Contract hand and no Fencing gang")


def test_the_map_becomes_smaller_again(page, qapp, qtbot):
    page.resize(1200, 650)
    page.show()
    high = page.picture.sizeHint().height()
    try:
        theme.apply(qapp, replace(theme.light(), zoom=1.5))
        qtbot.waitUntil(lambda: page.inside.minimumHeight() > 1.5 * high)
        large = page.inside.minimumHeight()
    finally:
        theme.apply(qapp, theme.light())
    qtbot.waitUntil(lambda: page.inside.minimumHeight() < large - high / 3)
    assert page.picture.sizeHint().height() == page.picture.minimumHeight() == high
