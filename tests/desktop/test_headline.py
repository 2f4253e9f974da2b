from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from desktop.answers import Answers, Status
from desktop.document import Document, Refusal
from desktop.headline import HeadlineBar
from desktop.headline_words import Action, headline
from solver.answer import Proof
from solver.plan import Plan
from solver.review import Problem
from tests.desktop import samples

D = Decimal


@pytest.fixture
def document(qapp):
    return Document(samples.hillside_plan())


@pytest.fixture
def answers(document):
    return Answers(document)


def said(document, answers):
    return headline(document, answers)


def test_an_empty_plan_says_what_to_do_next(qapp):
    document = Document()
    words = said(document, Answers(document))
    assert words.crew == ("No crew yet",)
    assert words.facts.startswith("Add a category")
    document.edit("x", replace(Plan(), categories=samples.hillside_plan().categories))
    assert said(document, Answers(document)).facts.startswith("Add a work")


def test_a_proved_crew_in_words(document, answers):
    answers.receive(document.plan, samples.hillside_answer())
    words = said(document, answers)
    assert words.crew == ("3 Lead hand", "9 Contract hand", "6 Learner", "8 Fencing gang", "0.5 First-aider")
    facts = [part.replace("\u00a0", " ").strip() for part in words.facts.split("\u00b7")]
    assert facts == [
        "costs EUR 133,690",
        "floor EUR 131,245.50",
        "whole-people cost EUR 2,444.50 (1.83 %)",
        "19.5 join",
    ]
    assert (words.sign, words.state, words.tone, words.loud) == ("✓", "proved cheapest", "exact", True)
    assert "complete search" in words.tooltip
    answers.receive(document.plan, replace(samples.hillside_answer(), proof=Proof.TWO_ENGINES))
    assert "Two solvers" in said(document, answers).tooltip
    assert said(document, answers).state == "proved cheapest"
    answers.receive(document.plan, replace(samples.hillside_answer(), proof=Proof.ONE_ENGINE))
    assert said(document, answers).state == "proved cheapest, by one solver"
    assert "one solver" in said(document, answers).tooltip


def test_phases_give_ranges_and_best_found_its_gap(qapp):
    document = Document(samples.museum_plan())
    answers = Answers(document)
    answers.receive(document.plan, samples.museum_answer())
    words = said(document, answers)
    assert words.crew == ("2 Conservator", "1 to 4 Packer", "1 to 5 Porter")
    assert (words.sign, words.tone) == ("△", "ink")
    state = words.state.replace("\u00a0", " ")
    assert state == "best found, at most EUR 350 (0.5 %) above the cheapest possible"
    assert "whole-people" not in words.facts  # not known before the crew is proved
    answers.receive(document.plan, replace(samples.museum_answer(), bound=None))
    assert said(document, answers).state == "best found, not proved"


def test_a_changed_plan_is_out_of_date_and_looks_it(document, answers):
    answers.receive(document.plan, samples.hillside_answer())
    document.edit("x", replace(document.plan, rules=()))
    words = said(document, answers)
    assert (words.sign, words.state, words.loud, words.tone) == (
        "…",
        "out of date, working on the change",
        False,
        "faint",
    )
    document.undo_stack.undo()
    assert said(document, answers).loud


def test_impossible_names_what_cannot_hold_together(document, answers):
    answers.receive(document.plan, samples.impossible_answer())
    words = said(document, answers)
    assert words.crew == ("No crew can meet this plan",)
    assert "Planting needs 52,000 trees" in words.facts
    assert (words.sign, words.state, words.tone) == ("✗", "impossible", "short")
    only_fractional = samples.impossible_answer()
    conflict = replace(only_fractional.conflict, whole_people=True)
    answers.receive(document.plan, replace(only_fractional, conflict=conflict))
    assert said(document, answers).crew == ("No whole crew can meet this plan; fractional people could",)


def test_problems_are_told_with_their_place_in_words(document, answers):
    bad = replace(document.plan.categories[1], pay=D(-5))
    document.edit("x", replace(document.plan, categories=(document.plan.categories[0], bad)))
    words = said(document, answers)
    assert answers.status is Status.PROBLEMS
    assert words.facts.startswith("Contract hand, Pay: -5 is negative")
    assert (words.action, words.place) == (Action.GO_TO, "categories[1].pay")
    assert words.sign == "!"


