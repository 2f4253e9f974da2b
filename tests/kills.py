"""kill -9 of the program and of its solver processes at random moments: is anything lost?

    python -m tests.kills [--rounds 50] [--seed 1]      by hand, Linux; some ten seconds a round

Each round starts the window (drawn into memory) on a plan, in which a script edits, lets solve, looks at
pages, saves and prints without a pause (`tests/kills_session.py`). Twice a solver process is killed at a
random moment: the window has to answer again. Then the program is killed at a random moment, and every third
round the command that writes the page as well. Afterwards
  - no process of the round may be left;
  - the plan's file must be readable and hold the last finished save, or a later one;
  - file and recovery copy together must hold everything typed up to two seconds before the kill;
  - the PDF must be whole, or not there;
  - what a killed save leaves beside the plan is counted (`.part` files; the plan is whole either way).
Prints a line per loss and the counts; exit code 1 if anything was lost.
"""

from __future__ import annotations

import argparse
import os
import random
import re
import secrets
import signal
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

from PySide6.QtCore import QCoreApplication

import resources
from desktop.recovery import leftovers
from solver.planfile import read_plan, save_plan

PROMISE = 2.0  # seconds of typing that may be lost
ENDED = 10.0  # seconds in which orphans have to be gone
ANSWERED = 30.0  # seconds in which a window has to answer again
TOKEN = "KILLS_TOKEN"


@dataclass
class Tally:
    """What happened in all rounds."""

    kills: dict[str, int] = field(default_factory=dict)
    losses: list[str] = field(default_factory=list)
    parts: int = 0
    longest_loss: float = 0.0
    longest_orphan: float = 0.0
    longest_restart: float = 0.0

    def killed(self, what: str) -> None:
        """Count one kill."""
        self.kills[what] = self.kills.get(what, 0) + 1

    def told(self) -> str:
        """The counts in words."""
        kills = ", ".join(f"{count} of {what}" for what, count in self.kills.items())
        return (
            f"kills: {kills}\n"
            f"most typing lost: {self.longest_loss:.2f} s (allowed {PROMISE:.0f} s)\n"
            f"last process gone after: {self.longest_orphan:.2f} s\n"
            f"slowest new answer after a solver process was killed: {self.longest_restart:.2f} s\n"
            f".part files left: {self.parts}\n"
            f"losses: {len(self.losses)}"
        )


