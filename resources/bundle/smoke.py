"""Trying the self-contained folder on Linux, with no Python, no network and no settings within reach."""

from __future__ import annotations

import json
import os
import shutil
import signal
import subprocess
import tempfile
import time
from pathlib import Path
from typing import Any

# minimise x, 2 x >= 3, x whole
SMALLEST = {
    "cost": [1.0],
    "lower": [0.0],
    "upper": [9.0],
    "integer": [True],
    "rows": [[[0], [2.0], "G", 3.0]],
}
LONGEST = 60.0  # seconds one step may take on a busy machine


def try_folder(folder: Path, example: Path) -> None:
    """Raises AssertionError or CalledProcessError where something does not work; prints what was measured."""
    with tempfile.TemporaryDirectory() as home:
        trial = Trial(folder / "full-complement", Path(home))
        print(trial.run("--version").strip())
        trial.page(example)
        trial.answer_without_display(example)
        trial.engines()
        trial.window(example)


class Trial:
    """One home folder in which the executable is started again and again."""

    def __init__(self, executable: Path, home: Path) -> None:
        self._home = home
        self._environment = {"HOME": str(home), "PATH": str(home), "LANG": "C.UTF-8"}
        self._executable = executable
        self._start = [*_without_network(), str(executable)]

    def run(self, *arguments: str) -> str:
        """Run it to its end; returns what it printed."""
        done = subprocess.run(
            [*self._start, *arguments],
            env=self._environment,
            cwd=self._home,
            stdin=subprocess.DEVNULL,
            capture_output=True,
            encoding="utf-8",
            timeout=LONGEST,
            check=False,
        )
        assert done.returncode == 0, f"{arguments}: exit {done.returncode}\n{done.stdout}{done.stderr}"
        return done.stdout

    def page(self, example: Path) -> None:
        """The command that writes the page, which asks a solver process of its own."""
        out = self._home / "out.pdf"
        self.run("page", str(example), str(out))
        assert out.read_bytes()[:5] == b"%PDF-", "no page was written"

    def answer_without_display(self, example: Path) -> None:
        """Opened where no window can appear."""
        self.run(str(example))
        answer = (self._home / "hillside.txt").read_text("utf-8")
        assert "Proved cheapest" in answer, answer

    def engines(self) -> None:
        """Both engines, each in a process of its own."""
        for engine in ("CBC", "HIGHS"):
            request: dict[str, Any] = {
                "number": 1,
                "engine": engine,
                "matrix": SMALLEST,
                "seconds": 9.0,
                "start": None,
            }
            assert self._engine_says(request)["objective"] == 2.0, f"{engine} is wrong"

    def _engine_says(self, request: dict[str, Any]) -> dict[str, Any]:
        """What it says in the end; its input stays open until then, for closing it ends the process."""
        command = [*self._start, "--engine"]
        pipe = subprocess.PIPE
        with subprocess.Popen(
            command, stdin=pipe, stdout=pipe, env=self._environment, cwd=self._home, encoding="utf-8"
        ) as process:
            assert process.stdin is not None
            assert process.stdout is not None
            process.stdin.write(json.dumps(request) + "\n")
            process.stdin.flush()
            said: dict[str, Any] = {"kind": "news"}
            while said["kind"] == "news":
                said = json.loads(process.stdout.readline())
        return said

    def window(self, example: Path) -> None:
        """The window, drawn into memory, until it has an answer; a second start finds files read before."""
        for name in ("first", "second"):
            print(f"{name} start to answer: {self._start_to_answer(example):.2f} s")

    def _start_to_answer(self, example: Path) -> float:
        log = self._home / ".local/state/full-complement/full-complement/full-complement.log"
        log.unlink(missing_ok=True)
        environment = self._environment | {"QT_QPA_PLATFORM": "offscreen"}
        began = time.perf_counter()
        window = subprocess.Popen([*self._start, str(example)], env=environment, cwd=self._home)
        try:
            while not (log.exists() and "first answer" in log.read_text("utf-8")):
                assert window.poll() is None, f"the window ended: {_text(log)}"
                assert time.perf_counter() - began < LONGEST, f"no answer: {_text(log)}"
                time.sleep(0.01)
            took = time.perf_counter() - began
            assert len(self._processes()) >= 2, "the window has no solver process"
        finally:
            for process in self._processes()[:1]:
                os.kill(process, signal.SIGTERM)
            window.wait(LONGEST)
        assert not self._processes(), "a process was left"
        assert "ERROR" not in _text(log), _text(log)
        return took

    def _processes(self) -> list[int]:
        """Numbers of all running copies of the executable, the oldest first."""
        found = []
        for entry in Path("/proc").glob("[0-9]*/exe"):
            try:
                if entry.readlink() == self._executable:
                    found.append(int(entry.parent.name))
            except OSError:
                continue  # ended, or somebody else's
        return sorted(found)


def _text(log: Path) -> str:
    return log.read_text("utf-8") if log.exists() else "no log was written"


def _without_network() -> list[str]:
    """A network namespace of its own, where the system lets us make one."""
    unshare = shutil.which("unshare")
    start = [unshare or "", "--map-root-user", "--net"]
    if unshare and subprocess.run([*start, "true"], capture_output=True, check=False).returncode == 0:
        return start
    print("No network namespace can be made here: tried with the network in reach.")
    return []
