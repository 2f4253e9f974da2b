"""The window as a planner uses it: most with the fake solver process, the whole job with the real one."""

from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtCore import QSettings, Qt, QTimer
from PySide6.QtGui import QCloseEvent, QKeySequence
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QDialog, QFileDialog

from desktop import files as files_module
from desktop import help_text, start
from desktop.answers import Status
from desktop.document import Document
from desktop.look import Look, Palette
from desktop.rail import PAGES
from solver.answer import Policy
from solver.plan import Category, Plan, Work
from solver.planfile import read_plan, save_plan

D = Decimal
PLAN = Plan(
    title="One",
    categories=(Category("A", D(10), D(40), on_books=D(3), output={"W": D(1)}),),
    works=(Work("W", "units", (D(100),)),),
)


@pytest.fixture
def usual_look(qapp):
    """The look is the usual one again at the end."""
    yield
    Look(qapp).choose(Palette.LIGHT)
    Look(qapp).zoom_to(1.0)


@pytest.fixture
def made(usual_look, open_window):
    """A window over a plan."""

    def make(plan=PLAN, workers=None, look=None):
        return open_window(Document(plan), workers, look)

    return make


@pytest.fixture
def window(made, workers):
    return made(workers=workers)


def ready(window):
    return window.answers.status is Status.READY and not window.answers.stale


def press(keys):
    QTest.keySequence(QApplication.focusWidget() or QApplication.activeWindow(), keys)


def press_in(window, keys, qtbot):
    """As `press`, once `window` has the focus back from a dialog; offscreen nobody else gives it back."""
    window.activateWindow()
    qtbot.waitUntil(lambda: window.isActiveWindow() and QApplication.focusWidget() is not None)
    press(keys)


def test_typing_a_number_changes_the_headline(window, qtbot):
    qtbot.waitUntil(lambda: ready(window))
    assert "100" in window.headline.facts.text()
    works = window.page("Plan").works
    works.setCurrentIndex(works.model().index(0, 2))
    works.setFocus()
    QTest.keyClicks(works, "2")
    editor = QApplication.focusWidget()
    QTest.keyClicks(editor, "50")
    QTest.keyClick(editor, Qt.Key.Key_Return)
    qtbot.waitUntil(lambda: "costs\u00a0EUR\u00a0250" in window.headline.facts.text())
    assert window.headline.state.text() == "✓ proved cheapest"
    press("Ctrl+Z")
    qtbot.waitUntil(lambda: "costs\u00a0EUR\u00a0100" in window.headline.facts.text())


def test_undo_belongs_to_the_plan_also_in_a_field(window):
    line = window.page("Plan").fields.line("site")
    line.setFocus()
    QTest.keyClicks(line, "abc")
    assert window.document.plan.site == "abc"
    press("Ctrl+Z")
    assert window.document.plan.site == ""
    assert line.text() == ""


def test_the_edit_menu_works_on_the_grid_with_the_focus(window):
    page = window.page("Plan")
    page.categories.setFocus()
    page.categories.setCurrentIndex(page.categories.model().index(0, 0))
    enabled = {a.text(): a.isEnabled() for a in window.edit_menu.actions}
    assert all(enabled.values())
    press("Ctrl+Shift+D")
    assert [c.name for c in window.document.plan.categories] == ["A", "A 2"]
    press("Alt+Down")
    assert [c.name for c in window.document.plan.categories] == ["A 2", "A"]
    press("Ctrl+I")
    assert len(window.document.plan.categories) == 3
    page.fields.line("title").setFocus()
    assert not any(a.isEnabled() for a in window.edit_menu.actions)


def test_pages_are_reached_by_keys_and_by_the_rail(window, qtbot):
    for at, page in enumerate(PAGES):
        press(page.shortcut)
        assert window.rail.currentRow() == at
        assert window.stack.made(page.title) is window.stack.currentWidget()
    window.rail.setCurrentRow(0)
    assert window.stack.currentWidget() is window.page("Plan")


def test_f6_goes_from_part_to_part(window):
    page = window.page("Plan")
    window.rail.setFocus()
    seen = []
    for _ in range(4):
        press("F6")
        seen.append(QApplication.focusWidget())
    assert seen == [page.categories, page.works, page.rules, window.rail]


def test_zoom_and_palette_are_remembered(window, qapp, made, workers):
    press("Ctrl++")
    press("Ctrl++")
    assert window._look.zoom == 1.25
    window._look.choose(Palette.DARK)
    again = Look(qapp)
    assert again.zoom == 1.25
    assert again.palette is Palette.DARK
    assert qapp.palette().window().color().lightness() < 60
    press("Ctrl+0")
    assert window._look.zoom == 1.0
    press("Ctrl+-")
    assert Look(qapp).zoom == 0.9


