from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import QModelIndex, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QMessageBox

from desktop.document import Document
from desktop.tables.category_table import CATEGORIES, HOURS, LIMITS, MOVES
from desktop.tables.cell_editors import NameList
from desktop.tables.clipboard import settled
from desktop.tables.grid import Grid
from desktop.tables.grid_model import GridModel
from desktop.tables.phase_table import PHASES
from desktop.tables.work_table import WORKS
from solver.plan import (
    Category,
    Phase,
    Plan,
    Presence,
    Ratio,
    Sense,
    Supervision,
    Work,
)
from solver.review import review

D = Decimal
EDIT = Qt.ItemDataRole.EditRole
EVERY_GROUP = (LIMITS, MOVES, HOURS)


def plan():
    return Plan(
        categories=(
            Category("Lead hand", D(980), D(38), output={"Planting": D("21.5")}),
            Category(
                "Learner", D(430), D(36), absence=D("0.05"), supervision=Supervision(D(6), ("Lead hand",))
            ),
            Category("Driver", D(600), D(38)),
        ),
        works=(Work("Planting", "trees", (D(52000),)),),
        rules=(
            Ratio("Learners per lead", ("Learner",), ("Lead hand",), D(3)),
            Presence("A driver", {"Driver": D(1)}, Sense.AT_LEAST, D(1)),
        ),
    )


@pytest.fixture
def made(qtbot, qtmodeltester):
    """A grid over a document; its model is under the model tester through every change."""

    def make(table=CATEGORIES, first=None, groups=()):
        document = Document(plan() if first is None else first)
        grid = Grid(GridModel(document, table))
        qtbot.addWidget(grid)
        grid.model().show_groups(groups)
        qtmodeltester.check(grid.model())
        grid.resize(900, 400)
        with qtbot.waitActive(grid):
            grid.show()
            grid.activateWindow()
        return document, grid

    return make


def column(grid, key):
    return next(at for at, c in enumerate(grid.model().columns) if c.key == key)


def select(grid, cells):
    grid.setCurrentIndex(grid.model().index(*cells[0]))
    grid._select(cells)


def block(top, left, bottom, right):
    return [(r, c) for r in range(top, bottom + 1) for c in range(left, right + 1)]


def type_into(grid, row, key, text):
    grid.model().setData(grid.model().index(row, column(grid, key)), text)


def shown(grid, row, key):
    return grid.model().index(row, column(grid, key)).data()


def paste(grid, text):
    QGuiApplication.clipboard().setText(text)
    grid.paste()


@pytest.mark.parametrize("table", [CATEGORIES, WORKS, PHASES], ids=lambda t: t.key)
def test_every_table_is_a_sound_model_through_every_change(table, made, qtmodeltester):
    document, grid = made(table, groups=EVERY_GROUP if table is CATEGORIES else ())
    for _ in range(2):
        grid.insert_row()
        select(grid, block(0, 0, 1, 1))
        grid.duplicate_rows()
        grid.move_rows(1)
        grid.move_rows(-1)
        type_into(grid, 0, "name", "Renamed")
        grid.model().setData(grid.model().index(len(grid.model().row_names), 0), "At the end")
    end = document.plan
    while document.undo_stack.canUndo():
        document.undo_stack.undo()
    assert document.plan == plan()
    while document.undo_stack.canRedo():
        document.undo_stack.redo()
    assert document.plan == end
    document.new(Plan())
    qtmodeltester.check(grid.model())


@pytest.mark.parametrize("table", [CATEGORIES, WORKS, PHASES], ids=lambda t: t.key)
def test_an_invalid_index_has_no_data(table, made):
    _, grid = made(table)
    for role in (Qt.ItemDataRole.DisplayRole, EDIT, Qt.ItemDataRole.ToolTipRole):
        assert grid.model().data(QModelIndex(), role) is None


