"""The command `full-complement`, run as a process of its own."""

import json
import os
import subprocess
import sys
from dataclasses import replace
from decimal import Decimal
from pathlib import Path

import pytest
from PySide6.QtWidgets import QApplication, QMessageBox

from desktop import app, failures
from solver.plan import Category, Plan, Work
from solver.planfile import save_plan

ROOT = Path(__file__).parents[2]
D = Decimal
PLAN = Plan(
    title="One",
    categories=(Category("Hand", D(10), D(40), output={"W": D(1)}),),
    works=(Work("W", "units", (D(100),)),),
)


@pytest.fixture
def run(tmp_path):
    """`full-complement` with a clean environment, in a folder of its own."""

    def full_complement(*arguments, **environment):
        kept = {
            k: v for k, v in os.environ.items() if k not in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM")
        }
        env = {**kept, "PYTHONPATH": str(ROOT), "PYTHONWARNINGS": "error", **environment}
        command = [sys.executable, "-m", "desktop.app", *map(str, arguments)]
        return subprocess.run(
            command, cwd=tmp_path, env=env, capture_output=True, encoding="utf-8", timeout=60, check=False
        )

    return full_complement


@pytest.fixture
def plan_file(tmp_path):
    path = tmp_path / "one.crew.json"
    save_plan(PLAN, path)
    return path


def test_usage_and_version(run):
    asked = run("--help")
    assert asked.returncode == 0
    assert "full-complement PLAN" in asked.stdout
    assert run("--version").stdout.startswith("Full Complement ")
    for wrong in (["--nonsense"], ["a", "b"], ["page"], ["page", "a"]):
        told = run(*wrong)
        assert told.returncode == 2
        assert "full-complement PLAN" in told.stderr


def test_the_page_is_written_without_a_display(run, plan_file, tmp_path):
    done = run("page", plan_file, tmp_path / "out.pdf")
    assert done.returncode == 0, done.stderr
    assert (tmp_path / "out.pdf").read_bytes().startswith(b"%PDF")


@pytest.mark.skipif(sys.platform in ("win32", "darwin"), reason="there is always a display there")
def test_without_a_display_the_page_and_the_answer_are_written_instead(run, plan_file, tmp_path):
    done = run(plan_file.name)
    assert done.returncode == 0, done.stderr
    assert done.stdout.count("\n") == 1
    assert "No display was found" in done.stdout
    assert (tmp_path / "one.pdf").read_bytes().startswith(b"%PDF")
    assert "3 Hand" in (tmp_path / "one.txt").read_text("utf-8")


@pytest.mark.skipif(sys.platform in ("win32", "darwin"), reason="there is always a display there")
def test_without_a_display_or_a_plan_it_is_the_example(run, tmp_path):
    done = run()
    assert done.returncode == 0, done.stderr
    assert {p.suffix for p in tmp_path.glob("hillside.*")} == {".pdf", ".txt"}


@pytest.mark.parametrize(
    ("content", "code", "says"),
    [
        ('{"categories": [{"name": "A", "pay": -1, "hours": 38}]}', 1, "categories[0].pay"),
        ('{"categories": [', 2, "cut off"),
        (None, 2, "no such file"),
    ],
)
def test_a_bad_plan_is_a_sentence(content, code, says, run, tmp_path):
    if content is not None:
        (tmp_path / "bad.crew.json").write_text(content)
    for arguments in (["page", "bad.crew.json", "out.pdf"], ["bad.crew.json"]):
        told = run(*arguments)
        assert told.returncode == code
        assert says in told.stderr
        assert "Traceback" not in told.stderr
    assert not (tmp_path / "out.pdf").exists()


def test_the_solver_process_is_started_without_qt(tmp_path):
    request = json.dumps({"id": 7, "ask": "nothing", "plan": {}, "options": {}}) + "\n"
    program = (
        "import sys; sys.argv = ['full-complement', '--worker']\n"
        "from desktop.app import main\n"
        "code = main()\n"
        "assert not [m for m in sys.modules if m.startswith('PySide6')], 'Qt was imported'\n"
        "sys.exit(code)"
    )
    done = subprocess.run(
        [sys.executable, "-c", program],
        input=request,
        cwd=ROOT,
        capture_output=True,
        encoding="utf-8",
        timeout=60,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    assert '"id": 7' in done.stdout


def test_the_window_starts_and_ends_without_leaving_a_process(run, plan_file):
    program = (
        "import sys\n"
        "from PySide6.QtCore import QTimer\n"
        "from PySide6.QtWidgets import QApplication\n"
        "from desktop import start\n"
        "seen = []\n"
        "def look():\n"
        "    window = next(w for w in QApplication.topLevelWidgets() if w.objectName() == 'window')\n"
        "    if window.answers.answer is None: return\n"
        "    seen.append(window.headline.crew.text()); window.close(); QApplication.quit()\n"
        "made = start.open_window\n"
        "def opened(*a):\n"
        "    window = made(*a); window.timer = QTimer(window); window.timer.timeout.connect(look)\n"
        "    window.timer.start(50); return window\n"
        "start.open_window = opened\n"
        "from pathlib import Path\n"
        "code = start.run(Path(sys.argv[1]))\n"
        "print(seen[0]); sys.exit(code)"
    )
    done = subprocess.run(
        [sys.executable, "-c", program, str(plan_file)],
        cwd=ROOT,
        env={**os.environ, "QT_QPA_PLATFORM": "offscreen"},
        capture_output=True,
        encoding="utf-8",
        timeout=60,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    assert done.stdout.strip() == "3 Hand"
    assert "QProcess: Destroyed" not in done.stderr


@pytest.mark.parametrize(
    ("environment", "platform", "display"),
    [
        ({}, "linux", False),
        ({"DISPLAY": ":0"}, "linux", True),
        ({"WAYLAND_DISPLAY": "wayland-0"}, "linux", True),
        ({"QT_QPA_PLATFORM": "offscreen"}, "linux", True),
        ({}, "win32", True),
        ({}, "darwin", True),
    ],
)
def test_whether_there_is_a_display(environment, platform, display, monkeypatch):
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    for name, value in environment.items():
        monkeypatch.setenv(name, value)
    monkeypatch.setattr(app.sys, "platform", platform)
    assert app.has_display() is display


def test_the_unexpected_is_one_dialog_with_details(qapp, monkeypatch, caplog):
    shown = []
    reporter = failures.FailureReporter()

    def answer(box):
        shown.append(box)
        reporter.report(ValueError, ValueError("again, while it is told"), None)
        copy = next(b for b in box.buttons() if b.text() == "Copy details")
        copy.click()
        return 0

    monkeypatch.setattr(QMessageBox, "exec", answer)
    try:
        replace(PLAN, nonsense=1)
    except TypeError as error:
        reporter.report(type(error), error, error.__traceback__)
    assert len(shown) == 1
    assert "still here" in shown[0].text()
    assert "nonsense" in shown[0].detailedText()
    assert "full-complement.log" in shown[0].informativeText()
    assert "nonsense" in QApplication.clipboard().text()
    assert sum("unexpected error" in r.message for r in caplog.records) == 2
