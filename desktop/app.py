"""The command `full-complement`: the window, the page without a window, the solver process.

Qt is imported only where it is needed, and as late as that.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Sequence
from pathlib import Path

OK, UNUSABLE = 0, 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the program; returns its exit code."""
    given = list(sys.argv[1:] if arguments is None else arguments)
    if given[:1] == ["--worker"]:  # the bundle starts itself as the solver process, without Qt
        from solver.service import main as serve

        return serve()
    if given[:1] == ["--engine"]:  # and as the process of one engine
        from solver.enginehost import main as host

        return host()
    if given[:1] == ["--solve"]:  # the same for one answer as text
        from solver.commands import main as command

        return command(["solve", *given[1:]])
    if given[:1] == ["page"]:
        return _page(given[1:])
    return _window(given)


def _page(arguments: list[str]) -> int:
    if len(arguments) != 2:
        return _usage()
    _without_display()
    from desktop.headless import write_page_of

    return write_page_of(Path(arguments[0]), Path(arguments[1]))


def _window(arguments: list[str]) -> int:
    if arguments in (["--version"], ["--help"], ["-h"]):
        return _told(arguments[0])
    if len(arguments) > 1 or any(a.startswith("-") for a in arguments):
        return _usage()
    plan = Path(arguments[0]) if arguments else None
    if not has_display():
        _without_display()
        from desktop.headless import write_here

        return write_here(plan)
    from desktop.start import run

    return run(plan)


def has_display() -> bool:
    """False on Linux and its kin where no window can appear; Qt would end the process there."""
    if sys.platform in ("win32", "darwin", "cygwin"):
        return True
    return any(os.environ.get(name) for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"))


def _without_display() -> None:
    if not has_display():
        os.environ["QT_QPA_PLATFORM"] = "offscreen"


def _told(option: str) -> int:
    from desktop import messages
    from solver.version import program_version

    print(f"{messages.PROGRAM} {program_version()}" if option == "--version" else messages.USAGE)
    return OK


def _usage() -> int:
    from desktop import messages

    print(messages.USAGE, file=sys.stderr)
    return UNUSABLE


if __name__ == "__main__":
    sys.exit(main())
