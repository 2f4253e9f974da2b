"""A table on its way into the plan: what was understood, what not, and nothing in by halves."""

from dataclasses import replace
from decimal import Decimal

import openpyxl
import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QFileDialog, QPushButton, QWidget

from desktop import theme, traffic
from desktop.dialogs.import_dialog import ImportDialog
from desktop.document import Document, Refusal
from desktop.tables.fate_table import FateTable
from desktop.traffic import Traffic
from solver.plan import Category, Plan, Presence, Sense, Work
from solver.tableimport import ImportRefused, What, import_rows, pasted_table, propose_mapping, read_table

D = Decimal
PLAN = Plan(
    categories=(Category("Lead hand", D(980), D(38), on_books=D(2)),),
    works=(Work("Planting", "trees", (D(52000),)),),
)
CREW = """Trade;Wage;Hours;Output Planting;Boots
Lead hand;1.010,50;38;21,5;44
Driver;700;38;9;43
"""
WITH_REFUSED = CREW + "Helper;abc;38;;\n"


@pytest.fixture
def make(qtbot):
    def make(*texts, plan=PLAN, what=None):
        document = Document(plan)
        dialog = ImportDialog(document, [pasted_table(text) for text in texts], "crew.csv", what)
        qtbot.addWidget(dialog)
        with qtbot.waitActive(dialog):
            dialog.show()
            dialog.activateWindow()
        return dialog, document

    return make


def shown(dialog):
    """Name, fate and reason of every row in the order shown."""
    table = dialog.rows
    return [tuple(table.index(r, c).data() for c in range(3)) for r in range(table.rowCount())]


def understood(dialog):
    return [dialog.columns.says(row) for row in range(dialog.columns.rowCount())]


# what is shown


def test_every_column_tells_how_it_was_understood(make):
    dialog, _ = make(CREW)
    assert understood(dialog) == [
        "✓ understood as Category",
        "✓ understood as Pay (EUR per week)",
        "✓ understood as Paid hours (hours per week)",
        "✓ understood as Output Planting (trees per hour)",
        '✗ not understood: no column is called "Boots"',
    ]
    assert dialog.columns.item(1, 0).text() == "B  Wage"
    assert dialog.columns.item(1, 1).text() == "1.010,50 · 700"
    assert dialog.columns.box(4).currentText() == "left out"
    assert dialog.columns_said.text() == "4 of 5 columns understood; the others are left out."
    assert dialog.remarks.text() == "Columns are set apart by semicolons."


def test_every_row_tells_what_becomes_of_it(make):
    dialog, _ = make(WITH_REFUSED)
    assert shown(dialog)[0] == (
        "Helper",
        "✗ refused",
        'Pay (B4): "abc" is not a number; allowed are digits with one decimal sign',
    )
    assert [row[:2] for row in shown(dialog)[1:]] == [
        ("Lead hand", "✓ changes an entry"),
        ("Driver", "✓ new"),
    ]
    assert dialog.rows.headerData(0, Qt.Orientation.Vertical) == "4"
    assert dialog.rows_said.text().startswith(
        "1 row is new, 1 row changes an entry of the plan, 1 row is ref"
    )


def test_what_new_entries_lack_is_told(make):
    dialog, _ = make("Trade;Hours\nDriver;38\n")
    assert "New entries also need: Pay (EUR per week)." in dialog.columns_said.text()
    assert shown(dialog)[0][2] == "Pay (EUR per week) is missing"
    assert not dialog.accept_button.isEnabled()


def test_a_table_without_headers_is_refused_in_a_sentence(make):
    dialog, document = make("a;b\n1;2\n")
    assert dialog.header_box.text() == "none found"
    assert "say which one it is" in dialog.rows_said.text()
    assert not dialog.accept_button.isEnabled()
    assert document.plan == PLAN


def test_rows_keep_to_the_rules_of_models(qtmodeltester):
    sheet = pasted_table(WITH_REFUSED)
    table = FateTable()
    qtmodeltester.check(table, force_py=True)
    table.show(import_rows(sheet, propose_mapping(sheet, What.CATEGORIES, PLAN), PLAN).rows)
    assert table.rowCount() == 3


# choices


def test_the_meaning_of_a_column_is_changed_by_hand(make):
    dialog, _ = make("Trade;Boots;Hours\nDriver;700;38\n")
    box = dialog.columns.box(1)
    assert not dialog.accept_button.isEnabled()
    box.setFocus()
    box.setCurrentIndex(box.findData("pay"))
    assert understood(dialog)[1] == "✓ taken as Pay (EUR per week) by choice"
    assert shown(dialog) == [("Driver", "✓ new", "")]
    assert dialog.accept_button.isEnabled()


def test_a_meaning_is_taken_from_the_column_that_had_it(make):
    dialog, _ = make("Trade;Wage;Other;Hours\nDriver;700;650;38\n")
    dialog.columns.box(2).setCurrentIndex(dialog.columns.box(2).findData("pay"))
    assert dialog.columns.box(1).currentText() == "left out"
    assert "was given to another column" in understood(dialog)[1]


