from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import Qt

from desktop import theme
from desktop.answers import Answers
from desktop.messages import CAUTION
from desktop.pages.cost_page import CostPage
from desktop.pages.near_page import NearPage
from desktop.pages.room_page import RoomPage
from desktop.pictures.named_bars import scale_of
from desktop.tables.crew_text import changes_text, counts_text
from desktop.understanding import Progress
from tests.desktop import samples
from tests.desktop.detail_samples import cost_detail, near_detail, room_detail

NB = "\u00a0"


class Told(Answers):
    """Answers that note what is asked, and answer when told to."""

    def __init__(self, document):
        super().__init__(document)
        self.asked = []
        self.given = {}
        self.working = {}

    def ask(self, question, **options):
        self.asked.append((question, options))
        self.working[question] = Progress("Half way", 0.5)
        self.given.pop(question, None)
        self.detail_changed.emit(question)

    def give(self, question, detail):
        self.working.pop(question, None)
        self.given[question] = detail
        self.detail_changed.emit(question)

    def cancel(self, question):
        self.working.pop(question, None)
        self.detail_changed.emit(question)

    def detail(self, question):
        return self.given.get(question)

    def progress(self, question):
        return self.working.get(question)


@pytest.fixture
def make(show_page):
    def make(kind, plan=None, answer=None):
        plan = plan or samples.hillside_plan()
        return show_page(kind, plan, answer or samples.hillside_answer(), Told)

    return make


@pytest.mark.parametrize(("kind", "question"), [(CostPage, "cost"), (RoomPage, "room"), (NearPage, "near")])
def test_the_question_is_asked_once_when_the_page_is_seen(make, kind, question):
    page, _, answers = make(kind)
    assert [q for q, _ in answers.asked] == [question]
    assert page.says.text() == "Half way"
    assert page.bar.value() == 50
    assert page.cancel_button.isVisible()
    assert page.caution.text() == CAUTION


def test_cancel_stops_until_asked_again(make, qtbot):
    page, _, answers = make(CostPage)
    qtbot.mouseClick(page.cancel_button, Qt.MouseButton.LeftButton)
    assert answers.progress("cost") is None
    assert page.says.text() == "Cancelled."
    assert len(answers.asked) == 1
    qtbot.mouseClick(page.ask_button, Qt.MouseButton.LeftButton)
    assert len(answers.asked) == 2


def test_nothing_is_asked_of_an_impossible_plan(make):
    page, _, answers = make(CostPage, answer=samples.impossible_answer())
    assert answers.asked == []
    assert page.says.text().startswith("This needs an exact crew, and no crew can meet the plan")
    assert "To mend" in page.says.text()  # what to do next
    assert not page.ladder.isVisible()


def test_the_ladder_is_measured_from_the_floor(make):
    page, _, answers = make(CostPage)
    answers.give("cost", cost_detail())
    bars = {bar.name: bar for bar in page.ladder.shown.bars}
    assert bars["floor"].length == 0
    assert bars["exact"].length == pytest.approx(2444.5)
    assert bars["exact"].number == "133,690"
    assert bars["best corner"].length is None
    assert bars["best corner"].note == "breaks Planting"
    assert scale_of(page.ladder.shown.bars, 500) * bars["up"].length == pytest.approx(500)
    assert page.sentence.text() == (
        f"That people are whole costs EUR{NB}2,444.50, which is 1.83{NB}% of the exact crew's cost."
    )


def test_savings_name_the_category_worth_talking_about(make):
    page, _, answers = make(CostPage)
    answers.give("cost", cost_detail())
    assert page.best.text().startswith("Sharing one Lead hand with another site")
    assert [bar.number for bar in page.savings.shown.bars[:2]] == ["1,310", "690"]
    assert "Lead hand: 1,310" in page.savings.accessibleDescription()
    assert page.savings.rows()[2][0] == "Lead hand"


def test_room_puts_the_largest_saving_first(make, qtmodeltester):
    page, _, answers = make(RoomPage)
    answers.give("room", room_detail())
    qtmodeltester.check(page.lines, force_py=True)
    qtmodeltester.check(page.pay, force_py=True)
    assert page.lines.headerData(0, Qt.Orientation.Vertical) == "Supervision by Lead hand"
    assert page.lines.index(0, 1).data() == f"12{NB}h"
    assert page.lines.index(0, 2).data() == "1,980"
    assert page.lines.index(0, 3).data() == f"\u22121{NB}Lead hand"  # what changes, not the whole crew again
    assert page.lines.index(2, 1).data() == "none"
    assert page.sentence.text() == page.lines.rows[0].says
    page.line_view.setCurrentIndex(page.lines.index(1, 0))
    assert page.sentence.text() == page.lines.rows[1].says
    assert [page.pay.index(0, j).data() for j in range(3)] == ["980", "912", "no limit"]