def test_other_states(document, answers):
    assert said(document, answers).crew == ("Looking for the cheapest whole crew",)
    answers._set(Status.RESTARTING)
    assert said(document, answers).sign == "↻"
    answers._set(Status.FAILED, failure="The solver stopped twice.")
    assert said(document, answers).facts == "The solver stopped twice."
    assert said(document, answers).action is Action.ASK_AGAIN
    answers._set(Status.PROBLEMS, (Problem("rules[0].bound", "is odd"), Problem("title", "is long")))
    assert said(document, answers).crew == ("2 entries of the plan must be mended first",)
    assert said(document, answers).facts == "Learners per lead: is odd"


def test_nobody_needed_and_nothing_found(document, answers):
    answer = samples.hillside_answer()
    nobody = replace(answer, exact=replace(answer.exact, crew=samples.crew(0, 0, 0, 0, 0)))
    answers.receive(document.plan, nobody)
    assert said(document, answers).crew == ("Nobody is needed",)
    answers.receive(document.plan, replace(samples.museum_answer(), exact=None))
    assert said(document, answers).crew[0].startswith("No workable crew found yet")


def test_refused_entries_are_told_though_the_answer_stands(document, answers):
    answers.receive(document.plan, samples.hillside_answer())
    place = ("categories", "Learner", "pay")
    document.edit("x", document.plan, refused={place: Refusal("4x0", "is not a number")})
    words = said(document, answers)
    assert words.note == "1 entry was refused and is not counted"
    assert (words.action, words.place) == (Action.GO_TO, "categories[2].pay")


@pytest.fixture
def bar(document, answers, qtbot):
    made = HeadlineBar(document, answers)
    qtbot.addWidget(made)
    made.resize(1200, 80)
    made.show()
    return made


def test_the_bar_leaves_out_what_has_no_room(bar, document, answers):
    answers.receive(document.plan, samples.hillside_answer())
    bar.resize(2000, 80)
    assert bar.crew.text().endswith("0.5 First-aider")
    assert not bar.crew.styleSheet()
    bar.resize(1100, 80)
    assert bar.crew.text().endswith("0.5 First-aider")  # all of them, a little smaller
    assert 12.4 <= bar.crew.font().pointSizeF() < 20
    bar.resize(760, 80)
    assert bar.crew.text() == "3 Lead hand, 9 Contract hand and 3 more"
    assert not bar.crew.styleSheet()
    bar.resize(500, 80)
    assert "more" in bar.crew.text()
    assert "First-aider" in bar.crew.toolTip()
    assert "3 Lead hand, 9 Contract hand" in bar.accessibleDescription()


def test_the_bar_does_not_flicker_over_a_quick_answer(bar, document, answers, qtbot):
    answers.receive(document.plan, samples.hillside_answer())
    document.edit("x", replace(document.plan, rules=()))
    assert bar.said.loud  # for 150 ms at most
    answers.receive(document.plan, samples.hillside_answer())
    assert bar.said.loud
    document.edit("x", replace(document.plan, currency="GBP"))
    qtbot.waitUntil(lambda: not bar.said.loud)
    assert bar.state.text() == "… out of date, working on the change"


def test_the_bar_leads_to_a_problem_and_asks_again(bar, answers, qtbot):
    answers._set(Status.PROBLEMS, (Problem("categories[0].pay", "is odd"),))
    qtbot.waitUntil(bar.button.isVisible)
    with qtbot.waitSignal(bar.go_to) as went:
        QTest.mouseClick(bar.button, Qt.MouseButton.LeftButton)
    assert went.args == ["categories[0].pay"]
    answers._set(Status.FAILED, failure="no")
    qtbot.waitUntil(lambda: bar.button.text() == "Ask again")
    with qtbot.waitSignal(answers.changed):
        bar.button.click()


def test_html_in_names_is_text(bar, document, answers):
    answer = samples.hillside_answer()
    crew = {"<b>Lead</b>": (3.0,)}
    answers.receive(document.plan, replace(answer, exact=replace(answer.exact, crew=crew)))
    assert bar.crew.text() == "3 <b>Lead</b>"
    assert bar.crew.textFormat() == Qt.TextFormat.PlainText
