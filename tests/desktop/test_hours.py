"""Hours and pay worked out from a contract: every step told, the result in the plan as one undo step."""

from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QDialog, QWidget

from desktop import hours_words as say
from desktop import theme
from desktop.dialogs.hours_dialog import HoursDialog
from desktop.document import Document, Refusal
from desktop.edits.reckoned import by_hand
from desktop.tables.category_grid import CategoryGrid
from desktop.tables.step_table import StepTable
from solver.plan import Category, Plan
from solver.planfile import dump_plan, parse_plan

D = Decimal
NB = "\u00a0"
PLAN = Plan(
    categories=(
        Category("Lead hand", D(980), D(38), absence=D("0.05")),
        Category("Learner", D(430), D(36)),
    )
)
TYPED = {
    say.LEAVE: "28",
    say.HOLIDAYS: "9",
    say.SICKNESS: "3.5",
    say.TRAINING: "16",
}


@pytest.fixture
def make(qtbot):
    def make(plan=PLAN, at=0):
        dialog = HoursDialog(plan, plan.categories[at])
        qtbot.addWidget(dialog)
        with qtbot.waitActive(dialog):
            dialog.show()
            dialog.activateWindow()
        return dialog

    return make


def type_in(dialog, texts):
    for name, text in texts.items():
        field = dialog.form.field(name)
        field.selectAll()
        QTest.keyClicks(field, text)


def steps(dialog):
    rows = dialog.steps.rows
    return {row.what: (row.how.replace(NB, " "), row.result.replace(NB, " ")) for row in rows}


def with_away(dialog):
    dialog.form.measure(say.SICKNESS).setCurrentIndex(2)  # per cent of paid hours
    dialog.form.measure(say.TRAINING).setCurrentIndex(1)  # hours
    type_in(dialog, TYPED)


def test_every_step_is_a_sum(make):
    dialog = make()
    with_away(dialog)
    assert steps(dialog) == {
        "Paid a year": ("38 h × 52", "1,976 h"),
        "One working day": ("38 h ÷ 5", "7.6 h"),
        "Annual leave": ("28 × 7.6 h", "212.8 h"),
        "Public holidays": ("9 × 7.6 h", "68.4 h"),
        "Sickness": ("3.5 % × 1,976 h", "69.16 h"),
        "Training": ("16 h", "16 h"),
        "Away a year": ("212.8 + 68.4 + 69.16 + 16 h", "366.36 h"),
        "Attended a year": ("1,976 h − 366.36 h", "1,609.64 h"),
        "Absence": ("366.36 h ÷ 1,976 h", "18.54 %"),
        "Paid hours per week": ("38 h", "38 h"),
        "Attended hours per week": ("38 h × (1 − 18.54 %)", "30.95 h"),
        "Part of a full-time post": ("38 h ÷ 40 h", "0.95"),
    }
    assert dialog.category.absence == D("0.185405")
    assert dialog.outcome.text().startswith("Goes into Lead hand: hours 38, absence 18.5405")
    assert dialog.category.pay == 980


def test_pay_comes_from_salary_and_on_costs(make):
    dialog = make()
    assert not dialog.form.field(say.SALARY).isEnabled()
    dialog.form.pay.setChecked(True)
    assert dialog.wrong.text() == "Salary a year: a number is needed"
    assert "Paid hours per week" in steps(dialog)  # the hours stand already
    assert not dialog.take_button.isEnabled()
    type_in(dialog, {say.SALARY: "44200", say.ON_COST_SHARE: "21.3", say.ON_COSTS: "650"})
    assert steps(dialog)["Cost a year"] == ("44,200 × (1 + 21.3 %) + 650", "EUR 54,264.60")
    assert steps(dialog)["Pay per week"] == ("54,264.60 ÷ 52", "EUR 1,043.55")
    assert dialog.category.pay == D("1043.55")


