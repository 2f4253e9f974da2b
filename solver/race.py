"""CBC and HiGHS side by side, each in a process of its own; the best crew of any stands against the best
bound of any, the first proof wins, and the other confirms it where that is cheap."""

from __future__ import annotations

import atexit
import json
import os
import subprocess
import sys
import threading
from collections.abc import Callable, Mapping, Sequence
from contextlib import suppress
from dataclasses import dataclass, field
from functools import lru_cache
from math import inf
from pathlib import Path
from queue import Empty, SimpleQueue
from time import monotonic
from typing import Any

from solver.engine import EngineName, WholeStatus
from solver.enginehost import matrix_to_json
from solver.matrix import Matrix

# a confirmation that takes as long again as the proof is no longer cheap
GRACE = 1.0
# CBC tells its bound only at the end of a solve: the first is short, the later ones longer
SLICES = (9.0, 30.0, inf)
# engines look at the clock now and then only; what they tell at their end should not come too late
OVERRUN = 0.5


def host_command() -> tuple[str, ...]:
    """How an engine's process is started: a bundle starts itself, everything else starts Python."""
    if getattr(sys, "frozen", False):
        return (sys.executable, "--engine")
    return (sys.executable, "-m", "solver", "engine")


class Host:
    """One engine's process; killed to cancel, started again when next asked."""

    def __init__(self, engine: EngineName, events: SimpleQueue[dict[str, Any]]) -> None:
        self.engine = engine
        self._events = events
        self._process: subprocess.Popen[str] | None = None
        self._number = 0
        self.busy = False

    @property
    def pid(self) -> int | None:
        """Number of the process, None while there is none."""
        return None if self._process is None else self._process.pid

    def warm(self) -> None:
        """Start the process if it is not running."""
        if self._process is not None and self._process.poll() is None:
            return
        self.close()
        place = str(Path(__file__).resolve().parent.parent)
        paths = [place, *filter(None, [os.environ.get("PYTHONPATH")])]
        self._process = subprocess.Popen(
            host_command(),
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            text=True,
            encoding="utf-8",
            env={**os.environ, "PYTHONPATH": os.pathsep.join(paths)},
        )
        threading.Thread(target=self._listen, args=(self._process,), daemon=True).start()

    def ask(self, matrix: dict[str, Any], seconds: float, start: Sequence[float] | None) -> None:
        """Set the engine to work; what it says arrives in the queue, marked with its name."""
        self.warm()
        assert self._process is not None
        assert self._process.stdin is not None
        self._number += 1
        request = {
            "number": self._number, "engine": self.engine.value, "matrix": matrix,
            "seconds": seconds, "start": start,
        }  # fmt: skip
        self.busy = True
        try:
            self._process.stdin.write(json.dumps(request) + "\n")
            self._process.stdin.flush()
        except BrokenPipeError:
            self._events.put(self._lost())

    def cancel(self) -> None:
        """End a running solve."""
        if self.busy:
            self.close()
        self.busy = False
        self._number += 1

    def close(self) -> None:
        """End the process."""
        process, self._process = self._process, None
        if process is None:
            return
        process.kill()
        process.wait()
        if process.stdin is not None:
            with suppress(BrokenPipeError):
                process.stdin.close()

    def mine(self, event: dict[str, Any]) -> bool:
        """Whether an event answers the running request."""
        return bool(self.busy and event["number"] == self._number)

    def _listen(self, process: subprocess.Popen[str]) -> None:
        assert process.stdout is not None
        number = 0
        with process.stdout as replies:
            for line in replies:
                event = json.loads(line)
                number = event["number"]
                self._events.put({"engine": self.engine, **event})
        self._events.put({"engine": self.engine, "number": number, "kind": "failed", "says": "ended"})
        self._events.put(self._lost())

    def _lost(self) -> dict[str, Any]:
        return {"engine": self.engine, "number": self._number, "kind": "lost", "says": "ended"}


@dataclass
class Standing:
    """What a race knows so far. `proofs` are the engines that proved, with the cost each proved."""

    bound: float = -inf
    objective: float = inf
    proofs: dict[EngineName, float] = field(default_factory=dict)
    infeasible: set[EngineName] = field(default_factory=set)


# on_crew takes a solution's columns and answers with the cost of the crew that stood the check, or None
OnCrew = Callable[[Sequence[float]], float | None]
OnNews = Callable[[Standing], None]