def test_a_meaning_passed_over_while_choosing_goes_back(make):
    dialog, _ = make("Trade;Boots;Hours\nDriver;700;38\n")
    box = dialog.columns.box(1)
    box.setFocus()
    while box.currentData() != "pay":
        QTest.keyClick(box, Qt.Key.Key_Down)
    assert understood(dialog)[0] == "✓ understood as Category"
    assert shown(dialog) == [("Driver", "✓ new", "")]


def test_a_column_is_left_out_by_choice(make):
    dialog, document = make(CREW)
    dialog.columns.box(3).setCurrentIndex(0)
    assert understood(dialog)[3] == "– left out by choice"
    dialog.accept_button.click()
    assert dict(document.plan.category("Driver").output) == {}


def test_the_wheel_never_changes_a_meaning(make):
    dialog, _ = make(CREW)
    box = dialog.columns.box(1)
    before = box.currentIndex()
    at = QPointF(box.rect().center())
    for _ in range(3):
        turn = QWheelEvent(
            at,
            box.mapToGlobal(at),
            QPoint(),
            QPoint(0, -120),
            Qt.MouseButton.NoButton,
            Qt.KeyboardModifier.NoModifier,
            Qt.ScrollPhase.NoScrollPhase,
            False,
        )
        QApplication.sendEvent(box, turn)
    assert box.currentIndex() == before


def test_another_header_row_is_chosen(make):
    dialog, _ = make("Crew;Hours\n\nTrade;Wage;Hours\nDriver;700;38\n")
    assert dialog.header_box.value() == 3
    dialog.header_box.setValue(1)
    assert dialog.columns.item(0, 0).text() == "A  Crew"
    dialog.header_box.setValue(3)
    assert shown(dialog) == [("Driver", "✓ new", "")]


def test_what_the_rows_are_is_suggested_and_can_be_changed(make):
    dialog, document = make("Work;Unit;Amount\nFencing;m;3100\n")
    assert dialog.what_box.currentText() == "works"
    dialog.what_box.setCurrentIndex(dialog.what_box.findText("categories"))
    assert not dialog.accept_button.isEnabled()
    dialog.what_box.setCurrentIndex(dialog.what_box.findText("works"))
    dialog.accept_button.click()
    assert document.plan.works[1] == Work("Fencing", "m", (D(3100),))


# accepting


def test_accepting_is_one_undo_step(make, qtbot):
    dialog, document = make(CREW)
    with qtbot.waitSignal(dialog.told) as told:
        dialog.accept_button.click()
    assert told.args == ["2 categories imported from crew.csv."]
    assert not dialog.isVisible()
    assert [c.name for c in document.plan.categories] == ["Lead hand", "Driver"]
    assert document.plan.category("Lead hand").pay == D("1010.50")
    assert document.plan.category("Lead hand").on_books == 2
    assert document.undo_stack.count() == 1
    assert document.undo_stack.undoText() == "Import categories"
    document.undo_stack.undo()
    assert document.plan == PLAN


def test_refused_rows_are_left_out_only_when_ticked(make, qtbot):
    dialog, document = make(WITH_REFUSED)
    assert not dialog.accept_button.isEnabled()
    with pytest.raises(ImportRefused):
        dialog.intake.accept()
    assert document.plan == PLAN
    dialog.leave_out.setChecked(True)
    with qtbot.waitSignal(dialog.told) as told:
        dialog.accept_button.click()
    assert told.args == ["2 categories imported from crew.csv. 1 row was left out."]
    assert [c.name for c in document.plan.categories] == ["Lead hand", "Driver"]


def test_leaving_out_is_agreed_to_anew_when_other_rows_are_refused(make):
    dialog, _ = make(WITH_REFUSED)
    dialog.leave_out.setChecked(True)
    dialog.columns.box(4).setCurrentIndex(dialog.columns.box(4).findData("on_books"))
    assert not dialog.leave_out.isChecked()
    assert not dialog.accept_button.isEnabled()


def test_cancelling_changes_nothing(make):
    dialog, document = make(CREW)
    dialog.reject()
    assert document.plan == PLAN
    assert document.undo_stack.count() == 0


def test_a_refused_entry_gives_way_to_the_imported_value(make):
    dialog, document = make(CREW)
    places = {
        ("categories", "Lead hand", "pay"): Refusal("x", "no"),
        ("categories", "Lead hand", "absence"): Refusal("y", "no"),
    }
    document.edit("typed", document.plan, refused=places)
    dialog.accept_button.click()
    assert set(document.refused) == {("categories", "Lead hand", "absence")}


def test_a_big_table_is_refused_whole(make):
    dialog, document = make(CREW + "".join(f"C{i};700;38;;\n" for i in range(10_000)))
    assert "a plan holds at most 1,000" in dialog.rows_said.text()
    assert not dialog.accept_button.isEnabled()
    assert document.plan == PLAN