def test_a_month_is_a_twelfth_of_the_year(make):
    dialog = make(replace(PLAN, period="month"))
    assert (
        dialog.wrong.text() == "Hours a week: a number is needed"
    )  # 38 hours a month are no weekly contract
    type_in(dialog, {say.HOURS_A_WEEK: "39"})
    assert steps(dialog)["Paid hours per month"] == ("39 h × 4.3333", "169 h")
    dialog.form.pay.setChecked(True)
    type_in(dialog, {say.SALARY: "36000"})
    assert steps(dialog)["Months a year"] == ("52 ÷ 4.3333", "12")
    assert steps(dialog)["Pay per month"][1] == "EUR 3,000"


def test_a_period_of_unknown_length_is_asked_for(make):
    dialog = make(replace(PLAN, period="campaign"))
    type_in(dialog, {say.HOURS_A_WEEK: "40"})
    assert dialog.wrong.text() == "Weeks in one campaign: a number is needed"
    type_in(dialog, {"Weeks in one campaign": "6"})
    assert steps(dialog)["Paid hours per campaign"] == ("40 h × 6", "240 h")


@pytest.mark.parametrize(
    ("name", "text", "said"),
    [
        (say.HOURS_A_WEEK, "170", "Hours a week: 170 is not allowed; it must be more than 0 and at most 168"),
        (
            say.HOURS_A_WEEK,
            "forty",
            'Hours a week: "forty" is not a number; allowed are digits with one decim',
        ),
        (say.DAYS_A_WEEK, "0", "Days a week: 0 is not allowed; it must be more than 0 and at most 7"),
        (say.LEAVE, "300", "Paid, but not at work, in a year: 2,280 hours away leave nothing of 1,976"),
        (say.LEAVE, "-1", "Paid, but not at work, in a year: -1 is not allowed; it must be 0 or more"),
        (say.FULL_TIME, "0", "Full time is, hours a week: 0 is not allowed; it must be more than 0"),
    ],
)
def test_what_makes_no_year_is_told_and_stays(make, name, text, said):
    dialog = make()
    type_in(dialog, {name: text})
    assert dialog.wrong.text().startswith(said)
    assert dialog.form.field(name).text() == text
    assert not dialog.take_button.isEnabled()
    assert dialog.steps.rowCount() == 0
    QTest.keyClick(dialog.form.field(name), Qt.Key.Key_Return)
    assert dialog.isVisible()


def test_every_field_has_a_name_for_those_who_do_not_see_it(make):
    dialog = make()
    form = dialog.form
    for name in (say.HOURS_A_WEEK, say.LEAVE, say.SALARY):
        assert form.field(name).accessibleName() == name
    assert form.measure(say.LEAVE).accessibleName() == "Annual leave is counted in"


def test_the_steps_keep_to_the_rules_of_models(qtmodeltester, make):
    dialog, table = make(), StepTable()
    qtmodeltester.check(table, force_py=True)
    table.show(dialog.steps.rows)
    assert table.rowCount() == 7


@pytest.mark.parametrize("zoom", [1.0, 1.5])
def test_the_dialog_fits_a_small_laptop(qtbot, qapp, zoom):
    theme.apply(qapp, replace(theme.light(), zoom=zoom))
    window = QWidget()
    qtbot.addWidget(window)
    window.resize(1366, 768)
    dialog = HoursDialog(PLAN, PLAN.categories[0], window)
    dialog.form.pay.setChecked(True)
    dialog.show()
    assert dialog.width() <= 1366
    assert dialog.height() <= 768
    dialog.close()
    theme.apply(qapp, theme.light())


# in the plan


@pytest.fixture
def grid(qtbot):
    document = Document(PLAN)
    made = CategoryGrid(document)
    qtbot.addWidget(made)
    made.setCurrentIndex(made.model().index(0, 0))
    return made, document


def answering(monkeypatch, do, code=QDialog.DialogCode.Accepted):
    def run(dialog):
        do(dialog)
        return code

    monkeypatch.setattr(HoursDialog, "exec", run)


def tip(grid, row, key):
    columns = [column.key for column in grid.model().columns]
    return grid.model().index(row, columns.index(key)).data(Qt.ItemDataRole.ToolTipRole)


