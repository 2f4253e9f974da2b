"""A solve that takes long: the crew so far, stopping, looking further, time and tolerance, and no orphans."""

from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import QSettings, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QDialogButtonBox

from desktop import answers as answers_module
from desktop.answers import Answers, Status
from desktop.dialogs.effort_dialog import EffortDialog
from desktop.document import Document
from desktop.effort import Effort, store_effort, stored_effort
from desktop.headline import HeadlineBar
from desktop.look import Look
from desktop.pages.crew_page import CrewPage
from desktop.window import Window
from desktop.workers import Workers
from solver.answer import Policy, State
from solver.plan import Category, Plan, Work
from tests.family import family_plan
from tests.processes import PROC, alive, engines_of

D = Decimal
SO_FAR = "△ at most EUR 90 (6.52 %) above the cheapest possible, still improving"


def plan(amount=1340, word="long"):
    category = Category("A", D(10), D(40), on_books=D(3), hours_note=word, output={"W": D(1)})
    return Plan(categories=(category,), works=(Work("W", "units", (D(amount),)),))


def spaced(text):
    return text.replace("\u00a0", " ")


@pytest.fixture
def short(monkeypatch):
    """Long is what takes a tenth of a second."""
    monkeypatch.setattr(answers_module, "LONG", 100)


@pytest.fixture
def made(qapp, workers, short, qtbot):
    """Answers to a plan that takes long, and their headline."""
    kept = []

    def make(first, effort=None):
        document = Document(first)
        answers = Answers(document, workers)
        answers.choose(effort or Effort())
        bar = HeadlineBar(document, answers)
        qtbot.addWidget(bar)
        bar.resize(1300, 80)
        bar.show()
        kept.append(answers)
        return document, answers, bar

    yield make
    for answers in kept:
        answers.close()


def settled(bar):
    return spaced(bar.state.text()) == SO_FAR


def test_better_crews_come_into_the_headline_one_by_one(made, qtbot):
    _, answers, bar = made(plan())
    seen = []
    answers.changed.connect(lambda: seen.append((spaced(bar.state.text()), bar.said.loud)))
    qtbot.waitUntil(lambda: settled(bar) and bar.stop_button.isVisible())
    found = [state for n, (state, loud) in enumerate(seen) if loud and state not in [s for s, _ in seen[:n]]]
    assert found == ["△ at most EUR 160 (11.1 %) above the cheapest possible, still improving", SO_FAR]
    assert "costs EUR 1,380" in spaced(bar.facts.text())
    assert "whole-people" not in bar.facts.text()
    assert "less than EUR 1,290" in spaced(bar.state.toolTip())
    assert not bar.further_button.isVisible()
    assert answers.status is Status.SOLVING
    assert not answers.stale


def test_the_crew_keeps_its_place_while_the_gap_shrinks(made, qtbot):
    _, answers, bar = made(plan())
    widths = []
    answers.changed.connect(lambda: answers.can_stop and widths.append(bar.state.minimumWidth()))
    qtbot.waitUntil(lambda: settled(bar) and bar.stop_button.isVisible())
    assert len(widths) >= 2
    assert widths == sorted(widths)
    assert bar.state.width() >= max(widths)
    answers.stop()
    assert bar.state.minimumWidth() == 0


def test_a_quick_plan_has_no_controls(made, qtbot):
    _, answers, bar = made(plan(word=""))
    qtbot.waitUntil(lambda: answers.status is Status.READY)
    assert bar.state.text() == "✓ proved cheapest"
    assert not bar.stop_button.isVisible()
    assert not bar.further_button.isVisible()
    assert not answers.can_look_further


def test_stop_here_keeps_the_best_crew_and_ends_the_process(made, workers, qtbot):
    document, answers, bar = made(plan())
    qtbot.waitUntil(lambda: settled(bar) and bar.stop_button.isVisible())
    working = workers.process_ids()[0]
    QTest.mouseClick(bar.stop_button, Qt.MouseButton.LeftButton)
    assert answers.status is Status.READY
    assert answers.answer.state is State.BEST_FOUND
    assert answers.answer.exact.cost == 1380
    assert answers.answer.bound == 1290
    assert spaced(bar.state.text()) == "△ best found, at most EUR 90 (6.52 %) above the cheapest possible"
    assert not bar.stop_button.isVisible()
    assert bar.further_button.isVisible()
    assert working not in workers.process_ids()
    qtbot.waitUntil(lambda: not alive(working) or not PROC.is_dir())
    assert workers.process_ids()  # the spare
    document.edit("Change amount", plan(70, word=""))
    qtbot.waitUntil(lambda: answers.status is Status.READY)
    assert answers.answer.exact.cost == 70


def test_look_further_goes_on_from_the_crew_for_twice_the_time(made, qtbot):
    _, answers, bar = made(plan())
    qtbot.waitUntil(lambda: settled(bar))
    answers.stop()
    assert answers.can_look_further
    seen = []
    answers.changed.connect(
        lambda: seen.append((answers.stale, answers.answer.exact.cost, answers.answer.bound))
    )
    QTest.mouseClick(bar.further_button, Qt.MouseButton.LeftButton)
    assert answers.status is Status.SOLVING
    assert bar.said.loud
    assert not bar.further_button.isVisible()
    qtbot.waitUntil(lambda: answers.status is Status.READY)
    assert answers.answer.state is State.PROVED
    assert answers.answer.exact.cost == 1340
    assert answers.answer.seconds == 120  # what the fake worker was given
    # a bound that was known does not get worse when looking begins anew
    assert set(seen[:-1]) == {(False, 1380, 1290)}


