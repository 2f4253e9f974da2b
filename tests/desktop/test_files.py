import os
from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtWidgets import QFileDialog, QWidget

from desktop import files as files_module
from desktop import recent, recovery
from desktop.claim import Claim
from desktop.disk_watch import DiskWatch, OnDisk
from desktop.document import Document, Refusal
from desktop.files import Files, with_suffix
from desktop.recovery import Recovery, leftovers
from solver.plan import Category, Plan
from solver.planfile import read_plan, save_plan

D = Decimal
PLAN = Plan(title="One", categories=(Category("Lead hand", D(980), D(38)),))
OTHER = replace(PLAN, title="Other")


class Asked:
    """Answers every question with the next of `answers`, and keeps what was asked."""

    def __init__(self, monkeypatch):
        self.texts = []
        self.answers = []
        monkeypatch.setattr(files_module, "ask", self.ask)
        monkeypatch.setattr(
            files_module, "tell", lambda _w, text, more="": self.texts.append(f"{text} {more}")
        )

    def ask(self, _window, text, more, choices):
        self.texts.append(f"{text} {more}")
        answer = self.answers.pop(0)
        assert answer in [c.key for c in choices]
        return answer


@pytest.fixture
def asked(monkeypatch):
    return Asked(monkeypatch)


@pytest.fixture
def made(qtbot):
    """Windows' files; each closed at the end."""
    kept = []

    def make():
        window = QWidget()
        qtbot.addWidget(window)
        document = Document()
        copy = Recovery(document)
        files = Files(document, copy, window)
        kept.append((files, copy))
        return document, files, copy

    yield make
    for files, copy in kept:
        files.close()
        copy.close()


@pytest.fixture
def path(tmp_path):
    made = tmp_path / "one.crew.json"
    save_plan(PLAN, made)
    return made


def choose(monkeypatch, path):
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(path), ""))
    monkeypatch.setattr(QFileDialog, "getOpenFileName", lambda *_: (str(path), ""))


def test_open_edit_save(made, path, asked):
    document, files, _ = made()
    assert files.open(path)
    assert files.name == "one.crew.json"
    document.edit("x", OTHER)
    assert files.save()
    assert read_plan(path) == OTHER
    assert recent.recent() == [path]
    assert asked.texts == []


@pytest.mark.parametrize(
    ("answer", "goes", "title"), [("save", True, "Other"), ("drop", True, "One"), ("cancel", False, "One")]
)
def test_save_first(answer, goes, title, made, path, asked):
    document, files, _ = made()
    files.open(path)
    document.edit("x", OTHER)
    asked.answers = [answer]
    assert files.may_go() is goes
    assert asked.texts[0].startswith("Save the changes to one.crew.json first?")
    assert read_plan(path).title == title


def test_a_new_plan_is_saved_under_a_chosen_name(made, tmp_path, asked, monkeypatch):
    document, files, _ = made()
    document.edit("x", PLAN)
    choose(monkeypatch, tmp_path / "chosen")
    assert files.save()
    assert document.path == tmp_path / "chosen.crew.json"
    assert with_suffix(tmp_path / "a.json") == tmp_path / "a.json"
    choose(monkeypatch, "")
    assert not files.save_as()


def test_an_example_is_a_copy_without_a_file(made, path, asked):
    document, files, _ = made()
    files.open_example(path)
    assert document.plan == PLAN
    assert document.path is None
    assert not document.modified


@pytest.mark.parametrize(
    ("content", "says"),
    [
        (b'{"format": "full-complement/plan", "catego', "cut off"),
        (b"\x00\x01\x02", "not a text file"),
        (b'{"categories": [{"name": "A", "pay": "five", "hours": 38}]}', "categories[0].pay"),
    ],
)
def test_what_cannot_be_opened_is_told_and_changes_nothing(content, says, made, path, asked, tmp_path):
    document, files, _ = made()
    files.open(path)
    bad = tmp_path / "bad.crew.json"
    bad.write_bytes(content)
    assert not files.open(bad)
    assert says in asked.texts[0]
    assert document.plan == PLAN
    assert document.path == path
    assert bad.read_bytes() == content


def test_what_cannot_be_saved_is_told(made, path, asked, monkeypatch, tmp_path):
    document, files, _ = made()
    files.open(path)
    document.edit("x", OTHER)
    choose(monkeypatch, tmp_path / "gone" / "x.crew.json")
    assert not files.save_as()
    assert "does not exist" in asked.texts[0]
    assert document.modified
    path.chmod(0o444)
    assert not files.save()
    assert "read-only" in asked.texts[1]
    assert read_plan(path) == PLAN


@pytest.mark.parametrize(
    ("answer", "title", "has_path", "opened"),
    [("copy", "One", False, True), ("open", "One", True, True), ("cancel", "", False, False)],
)
def test_two_windows_on_one_file_are_noticed(answer, title, has_path, opened, made, path, asked):
    _, first, _ = made()
    first.open(path)
    document, second, _ = made()
    asked.answers = [answer]
    assert second.open(path) is opened
    assert "open in another window" in asked.texts[0]
    assert document.plan.title == title
    assert (document.path == path) is has_path


def test_a_claim_ends_with_its_window_and_with_its_program(qapp, path):
    first, second = Claim(), Claim()
    assert first.take(path)
    assert not second.take(path)
    first.release()
    assert second.take(path)
    assert first.take(None)
    second.release()