@pytest.mark.parametrize("stored", ["rubbish", "1e9", "-3"])
def test_odd_settings_are_survived(stored, qapp):
    QSettings().setValue("look/zoom", stored)
    QSettings().setValue("look/palette", stored)
    look = Look(qapp)
    assert 0.7 <= look.zoom <= 2.5
    assert look.palette is Palette.SYSTEM
    look.zoom_to(1.0)


@pytest.mark.parametrize(("answer", "closes"), [("save", True), ("drop", True), ("cancel", False)])
def test_closing_asks_to_save_first(answer, closes, window, monkeypatch, tmp_path):
    window.document.save(tmp_path / "one.crew.json")
    window.document.edit("x", replace(PLAN, title="Changed"))
    monkeypatch.setattr(files_module, "ask", lambda *_: answer)
    event = QCloseEvent()
    window.closeEvent(event)
    assert event.isAccepted() is closes
    assert read_plan(tmp_path / "one.crew.json").title == ("Changed" if answer == "save" else "One")
    assert window.recovery.file.exists() is False


def test_the_title_names_the_plan_and_marks_changes(window, tmp_path):
    assert window.windowTitle() == "One[*] – Full Complement"
    window.document.edit("x", replace(PLAN, title="Two"))
    assert window.isWindowModified()
    window.document.save(tmp_path / "two.crew.json")
    assert window.windowTitle() == "two.crew.json[*] – Full Complement"
    assert not window.isWindowModified()


def test_the_headline_leads_to_the_entry_to_mend(window, qtbot):
    window.page("Crew")
    bad = replace(PLAN.categories[0], pay=D(-1))
    window.document.edit("x", replace(PLAN, categories=(bad,)))
    qtbot.waitUntil(window.headline.button.isVisible)
    window.headline.button.click()
    page = window.stack.currentWidget()
    assert page is window.stack.made("Plan")
    assert page.categories.hasFocus()
    assert page.categories.currentIndex().data() == "! −1"


def test_remarks_stand_at_the_foot(window):
    window.page("Plan").remarked.emit("52,000 was read as 52")
    assert window.statusBar().currentMessage() == "52,000 was read as 52"


def test_help_and_about_can_be_read(window, monkeypatch):
    shown = []
    monkeypatch.setattr(QDialog, "exec", lambda dialog: shown.append(dialog.text.toPlainText()))
    press("F1")
    window.findChild(type(window.menuBar()))
    about = next(a for m in window.menuBar().actions() for a in m.menu().actions() if "About" in a.text())
    about.trigger()
    assert "Attended hours" in shown[0]
    for words in (
        "One engine",
        "within one second of work",
        "Ctrl+.\nStop here",
        "Ctrl+Shift+L\nLook further",
    ):
        assert words in shown[0]
    assert "Not a legal check" in shown[0]
    assert "DejaVu" in shown[1]
    assert "LGPL" in shown[1]


def test_help_knows_every_page_and_every_key_of_the_menus(window, monkeypatch):
    shown = []
    monkeypatch.setattr(QDialog, "exec", lambda dialog: shown.append(dialog.text.toPlainText()))
    press("F1")
    assert [title for title, _ in help_text.PAGES] == [page.title for page in PAGES]
    menus = [action.menu() for action in window.menuBar().actions()]
    with_keys = [entry for menu in menus for entry in menu.actions() if entry.shortcuts()]
    assert len(with_keys) > 30
    for entry in with_keys:
        keys = entry.shortcut().toString(QKeySequence.SequenceFormat.NativeText)
        assert f"\n{keys}\n{entry.iconText()}\n" in shown[0]


def test_no_part_scrolls_sideways_on_a_small_laptop(made, workers):
    import resources

    for path in resources.example_paths():
        window = made(read_plan(path), workers)
        page = window.page("Plan")
        for view in (v for v in (page.categories, page.works, page.phases, page.rules) if v.isVisible()):
            assert view.horizontalScrollBar().maximum() == 0, (path.name, view.accessibleName())


# starting


@pytest.fixture
def started(made, workers):
    return made(Plan(), workers)


def test_the_first_start_shows_an_example(started):
    start.first_plan(started, None)
    assert started.document.plan.title
    assert started.document.path is None


def test_a_later_start_shows_the_last_plan(started, tmp_path):
    save_plan(PLAN, tmp_path / "one.crew.json")
    started.files.open(tmp_path / "one.crew.json")
    started.document.new()
    start.first_plan(started, None)
    assert started.document.path == tmp_path / "one.crew.json"
    (tmp_path / "one.crew.json").unlink()
    start.first_plan(started, None)
    assert started.document.path is None
    assert "not there any more" in started.statusBar().currentMessage()


def test_a_named_plan_is_opened(started, tmp_path):
    save_plan(PLAN, tmp_path / "one.crew.json")
    start.first_plan(started, tmp_path / "one.crew.json")
    assert started.document.plan == PLAN


# the whole job, by keyboard, with the real solver


