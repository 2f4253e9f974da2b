"""Several variants of a plan: made beside it, compared side by side, each a plain plan in a file."""

from dataclasses import replace
from decimal import Decimal
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QDialog, QFileDialog

import resources
from desktop import family, files, variants
from desktop import variant_words as say
from desktop.answers import Answers, Status
from desktop.comparison import Comparison, Stage
from desktop.dialogs.variant_dialog import VariantDialog
from desktop.document import Document
from desktop.pages.variants_page import VariantsPage
from desktop.tables.variant_table import VariantTable
from solver.plan import Category, Plan, Work
from solver.planfile import read_plan, save_plan

D = Decimal
NB = "\u00a0"


def plan(amount=100, title="Job", on_books=3, told=""):
    who = Category("A", D(10), D(40), on_books=D(on_books), output={"W": D(1)}, hours_note=told)
    return Plan(title=title, categories=(who,), works=(Work("W", "units", (D(amount),)),))


@pytest.fixture
def folder(tmp_path):
    save_plan(plan(), tmp_path / "Job.crew.json")
    save_plan(plan(150, on_books=4), tmp_path / "Job - night shift.crew.json")
    save_plan(plan(90), tmp_path / "Job - fewer.crew.json")
    save_plan(plan(70), tmp_path / "Other.crew.json")
    return tmp_path


@pytest.fixture
def make(open_window, workers):
    """A window over a plan file, with the fake solver process."""

    def make(path):
        window = open_window(workers=workers)
        if path is not None:
            assert window.files.open(path)
        return window

    return make


def done(page):
    return not page.comparison.busy and not page.comparison.is_incomplete()


def cells(page, title):
    """One row of the table."""
    table = page.table
    row = next(at for at, figure in enumerate(table.rows) if figure.title == title)
    return [table.index(row, column).data().replace(NB, " ") for column in range(table.columnCount())]


def titles(page):
    return [
        page.table.headerData(at, Qt.Orientation.Horizontal).replace("\n", "|")
        for at in range(page.table.columnCount())
    ]


# comparing


def test_the_plans_stand_side_by_side(folder, make, qtbot):
    page = make(folder / "Job.crew.json").page(say.TITLE)
    qtbot.waitUntil(lambda: done(page) and "100" in cells(page, "Cost")[0])
    assert titles(page) == ["Job|in this window", "fewer", "night shift"]
    assert cells(page, "State") == ["✓ proved cheapest"] * 3
    assert cells(page, "A") == ["3", "3", "4"]
    assert cells(page, "People") == ["3", "3", "4"]
    assert cells(page, "Cost") == ["EUR 100", "EUR 90", "EUR 150"]
    assert cells(page, "Against the first") == ["", "−10", "+50"]
    assert cells(page, "Floor") == ["EUR 99", "EUR 89", "EUR 149"]
    assert cells(page, "Whole-people cost") == ["EUR 1 (1 %)"] * 3
    assert cells(page, "Tightest line") == ["W", "W", "W"]
    assert page.hint.text() == say.HOW
    assert not page.problems.isVisible()


def test_what_differs_from_the_first_is_bold(folder, make, qtbot):
    page = make(folder / "Job.crew.json").page(say.TITLE)
    qtbot.waitUntil(lambda: done(page) and "100" in cells(page, "Cost")[0])
    row = [figure.title for figure in page.table.rows].index("A")
    fonts = [page.table.index(row, at).data(Qt.ItemDataRole.FontRole).bold() for at in range(3)]
    assert fonts == [False, False, True]
    spoken = page.table.index(row, 2).data(Qt.ItemDataRole.AccessibleTextRole)
    assert spoken == "A, night shift: 4"


def test_the_plan_in_the_window_is_compared_as_it_stands(folder, make, qtbot):
    window = make(folder / "Job.crew.json")
    page = window.page(say.TITLE)
    window.document.edit("more", plan(120))
    qtbot.waitUntil(lambda: done(page) and cells(page, "Cost")[0] == "EUR 120")
    assert titles(page)[0] == "Job|in this window, changed, not saved"
    assert cells(page, "Against the first") == ["", "−30", "+30"]
    assert read_plan(folder / "Job.crew.json") == plan()


