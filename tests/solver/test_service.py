"""The worker: framed replies, one ending per request, and nothing that ends it but its input closing."""

from __future__ import annotations

import io
import json
import os
import select
import signal
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path
from time import monotonic
from typing import Any

import numpy as np
import pytest

import solver
from solver.answer import Answer, State, from_json, to_json
from solver.planfile import dump_plan
from solver.questions import QUESTIONS
from solver.service import CUT_SHORT, SOON, serve
from solver.solve import solve
from solver.warmup import TINY
from tests.family import family_plan
from tests.processes import PROC, engines_of, wait_for, wait_until_gone
from tests.solver.full_plans import full_plan

ROOT = Path(solver.__file__).parent.parent
ENDINGS = {"answer", "problems", "refused", "failed"}
TINY_DOCUMENT = json.loads(dump_plan(TINY))
# nobody proves this one within a minute
LONG_DOCUMENT = json.loads(dump_plan(family_plan(20, 8, 52, 0)))
needs_proc = pytest.mark.skipif(not PROC.is_dir(), reason="processes are looked up in /proc")
# a process that asks a worker for something long, tells the number of the worker, and waits
ASKER = """
import subprocess, sys
worker = subprocess.Popen([sys.executable, "-m", "solver", "worker"], stdin=subprocess.PIPE, text=True,
                          stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
worker.stdin.write(sys.stdin.readline())
worker.stdin.flush()
print(worker.pid, flush=True)
worker.wait()
"""


def request(number: Any = 1, ask: Any = "solve", plan: Any = TINY_DOCUMENT, **more: Any) -> str:
    return json.dumps({"id": number, "ask": ask, "plan": plan, **more})


def replies_to(*lines: str) -> list[dict[str, Any]]:
    written = io.StringIO()
    serve((f"{line}\n" for line in lines), written)
    records = written.getvalue().split("\x1e")
    assert records[0] == ""
    assert all(record.endswith("\n") for record in records[1:])
    return [json.loads(record) for record in records[1:]]