def test_a_number_is_kept_as_typed_and_shown_in_the_locale(made):
    document, grid = made()
    type_into(grid, 0, "pay", "1,234.50")
    assert str(document.plan.categories[0].pay) == "1234.50"
    assert shown(grid, 0, "pay") == "1234.5"
    assert document.undo_stack.undoText() == "Change pay"
    type_into(grid, 0, "pay", "52000,5")
    assert document.plan.categories[0].pay == D("52000.5")
    assert shown(grid, 0, "pay") == "52\u202f000.5"
    assert shown(grid, 0, "on_books") == "–"


def test_per_cent_are_shares_in_the_plan(made):
    document, grid = made()
    type_into(grid, 0, "absence", "7.5 %")
    assert document.plan.categories[0].absence == D("0.075")
    assert shown(grid, 0, "absence") == "7.5"
    type_into(grid, 0, "absence", "150")
    assert document.plan.categories[0].absence == D("0.075")
    assert "less than 100 %" in grid.model().index(0, column(grid, "absence")).data(
        Qt.ItemDataRole.ToolTipRole
    )


@pytest.mark.parametrize(
    ("key", "text", "reason"),
    [
        ("pay", "12o", '"12o" is not a number'),
        ("pay", "-5", "negative"),
        ("pay", "1.234567", "more than 2 decimals"),
        ("hours", "nan", "not a number"),
        ("lot", "0", "more than 0"),
        ("supervision.by", "Forman", 'no category is called "Forman"'),
        ("name", "Learner", "called"),
        ("name", " ", "a name is needed"),
    ],
)
def test_a_refused_entry_stays_in_its_cell_with_its_reason(key, text, reason, made):
    document, grid = made(groups=EVERY_GROUP)
    before = document.plan
    type_into(grid, 0, key, text)
    index = grid.model().index(0, column(grid, key))
    assert document.plan == before
    assert index.data() == f"✗ {text}"
    assert index.data(EDIT) == text
    assert reason.replace('"', "&quot;") in index.data(Qt.ItemDataRole.ToolTipRole)
    assert reason in index.data(Qt.ItemDataRole.AccessibleTextRole)
    document.undo_stack.undo()
    assert not document.refused
    document.undo_stack.redo()
    assert index.data(EDIT) == text


def test_a_refused_entry_goes_when_mended_cleared_or_escaped(made):
    document, grid = made()
    type_into(grid, 0, "pay", "x")
    type_into(grid, 0, "pay", "5")
    assert not document.refused
    type_into(grid, 0, "pay", "x")
    select(grid, [(0, column(grid, "pay"))])
    grid.clear()
    assert not document.refused
    assert document.plan.categories[0].pay == 5
    type_into(grid, 0, "pay", "x")
    QTest.keyClick(grid, Qt.Key.Key_Escape)
    assert not document.refused
    grid.clear()
    assert document.plan.categories[0].pay == 0


def test_a_refused_entry_follows_its_row(made):
    _, grid = made()
    type_into(grid, 0, "pay", "x")
    type_into(grid, 0, "name", "Foreman")
    assert shown(grid, 0, "pay") == "✗ x"
    select(grid, [(0, 0)])
    grid.move_rows(1)
    assert shown(grid, 1, "pay") == "✗ x"
    assert shown(grid, 0, "pay") == "430"


def test_a_number_that_reads_two_ways_is_not_guessed_at(made, qtbot):
    document, grid = made()
    before = document.plan.categories[0].hours
    with qtbot.waitSignal(grid.remarked) as heard:
        type_into(grid, 0, "hours", "1,234")
    assert document.plan.categories[0].hours == before
    assert shown(grid, 0, "hours") == "✗ 1,234"
    assert "type 1234 for thousands or 1.234 for decimals" in heard.args[0]
    with qtbot.waitSignal(grid.remarked) as heard:
        type_into(grid, 0, "hours", "1.234")
    assert document.plan.categories[0].hours == D("1.234")
    assert heard.args[0] == "1.234 was read as 1.234. For thousands leave the sign out."


def test_renaming_renames_everywhere_in_one_step(made):
    document, grid = made()
    type_into(grid, 0, "name", "Foreman")
    assert document.undo_stack.count() == 1
    after = document.plan
    assert after.categories[1].supervision.by == ("Foreman",)
    assert after.rules[0].per == ("Foreman",)
    document.undo_stack.undo()
    assert document.plan == plan()


