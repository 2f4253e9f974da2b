"""One request to the solver, seen through to its end whatever happens to the process."""

from __future__ import annotations

import logging
from typing import Any

from PySide6.QtCore import QObject, QTimer, Signal

from desktop.replies import Reply
from desktop.understanding import Rubbish, understood
from desktop.worker import Worker
from desktop.workers import Workers

ENDINGS = frozenset({"answer", "problems", "refused", "failed"})
TRIES = 2  # a second process is asked once; a request that ends two of them would end a third

_log = logging.getLogger(__name__)


class Errand(QObject):
    """Asks one question and listens until its answer is there.

    `heard(Reply)` for every part on the way, `ended(Reply)` once with the last part, both with understood
    values; `restarting()` when the process was lost and another one is asked, `given_up(how)` when that was
    lost as well. After `cancel()` nothing is emitted. `kind` is the class of the answer (None: plain dicts);
    `silence` is how long a process may say nothing before it counts as hung (ms).
    """

    heard = Signal(object)
    ended = Signal(object)
    restarting = Signal()
    given_up = Signal(str)

    def __init__(
        self,
        workers: Workers,
        question: str,
        request: dict[str, Any],
        kind: type[Any] | None,
        silence: int,
        parent: QObject,
    ) -> None:
        super().__init__(parent)
        self._kind = kind
        self._workers = workers
        self._question = question
        self._request = request
        self._worker: Worker | None = None
        self._number = 0
        self._tries = 0
        self._watchdog = QTimer(self, interval=silence, singleShot=True)
        self._watchdog.timeout.connect(self._on_silence)

    def start(self) -> None:
        """Send the request."""
        self._tries += 1
        self._number = self._workers.next_number()
        self._worker = self._workers.take()
        self._worker.replied.connect(self._on_reply)
        self._worker.lost.connect(self._on_lost)
        self._worker.send({"id": self._number, "ask": self._question, **self._request})
        self._watchdog.start()

    def cancel(self) -> None:
        """Stop working on it: a running solve can only be ended with its process."""
        self.blockSignals(True)
        worker = self._release()
        if worker is not None:
            self._workers.drop(worker)
        self.deleteLater()

    def _release(self) -> Worker | None:
        """Let go of the process; what it still says is for nobody."""
        self._watchdog.stop()
        worker, self._worker = self._worker, None
        if worker is not None:
            worker.replied.disconnect(self._on_reply)
            worker.lost.disconnect(self._on_lost)
        return worker

    def _on_reply(self, reply: Reply) -> None:
        if reply.id != self._number or self._worker is None:
            return  # late: it belongs to an older request
        try:
            self._take(understood(reply, self._kind))
        except Rubbish as rubbish:
            self._on_lost(f"its answer could not be understood ({rubbish})")

    def _take(self, reply: Reply) -> None:
        if reply.part not in ENDINGS:
            self._watchdog.start()
            self.heard.emit(reply)
            return
        worker = self._release()
        if worker is not None:
            self._workers.give_back(worker)
        self.ended.emit(reply)
        self.deleteLater()

    def _on_silence(self) -> None:
        self._on_lost(f"it said nothing for {self._watchdog.interval() / 1000:.0f} s")

    def _on_lost(self, how: str) -> None:
        worker = self._release()
        words = worker.last_words if worker is not None else ""
        _log.warning("the solver process was lost while asked to %s: %s\n%s", self._question, how, words)
        if worker is not None:
            self._workers.drop(worker)
        if self._tries < TRIES:
            self.restarting.emit()
            self.start()
        else:
            self.given_up.emit(how)
            self.deleteLater()
