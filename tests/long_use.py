"""A long day: thousands of edits with solves in one run. `python -m tests.long_use [--edits 2000]`

By hand, Linux, minutes. Opens the window (drawn into memory) on the hillside example and edits it again and
again; every edit waits for its answer. Every 50 edits another page is shown and its question answered, every
100 the plan is saved and the page written, every 250 the plan is opened again. Prints the memory of each
process along the way, what is left running, and how long the window was blocked. Exit code 1 if the most
memory of a process in the second half is a tenth above that in the first, if processes multiplied, or if one
was left.
"""

from __future__ import annotations

import argparse
import os
import random
import sys
import tempfile
import time
from collections import Counter
from collections.abc import Callable
from dataclasses import replace
from decimal import Decimal
from itertools import accumulate
from pathlib import Path

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication

import resources
from desktop.answers import Status
from desktop.rail import OUTPUT, PAGES
from desktop.start import open_window
from desktop.window import Window
from desktop.workers import Workers
from tests.processes import alive, children

ALLOWED = 1.1  # most memory in the second half over most in the first
SAMPLES = 40
MOST = 4  # solver processes at a time
LONGEST = 120.0  # seconds for one answer


class Day:
    """The window and the hand that edits."""

    def __init__(self, app: QApplication, window: Window, folder: Path) -> None:
        self.app = app
        self.window = window
        self.gaps: Counter[int] = Counter()  # tenths of a millisecond; a list would be memory that grows
        self.seen: set[int] = set()
        self._folder = folder
        self._draw = random.Random(7)
        self._last = time.perf_counter()
        self._clock = QTimer(window)
        self._clock.timeout.connect(self._tick)
        self._clock.start(0)

    def edit(self, number: int) -> None:
        """One edit, and its answer."""
        plan = self.window.document.plan
        first, *works = plan.works
        hands, *others = plan.categories
        work = replace(first, amounts=tuple(Decimal(self._draw.randint(45_000, 65_000)) for _ in plan.phases))
        paid = replace(hands, pay=Decimal(self._draw.randint(900, 1100)))
        new = replace(plan, title=f"edit {number}", works=(work, *works), categories=(paid, *others))
        self.window.document.edit(f"edit {number}", new)
        self.wait(self.settled)
        self.seen |= set(children(os.getpid()))

    def between(self, number: int) -> None:
        """What else people do now and then."""
        if number % 50 == 0:
            self.window.show_page(number // 50 % len(PAGES))
            self.wait(self.settled)
        if number % 100 == 0:
            self.window.document.save(self._folder / "long.crew.json")
            self.window.page(OUTPUT).write_pdf(self._folder / "long.pdf")
        if number % 250 == 0:
            self.window.document.open(self._folder / "long.crew.json")
            self.wait(self.settled)

    def settled(self) -> bool:
        """Nobody is at work on anything."""
        answers = self.window.answers
        asked = ("cost", "room", "near", "steps", "map", "attend")
        over = answers.status not in (Status.SOLVING, Status.RESTARTING) and not answers.busy
        return over and all(answers.progress(question) is None for question in asked)

    def wait(self, until: Callable[[], bool]) -> None:
        """Let the window work."""
        end = time.monotonic() + LONGEST
        while not until():
            if time.monotonic() > end:
                raise TimeoutError(f"no answer: {self.window.answers.status}")
            self.app.processEvents()
            time.sleep(0.001)

    def _tick(self) -> None:
        now = time.perf_counter()
        self.gaps[round((now - self._last) * 10_000)] += 1
        self._last = now


def memory(process: int) -> float:
    """MB that a process really holds."""
    pages = int(Path(f"/proc/{process}/statm").read_text().split()[1])
    return pages * os.sysconf("SC_PAGE_SIZE") / 1e6


def sample(number: int) -> tuple[float, float, int]:
    """Print and give: memory of the window, of its largest process, how many of these there are."""
    own, others = memory(os.getpid()), sorted((memory(p) for p in children(os.getpid())), reverse=True)
    print(f"{number:6} edits: window {own:6.1f} MB, solvers {[round(one, 1) for one in others]}", flush=True)
    return own, max(others, default=0.0), len(others)


def run(edits: int, folder: Path) -> int:
    """The day; returns the exit code."""
    app = QApplication(["long use"])
    app.setApplicationName("full-complement")
    window = open_window(app, Workers(), resources.example_paths()[0])
    day = Day(app, window, folder)
    day.wait(lambda: window.answers.answer is not None)
    began, samples = time.monotonic(), [sample(0)]
    for number in range(1, edits + 1):
        day.edit(number)
        day.between(number)
        if number % max(1, edits // SAMPLES) == 0:
            samples.append(sample(number))
    minutes = (time.monotonic() - began) / 60
    window.document.undo_stack.setClean()
    window.close()
    left = [process for process in day.seen if alive(process)]
    return told(samples, day, left, minutes)


def told(samples: list[tuple[float, float, int]], day: Day, left: list[int], minutes: float) -> int:
    """Print what came out."""
    half = len(samples) // 2
    (own, own_late), (solver, solver_late), (_, many) = (
        (max(column[1:half]), max(column[half:])) for column in zip(*samples, strict=True)
    )
    print(f"took {minutes:.1f} minutes; {len(day.seen)} processes were started in all, {len(left)} are left")
    print(f"most memory, first and second half: window {own:.1f} and {own_late:.1f} MB,", end=" ")
    print(f"a solver {solver:.1f} and {solver_late:.1f} MB; at most {many} solvers at a time")
    print(f"window blocked: median {within(day.gaps, 0.5):.1f} ms,", end=" ")
    print(f"99.9 % {within(day.gaps, 0.999):.0f} ms, longest {within(day.gaps, 1.0):.0f} ms")
    kept = own_late <= ALLOWED * own and solver_late <= ALLOWED * solver and not left and many <= MOST
    print("flat" if kept else "NOT flat")
    return 0 if kept else 1


def within(gaps: Counter[int], share: float) -> float:
    """The shortest time, ms, that `share` of the gaps do not exceed."""
    wanted = share * gaps.total()
    sums = accumulate(gaps[gap] for gap in sorted(gaps))
    return next(gap for gap, so_far in zip(sorted(gaps), sums, strict=True) if so_far >= wanted) / 10


if __name__ == "__main__":
    asked = argparse.ArgumentParser(description="Thousands of edits with solves in one run.")
    asked.add_argument("--edits", type=int, default=2000)
    with tempfile.TemporaryDirectory() as own:  # the planner's settings stay as they are
        for place in ("XDG_STATE_HOME", "XDG_CONFIG_HOME", "XDG_DATA_HOME"):
            os.environ[place] = own
        sys.exit(run(asked.parse_args().edits, Path(own)))
