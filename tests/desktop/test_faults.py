"""The disk and the folders fail: a sentence, nothing lost, nothing half written, and the program goes on."""

import errno
import os
import shutil
import subprocess
import sys
import time
from dataclasses import replace
from decimal import Decimal
from pathlib import Path

import pytest

from desktop import recovery as recovery_module
from desktop import workers as workers_module
from desktop.answers import Answers, Status
from desktop.claim import Claim
from desktop.document import Document
from desktop.rail import OUTPUT
from desktop.recovery import Recovery
from solver.plan import Category, Plan, Work
from solver.planfile import CannotSave, read_plan

ROOT = Path(__file__).parents[2]
D = Decimal
PLAN = Plan(
    title="One",
    categories=(Category("A", D(10), D(40), on_books=D(3), output={"W": D(1)}),),
    works=(Work("W", "units", (D(100),)),),
)
CHANGED = replace(PLAN, title="Two")


@pytest.fixture
def document(qapp, tmp_path):
    made = Document(PLAN)
    made.save(tmp_path / "one.crew.json")
    return made


@pytest.fixture
def window(document, workers, open_window):
    return open_window(document, workers)


def failing(code):
    def fail(*_arguments, **_options):
        raise OSError(code, os.strerror(code))

    return fail


@pytest.fixture(params=[("fsync", errno.ENOSPC), ("open", errno.EROFS), ("replace", errno.EACCES)], ids=str)
def broken_disk(request, monkeypatch):
    """Makes writing fail: full when it comes to the bytes, read-only folder, no permission in it."""
    name, code = request.param

    def break_it():
        fail, real = failing(code), getattr(os, name)
        monkeypatch.setattr(
            os,
            name,
            fail
            if name != "open"
            else lambda path, flags, *m: (fail if flags & os.O_CREAT else real)(path, flags, *m),
        )

    return break_it


def files_in(folder):
    return sorted(path.name for path in folder.iterdir() if path.is_file())


def test_a_failed_save_leaves_the_file_and_the_changes(document, broken_disk, tmp_path, monkeypatch):
    document.edit("Rename", CHANGED)
    broken_disk()
    with pytest.raises(CannotSave, match="was not saved"):
        document.save()
    monkeypatch.undo()
    assert read_plan(tmp_path / "one.crew.json") == PLAN
    assert files_in(tmp_path) == ["one.crew.json"]
    assert document.modified
    assert document.plan == CHANGED
    document.save()
    assert read_plan(tmp_path / "one.crew.json") == CHANGED


def test_a_failed_page_is_told_and_leaves_the_old_one(window, broken_disk, tmp_path, qtbot, monkeypatch):
    out = tmp_path / "page.pdf"
    out.write_bytes(b"the old page")
    qtbot.waitUntil(lambda: window.answers.status is Status.READY)
    page, told = window.page(OUTPUT), []
    monkeypatch.setattr(page, "tell", told.append)
    broken_disk()
    page.write_pdf(out)
    assert len(told) == 1
    assert "was not saved" in told[0]
    assert out.read_bytes() == b"the old page"
    assert [name for name in files_in(tmp_path) if name.endswith(".part")] == []


def test_a_failed_recovery_copy_is_told_and_typing_goes_on(window, broken_disk, qtbot):
    broken_disk()
    window.document.edit("Rename", CHANGED)
    window.recovery.write()
    qtbot.waitUntil(lambda: "No recovery copy could be written" in window.statusBar().currentMessage())
    window.document.edit("Rename", replace(CHANGED, title="Three"))
    assert window.document.plan.title == "Three"


def test_what_a_killed_save_left_goes_with_a_later_one(document, tmp_path):
    old = tmp_path / ".one.crew.json.0123456789ab.part"
    young, foreign = tmp_path / ".one.crew.json.ba9876543210.part", tmp_path / ".one.crew.json.mine.part"
    for left in (old, young, foreign):
        left.touch()
    for left in (old, foreign):
        os.utime(left, (1, 1))
    document.edit("Rename", CHANGED)
    document.save()
    assert files_in(tmp_path) == [young.name, foreign.name, "one.crew.json"]