def test_missing_and_unreadable_files_say_so(folder, make, qtbot):
    (folder / "Job - fewer.crew.json").write_text('{"format": ', encoding="utf-8")
    bad = plan().categories[0]
    save_plan(replace(plan(), categories=(replace(bad, pay=D(-1)),)), folder / "Job - night shift.crew.json")
    window = make(folder / "Job.crew.json")
    page = window.page(say.TITLE)
    page.add([folder / "gone.crew.json"])
    qtbot.waitUntil(lambda: done(page) and "100" in cells(page, "Cost")[0])
    assert cells(page, "State")[1:] == ["✗ cannot be read", "! must be mended first", "✗ cannot be read"]
    said = page.problems.text().splitlines()
    assert len(said) == 3
    assert said[0].startswith("Job - fewer.crew.json: ")
    assert "-1 is negative" in said[1]
    assert said[2].startswith("gone.crew.json: ")
    assert all(line.count(".crew.json") == 1 for line in said)


def test_an_empty_plan_and_a_lost_one_are_told(folder, make, qtbot):
    save_plan(Plan(), folder / "Job - fewer.crew.json")
    save_plan(plan(told="refused"), folder / "Job - night shift.crew.json")
    page = make(folder / "Job.crew.json").page(say.TITLE)
    qtbot.waitUntil(lambda: done(page) and "100" in cells(page, "Cost")[0])
    assert cells(page, "State")[1:] == ["○ nothing is asked in it", "! could not be worked out"]
    assert page.problems.text() == "Job - night shift.crew.json: refused: no"


def test_a_file_changed_elsewhere_is_read_again(folder, make, qtbot):
    page = make(folder / "Job.crew.json").page(say.TITLE)
    qtbot.waitUntil(lambda: done(page) and cells(page, "Cost")[1:] == ["EUR 90", "EUR 150"])
    save_plan(plan(9000), folder / "Job - fewer.crew.json")
    page.hide()
    page.show()
    qtbot.waitUntil(lambda: done(page) and cells(page, "Cost")[1] == "EUR 9,000")


def test_the_same_plan_is_asked_about_once(folder, qtbot, workers):
    save_plan(plan(90, title="Another title"), folder / "Job - night shift.crew.json")
    parent = Document()
    comparison = Comparison(workers, parent)
    asked = []
    ask = comparison._ask
    comparison._ask = lambda question, *rest: asked.append(question) or ask(question, *rest)
    comparison.show_files([folder / "Job - fewer.crew.json", folder / "Job - night shift.crew.json"])
    assert asked == []  # not before it is started
    comparison.start()
    qtbot.waitUntil(lambda: not comparison.is_incomplete() and not comparison.busy)
    assert asked == ["solve", "tightest"]
    assert [entry.stage for entry in comparison.entries()] == [Stage.DONE, Stage.DONE]
    comparison.stop()


def test_it_can_be_cancelled_and_gone_on_with(folder, make, qtbot):
    save_plan(plan(told="hang"), folder / "Job - fewer.crew.json")
    page = make(folder / "Job.crew.json").page(say.TITLE)
    qtbot.waitUntil(lambda: page.says.text() == "Working on Job - fewer.crew.json, 1 of 2")
    assert page.bar.isVisible()
    qtbot.mouseClick(page.stop_button, Qt.MouseButton.LeftButton)
    assert not page.comparison.busy
    assert page.start_button.isVisible()
    assert cells(page, "State")[1] == "… waiting"
    save_plan(plan(80), folder / "Job - fewer.crew.json")
    page.comparison.show_files(page.comparison.paths)
    qtbot.mouseClick(page.start_button, Qt.MouseButton.LeftButton)
    qtbot.waitUntil(lambda: done(page) and cells(page, "Cost")[1] == "EUR 80")


def test_nobody_works_on_it_while_nobody_looks(folder, make, qtbot):
    save_plan(plan(told="hang"), folder / "Job - fewer.crew.json")
    window = make(folder / "Job.crew.json")
    page = window.page(say.TITLE)
    qtbot.waitUntil(lambda: page.comparison.busy)
    window.page("Plan")
    assert not page.comparison.busy


def test_a_lost_process_costs_one_plan_not_the_others(folder, make, qtbot):
    save_plan(plan(told="crash"), folder / "Job - fewer.crew.json")
    page = make(folder / "Job.crew.json").page(say.TITLE)
    with qtbot.captureExceptions() as raised:
        qtbot.waitUntil(lambda: done(page) and cells(page, "Cost")[2] == "EUR 150", timeout=15000)
    assert raised == []
    assert cells(page, "State")[1] == "! could not be worked out"
    assert "stopped twice" in page.problems.text()


# choosing


