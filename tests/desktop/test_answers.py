import os
import signal
from dataclasses import replace
from decimal import Decimal

import pytest

from desktop import answers as answers_module
from desktop.answers import Answers, Fractional, Status
from desktop.document import Document
from desktop.effort import Effort
from desktop.workers import Workers
from solver.answer import State
from solver.plan import Category, Plan, Work

D = Decimal


def plan(amount=100, word=""):
    category = Category("A", D(10), D(40), on_books=D(3), hours_note=word, output={"W": D(1)})
    return Plan(categories=(category,), works=(Work("W", "units", (D(amount),)),))


@pytest.fixture
def made(qapp):
    """Answers to a plan; closed at the end of the test."""
    kept = []

    def make(first, workers):
        document = Document(first)
        answers = Answers(document, workers)
        kept.append(answers)
        return document, answers

    yield make
    for answers in kept:
        answers.close()


def ready(answers):
    return answers.status is Status.READY and not answers.stale


def test_a_plan_is_answered_without_being_asked(made, workers, qtbot):
    _, answers = made(plan(), workers)
    assert answers.status is Status.SOLVING
    qtbot.waitUntil(lambda: ready(answers))
    assert answers.answer.exact.cost == 100
    assert answers.answer.state is State.PROVED


def test_an_edit_makes_the_answer_stale_and_then_right(made, workers, qtbot):
    document, answers = made(plan(), workers)
    qtbot.waitUntil(lambda: ready(answers))
    document.edit("Change amount", plan(250))
    assert answers.stale
    assert answers.status is Status.SOLVING
    assert answers.answer.exact.cost == 100
    qtbot.waitUntil(lambda: ready(answers))
    assert answers.answer.exact.cost == 250
    assert answers.plan == plan(250)


def test_edits_in_a_row_end_with_the_last(made, workers, qtbot):
    document, answers = made(plan(), workers)
    seen = []
    answers.changed.connect(lambda: ready(answers) and seen.append(answers.answer.exact.cost))
    for amount in range(1, 60):
        document.edit("Change amount", plan(amount))
    qtbot.waitUntil(lambda: ready(answers))
    assert seen == [59]


def test_late_answers_and_noise_are_dropped(made, workers, qtbot):
    _, answers = made(plan(word="noise"), workers)
    qtbot.waitUntil(lambda: ready(answers))
    assert answers.answer.exact.cost == 100


def test_texts_need_no_new_answer(made, workers, qtbot):
    document, answers = made(plan(), workers)
    qtbot.waitUntil(lambda: ready(answers))
    document.edit("Change title", replace(plan(), title="Other"))
    assert ready(answers)
    assert answers.plan.title == "Other"


def test_undo_to_the_answered_plan_is_not_stale_for_long(made, workers, qtbot):
    document, answers = made(plan(), workers)
    qtbot.waitUntil(lambda: ready(answers))
    document.edit("Change amount", plan(250))
    document.undo_stack.undo()
    qtbot.waitUntil(lambda: ready(answers))
    assert answers.answer.exact.cost == 100


def test_a_newer_edit_ends_a_solve_that_takes_too_long(made, workers, qtbot, monkeypatch):
    monkeypatch.setattr(answers_module, "PATIENCE", 50)
    document, answers = made(plan(word="hang"), workers)
    qtbot.waitUntil(lambda: len(workers.process_ids()) == 1 and answers.busy)
    document.edit("Change amount", plan(70))
    qtbot.waitUntil(lambda: ready(answers))
    assert answers.answer.exact.cost == 70


def test_the_floor_comes_first_when_the_crew_takes_time(made, workers, qtbot):
    _, answers = made(plan(word="slow"), workers)
    seen = []
    answers.changed.connect(
        lambda: seen.append((answers.status, answers.fractional, answers.answer and answers.answer.state))
    )
    qtbot.waitUntil(lambda: ready(answers))
    assert seen == [
        (Status.SOLVING, Fractional(12.5, {"A": (1.5,)}), None),
        (Status.SOLVING, None, State.BEST_FOUND),
        (Status.READY, None, State.PROVED),
    ]


@pytest.mark.parametrize("word", ["crash", "flood", "rubbish"])
def test_a_broken_process_costs_a_restart(word, made, fake_command, qtbot, tmp_path):
    workers = Workers(fake_command(str(tmp_path / "seen")))
    document, answers = made(plan(word=f"once {word}"), workers)
    states = []
    answers.changed.connect(lambda: states.append(answers.status))
    qtbot.waitUntil(lambda: ready(answers), timeout=15000)
    assert Status.RESTARTING in states
    assert answers.answer.exact.cost == 100
    assert document.plan == plan(word=f"once {word}")
    workers.close()


@pytest.mark.parametrize("word", ["crash", "rubbish"])
def test_a_plan_that_breaks_two_processes_gets_a_sentence(word, made, workers, qtbot):
    document, answers = made(plan(word=word), workers)
    qtbot.waitUntil(lambda: answers.status is Status.FAILED, timeout=15000)
    assert "The plan is safe" in answers.failure
    document.edit("Mend", plan())
    qtbot.waitUntil(lambda: ready(answers))


