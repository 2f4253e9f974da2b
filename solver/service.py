"""The worker: one JSON request a line on standard input, framed JSON replies on standard output.

A reply is an RFC 7464 record: the byte 0x1E, JSON, a line feed. Whatever else comes out of native code
is noise to be skipped. Standard input closing ends the process.
"""

from __future__ import annotations

import json
import sys
import traceback
from collections.abc import Iterable
from functools import partial
from os import fdopen
from typing import IO, Any

from solver.answer import to_json
from solver.engine import quiet_native_output
from solver.planfile import PlanProblems, UnreadableFile, exact_json, plan_from_document
from solver.questions import QUESTIONS, BadOption
from solver.unanswered import Unanswered

RECORD = "\x1e"


def serve(requests: Iterable[str], replies: IO[str]) -> None:
    """Answer every request line until there are no more."""
    for line in requests:
        if line.strip():
            _answer(line, replies)


def _answer(line: str, replies: IO[str]) -> None:
    request = exact_json(line)
    say = partial(_reply, replies, int(request["id"]))
    try:
        question = QUESTIONS[request["ask"]]
        plan = plan_from_document(request["plan"])
        result = question.ask(plan, _plain(request.get("options") or {}), say)
    except PlanProblems as problems:
        say("problems", [{"place": p.place, "says": p.says} for p in problems.problems])
    except (UnreadableFile, BadOption, Unanswered) as refusal:
        say("refused", str(refusal))
    except Exception:  # the window shows it and goes on: one broken plan must not end the worker
        say("failed", traceback.format_exc())
    else:
        say("answer", to_json(result))


def _plain(options: Any) -> Any:
    """Options are settings, not plan data: ordinary numbers will do."""
    return json.loads(json.dumps(options, default=float))


def _reply(replies: IO[str], number: Any, part: str, value: Any) -> None:
    whole = value if isinstance(value, (dict, list, str)) else to_json(value)
    record = json.dumps({"id": number, "part": part, "value": whole}, default=float, allow_nan=False)
    replies.write(f"{RECORD}{record}\n")
    replies.flush()


def main() -> int:
    """Serve standard input until it closes."""
    replies = fdopen(quiet_native_output(), "w", encoding="utf-8", newline="\n")
    requests = fdopen(sys.stdin.fileno(), "r", encoding="utf-8", closefd=False)
    _warm_up()
    serve(iter(requests.readline, ""), replies)
    return 0


def _warm_up() -> None:
    """The first solve pays for loading libraries; better before the first question than in it."""
    from solver.solve import solve
    from solver.warmup import TINY

    solve(TINY)