def type_text(text):
    for character in text:
        QTest.keyClicks(QApplication.focusWidget(), character)


def type_row(texts, qtbot):
    """Type into the cells of a row from the current one on, as a planner does: text, Tab, text, Tab."""
    for text in texts:
        before = QApplication.focusWidget()
        type_text(text)
        QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
        qtbot.waitUntil(lambda before=before: QApplication.focusWidget() is not before)


def accept_dialog():
    """Press Return in the dialog that is about to open."""

    def look():
        dialog = QApplication.activeModalWidget()
        if dialog is None or not dialog.isActiveWindow():
            QTimer.singleShot(10, look)
            return
        QTest.keyClick(dialog.focusWidget(), Qt.Key.Key_Return)

    QTimer.singleShot(0, look)


def add_rule(steps):
    """Through the menu of rule kinds: `steps` down, Return, and Return again in the dialog."""
    menu = QApplication.activePopupWidget()
    for _ in range(steps):
        QTest.keyClick(menu, Qt.Key.Key_Down)
    accept_dialog()
    QTest.keyClick(menu, Qt.Key.Key_Return)


@pytest.mark.qt_log_ignore("This plugin does not support")  # offscreen has no window manager
def test_the_whole_job_by_keyboard_alone(made, qtbot, tmp_path, monkeypatch):
    window = made(Plan())
    out, page_out = tmp_path / "job.crew.json", tmp_path / "job.pdf"
    names = iter([str(out), str(page_out)])
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_, **__: (next(names), ""))
    press("Ctrl+N")
    press("Ctrl+1")
    press("F6")  # the categories
    for row in (
        ["Lead hand", "2", "980", "38"],
        ["Contract hand", "0", "720", "40"],
        ["Learner", "3", "450", "36"],
    ):
        type_row(row, qtbot)
        QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Escape)
        press("Ctrl+End")
        press("Home")
    assert [c.name for c in window.document.plan.categories] == ["Lead hand", "Contract hand", "Learner"]
    press("F6")  # the works
    type_row(["Planting", "trees", "5000"], qtbot)
    QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Escape)
    for _ in range(3):
        press("F6")  # rules, rail, categories
    grid = QApplication.focusWidget()
    press("Ctrl+Home")
    for _ in range(5):
        press("Right")
    for rate in ("18", "24", "15"):
        type_text(rate)
        QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Return)
        qtbot.waitUntil(grid.hasFocus)
    assert [dict(c.output) for c in window.document.plan.categories] == [
        {"Planting": 18},
        {"Planting": 24},
        {"Planting": 15},
    ]
    press("F6")
    press("F6")  # the rules
    for kind in (1, 2):
        press_in(window, "Ctrl+I", qtbot)
        add_rule(kind)
    assert [type(r).__name__ for r in window.document.plan.rules] == ["Presence", "Ratio"]
    qtbot.waitUntil(lambda: ready(window), timeout=30000)
    assert window.headline.state.text() == "✓ proved cheapest"
    press_in(window, "Ctrl+2", qtbot)  # the crews, the own one in the last column
    press("F6")
    for row, count in enumerate(("1", "5", "0")):
        press("Ctrl+Home")
        press("End")
        for _ in range(row):
            press("Down")
        view = QApplication.focusWidget()
        type_text(count)
        QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Return)
        qtbot.waitUntil(view.hasFocus)
    assert {name: counts[0] for name, counts in window.document.plan.own.items()} == {
        "Lead hand": 1,
        "Contract hand": 5,
        "Learner": 0,
    }
    qtbot.waitUntil(lambda: ready(window), timeout=30000)
    assert window.answers.answer.report(Policy.OWN).crew is not None
    press("Ctrl+S")
    assert read_plan(out) == window.document.plan
    press("Ctrl+Shift+P")
    assert page_out.read_bytes().startswith(b"%PDF")


@pytest.mark.parametrize("name", ["hillside", "museum-store"])
def test_examples_are_answered_by_the_real_solver(name, made, qtbot):
    import resources

    path = next(p for p in resources.example_paths() if p.name.startswith(name))
    window = made(read_plan(path))
    qtbot.waitUntil(lambda: ready(window), timeout=30000)
    assert window.answers.answer.exact is not None
    assert "costs" in window.headline.facts.text()
    for at in range(len(PAGES)):
        window.show_page(at)


def test_a_plan_saved_and_reopened_has_the_same_answer(made, qtbot, tmp_path, monkeypatch):
    import resources

    window = made(read_plan(resources.example_paths()[0]))
    qtbot.waitUntil(lambda: ready(window), timeout=30000)
    crew = window.answers.answer.exact.crew
    chosen = tmp_path / "copy.crew.json"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(chosen), ""))
    assert window.files.save_as()
    window.document.new()
    window.files.open(chosen)
    qtbot.waitUntil(lambda: ready(window), timeout=30000)
    assert window.answers.answer.exact.crew == crew
