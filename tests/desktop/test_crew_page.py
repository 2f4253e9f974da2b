from decimal import Decimal
from functools import partial

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QLineEdit

from desktop.messages import CAUTION
from desktop.pages.crew_page import CrewPage
from solver.answer import LineKind, LineRoom, Policy, Room
from tests.desktop import samples

D = Decimal


@pytest.fixture
def make(show_page):
    return partial(show_page, CrewPage)


@pytest.fixture
def hillside(make):
    return make(samples.hillside_plan(), samples.hillside_answer())


def text(page, row, policy):
    table = page.table
    column = next(j for j, c in enumerate(table.columns) if c.policy == policy)
    at = next(i for i, r in enumerate(table.rows) if r.title == row)
    return table.index(at, column).data()


def own_column(table):
    return next(j for j, c in enumerate(table.columns) if c.own)


def type_own(page, row, typed):
    table = page.table
    at = next(i for i, r in enumerate(table.rows) if r.title == row)
    return table.setData(table.index(at, own_column(table)), typed)


def test_every_crew_stands_in_a_column(hillside, qtmodeltester):
    page, _, _ = hillside
    qtmodeltester.check(page.table, force_py=True)
    assert text(page, "Contract hand", None) == "9.41"
    assert text(page, "Contract hand", Policy.EXACT) == "9"
    assert text(page, "Fencing gang", Policy.DOWN) == "4"
    assert text(page, "Cost (EUR)", None) == "131,245.50"
    assert text(page, "Cost (EUR)", Policy.EXACT) == "133,690"
    assert text(page, "Cost (EUR)", Policy.NEAREST) == ""
    assert text(page, "More than exact (EUR)", Policy.PATCHED) == "+2,430"
    assert text(page, "Verdict", Policy.NEAREST) == "breaks 3 lines"
    assert text(page, "Verdict", Policy.UP) == "workable"
    assert text(page, "Verdict", Policy.BEST_CORNER) == "no crew"


def test_why_there_is_no_crew_is_told(hillside):
    page, _, _ = hillside
    column = next(j for j, c in enumerate(page.table.columns) if c.policy is Policy.BEST_CORNER)
    tip = page.table.index(0, column).data(Qt.ItemDataRole.ToolTipRole)
    assert "Planting stays short" in tip


def test_the_first_count_typed_starts_from_the_exact_crew(hillside):
    page, document, _ = hillside
    assert type_own(page, "Contract hand", "10")
    assert document.plan.own["Contract hand"] == (D(10),)
    assert document.plan.own["Fencing gang"] == (D(8),)
    document.undo_stack.undo()
    assert document.plan.own == {}
    assert text(page, "Contract hand", Policy.OWN) == ""


@pytest.mark.parametrize(
    ("row", "typed", "why"),
    [
        ("Fencing gang", "6", "lots of 4"),
        ("Contract hand", "-1", "less than nobody"),
        ("Contract hand", "9.5", "lots of 1"),
        ("Contract hand", "many", "many"),
        ("Contract hand", "NaN", "NaN"),
    ],
)
def test_a_refused_count_stays_with_its_reason(hillside, row, typed, why):
    page, document, _ = hillside
    remarks = []
    page.remarked.connect(remarks.append)
    assert not type_own(page, row, typed)
    assert len(remarks) == 1
    assert why in remarks[0]
    assert document.plan.own == {}
    assert text(page, row, Policy.OWN) == typed
    assert page.refusal.isVisible()
    assert why in page.refusal.text()
    assert type_own(page, row, "8")
    assert text(page, row, Policy.OWN) == "8"
    assert not page.refusal.isVisible()


def test_half_lots_are_taken_with_either_decimal_sign(hillside):
    page, document, _ = hillside
    assert type_own(page, "First-aider", "1,5")
    assert document.plan.own["First-aider"] == (D("1.5"),)
    assert type_own(page, "First-aider", "")
    assert document.plan.own["First-aider"] == (D(0),)


def test_start_from_exact_and_clear(hillside, qtbot):
    page, document, _ = hillside
    assert not page.clear_own.isEnabled()
    qtbot.mouseClick(page.from_exact, Qt.MouseButton.LeftButton)
    assert document.plan.own["Lead hand"] == (D(3),)
    assert document.plan.own["First-aider"] == (D("0.5"),)
    qtbot.mouseClick(page.clear_own, Qt.MouseButton.LeftButton)
    assert document.plan.own == {}
    document.undo_stack.undo()
    assert document.plan.own["Lead hand"] == (D(3),)


def test_only_counts_of_the_own_column_can_be_typed(hillside):
    page, _, _ = hillside
    table = page.table
    editable = [
        (i, j)
        for i in range(table.rowCount())
        for j in range(table.columnCount())
        if table.flags(table.index(i, j)) & Qt.ItemFlag.ItemIsEditable
    ]
    assert editable == [(i, own_column(table)) for i in range(5)]