def test_a_hung_process_is_ended(made, fake_command, qtbot, tmp_path, monkeypatch):
    monkeypatch.setattr(answers_module, "GRACE", 1)
    workers = Workers(fake_command(str(tmp_path / "seen")))
    _, answers = made(plan(word="once hang"), workers)
    answers.choose(Effort(seconds=0))
    qtbot.waitUntil(lambda: ready(answers), timeout=15000)
    assert answers.answer.exact.cost == 100
    workers.close()


@pytest.mark.skipif(not hasattr(signal, "SIGKILL"), reason="Windows has no SIGKILL to send")
def test_a_process_killed_in_the_middle_costs_a_restart(made, fake_command, qtbot, tmp_path):
    workers = Workers(fake_command(str(tmp_path / "seen")))
    _, answers = made(plan(word="once hang"), workers)
    qtbot.waitUntil((tmp_path / "seen").exists)
    os.kill(workers.process_ids()[0], signal.SIGKILL)
    qtbot.waitUntil(lambda: ready(answers), timeout=15000)
    assert answers.answer.exact.cost == 100
    workers.close()


def test_a_command_that_cannot_be_started_gets_a_sentence(made, qtbot, tmp_path):
    workers = Workers((str(tmp_path / "no-such-program"),))
    _, answers = made(plan(), workers)
    qtbot.waitUntil(lambda: answers.status is Status.FAILED)
    assert "could not be started" in answers.failure
    workers.close()


@pytest.mark.parametrize(
    ("word", "status", "says"),
    [
        ("problems", Status.PROBLEMS, "is odd"),
        ("refused", Status.FAILED, "refused: no"),
        ("failed", Status.FAILED, "log"),
    ],
)
def test_other_endings(word, status, says, made, workers, qtbot):
    _, answers = made(plan(word=word), workers)
    qtbot.waitUntil(lambda: answers.status is status)
    assert says in (answers.problems[0].says if status is Status.PROBLEMS else answers.failure)


def test_problems_are_told_without_a_process(made, workers):
    bad = replace(plan(), categories=(replace(plan().categories[0], pay=D(-1)),))
    _, answers = made(bad, workers)
    assert answers.status is Status.PROBLEMS
    assert answers.problems[0].place == "categories[0].pay"


def test_an_empty_plan_is_not_asked_about(made, workers):
    document, answers = made(Plan(), workers)
    assert answers.status is Status.EMPTY
    document.edit("Add", plan())
    assert answers.status is Status.SOLVING


def test_a_long_question_has_progress_and_a_result(made, workers, qtbot):
    _, answers = made(plan(), workers)
    said = []
    answers.detail_changed.connect(lambda q: said.append(p.says if (p := answers.progress(q)) else ""))
    answers.ask("anything", within=2)
    qtbot.waitUntil(lambda: answers.detail("anything") is not None)
    assert answers.detail("anything") == {"asked": "anything", "options": {"within": 2}}
    assert "half way" in said
    assert answers.progress("anything") is None


def test_long_questions_are_dropped_when_the_plan_changes(made, workers, qtbot):
    document, answers = made(plan(), workers)
    answers.ask("anything", wait=60)
    answers.ask("other")
    qtbot.waitUntil(lambda: (p := answers.progress("anything")) is not None and p.done == 0.5)
    document.edit("Change amount", plan(70))
    assert answers.progress("anything") is None
    assert answers.progress("other") is None
    qtbot.waitUntil(lambda: ready(answers))
    assert answers.detail("anything") is None


def test_a_cancelled_question_makes_room_for_the_next(made, workers, qtbot):
    _, answers = made(plan(), workers)
    answers.ask("anything", wait=60)
    answers.ask("other")
    answers.cancel("anything")
    qtbot.waitUntil(lambda: answers.detail("other") is not None)
    assert answers.detail("anything") is None
    assert answers.progress("anything") is None


def test_a_long_question_does_not_delay_the_answer(made, workers, qtbot):
    document, answers = made(plan(), workers)
    qtbot.waitUntil(lambda: ready(answers))
    answers.ask("anything", wait=60)
    document.edit("Change title", replace(plan(), title="T"))  # keeps the question
    assert answers.progress("anything") is not None
    answers.again()
    qtbot.waitUntil(lambda: ready(answers))


def test_answers_may_go_right_after_one_arrived(made, workers, qtbot, qapp):
    """An errand that is done must not keep its parent alive until it is itself destroyed: that is a crash."""
    only, gone = [Answers(Document(plan()), workers)], []
    only[0].destroyed.connect(lambda: gone.append(True))
    qtbot.waitUntil(lambda: ready(only[0]))
    only[0].close()
    only.clear()
    assert gone
    qapp.processEvents()
