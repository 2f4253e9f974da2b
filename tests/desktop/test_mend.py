"""No workable crew: the window says which lines cannot hold together, and mends one on request."""

from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel

import resources
from desktop import conflict_watch, mend_words
from desktop.answers import Answers, Status
from desktop.conflict_watch import ConflictWatch
from desktop.document import Document, Refusal
from desktop.headline_words import Action
from desktop.messages import CAUTION
from desktop.pages.mend_page import MendPage
from desktop.rail import MEND, PAGES
from solver.answer import Conflict, Conflicting, LineKind, State
from solver.plan import Phase, Sense
from solver.planfile import read_plan
from tests.desktop import samples

D = Decimal


def lines():
    return (
        Conflicting(
            "Planting",
            LineKind.WORK,
            "Whole job",
            "trees",
            4100.0,
            "52,000 trees of Planting",
            "Lower Planting by 4,100 trees to 47,900.",
        ),
        Conflicting(
            "Supervision by Lead hand",
            LineKind.SUPERVISION,
            "Whole job",
            "h",
            None,
            "supervision by Lead hand",
            "Not enough alone.",
        ),
        Conflicting("Whole people", None, None, "", None, "people come whole", "Share someone."),
    )


def impossible(whole_people=True):
    return replace(samples.impossible_answer(), conflict=Conflict(lines(), whole_people))


@pytest.fixture
def make(show_page):
    def make(plan=None, answer=None):
        return show_page(MendPage, plan or samples.hillside_plan(), answer)

    return make


def texts(page):
    return [made.text() for made in page.findChildren(QLabel) if made.text() and made.isVisible()]


def test_every_line_is_told_with_what_it_must_give(make):
    page, _, _ = make(answer=impossible())
    said = texts(page)
    assert mend_words.NOT_WHOLE in said
    for line in ("52,000 trees of Planting", "Supervision by Lead hand", "People come whole"):
        assert line in said
    assert "Lower Planting by 4,100 trees to 47,900." in said
    assert "Not enough alone." in said
    assert CAUTION in said


def test_that_not_even_fractional_people_can_do_it_is_told(make):
    page, _, _ = make(answer=impossible(whole_people=False))
    assert mend_words.NOBODY in texts(page)


def test_only_what_can_be_changed_has_a_button(make):
    page, _, _ = make(answer=impossible())
    assert [b.accessibleName() for b in page.buttons] == ["Do this: Lower Planting by 4,100 trees to 47,900."]


def test_a_repair_is_one_undo_step(make, qtbot):
    page, document, answers = make(answer=impossible())
    page.buttons[0].setFocus()
    QTest.keyClick(page.buttons[0], Qt.Key.Key_Space)
    assert document.plan.works[0].amounts == (D(47900),)
    assert document.undo_stack.count() == 1
    assert document.undo_stack.undoText() == "Repair: Planting"
    qtbot.waitUntil(lambda: not page.buttons[0].isEnabled())  # it belongs to the plan before
    assert page.says.text() == mend_words.UNTIL_THEN
    answers.receive(document.plan, samples.hillside_answer())
    qtbot.waitUntil(lambda: page.says.text().startswith("Done: Lower Planting"))
    assert "A crew can meet the plan" in page.says.text()
    document.undo_stack.undo()
    assert document.plan == samples.hillside_plan()


def test_an_old_conflict_repairs_nothing(make):
    page, document, _ = make(answer=impossible())
    other = replace(document.plan, works=document.plan.works[:1])
    document.edit("x", other)
    page.repair(lines()[0])
    assert document.plan == other


def test_phases_are_named_where_there_are_several(make):
    plan = replace(samples.museum_plan(), phases=(Phase("Packing up"), Phase("The move"), Phase("After")))
    line = replace(lines()[0], line="Packing", phase="The move")
    page, _, _ = make(plan, replace(impossible(), conflict=Conflict((line,), False)))
    assert "52,000 trees of Planting, in The move" in texts(page)


