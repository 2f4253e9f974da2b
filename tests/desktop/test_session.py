"""A whole session, watched from inside: no socket is opened by the window or by a solver process."""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

import resources

ROOT = Path(__file__).parents[2]
WATCH = """
import os, sys
def heard(event, _):
    if event.startswith("socket."):
        with open(os.environ["WATCHED"], "a") as seen:
            seen.write(event + "\\n")
sys.addaudithook(heard)
"""
WORKER = WATCH + "from solver.service import main\nsys.exit(main())\n"

SESSION = (
    WATCH
    + """
import json
from pathlib import Path
from PySide6.QtWidgets import QApplication
from PySide6.QtCore import QTimer
from desktop import start, worker
from desktop.answers import Status
from desktop.rail import PAGES

worker.worker_command = lambda: (sys.executable, "-c", os.environ["WORKER"])
open_window, told = start.open_window, {"pages": 0, "internet": []}

def internet_sockets(process):
    # what native code may have opened, which Python's own hook does not see
    known = set()
    for table in ("tcp", "tcp6", "udp", "udp6", "raw", "raw6"):
        path = Path(f"/proc/{process}/net/{table}")
        if path.exists():
            known |= {line.split()[9] for line in path.read_text().splitlines()[1:]}
    held = []
    for descriptor in Path(f"/proc/{process}/fd").glob("*"):
        try:
            held.append(os.readlink(descriptor))
        except OSError:
            pass
    return [where for where in held if where.startswith("socket:[") and where[8:-1] in known]

def steps(window):
    yield from until(lambda: window.answers.status is Status.READY)
    told["answer"] = window.headline.crew.text()
    for at, page in enumerate(PAGES):
        window.show_page(at)
        told["pages"] += 1
        yield from until(lambda: not window.answers.busy)
    plan = window.document.plan
    from dataclasses import replace
    window.document.edit("Rename", replace(plan, title="Another"))
    window.document.save(Path(os.environ["SAVED"]))
    for process in (os.getpid(), *window._workers.process_ids()):
        told["internet"] += internet_sockets(process)
    told["processes"] = 1 + len(window._workers.process_ids())
    window.close()
    QApplication.quit()

def until(holds):
    while not holds():
        yield

def opened(*given):
    window = open_window(*given)
    window.steps, window.clock = steps(window), QTimer(window)
    window.clock.timeout.connect(lambda: next(window.steps, None))
    window.clock.start(20)
    return window

start.open_window = opened
code = start.run(Path(sys.argv[1]))
print(json.dumps(told))
sys.exit(code)
"""
)


@pytest.fixture
def watched(tmp_path):
    """Runs a program under the hook; returns what it printed and the socket events."""

    def run(program, *arguments):
        seen = tmp_path / "sockets.txt"
        seen.touch()
        done = subprocess.run(
            [sys.executable, "-c", program, *map(str, arguments)],
            cwd=ROOT,
            env={
                **os.environ,
                "QT_QPA_PLATFORM": "offscreen",
                "WATCHED": str(seen),
                "WORKER": WORKER,
                "SAVED": str(tmp_path / "saved.crew.json"),
            },
            stdin=subprocess.DEVNULL,
            capture_output=True,
            encoding="utf-8",
            timeout=120,
            check=False,
        )
        assert done.returncode == 0, done.stderr
        return done.stdout, seen.read_text().split()

    return run


def test_no_socket_is_opened_in_a_whole_session(watched, tmp_path):
    said, sockets = watched(SESSION, resources.example_paths()[0])
    told = json.loads(said)
    assert sockets == []
    assert told["internet"] == []
    assert told["pages"] >= 7
    assert told["processes"] >= 2
    assert "Lead hand" in told["answer"]
    assert (tmp_path / "saved.crew.json").exists()


def test_the_hook_hears_a_socket(watched):
    _, sockets = watched(WATCH + "import socket\nsocket.socket().close()")
    assert sockets == ["socket.__new__"]


def test_the_hook_hears_a_solver_process(watched):
    inside = WORKER.replace("sys.exit(main())", "import socket; socket.socket().close(); sys.exit(main())")
    _, sockets = watched(inside)
    assert sockets == ["socket.__new__"]