@pytest.mark.parametrize("zoom", [1.0, 1.5])
def test_the_dialog_fits_a_small_laptop(qtbot, qapp, zoom):
    theme.apply(qapp, replace(theme.light(), zoom=zoom))
    window = QWidget()
    qtbot.addWidget(window)
    window.resize(1366, 768)
    dialog = ImportDialog(Document(PLAN), [pasted_table(WITH_REFUSED)], "crew.csv", parent=window)
    dialog.show()
    assert dialog.width() <= 1366
    assert dialog.height() <= 768
    dialog.close()
    theme.apply(qapp, theme.light())


# several sheets


def test_sheets_come_in_one_after_the_other_works_first(make):
    works = "Work;Unit;Amount\nFencing;m;3100\n"
    crew = "Trade;Wage;Hours;Output Fencing\nDriver;700;38;9\n"
    rules = "Kind;Rule;People;Sense;Number\npresence;Drivers;Driver;at least;1\n"
    dialog, document = make(rules, crew, works)
    for what in ("works", "categories"):
        assert dialog.what_box.currentText() == what
        assert dialog.next_button.isVisible()
        dialog.next_button.click()
        assert dialog.isVisible()
    assert dialog.what_box.currentText() == "rules"
    assert not dialog.next_button.isVisible()
    dialog.accept_button.click()
    assert dict(document.plan.category("Driver").output) == {"Fencing": 9}
    assert document.plan.rules == (Presence("Drivers", {"Driver": D(1)}, Sense.AT_LEAST, D(1)),)
    assert document.undo_stack.count() == 3


# by keyboard


def test_return_in_a_choice_imports_nothing(make):
    dialog, document = make(CREW)
    for box in (dialog.what_box, dialog.header_box, dialog.columns.box(0)):
        box.setFocus()
        QTest.keyClick(box, Qt.Key.Key_Return)
    assert dialog.isVisible()
    assert document.plan == PLAN


def test_a_table_is_imported_by_keyboard_alone(make):
    dialog, document = make("Trade;Boots;Hours\nDriver;700;38\nHelper;x;38\n")
    seen = []
    dialog.what_box.setFocus()
    for _ in range(30):
        focused = QApplication.focusWidget()
        seen.append(focused.accessibleName() or focused.text())
        if focused is dialog.columns.box(1):
            while focused.currentData() != "pay":
                QTest.keyClick(focused, Qt.Key.Key_Down)
        if focused is dialog.leave_out:
            QTest.keyClick(focused, Qt.Key.Key_Space)
        if focused is dialog.accept_button:
            QTest.keyClick(focused, Qt.Key.Key_Return)
            break
        QTest.keyClick(focused, Qt.Key.Key_Tab)
    assert [c.name for c in document.plan.categories] == ["Lead hand", "Driver"]
    assert "What column B  Boots means" in seen, seen
    assert "Rows" in seen


# files


@pytest.fixture
def office(qtbot):
    document = Document(PLAN)
    window = QPushButton()
    qtbot.addWidget(window)
    return Traffic(document, window), document


def test_a_chosen_file_is_shown_and_imported(office, monkeypatch, tmp_path):
    made, document = office
    path = tmp_path / "crew.csv"
    path.write_text(CREW, encoding="utf-8")
    monkeypatch.setattr(QFileDialog, "getOpenFileName", lambda *_: (str(path), ""))
    monkeypatch.setattr(ImportDialog, "exec", lambda dialog: dialog.accept_button.click())
    told = []
    made.told.connect(told.append)
    made.import_table()
    assert told == ["2 categories imported from crew.csv."]
    assert len(document.plan.categories) == 2


def test_a_file_that_is_no_table_is_told(office, monkeypatch, tmp_path):
    made, document = office
    path = tmp_path / "crew.xlsx"
    path.write_bytes(b"MZ\x90\x00not a workbook")
    said = []
    monkeypatch.setattr(traffic, "tell", lambda _parent, text, more: said.append((text, more)))
    made.read(path)
    assert said == [("crew.xlsx was not imported.", "crew.xlsx: It is called a workbook, but it is not one.")]
    assert document.plan == PLAN


def test_the_template_has_the_headers_that_the_import_understands(office, monkeypatch, tmp_path, qtbot):
    made, _ = office
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(tmp_path / "blank"), ""))
    with qtbot.waitSignal(made.told):
        made.save_template()
    book = openpyxl.load_workbook(tmp_path / "blank.xlsx")
    assert book.sheetnames == ["Categories", "Works", "Rules"]
    document = Document(PLAN)
    dialog = ImportDialog(document, read_table(tmp_path / "blank.xlsx"), "blank.xlsx")
    qtbot.addWidget(dialog)
    assert all(says.startswith("✓") for says in understood(dialog))
    dialog.next_button.click()
    assert all(says.startswith("✓") for says in understood(dialog))


def test_a_template_that_cannot_be_written_is_told(office, monkeypatch, tmp_path):
    made, _ = office
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(tmp_path / "no" / "x.xlsx"), ""))
    said = []
    monkeypatch.setattr(traffic, "tell", lambda _parent, text, more: said.append(text))
    made.save_template()
    assert said == ["x.xlsx was not written."]
