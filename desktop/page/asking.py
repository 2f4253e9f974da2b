"""Asking the solver without a window: one process, a few questions, and it is gone."""

from __future__ import annotations

import subprocess
import threading
from collections.abc import Mapping, Sequence
from contextlib import suppress
from typing import Any

import simplejson

from desktop.errand import ENDINGS
from desktop.inquiries import KINDS
from desktop.messages import SOLVER_FAILED
from desktop.page.compose import Details
from desktop.replies import Flooded, Reply, ReplyReader
from desktop.understanding import Rubbish, understood
from desktop.worker import solver_folder, worker_command
from solver.answer import Answer
from solver.plan import Plan
from solver.planfile import plan_to_document
from solver.questions import QUESTIONS

GRACE = 60.0  # seconds beyond the limit of the solve: start, appraisals, details
_SMALL = 8  # categories and, for rules and works together, half as many again: details take a second or two
_DETAILS: Mapping[str, Mapping[str, Any]] = {"room": {}, "near": {"within": 2, "most": 5}}


class NoAnswer(Exception):
    """The solver gave no answer; the message is one sentence for people."""


def ask_solver(plan: Plan, seconds: float, command: Sequence[str] | None = None) -> tuple[Answer, Details]:
    """The answer to `plan`, and what room and near-best crews there are where that is quickly known.

    Native code runs in a process of its own: a crash costs the page, not the program. Raises NoAnswer.
    """
    questions = {"solve": {"seconds": seconds}, **(_DETAILS if _is_small(plan) else {})}
    asked = {name: options for name, options in questions.items() if name in QUESTIONS}
    found = _exchange(plan, asked, command or worker_command(), seconds + GRACE)
    answer = found.get("solve")
    if not isinstance(answer, Answer):
        raise NoAnswer(str(answer) if answer else SOLVER_FAILED)
    return answer, Details(room=found.get("room"), near=found.get("near"))


def _is_small(plan: Plan) -> bool:
    lines = len(plan.works) + len(plan.rules)
    return len(plan.phases) == 1 and len(plan.categories) <= _SMALL and lines <= _SMALL * 3 // 2


def _exchange(
    plan: Plan, asked: Mapping[str, Mapping[str, Any]], command: Sequence[str], limit: float
) -> dict[str, Any]:
    """Answers by question; a sentence where the solver refused, nothing where it failed."""
    document = plan_to_document(plan)
    requests = [
        {"id": at, "ask": name, "plan": document, "options": dict(options)}
        for at, (name, options) in enumerate(asked.items())
    ]
    lines = "".join(simplejson.dumps(request, use_decimal=True) + "\n" for request in requests)
    replies = _run(command, lines, len(requests), limit)
    names = list(asked)
    found: dict[str, Any] = {}
    for reply in replies:
        if reply.part in ("answer", "refused") and 0 <= reply.id < len(names):
            found.update(_taken(names[reply.id], reply))
    return found


def _taken(name: str, reply: Reply) -> dict[str, Any]:
    kind = Answer if name == "solve" else KINDS[name]
    try:
        value = understood(reply, kind).value
    except Rubbish:
        return {}
    return {name: value} if reply.part == "answer" or name == "solve" else {}


def _run(command: Sequence[str], requests: str, endings: int, limit: float) -> list[Reply]:
    """Every reply until each request has had its ending; the solver's input stays open until then, for a
    solver whose input closes gives up long answers."""
    try:
        process = subprocess.Popen(
            list(command),
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            cwd=solver_folder(),
        )
    except OSError as error:
        raise NoAnswer(f"The solver could not be started: {error.strerror or error}.") from error
    late = threading.Timer(limit, process.kill)
    late.start()
    try:
        with process, suppress(BrokenPipeError):
            assert process.stdin is not None
            process.stdin.write(requests.encode("utf-8"))
            process.stdin.flush()
            return _replies(process, endings)
    finally:
        late.cancel()
    return []


def _replies(process: subprocess.Popen[bytes], endings: int) -> list[Reply]:
    assert process.stdout is not None
    reader, replies = ReplyReader(), list[Reply]()
    try:
        for line in process.stdout:
            replies += reader.feed(line)
            if sum(reply.part in ENDINGS for reply in replies) >= endings:
                break
    except Flooded:
        process.kill()
    return replies