def test_the_result_is_one_undo_step_and_its_note_a_tooltip(grid, monkeypatch):
    made, document = grid
    answering(monkeypatch, lambda d: type_in(d, {say.LEAVE: "26"}))
    document.edit("typed", PLAN, refused={("categories", "Lead hand", "absence"): Refusal("x", "no")})
    made.work_out_hours()
    category = document.plan.categories[0]
    assert (category.hours, category.absence, category.pay) == (38, D("0.1"), 980)
    assert document.undo_stack.undoText() == "Work out hours of Lead hand"
    assert document.refused == {}
    for key in ("hours", "absence"):
        assert "38 h a week x 52 weeks = 1,976 h paid a year" in tip(made, 0, key)
    assert "38 h a week" not in tip(made, 0, "pay")
    assert parse_plan(dump_plan(document.plan)).categories[0].hours_note == category.hours_note
    document.undo_stack.undo()
    assert document.plan == PLAN


def test_pay_that_was_worked_out_is_told_with_it(grid, monkeypatch):
    made, document = grid

    def pay(dialog):
        dialog.form.pay.setChecked(True)
        type_in(dialog, {say.SALARY: "52000"})

    answering(monkeypatch, pay)
    made.work_out_hours()
    assert document.plan.categories[0].pay == 1000
    assert "52,000 EUR a year" in tip(made, 0, "pay")
    answering(monkeypatch, lambda d: d.form.pay.setChecked(False))
    made.work_out_hours()
    assert "52,000 EUR a year" in tip(made, 0, "pay")


def test_cancelling_changes_nothing(grid, monkeypatch):
    made, document = grid
    answering(monkeypatch, lambda d: type_in(d, {say.LEAVE: "26"}), QDialog.DialogCode.Rejected)
    made.work_out_hours()
    assert document.plan == PLAN


def test_what_was_typed_is_offered_again(grid, monkeypatch):
    made, _ = grid

    def first(dialog):
        with_away(dialog)
        dialog.form.pay.setChecked(True)
        type_in(dialog, {say.SALARY: "44200"})

    answering(monkeypatch, first)
    made.work_out_hours()
    seen = []
    answering(monkeypatch, lambda d: seen.append(d.form.texts()), QDialog.DialogCode.Rejected)
    made.work_out_hours()
    made.setCurrentIndex(made.model().index(1, 0))
    made.work_out_hours()
    assert seen[0][say.SALARY] == "44200"
    assert seen[1][say.LEAVE] == "28"
    assert seen[1][f"{say.SICKNESS} in"] == "share of paid hours"
    assert seen[1][say.HOURS_A_WEEK] == "36"  # the contract of the other category
    assert seen[1][say.SALARY] == ""


def test_without_a_category_there_is_nothing_to_work_out(grid):
    made, _ = grid
    remarks = []
    made.remarked.connect(remarks.append)
    made.setCurrentIndex(made.model().index(2, 0))
    made.work_out_hours()
    assert remarks == [say.CHOOSE_CATEGORY]


def test_typing_over_a_value_is_told_in_its_note(grid, monkeypatch):
    made, document = grid
    answering(monkeypatch, lambda d: type_in(d, {say.LEAVE: "26"}))
    made.work_out_hours()
    columns = [column.key for column in made.model().columns]
    made.model().setData(made.model().index(0, columns.index("hours")), "40")
    assert document.plan.categories[0].hours_note.endswith("Hours: changed by hand since.")
    made.model().setData(made.model().index(0, columns.index("hours")), "41")
    assert document.plan.categories[0].hours_note.count("by hand") == 1
    typed = Category("A", D(1), D(2))
    assert by_hand(typed, replace(typed, pay=D(3)), "Pay").hours_note == ""


def test_by_keyboard_alone(grid, qtbot, monkeypatch):
    made, document = grid

    def run(dialog):
        with qtbot.waitActive(dialog):
            dialog.show()
            dialog.activateWindow()
        for _ in range(30):
            focused = QApplication.focusWidget()
            if focused is dialog.form.field(say.LEAVE):
                QTest.keyClicks(focused, "26")
            if focused is dialog.take_button:
                QTest.keyClick(focused, Qt.Key.Key_Space)
                break
            QTest.keyClick(focused, Qt.Key.Key_Tab)
        return dialog.result()

    monkeypatch.setattr(HoursDialog, "exec", run)
    made.work_out_hours()
    assert document.plan.categories[0].absence == D("0.1")
