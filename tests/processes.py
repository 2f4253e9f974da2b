"""Which processes are alive and whose children they are, read from /proc (Linux)."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from pathlib import Path
from time import monotonic, sleep
from typing import TypeVar

PROC = Path("/proc")
T = TypeVar("T")


def alive(process: int) -> bool:
    """Whether the process runs; one that ended and was not yet waited for does not."""
    return _state(process) not in ("", "Z", "X")


def children(process: int) -> list[int]:
    """The processes started by `process`."""
    everyone = [int(folder.name) for folder in PROC.iterdir() if folder.name.isdecimal()]
    return [one for one in everyone if _parent(one) == process and alive(one)]


def engines_of(process: int) -> list[int]:
    """The processes of both engines, once both are there and one has been working."""
    found = [one for one in children(process) if b"engine" in _command(one)]
    return found if len(found) == 2 and any(_seconds(one) > 0.5 for one in found) else []


def wait_for(found: Callable[[], T], seconds: float = 30.0) -> T:
    """What `found` gives once it gives something."""
    until = monotonic() + seconds
    while not (value := found()):
        assert monotonic() < until, "it did not happen"
        sleep(0.02)
    return value


def wait_until_gone(processes: Iterable[int], seconds: float = 10.0) -> None:
    """Wait until none of them runs."""
    wanted = list(processes)
    wait_for(lambda: not any(alive(one) for one in wanted), seconds)


def _fields(process: int) -> list[str]:
    try:
        return (PROC / str(process) / "stat").read_text().rpartition(")")[2].split()
    except OSError:
        return []


def _state(process: int) -> str:
    return next(iter(_fields(process)), "")


def _parent(process: int) -> int:
    fields = _fields(process)
    return int(fields[1]) if fields else 0


def _seconds(process: int) -> float:
    """Processor time it used, at a hundred ticks a second."""
    fields = _fields(process)
    return int(fields[11]) / 100 if fields else 0.0


def _command(process: int) -> bytes:
    try:
        return (PROC / str(process) / "cmdline").read_bytes()
    except OSError:
        return b""