def test_names_are_text(make):
    line = replace(lines()[0], says="<b>bold</b> at most 3")
    page, _, _ = make(answer=replace(impossible(), conflict=Conflict((line,), False)))
    label = next(made for made in page.findChildren(QLabel) if "bold" in made.text())
    assert label.textFormat() == Qt.TextFormat.PlainText


def test_problems_and_refused_entries_lead_to_their_place(make, qtbot):
    plan = samples.hillside_plan()
    bad = replace(plan.categories[0], pay=D(-1))
    refused = {("categories", "Learner", "hours"): Refusal("lots", "it is not a number")}
    page, document, _ = make(plan)
    document.edit("x", replace(plan, categories=(bad, *plan.categories[1:])), refused=refused)
    qtbot.waitUntil(lambda: len(page.buttons) == 2)
    said = texts(page)
    assert "Lead hand, Pay: -1 is negative; allowed is 0 or more" in said
    assert 'Learner, Hours: "lots" – it is not a number' in said
    places = []
    page.go_to.connect(places.append)
    for button in page.buttons:
        button.click()
    assert places == ["categories[0].pay", "categories[2].hours"]


def test_many_problems_are_counted(make, qtbot):
    plan = samples.hillside_plan()
    page, document, _ = make(plan)
    many = tuple(replace(plan.categories[0], name=f"C{i}", pay=D(-1)) for i in range(150))
    document.edit("x", replace(plan, categories=many, rules=()))
    qtbot.waitUntil(lambda: len(page.buttons) == 100)
    assert any(text.startswith("and ") and text.endswith(" more") for text in texts(page))


def test_nothing_to_mend_is_told(make):
    page, _, _ = make(answer=samples.hillside_answer())
    assert page.says.text() == mend_words.CAN_MEET
    assert page.buttons == []


# going there by itself


class Ears:
    def __init__(self, signal):
        self.count = 0
        signal.connect(self._hear)

    def _hear(self):
        self.count += 1


@pytest.fixture
def watched(qapp, monkeypatch):
    monkeypatch.setattr(conflict_watch, "PAUSE", 60)
    document = Document(samples.hillside_plan())
    answers = Answers(document)
    watch = ConflictWatch(document, answers)
    return document, answers, watch, Ears(watch.impossible)


def test_a_plan_just_opened_is_told_of_at_once(watched, qtbot):
    document, answers, watch, heard = watched
    document.new(samples.museum_plan())
    answers.receive(document.plan, impossible())
    qtbot.waitUntil(lambda: heard.count == 1)
    answers.receive(document.plan, impossible())
    qtbot.waitUntil(lambda: not watch._due.isActive())
    assert heard.count == 1


def test_after_an_edit_there_is_a_pause_and_another_edit_lengthens_it(watched, qtbot):
    document, answers, watch, heard = watched
    document.edit("x", replace(document.plan, works=document.plan.works[:1]))
    answers.receive(document.plan, impossible())
    assert watch._due.isActive()
    document.edit("y", replace(document.plan, works=()))
    assert heard.count == 0
    qtbot.waitUntil(lambda: not watch._due.isActive())
    assert heard.count == 0  # the answer is out of date
    answers.receive(document.plan, impossible())
    qtbot.waitUntil(lambda: heard.count == 1)


def test_it_is_told_again_only_after_a_crew_was_possible(watched, qtbot):
    document, answers, watch, heard = watched
    for answer, count in (
        (impossible(), 1),
        (impossible(), 1),
        (samples.hillside_answer(), 1),
        (impossible(), 2),
    ):
        answers.receive(document.plan, answer)
        qtbot.waitUntil(lambda: not watch._due.isActive())
        assert heard.count == count


# in the window


@pytest.fixture
def window(open_window, monkeypatch):
    monkeypatch.setattr(conflict_watch, "PAUSE", 60)
    return open_window()