@dataclass(frozen=True)
class Heat:
    """What a race is run over, and who listens.

    `start`: every column of a crew to begin from, or None. `rounded` lifts a bound to the next cost a whole
    crew can have. `idle` may do something useful for at most half a second while there is no news, and says
    whether it wants to again.
    """

    matrix: Matrix
    start: Sequence[float] | None
    seconds: float
    good_enough: Callable[[Standing], bool]
    rounded: Callable[[float], float]
    on_crew: OnCrew
    on_news: OnNews
    idle: Callable[[Standing], bool]


class Race:
    """Two hosts and the queue they report to."""

    def __init__(self) -> None:
        self._events: SimpleQueue[dict[str, Any]] = SimpleQueue()
        self.hosts = {engine: Host(engine, self._events) for engine in EngineName}

    def warm(self) -> None:
        """Start both processes ahead of the question."""
        for host in self.hosts.values():
            host.warm()

    def close(self) -> None:
        """End both processes."""
        for host in self.hosts.values():
            host.close()

    def run(self, heat: Heat, standing: Standing) -> Standing:
        """Race until proved, infeasible, good enough or out of time; brings `standing` up to date."""
        try:
            return _Run(self.hosts, heat, standing).until_decided(self._events)
        finally:
            for host in self.hosts.values():
                host.cancel()
            self.warm()  # the next question finds them ready


class _Run:
    """One race."""

    def __init__(self, hosts: Mapping[EngineName, Host], heat: Heat, standing: Standing) -> None:
        self._hosts = hosts
        self._heat = heat
        self._matrix = matrix_to_json(heat.matrix)
        self.standing = standing
        self._began = monotonic()
        self._until = self._began + heat.seconds
        self._slice = dict.fromkeys(hosts, 0)

    def until_decided(self, events: SimpleQueue[dict[str, Any]]) -> Standing:
        for engine in self._hosts:
            self._ask(engine)
        confirm_until, willing = inf, True
        while not self._decided():
            if self.standing.proofs and confirm_until == inf:
                confirm_until = monotonic() + max(GRACE, monotonic() - self._began)
            wait = min(self._until + 0.5, confirm_until) - monotonic()
            if wait <= 0:
                break
            try:
                self._take(events.get(block=not willing, timeout=min(wait, 1.0)))
            except Empty:
                willing = willing and not self.standing.proofs and self._heat.idle(self.standing)
        return self.standing

    def _ask(self, engine: EngineName) -> None:
        left = self._until - monotonic()
        left -= min(OVERRUN, left / 20)
        longest = SLICES[self._slice[engine]] if engine is EngineName.CBC else inf
        self._hosts[engine].ask(self._matrix, max(min(left, longest), 0.05), self._heat.start)

    def _decided(self) -> bool:
        standing, busy = self.standing, any(host.busy for host in self._hosts.values())
        if not busy or len(standing.infeasible) == len(self._hosts):
            return True
        if standing.proofs:
            return len(standing.proofs) == len(self._hosts)
        return self._heat.good_enough(standing)

    def _take(self, event: dict[str, Any]) -> None:
        engine: EngineName = event["engine"]
        host = self._hosts[engine]
        if not host.mine(event):
            return
        if event["kind"] in ("failed", "lost"):
            host.busy = False
            return
        self._learn(event)
        if event["kind"] == "done":
            host.busy = False
            self._finished(engine, event)
        self._heat.on_news(self.standing)

    def _learn(self, event: dict[str, Any]) -> None:
        if event["x"] is not None:
            cost = self._heat.on_crew(event["x"])
            if cost is not None:
                self.standing.objective = min(self.standing.objective, cost)
        if event["bound"] > -inf and event.get("status") != WholeStatus.INFEASIBLE.value:
            self.standing.bound = max(self.standing.bound, self._heat.rounded(event["bound"]))

    def _finished(self, engine: EngineName, event: dict[str, Any]) -> None:
        status = WholeStatus(event["status"])
        if status is WholeStatus.OPTIMAL:
            self.standing.proofs[engine] = event["objective"]
        elif status is WholeStatus.INFEASIBLE:
            self.standing.infeasible.add(engine)
        elif engine is EngineName.CBC and self._slice[engine] + 1 < len(SLICES):
            self._slice[engine] += 1
            if self._until - monotonic() > 1.0:
                self._ask(engine)


@lru_cache(maxsize=1)
def engines() -> Race:
    """This process's two engine processes: they outlast a question, so that the next finds them warm."""
    race = Race()
    atexit.register(race.close)
    return race