class TestRequests:
    def test_an_answer_comes_after_the_fractional_crew(self) -> None:
        parts = replies_to(request(7))
        assert [(reply["id"], reply["part"]) for reply in parts] == [(7, "fractional"), (7, "answer")]
        assert parts[0]["value"] == {"floor": pytest.approx(1.5), "crew": {"A": [pytest.approx(1.5)]}}
        answer = from_json(parts[1]["value"], Answer)
        assert answer.state is State.PROVED
        assert answer.exact is not None
        assert answer.exact.crew == {"A": (2.0,)}

    def test_is_the_answer_of_the_solver(self) -> None:
        plan = full_plan(np.random.default_rng(3))
        value = replies_to(request(plan=json.loads(dump_plan(plan))))[-1]["value"]
        ours = json.loads(json.dumps(to_json(solve(plan))))
        clock = {"seconds": 0, "proof": "", "bound": 0}  # who proved it depends on how busy the machine is
        assert {**value, **clock} == {**ours, **clock}

    def test_every_question_ends_once(self) -> None:
        for number, ask in enumerate(QUESTIONS):
            parts = replies_to(request(number, ask))
            # a map needs two categories, a tightest line the crew it is asked of
            wanted = "refused" if ask in ("map", "tightest") else "answer"
            assert [reply["part"] for reply in parts if reply["part"] in ENDINGS] == [wanted], ask
            assert parts[-1]["part"] == wanted
            assert all(reply["id"] == number for reply in parts)

    def test_problems_of_a_plan_are_listed_with_their_places(self) -> None:
        bad = {**TINY_DOCUMENT, "categories": [{"name": "A", "pay": -1, "hours": "many"}]}
        (reply,) = replies_to(request(plan=bad))
        assert reply["part"] == "problems"
        places = {problem["place"] for problem in reply["value"]}
        assert places == {"categories[0].pay", "categories[0].hours"}
        assert all(problem["says"] for problem in reply["value"])

    @pytest.mark.parametrize(
        ("line", "number"),
        [
            ("rubbish", None),
            ("{", None),
            ("[1, 2]", None),
            ("null", None),
            ("17", None),
            ('{"id": "one", "ask": "solve", "plan": {}}', None),
            ('{"id": 1.5, "ask": "solve", "plan": {}}', None),
            ('{"id": true, "ask": "solve", "plan": {}}', None),
            ('{"id": NaN, "ask": "solve", "plan": {}}', None),
            ('{"ask": "solve", "plan": {}}', None),
            ('{"id": 4}', 4),
            ('{"id": 4, "ask": "sing", "plan": {}}', 4),
            ('{"id": 4, "ask": ["solve"], "plan": {}}', 4),
            ('{"id": 4, "ask": "solve"}', 4),
            ('{"id": 4, "ask": "solve", "plan": {}, "options": [1]}', 4),
            ('{"id": 4, "ask": "solve", "plan": {}, "options": {"seconds": NaN}}', 4),
            ('{"id": 4, "ask": "solve", "plan": {"version": 99}}', 4),
            ('{"id": 4, "ask": "solve", "plan": [1]}', 4),
            ('{"id": 4, "ask": "solve", "plan": {}, "options": {"seconds": -1}}', 4),
            ('{"id": 4, "ask": "solve", "plan": {}, "options": {"seconds": "long"}}', 4),
            ('{"id": 4, "ask": "near", "plan": {}, "options": {"within": true}}', 4),
            ("[" * 100_000, None),
            ('{"id": 4, "ask": "' + "x" * 100_000, None),
            ("\ufffd\x00\x1e", None),
        ],
        ids=lambda value: str(value)[:60],
    )
    def test_a_line_that_is_no_request_is_refused_in_a_sentence_and_the_next_answered(
        self, line: str, number: int | None
    ) -> None:
        refused, *rest = replies_to(line, request(9))
        assert (refused["id"], refused["part"]) == (number, "refused")
        assert refused["value"].endswith(".")
        assert "Traceback" not in refused["value"]
        assert [reply["part"] for reply in rest] == ["fractional", "answer"]

    def test_blank_lines_are_nothing(self) -> None:
        assert replies_to("", "   ", "\t") == []

    def test_a_defect_is_told_with_its_traceback_and_the_next_request_answered(
        self, monkeypatch: pytest.MonkeyPatch
    ) -> None:
        def broken(*_: Any) -> None:
            raise ZeroDivisionError("a defect")

        broken_question = type(QUESTIONS["solve"])("solve", broken)
        monkeypatch.setattr("solver.service.QUESTIONS", {**QUESTIONS, "solve": broken_question})
        failed, *rest = replies_to(request(1), request(2, "near"))
        assert failed["part"] == "failed"
        assert "ZeroDivisionError: a defect" in failed["value"]
        assert rest[-1]["part"] == "answer"

    def test_an_answer_that_is_no_json_is_told_as_a_defect(self, monkeypatch: pytest.MonkeyPatch) -> None:
        unsayable = type(QUESTIONS["solve"])("solve", lambda *_: {"cost": float("nan")})
        monkeypatch.setattr("solver.service.QUESTIONS", {**QUESTIONS, "solve": unsayable})
        (failed,) = replies_to(request(1))
        assert failed["part"] == "failed"


class Worker:
    """A worker process; reads records with a deadline."""

    def __init__(self, replies: int = subprocess.PIPE) -> None:
        self.process = subprocess.Popen(
            [sys.executable, "-m", "solver", "worker"],
            stdin=subprocess.PIPE,
            stdout=replies,
            stderr=subprocess.PIPE,
            cwd=ROOT,
            bufsize=0,
        )
        self._pending = b""

    def send(self, line: bytes) -> None:
        assert self.process.stdin is not None
        self.process.stdin.write(line + b"\n")

    def record(self, seconds: float = 60.0) -> dict[str, Any]:
        assert self.process.stdout is not None
        while b"\n" not in self._pending:
            ready, _, _ = select.select([self.process.stdout], [], [], seconds)
            assert ready, "the worker is silent"
            piece = os.read(self.process.stdout.fileno(), 65536)
            assert piece, "the worker is gone"
            self._pending += piece
        record, _, self._pending = self._pending.partition(b"\n")
        return json.loads(record[record.index(b"\x1e") + 1 :])

    def ending(self) -> dict[str, Any]:
        while True:
            record = self.record()
            if record["part"] in ENDINGS:
                return record


