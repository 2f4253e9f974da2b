"""How quick the window is: `python -m tests.benchmark_window`, from the root of the repository.

Prints the time from start to window and to first answer, from a choice to the picture (crew map with other
axes, staircase of 50 to 200 % of the workload; the hillside example), from an edit to the new headline
(12 categories, 12 rules, one phase) with each page in front, and the longest gap of a timer while somebody
types for ten seconds.
"""

# ruff: noqa: E402 - the clock starts before anything heavy is imported

from __future__ import annotations

import os
import time

STARTED = time.perf_counter()
os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

import random
import statistics
import tempfile
from collections.abc import Callable
from dataclasses import replace
from decimal import Decimal

from PySide6.QtCore import Qt, QTimer
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

from desktop.workers import Workers
from solver.plan import ONE, Category, Plan, Presence, Ratio, Rule, Sense, Share, Supervision, Work

EDITS = 40
CHOICES = 8
TYPING = 10.0  # seconds
KEY_EVERY = 0.03  # seconds between two keys
PAGES = ("Plan", "Crew", "Rounding")


def twelve(seed: int) -> Plan:
    """A plan of 12 categories, 3 works and 12 rules, without anything unusual."""
    draw = random.Random(seed)
    return Plan(
        categories=tuple(_category(at, draw) for at in range(12)),
        works=tuple(Work(f"Work {k}", "units", (Decimal(draw.randrange(2000, 9000)),)) for k in range(3)),
        rules=tuple(_rule(at, draw) for at in range(12)),
    )


def _category(at: int, draw: random.Random) -> Category:
    supervision = Supervision(Decimal(draw.choice((2, 3, 4))), ("Grade 0", "Grade 1"))
    return Category(
        f"Grade {at}",
        Decimal(draw.randrange(400, 1400)),
        Decimal(38),
        on_books=Decimal(draw.randrange(3)),
        absence=Decimal("0.05"),
        join_cost=Decimal(draw.randrange(300)),
        supervision=supervision if at > 6 else Supervision(),
        output={f"Work {k}": Decimal(draw.randrange(5, 40)) for k in range(3) if draw.random() < 0.6},
    )


def _rule(at: int, draw: random.Random) -> Rule:
    first, second = (f"Grade {n}" for n in draw.sample(range(12), 2))
    everybody = tuple(f"Grade {n}" for n in range(12))
    if at % 3 == 0:
        return Presence(f"Rule {at}", {first: ONE, second: ONE}, Sense.AT_LEAST, ONE)
    if at % 3 == 1:
        return Ratio(f"Rule {at}", (first,), (second,), Decimal(3))
    return Share(f"Rule {at}", (first,), everybody, Sense.AT_MOST, Decimal("0.5"))


def main() -> None:
    """Run everything once and print it."""
    app = QApplication(["benchmark"])
    app.setApplicationName("full-complement")
    workers = Workers()
    from desktop.answers import Status
    from desktop.start import open_window

    window = open_window(app, workers, None)
    app.processEvents()
    print(f"window visible after           {time.perf_counter() - STARTED:6.2f} s")

    def ready() -> bool:
        return window.answers.status is Status.READY and not window.answers.stale

    wait(app, lambda: ready() and window.answers.answer is not None)
    print(f"first exact answer after       {time.perf_counter() - STARTED:6.2f} s")
    window.resize(1366, 768)
    document = window.document
    for title, choose in (("Crew map", other_axes), ("Workload", other_range)):
        first, later = picture_times(app, window, window.page(title), choose)
        print(f"{title + ', choice to picture':30} {later:6.2f} s median, the first {first:.2f} s")
    for title in PAGES:
        document.new(twelve(1))
        window.page(title)
        wait(app, ready)
        times, solves = edits(app, document, window.answers, ready)
        print(f"edit to headline, {title:12} {times:6.0f} ms median, of which the solve {solves:.0f} ms")
    document.new(twelve(2))
    wait(app, ready)
    window.page("Plan")
    gaps = typing(app, window)
    wait(app, ready)
    print(f"longest gap while typing       {gaps[-1]:6.0f} ms (next {gaps[-2]:.0f} and {gaps[-3]:.0f} ms)")
    print(f"headline after typing: {window.headline.state.text()}")
    document.undo_stack.setClean()
    window.close()


def picture_times(
    app: QApplication, window, page, choose: Callable[[object, int], None]
) -> tuple[float, float]:
    """Seconds from opening the page to its picture, and the median over other choices."""
    times = []
    for count in range(CHOICES):
        start = time.perf_counter()
        if count:
            choose(page, count)
            wait(app, lambda: window.answers.detail(page.question) is None, 1.0)
        wait(app, lambda: window.answers.detail(page.question) is not None)
        page.grab()  # painted
        times.append(time.perf_counter() - start)
    return times[0], statistics.median(times[1:])


def other_axes(page, count: int) -> None:
    """Another pair of categories on the axes."""
    page.up.setCurrentIndex((page.up.currentIndex() + 1) % page.up.count())
    if page.up.currentIndex() == page.across.currentIndex():
        page.up.setCurrentIndex((page.up.currentIndex() + 1) % page.up.count())


def other_range(page, count: int) -> None:
    """Every work in turn, over the same range."""
    page.work.setCurrentIndex((page.work.currentIndex() + 1) % page.work.count())


def edits(app: QApplication, document, answers, ready: Callable[[], bool]) -> tuple[float, float]:
    """Medians over edits of one pay: milliseconds to the headline, and of the solve in it."""
    times, solves = [], []
    for count in range(EDITS):
        first, *others = document.plan.categories
        changed = replace(first, pay=Decimal(900 + count))
        start = time.perf_counter()
        document.edit("Change pay", replace(document.plan, categories=(changed, *others)))
        wait(app, ready)
        times.append((time.perf_counter() - start) * 1000)
        solves.append(answers.answer.seconds * 1000)
    return statistics.median(times), statistics.median(solves)


def typing(app: QApplication, window) -> list[float]:
    """Gaps between ticks of a timer, in ms, shortest first, while numbers are typed into the grid."""
    gaps: list[float] = []
    last = [time.perf_counter()]

    def tick() -> None:
        now = time.perf_counter()
        gaps.append((now - last[0]) * 1000)
        last[0] = now

    timer = QTimer()
    timer.timeout.connect(tick)
    timer.start(0)
    grid, draw = window.page("Plan").categories, random.Random(3)
    end = time.monotonic() + TYPING
    while time.monotonic() < end:
        window.activateWindow()
        grid.setFocus()
        grid.setCurrentIndex(grid.model().index(draw.randrange(12), draw.choice((1, 2, 3, 4))))
        for key in str(draw.randrange(10, 99)):
            QTest.keyClick(QApplication.focusWidget(), key)
            wait(app, lambda: False, KEY_EVERY)
        QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Return)
        wait(app, lambda: False, KEY_EVERY)
    timer.stop()
    return sorted(gaps)


def wait(app: QApplication, until: Callable[[], bool], seconds: float = 60.0) -> None:
    """Let the window work until `until()` or for `seconds`."""
    end = time.monotonic() + seconds
    while not until() and time.monotonic() < end:
        app.processEvents()


if __name__ == "__main__":
    with tempfile.TemporaryDirectory() as settings:
        for place in ("XDG_STATE_HOME", "XDG_CONFIG_HOME", "XDG_DATA_HOME"):
            os.environ[place] = settings
        main()