def test_the_dual_price_is_named_as_one_for_fractional_people(make):
    page, _, answers = make(RoomPage)
    answers.give("room", room_detail())
    column = next(c for c in page.lines.columns if "Price" in c.title)
    assert column.title.replace("\n", " ") == "Price for fractional people (EUR)"
    assert "does not hold for whole people" in column.tip


def test_near_best_crews_and_taking_one(make, qtbot, qtmodeltester):
    page, document, answers = make(NearPage)
    answers.give("near", near_detail())
    qtmodeltester.check(page.table, force_py=True)
    titles = [c.title for c in page.table.columns]
    assert titles[2:7] == [c.name for c in document.plan.categories]
    assert page.table.index(1, 1).data() == "310"
    assert page.told.text() == "These are all the crews within the limit."
    page.view.setFocus()
    qtbot.keyClick(page.view, Qt.Key.Key_Down)
    qtbot.mouseClick(page.take, Qt.MouseButton.LeftButton)
    assert document.plan.own["Learner"] == (Decimal(7),)
    assert page.told.text() == f"Now your own crew: EUR{NB}310 above the exact crew."
    document.undo_stack.undo()
    assert document.plan.own == {}


def test_the_own_crew_keeps_the_list(make):
    page, document, answers = make(NearPage)
    answers.give("near", near_detail())
    page.take_chosen()
    answers.given.clear()
    answers.receive(document.plan, samples.hillside_answer())
    assert len(answers.asked) == 1
    assert page.view.isVisible()


def test_another_plan_asks_again(make):
    page, document, answers = make(NearPage)
    answers.give("near", near_detail())
    answers.given.clear()
    other = replace(document.plan, categories=document.plan.categories[:4])
    document.edit("fewer", other)
    answers.receive(other, samples.hillside_answer())
    assert len(answers.asked) == 2
    assert not page.view.isVisible()


def test_other_limits_ask_again(make, qtbot):
    page, _, answers = make(NearPage)
    answers.give("near", near_detail())
    page.within.setValue(5)
    qtbot.waitUntil(lambda: len(answers.asked) == 2)
    assert answers.asked[-1] == ("near", {"within": 5.0, "most": 20})


def test_a_table_nobody_saw_follows_the_zoom(make, qapp, qtbot):
    page, _, answers = make(NearPage)
    answers.give("near", near_detail())
    before = page.view.verticalHeader().sectionSize(0)
    page.hide()
    theme.apply(qapp, replace(theme.light(), zoom=1.5))
    try:
        page.show()
        qtbot.waitUntil(lambda: page.view.verticalHeader().sectionSize(0) >= 1.4 * before)
        assert page.view.height() >= page.view.verticalHeader().length()
    finally:
        theme.apply(qapp, theme.light())


def test_what_was_told_of_another_plan_goes_with_its_answer(make):
    page, document, answers = make(NearPage)
    answers.give("near", near_detail())
    assert page.told.isVisible()
    turn_impossible(document, answers)
    assert not page.told.isVisible()


def turn_impossible(document, answers):
    """Another plan comes, and no crew can meet it."""
    answers.given.clear()
    document.edit("x", replace(document.plan, rules=()))
    answers.receive(document.plan, samples.impossible_answer())


def test_counts_of_phases_and_changes_of_crews_in_words():
    plan = samples.museum_plan()
    exact = samples.museum_answer().exact.crew
    more = {**exact, "Porter": (exact["Porter"][0], exact["Porter"][1] + 1, exact["Porter"][2])}
    phase = plan.phases[1].name
    assert counts_text((2.0, 2.0)) == "2"
    assert counts_text((0.0, 4.0, 5.0)) == "0/4/5"  # a dash beside a stroke reads as neither
    assert changes_text(plan, exact, more) == f"+1{NB}Porter in {phase}"
    assert (
        changes_text(plan, exact, {**exact, "Porter": tuple(n - 1 for n in exact["Porter"])})
        == f"\u22121{NB}Porter"
    )
    assert changes_text(plan, exact, exact) == "the same people, at less cost"


def test_texts_too_long_for_their_row_take_several_lines(make, qtbot):
    page, _, answers = make(RoomPage)
    detail = room_detail()
    long_name = "Supervision by Registrar or Conservator or Head of the store"
    answers.give("room", replace(detail, lines=(replace(detail.lines[0], line=long_name), *detail.lines[1:])))
    at = next(i for i, row in enumerate(page.lines.rows) if row.line == long_name)
    rows = page.line_view.verticalHeader()
    other = next(i for i in range(len(page.lines.rows)) if i != at)
    qtbot.waitUntil(lambda: rows.sectionSize(at) > rows.sectionSize(other))