class Round:
    """One window, its folder and its end."""

    def __init__(self, seed: int, folder: Path, tally: Tally) -> None:
        self._draw = random.Random(seed)
        self._tally = tally
        self._name = f"round {seed}"
        self._token = secrets.token_hex(8)
        self._plan = folder / "hillside.crew.json"
        self._pdf = folder / "hillside.pdf"
        self._journal = folder / "journal.txt"
        self._rest = folder / "rest"
        save_plan(read_plan(resources.example_paths()[0]), self._plan)
        self._journal.touch()
        os.environ["XDG_STATE_HOME"] = os.environ["XDG_CONFIG_HOME"] = str(folder / "own")
        self._environment = {
            **os.environ,
            "QT_QPA_PLATFORM": "offscreen",
            TOKEN: self._token,
            "KILLS_SEED": str(seed),
            "KILLS_JOURNAL": str(self._journal),
            "KILLS_PDF": str(self._pdf),
            "KILLS_REST": str(self._rest),
        }

    def run(self) -> None:
        """Start, kill twice a solver process, kill the program, look at what is left."""
        window = self._start("tests.kills_session", str(self._plan))
        try:
            self._until(lambda: "typed" in self._journal.read_text(), ANSWERED, "it never answered")
            for _ in range(2):
                time.sleep(self._draw.uniform(0.0, 1.5))
                self._kill_a_solver(window.pid)
            time.sleep(self._draw.uniform(0.0, 4.0))
        finally:
            self._kill(window, "the program")
        self._judge(time.time())

    def run_page(self) -> None:
        """The command that writes the page, killed at a random moment."""
        out = self._pdf.with_name("page.pdf")
        page = self._start("desktop.app", "page", str(self._plan), str(out))
        time.sleep(self._draw.uniform(0.2, 3.0))
        self._kill(page, "the command page")
        self._judge_processes()
        self._judge_pdf(out)

    def _start(self, module: str, *arguments: str) -> subprocess.Popen[bytes]:
        command = [sys.executable, "-m", module, *arguments]
        quiet = subprocess.DEVNULL
        return subprocess.Popen(command, env=self._environment, stdin=quiet, stdout=quiet, stderr=quiet)

    def _kill(self, process: subprocess.Popen[bytes], what: str) -> None:
        if process.poll() is None:
            process.send_signal(signal.SIGKILL)
            self._tally.killed(what)
        elif what == "the program":
            self._lost(f"{what} had ended by itself with code {process.returncode}")
        process.wait()

    def _kill_a_solver(self, window: int) -> None:
        solvers: list[int] = []

        def found() -> bool:
            solvers[:] = [process for process in self._processes() if process != window]
            return bool(solvers)

        if not self._until(found, ANSWERED, "there was no solver process to kill"):
            return
        os.kill(self._draw.choice(solvers), signal.SIGKILL)
        self._tally.killed("a solver process")
        began, seen = time.monotonic(), len(self._journal.read_text())
        self._rest.touch()  # the hands make one more edit and wait

        def answered() -> bool:
            return "answered" in self._journal.read_text()[seen:]

        if self._until(answered, ANSWERED, "no answer after a solver process was killed"):
            self._tally.longest_restart = max(self._tally.longest_restart, time.monotonic() - began)
        self._rest.unlink()

    # what is left

    def _judge(self, killed_at: float) -> None:
        self._judge_processes()
        self._judge_pdf(self._pdf)
        saved = self._saved()
        copies = [self._number(left.content.plan.title) for left in leftovers()]
        kept = max([saved, *copies])
        lost = [at for at, edit in self._noted("typed") if edit > kept]
        if lost:
            seconds = killed_at - min(lost)
            self._tally.longest_loss = max(self._tally.longest_loss, seconds)
            if seconds > PROMISE:
                self._lost(f"{seconds:.2f} s of typing: edits after {kept}")
        self._tally.parts += len(list(self._plan.parent.glob(".*.part")))

    def _saved(self) -> int:
        """Which edit the file holds; at least that of the last save that was reported."""
        try:
            saved = self._number(read_plan(self._plan).title)
        except Exception as broken:
            self._lost(f"the plan's file cannot be read: {broken}")
            return -1
        reported = max((edit for _, edit in self._noted("saved")), default=0)
        if saved < reported:
            self._lost(f"the file holds edit {saved}, reported as saved was {reported}")
        return saved

    def _judge_processes(self) -> None:
        began = time.monotonic()
        if self._until(lambda: not self._processes(), ENDED, f"processes left: {self._processes()}"):
            self._tally.longest_orphan = max(self._tally.longest_orphan, time.monotonic() - began)
        for process in self._processes():
            os.kill(process, signal.SIGKILL)

    def _judge_pdf(self, pdf: Path) -> None:
        content = pdf.read_bytes() if pdf.exists() else b""
        if content and not (content.startswith(b"%PDF-") and content.rstrip().endswith(b"%%EOF")):
            self._lost(f"{pdf.name} is half written")

    def _noted(self, what: str) -> list[tuple[float, int]]:
        lines = [line.split() for line in self._journal.read_text().splitlines()]
        return [(float(at), int(number[0])) for at, done, *number in lines if done == what]

    @staticmethod
    def _number(title: str) -> int:
        found = re.fullmatch(r"edit (\d+)", title)
        return int(found[1]) if found else 0

    def _processes(self) -> list[int]:
        """Everything this round started, and whatever that started."""
        mark, found = f"{TOKEN}={self._token}".encode(), []
        for folder in Path("/proc").glob("[0-9]*"):
            try:
                if mark in (folder / "environ").read_bytes():
                    found.append(int(folder.name))
            except OSError:
                continue  # ended, or somebody else's
        return found

    def _until(self, holds: Callable[[], bool], seconds: float, otherwise: str) -> bool:
        end = time.monotonic() + seconds
        while not holds():
            if time.monotonic() > end:
                self._lost(otherwise)
                return False
            time.sleep(0.02)
        return True

    def _lost(self, what: str) -> None:
        print(f"{self._name}: {what}", flush=True)
        self._tally.losses.append(what)


def main() -> int:
    """Run the rounds; returns the exit code."""
    asked = argparse.ArgumentParser(description="kill -9 at random moments: is anything lost?")
    asked.add_argument("--rounds", type=int, default=50)
    asked.add_argument("--seed", type=int, default=1)
    options = asked.parse_args()
    app = QCoreApplication(["kills"])
    app.setOrganizationName("full-complement")
    app.setApplicationName("full-complement")
    tally = Tally()
    for seed in range(options.seed, options.seed + options.rounds):
        with tempfile.TemporaryDirectory() as folder:
            one = Round(seed, Path(folder), tally)
            one.run()
            if seed % 3 == 0:
                one.run_page()
    print(tally.told())
    return 1 if tally.losses else 0


if __name__ == "__main__":
    sys.exit(main())