def test_plans_are_added_and_left_out(folder, make, qtbot, monkeypatch):
    window = make(folder / "Job.crew.json")
    page = window.page(say.TITLE)
    picked = [str(folder / "Other.crew.json"), str(folder / "Job.crew.json")]
    monkeypatch.setattr(QFileDialog, "getOpenFileNames", lambda *_: (picked, ""))
    page.add_button.click()
    qtbot.waitUntil(lambda: done(page) and titles(page)[1:] == ["fewer", "night shift", "Other"])
    page.view.setCurrentIndex(page.table.index(0, 1))
    page.leave_button.click()
    assert titles(page)[1:] == ["night shift", "Other"]
    assert (folder / "Job - fewer.crew.json").exists()
    assert [p.name for p in family.chosen(folder / "Job.crew.json")] == [
        "Job - night shift.crew.json",
        "Other.crew.json",
    ]


def test_the_chosen_one_is_opened(folder, make, qtbot):
    window = make(folder / "Job.crew.json")
    page = window.page(say.TITLE)
    qtbot.waitUntil(lambda: done(page))
    page.view.setCurrentIndex(page.table.index(0, 0))
    assert not page.open_button.isEnabled()
    page.view.setCurrentIndex(page.table.index(0, 2))
    page.open_button.click()
    assert window.document.path == folder / "Job - night shift.crew.json"
    qtbot.waitUntil(lambda: done(page) and cells(page, "Cost")[0] == "EUR 150")
    assert titles(page) == ["night shift|in this window", "Job", "fewer"]


def test_a_column_is_chosen_and_opened_by_keyboard(folder, make, qtbot):
    window = make(folder / "Job.crew.json")
    page = window.page(say.TITLE)
    qtbot.waitUntil(lambda: done(page))
    QTest.keySequence(window, "F6")
    assert QApplication.focusWidget() is page.view
    QTest.keyClick(page.view, Qt.Key.Key_Right)
    QTest.keyClick(page.view, Qt.Key.Key_Return)
    assert window.document.path == folder / "Job - fewer.crew.json"


def test_a_plan_without_a_file_can_be_compared_too(folder, make, qtbot):
    window = make(None)
    window.document.new(plan(300))
    page = window.page(say.TITLE)
    assert page.hint.text() == say.ALONE
    page.add([folder / "Other.crew.json"])
    qtbot.waitUntil(lambda: done(page) and cells(page, "Cost") == ["EUR 300", "EUR 70"])
    assert titles(page) == ["Unsaved plan|in this window", "Other"]


def test_without_a_solver_nothing_is_asked(folder, qtbot):
    document = Document()
    document.open(folder / "Job.crew.json")
    page = VariantsPage(document, Answers(document))
    qtbot.addWidget(page)
    page.show()
    assert cells(page, "State") == ["… being worked on", "… waiting", "… waiting"]
    assert not page.start_button.isVisible()


def test_the_table_keeps_to_the_rules_of_models(folder, make, qtbot, qtmodeltester):
    page = make(folder / "Job.crew.json").page(say.TITLE)
    qtbot.waitUntil(lambda: done(page) and "100" in cells(page, "Cost")[0])
    table = VariantTable()
    qtmodeltester.check(table, force_py=True)
    compared = page.comparison.entries()
    names = [str(at) for at in range(len(compared))]
    table.show_plans(compared, names, names)
    table.show_plans(compared[:2], names[:2], names[:2])
    assert table.columnCount() == 2


def test_currencies_are_never_subtracted_from_each_other(folder, make, qtbot):
    save_plan(replace(plan(90), currency="CHF"), folder / "Job - fewer.crew.json")
    page = make(folder / "Job.crew.json").page(say.TITLE)
    qtbot.waitUntil(lambda: done(page) and "100" in cells(page, "Cost")[0])
    assert cells(page, "Cost")[1] == "CHF 90"
    assert cells(page, "Against the first") == ["", "", "+50"]


# making a variant


def naming(monkeypatch, name):
    seen = []

    def run(dialog):
        dialog.line.setText(name)
        seen.append((dialog.says.text(), dialog.accept_button.isEnabled()))
        return QDialog.DialogCode.Accepted if dialog.target else QDialog.DialogCode.Rejected

    monkeypatch.setattr(VariantDialog, "exec", run)
    return seen