def test_renaming_a_work_renames_its_outputs(made):
    document, grid = made(WORKS)
    type_into(grid, 0, "name", "Trees")
    assert dict(document.plan.categories[0].output) == {"Trees": D("21.5")}


def test_typing_into_the_last_line_adds_a_row(made):
    document, grid = made()
    type_into(grid, 3, "name", "Cook")
    assert document.plan.categories[3].name == "Cook"
    assert document.plan.categories[3].pay == 600  # as the one above
    assert document.undo_stack.count() == 1
    type_into(grid, 4, "pay", "700")
    assert document.plan.categories[4] == replace(document.plan.categories[3], name="Category 1", pay=D(700))


def test_a_block_from_a_spreadsheet_with_german_signs(made):
    document, grid = made()
    select(grid, [(1, 0)])
    at = [c.key for c in grid.model().columns]
    assert at[:5] == ["name", "on_books", "pay", "hours", "absence"]
    paste(grid, "Helfer\t2\t1.234,50\t38,5\t5,5 %\r\nFahrer\t\t990\t40\t0\r\nKoch\t1\t870\t38\t0\r\n")
    made_of = [(c.name, c.on_books, c.pay, c.hours, c.absence) for c in document.plan.categories]
    assert made_of == [
        ("Lead hand", 0, 980, 38, 0),
        ("Helfer", 2, D("1234.5"), D("38.5"), D("0.055")),
        ("Fahrer", 0, 990, 40, 0),
        ("Koch", 1, 870, 38, 0),
    ]
    assert document.undo_stack.count() == 1
    assert document.plan.rules[0].of == ("Helfer",)


def test_a_block_with_a_mistake_is_taken_but_for_the_mistake(made):
    document, grid = made()
    select(grid, [(0, column(grid, "pay"))])
    paste(grid, "500\t40\nabc\t41\n-7\t42")
    assert [c.pay for c in document.plan.categories] == [500, 430, 600]
    assert [c.hours for c in document.plan.categories] == [40, 41, 42]
    assert {place[1]: r.text for place, r in document.refused.items()} == {"Learner": "abc", "Driver": "-7"}
    document.undo_stack.undo()
    assert document.plan == plan()
    assert not document.refused


def test_what_is_only_wrong_beside_another_entry_counts(made):
    document, grid = made(groups=(LIMITS,))
    type_into(grid, 0, "at_most", "3")
    type_into(grid, 0, "at_least", "5")
    assert (document.plan.categories[0].at_least, document.plan.categories[0].at_most) == (5, 3)
    assert not document.refused
    assert review(document.plan)[0].place == "categories[0].at_most"


def test_one_cell_is_pasted_into_all_selected(made):
    document, grid = made()
    select(grid, block(0, column(grid, "hours"), 2, column(grid, "hours")))
    paste(grid, "35")
    assert [c.hours for c in document.plan.categories] == [35, 35, 35]


def test_what_does_not_fit_is_told(made, qtbot):
    _, grid = made(WORKS)
    select(grid, [(0, len(grid.model().columns) - 1)])
    with qtbot.waitSignal(grid.remarked) as heard:
        paste(grid, "5\t6\t7")
    assert heard.args[0].startswith("2 columns")
    with qtbot.waitSignal(grid.remarked) as heard:
        paste(grid, "1\n" * 2000)
    assert "too much" in heard.args[0]


def test_copy_and_paste_give_the_same_back(made):
    document, grid = made()
    type_into(grid, 0, "pay", "12345.67")
    before = document.plan
    select(grid, block(0, 1, 2, grid.model().columnCount() - 1))
    grid.copy()
    assert "12345.67" in QGuiApplication.clipboard().text()
    grid.paste()
    assert document.plan == before