def begin_long_solve(worker: Worker) -> list[int]:
    """Ask for what takes a minute; the processes of the engines, once they are at it."""
    worker.send(request(1, plan=LONG_DOCUMENT).encode())
    return wait_for(lambda: engines_of(worker.process.pid))


@pytest.fixture
def worker() -> Iterator[Worker]:
    made = Worker()
    yield made
    made.process.kill()
    made.process.communicate()


@pytest.fixture
def unread() -> Iterator[Worker]:
    """A worker whose replies nobody needs to read for it to go on."""
    made = Worker(subprocess.DEVNULL)
    yield made
    made.process.kill()
    made.process.communicate()


class TestTheProcess:
    def test_answers_rubbish_and_requests_and_ends_with_its_input(self, worker: Worker) -> None:
        worker.send(b"\xff\xfe\x00rubbish")
        assert worker.record()["part"] == "refused"
        worker.send(request(1).encode())
        assert worker.ending()["part"] == "answer"
        worker.send(b'{"id": 2, "ask"')
        assert worker.ending()["id"] is None
        worker.send(request(3).encode())
        assert worker.ending()["id"] == 3
        out, errors = worker.process.communicate(timeout=30)  # closes its input
        assert (worker.process.returncode, out, errors) == (0, b"", b"")

    def test_ends_quietly_when_nobody_reads_its_replies(self, worker: Worker) -> None:
        worker.send(request(1).encode())
        assert worker.ending()["part"] == "answer"
        assert worker.process.stdout is not None
        worker.process.stdout.close()
        worker.process.stdout = None
        worker.send(request(2).encode())
        _, errors = worker.process.communicate(timeout=30)
        assert (worker.process.returncode, errors) == (0, b"")

    def test_a_request_cut_off_by_the_end_of_input_is_refused(self, worker: Worker) -> None:
        assert worker.process.stdin is not None
        worker.process.stdin.write(b'{"id": 1, "ask": "sol')
        out, errors = worker.process.communicate(timeout=30)
        assert b'"refused"' in out
        assert (worker.process.returncode, errors) == (0, b"")

    def test_a_request_piped_in_gets_its_answer_though_the_input_closes_at_once(self, worker: Worker) -> None:
        out, errors = worker.process.communicate(request(1).encode() + b"\n", timeout=30)
        parts = [json.loads(record)["part"] for record in out.split(b"\x1e")[1:]]
        assert parts == ["fractional", "answer"]
        assert (worker.process.returncode, errors) == (0, b"")

    @needs_proc
    def test_ends_soon_when_its_input_closes_in_the_middle_of_a_long_answer(self, unread: Worker) -> None:
        engines = begin_long_solve(unread)
        assert unread.process.stdin is not None
        unread.process.stdin.close()
        unread.process.stdin = None
        assert unread.process.wait(timeout=10) == CUT_SHORT
        wait_until_gone(engines)

    @needs_proc
    def test_takes_its_engines_along_when_killed(self, unread: Worker) -> None:
        engines = begin_long_solve(unread)
        unread.process.kill()
        unread.process.wait()
        wait_until_gone(engines)

    @needs_proc
    def test_ends_at_once_when_who_asked_is_gone(self) -> None:
        asker = subprocess.Popen(
            [sys.executable, "-c", ASKER], cwd=ROOT, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True
        )
        assert asker.stdin is not None
        assert asker.stdout is not None
        asker.stdin.write(request(1, plan=LONG_DOCUMENT) + "\n")
        asker.stdin.flush()
        worker = int(asker.stdout.readline())
        engines = wait_for(lambda: engines_of(worker))
        asker.kill()
        asker.communicate()
        began = monotonic()
        wait_until_gone([worker, *engines])
        assert monotonic() - began < SOON / 2

    @pytest.mark.skipif(sys.platform == "win32", reason="Windows has no signals to end a process by")
    def test_can_be_ended_at_once(self, worker: Worker) -> None:
        worker.send(request(1).encode())
        worker.ending()
        worker.process.send_signal(signal.SIGTERM)
        assert worker.process.wait(timeout=10) == -signal.SIGTERM