def test_a_variant_is_a_plain_plan_beside_the_first(folder, make, monkeypatch, qtbot):
    window = make(folder / "Job.crew.json")
    seen = naming(monkeypatch, "two gangs")
    page = window.page(say.TITLE)
    page.duplicate_button.click()
    made = folder / "Job - two gangs.crew.json"
    assert seen == [("It is saved as Job - two gangs.crew.json.", True)]
    assert window.document.path == made
    assert read_plan(made) == replace(plan(), title="Job – two gangs")
    assert read_plan(folder / "Job.crew.json") == plan()
    assert not window.document.modified
    assert "Job - two gangs.crew.json is in the window now" in window.statusBar().currentMessage()
    qtbot.waitUntil(lambda: done(page) and titles(page)[0] == "two gangs|in this window")
    assert titles(page)[1:] == ["Job", "fewer", "night shift"]


def test_a_variant_of_a_variant_has_one_name_in_its_title(folder, make, monkeypatch):
    save_plan(plan(title="Job – fewer"), folder / "Job - fewer.crew.json")
    window = make(folder / "Job - fewer.crew.json")
    naming(monkeypatch, "none")
    window.variants.duplicate()
    assert window.document.plan.title == "Job – none"


@pytest.mark.parametrize(
    ("answer", "original", "variant"), [("both", 120, 120), ("variant", 100, 120), ("cancel", 100, None)]
)
def test_where_unsaved_changes_go_is_asked(folder, make, monkeypatch, answer, original, variant):
    window = make(folder / "Job.crew.json")
    window.document.edit("more", plan(120))
    naming(monkeypatch, "two gangs")
    monkeypatch.setattr(variants, "ask", lambda *_: answer)
    window.variants.duplicate()
    assert read_plan(folder / "Job.crew.json").works[0].amounts == (D(original),)
    made = folder / "Job - two gangs.crew.json"
    assert made.exists() is (variant is not None)
    if variant is not None:
        assert read_plan(made).works[0].amounts == (D(variant),)


def test_a_plan_without_a_file_is_saved_first(make, monkeypatch, tmp_path):
    window = make(None)
    window.document.new(plan())
    told = []
    monkeypatch.setattr(variants, "tell", lambda _parent, text: told.append(text))
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: ("", ""))
    naming(monkeypatch, "two gangs")
    window.variants.duplicate()
    assert told == [say.SAVE_FIRST]
    assert list(tmp_path.glob("*.crew.json")) == []
    out = str(tmp_path / "New.crew.json")
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (out, ""))
    window.variants.duplicate()
    assert window.document.path == tmp_path / "New - two gangs.crew.json"
    assert Path(out).exists()


def test_a_variant_that_cannot_be_written_changes_nothing(folder, make, monkeypatch):
    window = make(folder / "Job.crew.json")
    naming(monkeypatch, "two gangs")
    said = []
    monkeypatch.setattr(files, "tell", lambda _parent, text, more: said.append(text))
    monkeypatch.setattr(Document, "save", _refusing)
    window.variants.duplicate()
    assert said == ["The plan was not saved."]
    assert window.document.path == folder / "Job.crew.json"
    assert window.document.plan == plan()
    assert not window.document.modified


def _refusing(_document, path):
    from solver.planfile import CannotSave

    raise CannotSave(f"{path.name} was not saved: the folder is read-only.")


def test_the_dialog_tells_why_a_name_will_not_do(folder, qtbot):
    dialog = VariantDialog(folder / "Job.crew.json")
    qtbot.addWidget(dialog)
    assert not dialog.accept_button.isEnabled()
    dialog.line.setText("fewer")
    assert dialog.says.text() == "There is a file called Job - fewer.crew.json already."
    assert not dialog.accept_button.isEnabled()
    dialog.line.setText("later")
    assert dialog.accept_button.isEnabled()
    assert dialog.line.accessibleName() == "Name of the variant"


# with the real solver


def test_variants_of_the_example_are_worked_out(tmp_path, qtbot, open_window):
    source = next(p for p in resources.example_paths() if p.name.startswith("hillside"))
    hill = read_plan(source)
    fewer = replace(hill.works[0], amounts=(hill.works[0].amounts[0] * 9 / 10,))
    save_plan(hill, tmp_path / "Hill.crew.json")
    save_plan(replace(hill, works=(fewer, *hill.works[1:])), tmp_path / "Hill - fewer.crew.json")
    window = open_window()
    window.files.open(tmp_path / "Hill.crew.json")
    page = window.page(say.TITLE)

    def compared():
        ready = window.answers.status is Status.READY and not window.answers.stale
        return ready and done(page) and all(cells(page, "Tightest line"))

    qtbot.waitUntil(compared, timeout=30000)
    assert cells(page, "State") == ["✓ proved cheapest"] * 2
    assert cells(page, "Against the first")[1].startswith("−")
