"""A window test leaves nothing behind: no window, no process, no file of the tester's own settings."""

import os
import sys
from pathlib import Path

import pytest

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from PySide6.QtCore import QCoreApplication, QEvent, QLocale, QProcess, QSettings, QStandardPaths
from PySide6.QtWidgets import QApplication
from shiboken6 import isValid

from desktop import theme
from desktop.answers import Answers
from desktop.document import Document
from desktop.fonts import load_fonts
from desktop.look import Look
from desktop.window import Window
from desktop.workers import Workers

FAKE_WORKER = Path(__file__).with_name("fake_worker.py")


@pytest.fixture(scope="session")
def qapp(qapp_cls):
    app = qapp_cls.instance() or qapp_cls(["full-complement"])
    app.setApplicationName("full-complement-tests")
    QLocale.setDefault(QLocale(QLocale.Language.English, QLocale.Country.UnitedStates))
    load_fonts()
    theme.apply(app, theme.light())
    return app


@pytest.fixture(scope="session")
def qapp_cls():
    return QApplication


@pytest.fixture(autouse=True)
def own_places(tmp_path, monkeypatch):
    """Settings, recovery copies and logs of this test alone."""
    if sys.platform not in ("linux", "freebsd"):
        QStandardPaths.setTestModeEnabled(True)  # elsewhere Qt takes no folders from the environment
    for name in ("XDG_STATE_HOME", "XDG_CONFIG_HOME", "XDG_DATA_HOME", "XDG_CACHE_HOME"):
        monkeypatch.setenv(name, str(tmp_path / name.lower()))
    QSettings.setDefaultFormat(QSettings.Format.IniFormat)
    QSettings.setPath(QSettings.Format.IniFormat, QSettings.Scope.UserScope, str(tmp_path / "settings"))


@pytest.fixture(autouse=True)
def nothing_left():
    """Fails the test that leaves a window or a process."""
    yield
    app = QApplication.instance()
    if app is None:
        return
    windows = [w for w in app.topLevelWidgets() if w.isVisible()]
    for window in windows:
        window.hide()
        window.deleteLater()
    QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete)
    alive = [p for p in _running if isValid(p)]
    processes = [p for p in alive if p.state() != QProcess.ProcessState.NotRunning]
    for process in processes:
        process.kill()
        process.waitForFinished(2000)
    _running.clear()
    assert not windows, f"left on the screen: {windows}"
    assert not processes, f"left running: {[p.arguments() for p in processes]}"


_running: list[QProcess] = []


@pytest.fixture(autouse=True)
def watch_processes(monkeypatch):
    start = QProcess.start

    def noted(self, *args):
        _running.append(self)
        return start(self, *args)

    monkeypatch.setattr(QProcess, "start", noted)


@pytest.fixture
def fake_command():
    """The command of a solver process that does what its plan's title says."""

    def command(*options):
        return (sys.executable, str(FAKE_WORKER), *options)

    return command


@pytest.fixture
def workers(qapp, fake_command):
    made = Workers(fake_command())
    yield made
    made.close()


@pytest.fixture
def open_window(qtbot, qapp):
    """Opens a window over a document; all are closed without questions at the end."""
    opened = []

    def open_window(document=None, workers=None, look=None):
        window = Window(document or Document(), workers or Workers(), look or Look(qapp))
        opened.append(window)
        window.resize(1366, 768)
        with qtbot.waitActive(window):
            window.show()
            window.activateWindow()
        return window

    yield open_window
    for window in opened:
        window.document.undo_stack.setClean()
        window.close()
        window.deleteLater()


@pytest.fixture
def show_page(qtbot):
    """Shows a page of the window alone, at the size it has there, over a plan and perhaps its answer."""

    def show_page(kind, plan, answer=None, heard=Answers):
        document = Document(plan)
        answers = heard(document)
        page = kind(document, answers)
        qtbot.addWidget(page)
        if answer is not None:
            answers.receive(plan, answer)
        page.resize(1186, 640)
        page.show()
        return page, document, answers

    return show_page