def test_a_window_that_is_busy_does_not_put_the_copy_off(document, monkeypatch):
    monkeypatch.setattr(recovery_module, "DELAY", 20)
    copy = Recovery(document)
    document.edit("Rename", CHANGED)
    end = time.monotonic() + 10
    while not copy.file.exists() and time.monotonic() < end:
        time.sleep(0.01)  # as a window that draws: no event is looked at
    assert copy.file.exists()
    copy.close()
    assert not copy.file.exists()


def test_a_change_while_saving_keeps_its_copy(document):
    copy = Recovery(document)
    document.edit("Rename", CHANGED)
    document.save()
    document.edit("Rename", replace(CHANGED, title="Three"))
    copy.wait()
    assert '"Three"' in copy.file.read_text("utf-8")
    copy.close()


def test_the_folder_of_the_plan_is_removed(document, tmp_path):
    folder = tmp_path / "gone"
    folder.mkdir()
    document.save(folder / "two.crew.json")
    document.edit("Rename", CHANGED)
    shutil.rmtree(folder)
    with pytest.raises(CannotSave, match="does not exist"):
        document.save()
    assert document.modified
    document.save(tmp_path / "two.crew.json")
    assert not document.modified


def test_the_folder_of_recovery_copies_is_removed(document):
    copy = Recovery(document)
    shutil.rmtree(copy.file.parent)
    document.edit("Rename", CHANGED)
    copy.write()
    copy.wait()
    assert copy.file.exists()
    copy.close()


def test_without_any_place_of_its_own_the_program_works(window, tmp_path, monkeypatch):
    nowhere = tmp_path / "file"
    nowhere.touch()
    monkeypatch.setenv("XDG_STATE_HOME", str(nowhere))
    told = []
    copy = Recovery(window.document)
    copy.failed.connect(told.append)
    copy.write()
    copy.wait()
    copy.close()
    assert Claim().take(tmp_path / "one.crew.json")


@pytest.mark.skipif(sys.platform == "win32", reason="the window is started with a folder in the environment")
def test_the_window_starts_where_it_can_write_nothing(tmp_path):
    program = (
        "import sys\n"
        "from PySide6.QtCore import QTimer\n"
        "from PySide6.QtWidgets import QApplication\n"
        "from desktop import start\n"
        "made = start.open_window\n"
        "def opened(*given):\n"
        "    window = made(*given)\n"
        "    def look():\n"
        "        if window.answers.answer is not None:\n"
        "            print(window.headline.crew.text()); window.close(); QApplication.quit()\n"
        "    window.clock = QTimer(window); window.clock.timeout.connect(look); window.clock.start(20)\n"
        "    return window\n"
        "start.open_window = opened\n"
        "sys.exit(start.run(None))\n"
    )
    nowhere = dict.fromkeys(("XDG_STATE_HOME", "XDG_CONFIG_HOME", "XDG_DATA_HOME"), "/dev/null")
    done = subprocess.run(
        [sys.executable, "-c", program],
        cwd=ROOT,
        env={**os.environ, **nowhere, "QT_QPA_PLATFORM": "offscreen"},
        stdin=subprocess.DEVNULL,
        capture_output=True,
        encoding="utf-8",
        timeout=120,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    assert "Lead hand" in done.stdout
    assert "Traceback" not in done.stderr


def test_two_programs_keep_copies_of_their_own(qapp):
    first, second = Document(PLAN), Document(PLAN)
    copies = Recovery(first), Recovery(second)
    for document, copy, title in zip((first, second), copies, ("First", "Second"), strict=True):
        document.edit("Rename", replace(PLAN, title=title))
        copy.write()
        copy.wait()
    texts = [copy.file.read_text("utf-8") for copy in copies]
    assert '"First"' in texts[0]
    assert '"Second"' in texts[1]
    for copy in copies:
        copy.close()


@pytest.fixture
def answers(document, workers):
    made = Answers(document, workers)
    yield made
    made.close()


def test_no_solver_process_serves_for_ever(document, answers, workers, qtbot, monkeypatch):
    monkeypatch.setattr(workers_module, "MOST_SERVED", 3)
    seen = set()
    for amount in range(101, 111):
        work = replace(PLAN.works[0], amounts=(D(amount),))
        document.edit("Amount", replace(PLAN, works=(work,)))
        qtbot.waitUntil(lambda: answers.status is Status.READY and not answers.stale, timeout=15_000)
        assert answers.answer.exact.cost == amount
        seen |= set(workers.process_ids())
    assert 3 <= len(seen) <= 7
    assert len(workers.process_ids()) <= 3