def test_names_with_commas_tabs_and_quotes_survive_copying(made):
    document, grid = made()
    type_into(grid, 0, "name", 'Driver, "HGV"')
    select(grid, [(1, column(grid, "supervision.by"))])
    grid.copy()
    grid.clear()
    assert document.plan.categories[1].supervision.by == ()
    grid.paste()
    assert document.plan.categories[1].supervision.by == ('Driver, "HGV"',)


def test_fill_down_clear_and_cut(made):
    document, grid = made()
    pay = column(grid, "pay")
    select(grid, block(0, pay, 2, pay))
    grid.fill_down()
    assert [c.pay for c in document.plan.categories] == [980, 980, 980]
    grid.cut()
    assert [c.pay for c in document.plan.categories] == [0, 0, 0]
    assert QGuiApplication.clipboard().text() == "980\n980\n980\n"
    assert document.undo_stack.count() == 2


def test_rows_are_inserted_duplicated_moved_and_deleted(made):
    document, grid = made()
    names = lambda: [c.name for c in document.plan.categories]  # noqa: E731
    select(grid, [(1, 0)])
    grid.insert_row()
    assert names() == ["Lead hand", "Category 1", "Learner", "Driver"]
    select(grid, [(0, 0)])
    grid.duplicate_rows()
    assert names()[1] == "Lead hand 2"
    assert document.plan.categories[1].output == document.plan.categories[0].output
    select(grid, [(0, 0), (1, 0)])
    grid.move_rows(1)
    assert names() == ["Category 1", "Lead hand", "Lead hand 2", "Learner", "Driver"]
    assert sorted({i.row() for i in grid.selectedIndexes()}) == [1, 2]
    select(grid, [(0, 0), (2, 0)])
    grid.delete_rows()  # nobody names these two: no question
    assert names() == ["Lead hand", "Learner", "Driver"]
    assert document.undo_stack.count() == 4


@pytest.mark.parametrize("button", ["Delete", "Keep"])
def test_deleting_what_rules_use_asks_and_explains(button, made, monkeypatch):
    document, grid = made()
    asked = []

    def answer(box):
        asked.append(f"{box.text()} {box.informativeText()}")
        next(b for b in box.buttons() if b.text() == button).click()
        return 0

    monkeypatch.setattr(QMessageBox, "exec", answer)
    select(grid, [(0, 0)])
    grid.delete_rows()
    assert asked == [
        "Delete Lead hand? These rules would name nobody and are deleted: Learners per lead. "
        "These categories would be supervised by nobody and need none then: Learner."
    ]
    if button == "Keep":
        assert document.plan == plan()
        return
    assert [r.name for r in document.plan.rules] == ["A driver"]
    assert document.plan.categories[0].supervision == Supervision()
    document.undo_stack.undo()
    assert document.plan == plan()


def test_phases_and_amounts_follow_each_other(made):
    document, grid = made(PHASES)
    grid.model().setData(grid.model().index(1, 0), "Second")
    assert [p.name for p in document.plan.phases] == ["Whole job", "Second"]
    assert document.plan.works[0].amounts == (52000, 0)
    select(grid, [(1, 0)])
    grid.move_rows(-1)
    assert document.plan.works[0].amounts == (0, 52000)
    type_into(grid, 0, "periods", "3")
    assert document.plan.phases[0] == Phase("Second", D(3))


def test_the_last_phase_stays(made, monkeypatch):
    document, grid = made(PHASES)
    told = []
    monkeypatch.setattr(QMessageBox, "exec", lambda box: told.append(box.informativeText()) or 0)
    select(grid, [(0, 0)])
    grid.delete_rows()
    assert document.plan == plan()
    assert told == ["A plan has at least one phase; the last one stays."]


def test_works_give_columns_to_the_categories(made):
    document, grid = made()
    document.edit("x", replace(plan(), works=(*plan().works, Work("Fencing", "m", (D(3),)))))
    assert grid.model().columns[column(grid, "output:Fencing")].unit == "m/h"
    type_into(grid, 2, "output:Fencing", "12")
    assert document.plan.categories[2].output["Fencing"] == 12


