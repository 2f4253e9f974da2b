"""The worker: one JSON request a line on standard input, framed JSON replies on standard output.

A reply is an RFC 7464 record: the byte 0x1E, JSON, a line feed. Whatever else comes out of native code
is noise to be skipped. Standard input closing ends the process, also in the middle of an answer: at once
where the process that asked is gone, else (a request piped in) unless the answer is there SOON.
"""

from __future__ import annotations

import json
import os
import sys
import threading
import traceback
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from decimal import Decimal
from functools import partial
from os import fdopen
from queue import SimpleQueue
from time import monotonic, sleep
from typing import IO, Any

from solver.answer import to_json
from solver.engine import quiet_native_output
from solver.planfile import PlanProblems, UnreadableFile, exact_json, plan_from_document
from solver.questions import QUESTIONS, BadOption, Question
from solver.unanswered import Unanswered

RECORD = "\x1e"
SOON = 2.0  # seconds an answer may still take after the input closed
LOOK = 0.05  # seconds between looks whether the asking process is still there
CUT_SHORT = 1  # exit code when a request was left without its answer


class BadRequest(ValueError):
    """A line that is no request; `number` is its id where it could be read. The message is one sentence."""

    def __init__(self, says: str, number: int | None = None) -> None:
        super().__init__(says)
        self.number = number


@dataclass(frozen=True)
class Request:
    """One request: which question about which plan document, and the number its replies carry."""

    number: int
    question: Question
    plan: Any
    options: dict[str, Any]


def serve(requests: Iterable[str], replies: IO[str]) -> None:
    """Answer every request line until there are no more; a line that is no request is refused."""
    for line in requests:
        if not line.strip():
            continue
        try:
            request = _request(line)
        except BadRequest as refusal:
            _reply(replies, refusal.number, "refused", str(refusal))
        else:
            _answer(request, partial(_reply, replies, request.number))


def _request(line: str) -> Request:
    try:
        raw = exact_json(line)
    except UnreadableFile as refusal:
        raise BadRequest(f"This is no request. {refusal}") from None
    if not isinstance(raw, dict):
        raise BadRequest("This is no request: allowed is a JSON object.")
    number = _number(raw.get("id"))
    question = QUESTIONS.get(raw["ask"]) if isinstance(raw.get("ask"), str) else None
    if question is None:
        raise BadRequest(f"This asks for none of {', '.join(QUESTIONS)}.", number)
    options = raw.get("options") or {}
    if not isinstance(options, dict) or "plan" not in raw:
        raise BadRequest('This lacks a "plan", or its "options" are no object.', number)
    try:
        return Request(number, question, raw["plan"], _plain(options))
    except (TypeError, ValueError):
        raise BadRequest("An option holds a number that cannot be used.", number) from None


def _number(raw: Any) -> int:
    if not isinstance(raw, Decimal) or raw != raw.to_integral_value():
        raise BadRequest('This is no request: its "id" is no whole number.')
    return int(raw)


def _answer(request: Request, say: Callable[[str, Any], None]) -> None:
    try:
        plan = plan_from_document(request.plan)
        say("answer", to_json(request.question.ask(plan, request.options, say)))
    except PlanProblems as problems:
        say("problems", [{"place": p.place, "says": p.says} for p in problems.problems])
    except (UnreadableFile, BadOption, Unanswered) as refusal:
        say("refused", str(refusal))
    except BrokenPipeError:
        raise
    except Exception:  # the window shows it and goes on: one broken plan must not end the worker
        say("failed", traceback.format_exc())


def _plain(options: Any) -> Any:
    """Options are settings, not plan data: ordinary numbers will do."""
    return json.loads(json.dumps(options, default=float))


def _reply(replies: IO[str], number: Any, part: str, value: Any) -> None:
    whole = value if isinstance(value, (dict, list, str)) else to_json(value)
    record = json.dumps({"id": number, "part": part, "value": whole}, default=float, allow_nan=False)
    replies.write(f"{RECORD}{record}\n")
    replies.flush()


def main() -> int:
    """Serve standard input until it closes, or until nobody reads the replies."""
    parent = os.getppid()
    replies = fdopen(quiet_native_output(), "w", encoding="utf-8", newline="\n")
    requests: SimpleQueue[str] = SimpleQueue()
    _warm_up()
    threading.Thread(target=_read, args=(requests, parent), daemon=True).start()
    try:
        serve(iter(requests.get, ""), replies)
    except BrokenPipeError:
        os._exit(0)  # nobody listens: neither to what is left to be written nor to how it ends
    return 0


def _read(requests: SimpleQueue[str], parent: int) -> None:
    """Pass requests on, "" after the last; a running solve cannot be told to stop, so the process ends."""
    lines = fdopen(sys.stdin.fileno(), "r", encoding="utf-8", errors="replace", closefd=False)
    for line in iter(lines.readline, ""):
        requests.put(line)
    requests.put("")
    until = monotonic() + SOON
    while monotonic() < until and os.getppid() == parent:
        sleep(LOOK)
    os._exit(CUT_SHORT)


def _warm_up() -> None:
    """The first solve pays for loading libraries; better before the first question than in it."""
    from solver.solve import solve
    from solver.warmup import TINY

    solve(TINY)