def test_the_tolerance_is_passed_on_and_ends_the_search(made, qtbot):
    _, answers, bar = made(plan(), Effort(tolerance=20.0))
    qtbot.waitUntil(lambda: answers.status is Status.READY)
    assert answers.answer.exact.cost == 1440
    assert spaced(bar.state.text()) == "△ best found, at most EUR 160 (11.1 %) above the cheapest possible"


def test_a_tolerance_chosen_meanwhile_holds_for_what_is_in_work(made, qtbot):
    _, answers, bar = made(plan())
    qtbot.waitUntil(lambda: settled(bar))
    answers.choose(Effort(seconds=7, tolerance=1.0))
    qtbot.waitUntil(lambda: answers.status is Status.READY)
    assert answers.answer.seconds == 7  # it was asked anew, from the crew so far


def test_the_effort_is_remembered_and_nonsense_is_not(qapp):
    assert stored_effort() == Effort(60, 0.0)
    store_effort(Effort(90, 0.5))
    assert stored_effort() == Effort(90.0, 0.5)
    QSettings().setValue("solve/seconds", "soon")
    QSettings().setValue("solve/tolerance", -3)
    assert stored_effort() == Effort(60, 0.0)


def test_the_dialog_asks_for_two_numbers(qtbot, qapp):
    dialog = EffortDialog(Effort(60, 0.0))
    qtbot.addWidget(dialog)
    dialog.show()
    assert dialog.tolerance.text() == "0.00 % of the cheapest"
    dialog.tolerance.setFocus()
    dialog.tolerance.selectAll()
    QTest.keyClicks(dialog.tolerance, "0.5")
    dialog.seconds.selectAll()
    QTest.keyClicks(dialog.seconds, "120")
    assert dialog.effort == Effort(120.0, 0.5)
    ok = dialog.findChild(QDialogButtonBox).button(QDialogButtonBox.StandardButton.Ok)
    QTest.mouseClick(ok, Qt.MouseButton.LeftButton)
    assert dialog.result() == EffortDialog.DialogCode.Accepted


def test_the_crew_page_says_that_the_crew_is_the_one_so_far(made, qtbot):
    document, answers, bar = made(plan())
    page = CrewPage(document, answers)
    qtbot.addWidget(page)
    page.show()
    qtbot.waitUntil(lambda: settled(bar))
    titles = [page.table.headerData(j, Qt.Orientation.Horizontal) for j in range(page.table.columnCount())]
    assert "best\nfound" in titles
    assert "exact" not in titles
    assert page.notice.text() == "The best crew so far; cheaper ones are being looked for."
    assert not page.tally.tally.proved
    answers.stop()
    assert page.notice.text().startswith("The best crew found; it is not proved")
    answers.look_further()
    qtbot.waitUntil(lambda: answers.status is Status.READY)
    titles = [page.table.headerData(j, Qt.Orientation.Horizontal) for j in range(page.table.columnCount())]
    assert "exact" in titles
    assert not page.notice.isVisible()


def test_the_menu_and_its_keys(qtbot, qapp, workers, short):
    store_effort(Effort(30, 0.0))
    window = Window(Document(plan()), workers, Look(qapp))
    with qtbot.waitActive(window):
        window.show()
        window.activateWindow()
    menu, answers = window.answer_menu, window.answers
    assert answers.effort == Effort(30, 0.0)
    assert (menu.stop.isEnabled(), menu.further.isEnabled()) == (False, False)
    qtbot.waitUntil(lambda: settled(window.headline))
    assert menu.stop.isEnabled()
    QTest.keySequence(window, "Ctrl+.")
    assert answers.status is Status.READY
    assert (menu.stop.isEnabled(), menu.further.isEnabled()) == (False, True)
    QTest.keySequence(window, "Ctrl+Shift+L")
    qtbot.waitUntil(lambda: answers.status is Status.READY)
    assert answers.answer.seconds == 60
    window.close()
    window.deleteLater()


@pytest.mark.skipif(not PROC.is_dir(), reason="processes are looked up in /proc")
def test_an_edit_takes_the_engines_of_the_superseded_solve_along(qapp, qtbot):
    workers = Workers()
    document = Document(family_plan(20, 8, 52, 0))
    answers = Answers(document, workers)
    (working,) = workers.process_ids()
    qtbot.waitUntil(lambda: len(engines_of(working)) == 2, timeout=40_000)
    engines = engines_of(working)
    document.edit("Another plan", replace(plan(word=""), title="Small"))
    qtbot.waitUntil(lambda: not any(alive(one) for one in (working, *engines)), timeout=10_000)
    qtbot.waitUntil(lambda: answers.status is Status.READY and not answers.stale, timeout=20_000)
    assert answers.answer.state is State.PROVED
    answers.close()
    workers.close()


def test_after_stop_here_the_roundings_are_worked_out_beside_the_crew(qapp, qtbot):
    workers = Workers()
    answers = Answers(Document(family_plan(6, 3, 12, 1)), workers)
    try:
        qtbot.waitUntil(lambda: answers.can_stop, timeout=30_000)
        answers.stop()
        kept = answers.answer
        assert answers.status is Status.READY
        assert answers.can_look_further
        qtbot.waitUntil(lambda: not answers.busy, timeout=30_000)
        assert answers.status is Status.READY
        assert {Policy.BEST_CORNER, Policy.PATCHED} <= {report.policy for report in answers.answer.crews}
        assert answers.answer.exact.cost <= kept.exact.cost
        assert answers.answer.bound >= kept.bound
    finally:
        answers.close()
        workers.close()
