"""The solver stands without Qt, and without a network."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

import solver
from solver.planfile import save_plan
from tests.solver.full_plans import full_plan

ROOT = Path(solver.__file__).parent.parent
MODULES = sorted(path.stem for path in Path(solver.__file__).parent.glob("*.py") if path.stem != "__main__")

# What is asked for and must not be there; imported packages of our own are listed as they come
BLOCKED = """
import importlib, sys

class Blocked:
    def find_spec(self, name, path=None, target=None):
        if name.partition(".")[0] in {"PySide6", "shiboken6", "pyqtgraph", "desktop"}:
            raise ImportError(f"{name} is not there")

sys.meta_path.insert(0, Blocked())
"""

NO_NETWORK = """
import socket

def refuse(*args, **kwargs):
    raise AssertionError("a socket was opened")

socket.socket = refuse
"""


def run(script: str, *arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-c", script, *arguments], cwd=ROOT, capture_output=True, text=True, timeout=120
    )


def test_every_module_can_be_imported_without_qt() -> None:
    script = BLOCKED + f"[importlib.import_module('solver.' + name) for name in {MODULES!r}]"
    done = run(script)
    assert (done.returncode, done.stderr) == (0, "")


@pytest.mark.parametrize("verb", ["check", "solve", "cost", "room", "near", "attend"])
def test_plans_are_answered_without_qt_and_without_a_socket(verb: str, tmp_path: Path) -> None:
    path = tmp_path / "small.crew.json"
    save_plan(full_plan(np.random.default_rng(3), phases=1), path)
    script = BLOCKED + NO_NETWORK + "from solver.commands import main\nsys.exit(main(sys.argv[1:]))"
    done = run(script, verb, "--json", str(path))
    assert (done.returncode, done.stderr) == (0, "")
    assert done.stdout.startswith("{")


def test_nothing_of_the_solver_names_qt() -> None:
    for path in Path(solver.__file__).parent.glob("*.py"):
        text = path.read_text("utf-8")
        assert "import PySide6" not in text
        assert "from PySide6" not in text
        assert "pyqtgraph" not in text
