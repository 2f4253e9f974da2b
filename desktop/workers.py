"""The solver processes of one window: those at work, and warm ones waiting."""

from __future__ import annotations

import itertools
from collections.abc import Sequence

from PySide6.QtCore import QObject
from shiboken6 import isValid

from desktop.worker import Worker

MOST_IDLE = 2  # one to answer the next edit, one spare for when that has to be stopped
MOST_SERVED = 200  # requests: the native solvers keep a little of every program, so nobody serves for ever


class Workers(QObject):
    """Lends out warm processes.

    A process that is taken is replaced, so that stopping it costs nobody the time of a start. The first one
    is started at once, the spare when the first answer is there (`warm_up`), so that a start of the program
    has the machine to itself.
    """

    def __init__(self, command: Sequence[str] | None = None, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._command = command
        self._idle: list[Worker] = []
        self._all: list[Worker] = []
        self._leaving: list[Worker] = []
        self._numbers = itertools.count(1)
        self._closed = False
        self._start()

    def next_number(self) -> int:
        """A number no request had before."""
        return next(self._numbers)

    def take(self) -> Worker:
        """A process for one request; hand it back with `give_back` or end it with `drop`."""
        worker = self._idle.pop() if self._idle else self._made()
        worker.lost.disconnect(self._forget)
        return worker

    def give_back(self, worker: Worker) -> None:
        """Its request was answered: it may wait for the next."""
        if self._closed or not worker.alive or len(self._idle) >= MOST_IDLE:
            self.drop(worker)
            return
        if worker.served >= MOST_SERVED:
            self.drop(worker)
            self.warm_up()
            return
        worker.lost.connect(self._forget)
        self._idle.append(worker)  # the last one back is taken first: its caches are warm

    def drop(self, worker: Worker) -> None:
        """End a process that was taken."""
        worker.stop()
        self._discard(worker)

    def warm_up(self) -> None:
        """Have a spare process waiting."""
        if not self._closed and len(self._idle) < MOST_IDLE:
            self._start()

    def process_ids(self) -> list[int]:
        """The system's numbers of all processes, the latest started last."""
        return [worker.process_id for worker in self._all]

    def close(self, milliseconds: int = 2000) -> None:
        """End every process and wait until they are gone."""
        self._closed = True
        ended = list(self._all)
        for worker in ended:
            worker.stop()
        for worker in (*ended, *filter(isValid, self._leaving)):
            worker.join(milliseconds)
        self._idle.clear()
        self._all.clear()

    def _start(self) -> None:
        self._idle.insert(0, self._made())

    def _made(self) -> Worker:
        worker = Worker(self._command, self)
        worker.lost.connect(self._forget)
        self._all.append(worker)
        return worker

    def _forget(self) -> None:
        """An idle process ended by itself; the next request starts another."""
        for worker in [w for w in self._idle if not w.alive or w is self.sender()]:
            self._idle.remove(worker)
            self._discard(worker)

    def _discard(self, worker: Worker) -> None:
        """It is being ended: until it is gone, the end of the program waits for it."""
        if worker in self._all:
            self._all.remove(worker)
        self._leaving = [w for w in self._leaving if isValid(w) and w.alive] + [worker]