def in_rail(window):
    rows = [at for at in range(len(PAGES)) if not window.rail.item(at).isHidden()]
    return [PAGES[at].title for at in rows]


def ready(window):
    return window.answers.status is Status.READY and not window.answers.stale


def test_the_window_goes_there_and_a_repair_gives_a_crew(window, qtbot):
    assert MEND not in in_rail(window)
    path = next(p for p in resources.example_paths() if p.name.startswith("no-crew"))
    plan = read_plan(path)
    window.document.new(plan)
    page = qtbot.waitUntil(lambda: window.stack.made(MEND) is not None, timeout=20000)
    page = window.stack.made(MEND)
    assert window.stack.currentWidget() is page
    assert MEND in in_rail(window)
    assert window.rail.hasFocus()
    qtbot.waitUntil(lambda: len(page.buttons) >= 2)
    for _ in range(12):  # from the rail to the first repair, by keyboard
        QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
        if QApplication.focusWidget() is page.buttons[0]:
            break
    QTest.keyClick(page.buttons[0], Qt.Key.Key_Space)
    qtbot.waitUntil(lambda: ready(window), timeout=20000)
    assert window.answers.answer.state is State.PROVED
    qtbot.waitUntil(lambda: "A crew can meet the plan" in page.says.text())
    assert MEND in in_rail(window)  # it stands as long as it is in front
    window.page("Plan")
    assert MEND not in in_rail(window)
    window.document.undo_stack.undo()
    assert window.document.plan == plan
    qtbot.waitUntil(lambda: window.stack.currentWidget() is page, timeout=20000)


def test_nobody_is_taken_away_from_a_cell_being_typed(window, qtbot):
    works = samples.hillside_plan()
    possible = replace(works, rules=(works.rules[1],))
    window.document.new(possible)
    qtbot.waitUntil(lambda: ready(window), timeout=20000)
    grid = window.page("Plan").works
    grid.setFocus()
    grid.setCurrentIndex(grid.model().index(0, 2))
    nobody = replace(works.rules[1], name="Nobody", sense=Sense.AT_MOST, bound=D(0))
    window.document.edit("x", replace(possible, rules=(works.rules[1], nobody)))
    QTest.keyClicks(grid, "5")
    with qtbot.waitSignal(window.watch._due.timeout, timeout=20000):
        pass  # it would have been told of, but for the open cell
    assert window.answers.answer.state is State.IMPOSSIBLE
    assert window.stack.currentWidget() is window.stack.made("Plan")
    assert window.headline.said.action is Action.MEND
    QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Escape)
    qtbot.waitUntil(lambda: window.stack.currentWidget() is window.stack.made(MEND))


def test_the_headline_leads_there(window, qtbot, monkeypatch):
    window.watch.blockSignals(True)
    plan = samples.hillside_plan()
    nobody = replace(plan.rules[1], name="Nobody", sense=Sense.AT_MOST, bound=D(0))
    window.document.new(replace(plan, rules=(plan.rules[1], nobody)))
    qtbot.waitUntil(lambda: ready(window), timeout=20000)
    assert window.headline.button.text() == "What helps"
    window.headline.button.click()
    assert window.stack.currentWidget() is window.stack.made(MEND)
    first = window.stack.made(MEND).buttons[0]
    assert first.accessibleName().startswith("Do this: ")


def test_a_problem_leads_from_there_to_its_cell(window, qtbot):
    plan = samples.hillside_plan()
    bad = replace(plan.categories[0], pay=D(-1))
    window.document.new(replace(plan, categories=(bad, *plan.categories[1:])))
    page = window.page(MEND)
    qtbot.waitUntil(lambda: len(page.buttons) == 1)
    page.buttons[0].click()
    assert window.stack.currentWidget() is window.stack.made("Plan")
    assert window.stack.made("Plan").categories.currentIndex().data() == "! −1"