def test_problems_are_marked_and_found(made):
    first = replace(plan(), categories=(replace(plan().categories[0], pay=D(-1)), *plan().categories[1:]))
    _, grid = made(first=first)
    grid.model().show_problems({"categories[0].pay": "-1 is negative"})
    assert shown(grid, 0, "pay") == "! −1"
    assert grid.show_place("categories[0].pay")
    assert grid.currentIndex().column() == column(grid, "pay")
    assert not grid.show_place("works[0].unit")
    assert grid.model().hidden_group_of("categories[1].lot") == LIMITS


def test_typing_by_keyboard_goes_down_and_right(made, qtbot):
    document, grid = made()
    grid.setCurrentIndex(grid.model().index(3, 0))
    grid.setFocus()
    here = lambda: (grid.currentIndex().row(), grid.currentIndex().column())  # noqa: E731
    for row, name in ((3, "Cook"), (4, "Guard")):
        QTest.keyClicks(grid, name[0])
        editor = QApplication.focusWidget()
        assert isinstance(editor, QLineEdit)
        QTest.keyClicks(editor, name[1:])
        QTest.keyClick(editor, Qt.Key.Key_Return)
        qtbot.waitUntil(lambda row=row: here() == (row + 1, 0))
    assert [c.name for c in document.plan.categories[3:]] == ["Cook", "Guard"]
    QTest.keyClicks(grid, "B")
    QTest.keyClicks(QApplication.focusWidget(), "oy")
    QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
    qtbot.waitUntil(lambda: here() == (5, 1))
    assert document.plan.categories[5].name == "Boy"
    QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Escape)


def test_names_are_ticked_by_keyboard(made):
    document, grid = made()
    grid.setCurrentIndex(grid.model().index(1, column(grid, "supervision.by")))
    QTest.keyClick(grid, Qt.Key.Key_Return)
    names = grid.findChild(NameList)
    assert names.ticked() == ("Lead hand",)
    QTest.keyClick(names, Qt.Key.Key_Space)
    QTest.keyClick(names, Qt.Key.Key_Down)
    QTest.keyClick(names, Qt.Key.Key_Down)
    QTest.keyClick(names, Qt.Key.Key_Space)
    QTest.keyClick(names, Qt.Key.Key_Return)
    assert document.plan.categories[1].supervision.by == ("Driver",)


@pytest.mark.parametrize(
    ("typed", "by"),
    [
        ("dri", ("Lead hand", "Driver")),
        ("Driver, lead", ("Lead hand", "Driver")),
        ("lead hand", ("Lead hand",)),
        ("nobody", ("Lead hand",)),
    ],
)
def test_supervisors_can_be_typed(made, typed, by):
    document, grid = made()
    grid.setCurrentIndex(grid.model().index(1, column(grid, "supervision.by")))
    QTest.keyClick(grid, Qt.Key.Key_F2)
    names = grid.findChild(NameList)
    QTest.keyClicks(names, typed)
    QTest.keyClick(names, Qt.Key.Key_Return)
    assert document.plan.categories[1].supervision.by == by


def test_html_in_names_is_text(made):
    _, grid = made()
    type_into(grid, 0, "name", "<b>A</b>")
    assert shown(grid, 0, "name") == "<b>A</b>"
    type_into(grid, 0, "pay", "<img src=x>")
    tip = grid.model().index(0, column(grid, "pay")).data(Qt.ItemDataRole.ToolTipRole)
    assert "<img" not in tip


@pytest.mark.parametrize(
    ("block", "read"),
    [
        ((("60,000",), ("1,250,000",)), (("60000",), ("1,250,000",))),
        ((("60,000", "2600.5"),), (("60000", "2600.5"),)),
        ((("60.000", "0,125"),), (("60000", "0,125"),)),
        ((("60,000", "2,600"),), (("60,000", "2,600"),)),  # nothing tells
        ((("60,000", "0,5", "0.5"),), (("60,000", "0,5", "0.5"),)),  # cells contradict each other
        ((("Gang 1,200", "1.5"),), (("Gang 1,200", "1.5"),)),
    ],
)
def test_pasted_thousands_are_told_by_the_cells_beside_them(block, read):
    assert settled(block) == read
