from decimal import Decimal

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QDialog

from desktop.document import Document
from desktop.rules import rule_list
from desktop.rules.kinds import KINDS, kind_of, sentence
from desktop.rules.rule_dialog import RuleDialog
from desktop.rules.rule_list import RuleList
from solver.plan import Budget, Category, Phase, Plan, Presence, Ratio, Sense, Share

D = Decimal
CATEGORIES = tuple(Category(name, D(1), D(38)) for name in ("Lead hand", "Learner", "Driver"))
PLAN = Plan(
    categories=CATEGORIES,
    rules=(
        Ratio("Learners", ("Learner",), ("Lead hand",), D(2)),
        Presence("Drivers", {"Driver": D(1)}, Sense.AT_LEAST, D(1)),
        Budget("Money", D(95000)),
    ),
)
TWO_PHASES = Plan(phases=(Phase("Early"), Phase("Late")), categories=CATEGORIES)


@pytest.mark.parametrize(
    ("rule", "says"),
    [
        (Presence("", {"Driver": D(1)}, Sense.AT_LEAST, D(1)), "At least 1 of Driver"),
        (
            Presence("", {"Driver": D(1), "Learner": D(1)}, Sense.EXACTLY, D(4)),
            "Exactly 4 of Driver or Learner",
        ),
        (
            Presence("", {"Driver": D(1), "Learner": D("0.5")}, Sense.AT_MOST, D(0), ("Late",)),
            "At most 0, counting Driver as 1 and Learner as 0.5, only in Late",
        ),
        (
            Ratio("", ("Learner",), ("Lead hand", "Driver"), D(2)),
            "At most 2 Learner for each Lead hand or Driver",
        ),
        (
            Ratio("", ("Learner",), ("Lead hand",), D("0.5"), None, True),
            "At most 0.5 Learner for each Lead hand, on every working day too",
        ),
        (
            Share("", ("Driver",), ("Lead hand", "Learner", "Driver"), Sense.AT_LEAST, D("0.25")),
            "At least 25 % of all people are Driver",
        ),
        (
            Share("", ("Driver",), ("Driver", "Learner"), Sense.AT_MOST, D("0.125")),
            "At most 12.5 % of Driver and Learner are Driver",
        ),
        (Budget("", D(95000)), "The whole job costs at most EUR 95\u202f000"),
    ],
)
def test_rules_are_sentences(rule, says, qapp):
    assert sentence(rule, TWO_PHASES) == says


@pytest.mark.parametrize("kind", KINDS, ids=lambda k: k.title)
@pytest.mark.parametrize("plan", [PLAN, TWO_PHASES], ids=["one phase", "two phases"])
def test_a_form_gives_back_the_rule_it_shows(kind, plan, qtbot):
    rule = kind.new(plan)
    form = kind.form(plan, rule)
    qtbot.addWidget(form)
    assert form.rule() == rule


@pytest.fixture
def rules(qtbot, qtmodeltester):
    document = Document(PLAN)
    made = RuleList(document)
    qtbot.addWidget(made)
    qtmodeltester.check(made.rule_model)
    made.show()
    return document, made


def answered(monkeypatch, do):
    """Every dialog is answered by `do` and closed."""

    def answer(dialog):
        do(dialog)
        return QDialog.DialogCode.Accepted

    monkeypatch.setattr(rule_list.RuleDialog, "exec", answer)


def test_a_rule_is_added_from_its_form(rules, monkeypatch):
    document, shown = rules

    def fill(dialog):
        dialog.form._name.setText("Own people")
        dialog.form._fraction.setText("30,5")
        dialog.form._name.textEdited.emit("")
        dialog.accept()

    answered(monkeypatch, fill)
    shown.add(next(k for k in KINDS if k.of is Share))
    assert document.plan.rules[-1] == Share(
        "Own people", ("Lead hand",), ("Lead hand", "Learner", "Driver"), Sense.AT_LEAST, D("0.305")
    )
    assert document.undo_stack.undoText() == "Insert rule"
    assert shown.rule_model.index(3, 1).data() == "At least 30.5 % of all people are Lead hand"


def test_return_opens_the_rule_and_cancel_changes_nothing(rules, monkeypatch):
    document, shown = rules
    opened = []
    monkeypatch.setattr(
        rule_list.RuleDialog,
        "exec",
        lambda dialog: opened.append(dialog.rule.name) or QDialog.DialogCode.Rejected,
    )
    shown.selectRow(1)
    QTest.keyClick(shown, Qt.Key.Key_Return)
    assert opened == ["Drivers"]
    assert document.undo_stack.count() == 0


@pytest.mark.parametrize(
    ("change", "wrong"),
    [
        (lambda form: form._at_most.setText("2x"), '"2x" is not a number'),
        (lambda form: form._at_most.setText("-1"), "At most: -1 is negative"),
        (lambda form: form._name.setText("Drivers"), 'another one is called "Drivers" already'),
        (lambda form: form._name.setText(""), "Name: is empty"),
        (lambda form: form._per.item(0).setCheckState(Qt.CheckState.Unchecked), "For each of: is empty"),
    ],
)
def test_a_dialog_says_what_is_wrong_and_stays_open(change, wrong, qtbot):
    dialog = RuleDialog(PLAN, kind_of(PLAN.rules[0]), PLAN.rules[0], 0)
    qtbot.addWidget(dialog)
    change(dialog.form)
    dialog.accept()
    assert dialog.wrong.text().startswith(wrong)
    assert dialog.result() != QDialog.DialogCode.Accepted


def test_weights_are_typed_beside_the_names(qtbot):
    form = kind_of(PLAN.rules[1]).form(PLAN, PLAN.rules[1])
    qtbot.addWidget(form)
    form._weights.item(0, 0).setCheckState(Qt.CheckState.Checked)
    form._weights.item(0, 1).setText("0,5")
    assert dict(form.rule().weights) == {"Lead hand": D("0.5"), "Driver": 1}


def test_rules_are_copied_duplicated_moved_and_deleted(rules):
    document, shown = rules
    names = lambda: [r.name for r in document.plan.rules]  # noqa: E731
    shown.selectRow(0)
    shown.copy()
    assert QGuiApplication.clipboard().text() == "Learners\tAt most 2 Learner for each Lead hand\n"
    shown.duplicate_rows()
    assert names() == ["Learners", "Learners 2", "Drivers", "Money"]
    shown.selectRow(3)
    shown.move_rows(-1)
    assert names() == ["Learners", "Learners 2", "Money", "Drivers"]
    assert [i.row() for i in shown.selectionModel().selectedRows()] == [2]
    shown.delete_rows()
    assert names() == ["Learners", "Learners 2", "Drivers"]
    while document.undo_stack.canUndo():
        document.undo_stack.undo()
    assert document.plan == PLAN


def test_problems_are_marked_and_found(rules):
    _, shown = rules
    shown.rule_model.show_problems({"rules[1].bound": "-1 is negative"})
    assert shown.rule_model.index(1, 0).data() == "! Drivers"
    assert "negative" in shown.rule_model.index(1, 0).data(Qt.ItemDataRole.ToolTipRole)
    assert shown.show_place("rules[1].bound")
    assert shown.currentIndex().row() == 1
    assert not shown.show_place("works[0]")


def test_sentences_follow_renamed_categories(rules):
    from desktop.edits import categories

    document, shown = rules
    document.edit("x", categories.rename(PLAN, "Learner", "Trainee"))
    assert shown.rule_model.index(0, 1).data() == "At most 2 Trainee for each Lead hand"