def test_the_own_crew_is_typed_by_keyboard(hillside, qtbot):
    page, document, _ = hillside
    page.view.setCurrentIndex(page.table.index(0, own_column(page.table)))
    page.view.setFocus()
    qtbot.keyClicks(page.view, "4")
    qtbot.keyClick(page.view.findChild(QLineEdit), Qt.Key.Key_Return)
    qtbot.waitUntil(lambda: bool(document.plan.own))
    assert document.plan.own["Lead hand"] == (D(4),)


def test_several_phases_have_a_row_each(make):
    page, document, _ = make(samples.museum_plan(), samples.museum_answer())
    assert text(page, "Porter, The move", Policy.EXACT) == "5"
    assert text(page, "Porter, The move", None) == "4.83"
    assert type_own(page, "Porter, The move", "6")
    assert document.plan.own["Porter"] == (D(1), D(6), D(2))
    assert "Carrying bought in, The move: 120" in page.run.text()
    assert "The move: 4 join" in page.tally.accessibleDescription()


def test_what_binds_is_ordered_by_what_loosening_would_save(hillside, monkeypatch):
    page, _, answers = hillside
    assert page.binding.text().splitlines() == ["\u2022 Planting", "\u2022 First aid"]

    def line(name, saving):
        phase = "Whole job"
        return LineRoom(name, LineKind.WORK, phase, "trees", 0, 120, saving, None, 0, None, None, "")

    room = Room((line("Planting", 100), line("First aid", 900)), (), 2)
    monkeypatch.setattr(answers, "detail", lambda question: room if question == "room" else None)
    answers.detail_changed.emit("room")
    first, second = page.binding.text().splitlines()
    assert first.startswith("\u2022 First aid")
    assert "900" in first
    assert second.startswith("\u2022 Planting")


def test_the_caution_stands_at_the_foot(hillside):
    page, _, _ = hillside
    assert page.caution.text() == CAUTION
    assert page.caution.isVisible()


def test_an_impossible_plan_shows_why(make):
    page, _, _ = make(samples.hillside_plan(), samples.impossible_answer())
    assert "Planting needs 52,000 trees" in page.impossible.text()
    assert page.impossible.isVisible()
    assert not page.from_exact.isEnabled()
    assert not page.tally.isVisible()


def test_names_are_text_everywhere(make):
    from dataclasses import replace

    plan = samples.hillside_plan()
    first = replace(plan.categories[0], name="<b>Lead</b> & co")
    page, _, _ = make(replace(plan, categories=(first, *plan.categories[1:])), samples.hillside_answer())
    table = page.table
    assert table.headerData(0, Qt.Orientation.Vertical) == "<b>Lead</b> & co"
    tip = table.headerData(0, Qt.Orientation.Vertical, Qt.ItemDataRole.ToolTipRole)
    assert "&lt;b&gt;Lead&lt;/b&gt; &amp; co" in tip
    assert page.binding.textFormat() == Qt.TextFormat.PlainText


def test_tally_and_table_can_be_copied(hillside, qtbot):
    page, _, _ = hillside
    page.tally.copy_data()
    lines = QGuiApplication.clipboard().text().splitlines()
    assert lines[0].split("\t") == ["Category", "fractional", "exact", "join", "leave"]
    assert lines[2].split("\t") == ["Contract hand", "9.41", "9", "9", "–"]
    page.tally.copy_image()
    image = QGuiApplication.clipboard().image()
    assert image.width() == 2 * page.tally.width()
    page.view.copy_selection()
    assert "133,690" in QGuiApplication.clipboard().text()


def test_the_tally_is_described_in_words(hillside):
    page, _, _ = hillside
    assert page.tally.accessibleName() == "People tally"
    assert "Contract hand: fractional 9.41, exact 9 (9 join)" in page.tally.accessibleDescription()


def test_nothing_yet_says_what_to_do(make):
    from solver.plan import Plan

    page, _, _ = make(Plan())
    assert page.notice.isVisible()
    assert "Plan page" in page.notice.text()


def test_what_is_out_of_date_looks_it(hillside, qtbot):
    from dataclasses import replace

    page, document, answers = hillside
    plan = document.plan
    first = replace(plan.categories[0], pay=D(1000))
    document.edit("pay", replace(plan, categories=(first, *plan.categories[1:])))
    assert answers.stale
    qtbot.waitUntil(lambda: page.inside.graphicsEffect().isEnabled())
    assert "before the last change" in page.notice.text()
    assert page.notice.isVisible()
    answers.receive(document.plan, samples.hillside_answer())
    assert not page.inside.graphicsEffect().isEnabled()
    assert not page.notice.isVisible()


def test_a_page_follows_theme_and_zoom(hillside, qapp):
    from dataclasses import replace

    from desktop import theme

    page, _, _ = hillside
    before = page.tally.sizeHint().height()
    theme.apply(qapp, replace(theme.dark(), zoom=1.5))
    try:
        assert page.tally.sizeHint().height() > 1.4 * before
        colour = page.table.index(0, 0).data(Qt.ItemDataRole.ForegroundRole)
        assert colour == theme.dark().fractional
        assert page.view.verticalHeader().defaultSectionSize() == theme.current().px(3.25)
    finally:
        theme.apply(qapp, theme.light())
