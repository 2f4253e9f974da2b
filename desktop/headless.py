"""What the program does without a window: the page, and on a machine without display the answer too."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import resources
from desktop import messages
from solver.planfile import SUFFIX, CannotSave, PlanProblems, UnreadableFile, read_plan, write_whole

OK, NO, UNUSABLE = 0, 1, 2


def write_page_of(plan: Path, out: Path) -> int:
    """`full-complement page PLAN OUT.pdf`: exit code 0, 1 (the plan has problems) or 2 (unusable)."""

    def write() -> int:
        from desktop.page import write_page

        write_page(plan, out)
        print(messages.PAGE_WRITTEN.format(out=out))
        return OK

    return _told(write)


def write_here(plan: Path | None) -> int:
    """No display: the page and the answer of `plan`, or of the first example, into the current folder."""
    chosen = plan or resources.example_paths()[0]
    stem = chosen.name.removesuffix(SUFFIX)
    page, text = Path(f"{stem}.pdf"), Path(f"{stem}.txt")

    def write() -> int:
        from desktop.page import write_page

        read_plan(chosen)  # what is wrong with it is told before anything is started
        answer = _answer(chosen)
        write_whole(text, answer.encode("utf-8"))
        write_page(chosen, page)
        print(messages.NO_DISPLAY.format(name=chosen.name, page=page, text=text))
        return OK

    return _told(write)


def _answer(plan: Path) -> str:
    """The answer as text, from the same command anybody can run."""
    from desktop.worker import solver_command, solver_folder

    done = subprocess.run(
        [*solver_command("solve"), str(plan.resolve())],
        cwd=solver_folder(),
        capture_output=True,
        encoding="utf-8",
        check=False,
    )
    return done.stdout or done.stderr


def _told(do: Callable[[], int]) -> int:
    from desktop.page import NoAnswer

    try:
        return do()
    except PlanProblems as problems:
        print(problems, file=sys.stderr)
        return NO
    except (UnreadableFile, CannotSave, NoAnswer, ValueError) as refused:
        print(refused, file=sys.stderr)
        return UNUSABLE