def change_on_disk(path):
    save_plan(replace(PLAN, site="elsewhere"), path)
    os.utime(path, ns=(1, 1))


@pytest.mark.parametrize(("answer", "site"), [("again", "elsewhere"), ("keep", "")])
def test_a_file_changed_on_disk_is_noticed(answer, site, made, path, asked):
    document, files, _ = made()
    files.open(path)
    files.look_at_disk()
    assert asked.texts == []
    change_on_disk(path)
    asked.answers = [answer]
    files.look_at_disk()
    assert "changed by another program" in asked.texts[0]
    assert document.plan.site == site
    files.look_at_disk()
    assert len(asked.texts) == 1  # asked once
    if answer == "again":
        document.undo_stack.undo()
        assert document.plan == PLAN


@pytest.mark.parametrize(("answer", "saved"), [("replace", "Other"), ("cancel", "One")])
def test_saving_over_a_changed_file_asks(answer, saved, made, path, asked):
    document, files, _ = made()
    files.open(path)
    document.edit("x", OTHER)
    change_on_disk(path)
    asked.answers = [answer]
    assert files.save() is (answer == "replace")
    assert read_plan(path).title == saved


def test_a_file_that_went_is_told(made, path, qtbot):
    _, files, _ = made()
    files.open(path)
    path.unlink()
    with qtbot.waitSignal(files.told) as told:
        files.look_at_disk()
    assert "no longer where it was" in told.args[0]


def test_only_contents_count_as_a_change(qapp, path):
    document = Document()
    document.open(path)
    watch = DiskWatch(document)
    watch.remember()
    os.utime(path, ns=(1, 1))
    assert watch.look() is OnDisk.SAME


def test_refused_entries_are_not_in_the_file_and_that_is_told(made, path, qtbot):
    document, files, _ = made()
    files.open(path)
    document.edit("x", PLAN, refused={("categories", "Lead hand", "pay"): Refusal("x", "no")})
    with qtbot.waitSignal(files.told) as told:
        files.save()
    assert told.args[0] == "Saved as one.crew.json. 1 refused entry is not in the file."


# recovery


def test_a_copy_is_written_within_two_seconds(made, path, qtbot):
    document, files, copy = made()
    files.open(path)
    document.edit("x", OTHER)
    qtbot.waitUntil(copy.file.exists, timeout=2000)
    assert files.save()
    qtbot.waitUntil(lambda: not copy.file.exists())


def test_typing_without_pause_does_not_put_the_copy_off(made, qtbot, monkeypatch):
    monkeypatch.setattr(recovery, "DELAY", 50)
    document, _, copy = made()
    for count in range(2000):
        document.edit("x", replace(PLAN, title=str(count)))
        qtbot.wait(1)
        if copy.file.exists():
            return
    pytest.fail("no copy while typing")


def crashed(document, copy):
    """The window is gone without closing: its lock is released as by the death of its process."""
    copy.write()
    copy.wait()
    copy._lock.unlock()


@pytest.mark.parametrize("answer", ["recover", "discard", "later"])
def test_what_a_crash_left_is_offered(answer, made, path, asked):
    document, files, copy = made()
    files.open(path)
    refused = {("categories", "Lead hand", "pay"): Refusal("4x", "no number")}
    document.edit("x", OTHER, refused=refused)
    crashed(document, copy)
    files.close()
    again, started, _ = made()
    asked.answers = [answer]
    assert started.open_leftovers() is (answer == "recover")
    assert asked.texts[0].startswith("one.crew.json had changes that were not saved")
    assert copy.file.exists() is (answer == "later")
    if answer == "recover":
        assert again.plan == OTHER
        assert dict(again.refused) == refused
        assert again.path == path
        assert again.modified
    if answer == "later":
        assert leftovers()[0].content.plan == OTHER


def test_the_copy_of_an_open_window_is_not_offered(made, path):
    document, files, copy = made()
    files.open(path)
    document.edit("x", OTHER)
    copy.write()
    copy.wait()
    assert copy.file.exists()
    assert leftovers() == []


def test_a_damaged_copy_is_left_alone(made):
    _, _, copy = made()
    damaged = copy.file.with_name("1-damaged.json")
    damaged.write_text('{"format": "full-complement/recov')
    assert leftovers() == []
    assert damaged.exists()


def test_a_copy_that_cannot_be_written_is_told(made, qtbot):
    document, _, copy = made()
    in_the_way = copy.file.parent / "gone"
    in_the_way.touch()
    copy._file = in_the_way / "x.json"
    with qtbot.waitSignal(copy.failed) as failed:
        document.edit("x", PLAN)
        copy.write()
    assert "was not saved" in failed.args[0]


def test_recent_plans_are_kept_in_order(qapp, tmp_path):
    paths = [tmp_path / f"{n}.crew.json" for n in range(12)]
    for one in paths:
        recent.remember(one)
    recent.remember(paths[5])
    assert recent.recent()[:3] == [paths[5], paths[11], paths[10]]
    assert len(recent.recent()) == recent.MOST
    recent.forget(paths[5])
    assert recent.recent()[0] == paths[11]
    recent.forget_all()
    assert recent.recent() == []
