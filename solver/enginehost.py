"""A process that runs one engine on one integer program at a time, telling what it finds as it goes.

A running solve cannot be cancelled, only killed: so it runs in a process of its own. Requests and
replies are one JSON document a line. The process ends when its standard input closes, also in the
middle of a solve.
"""

from __future__ import annotations

import json
import os
import sys
import threading
from os import fdopen
from queue import SimpleQueue
from typing import IO, Any

from solver.engine import EngineName, WholeResult, quiet_native_output, whole
from solver.matrix import Floats, Matrix, Row, RowSense


def matrix_to_json(matrix: Matrix) -> dict[str, Any]:
    """Plain lists."""
    return {
        "cost": matrix.cost,
        "lower": matrix.lower,
        "upper": matrix.upper,
        "integer": matrix.integer,
        "rows": [[row.columns, row.coefs, row.sense.value, row.rhs] for row in matrix.rows],
    }


def matrix_from_json(raw: dict[str, Any]) -> Matrix:
    """The matrix that `matrix_to_json` turned into `raw`."""
    rows = [Row(tuple(c), tuple(v), RowSense(sense), rhs) for c, v, sense, rhs in raw["rows"]]
    return Matrix(raw["cost"], raw["lower"], raw["upper"], raw["integer"], rows)


def main() -> int:
    """Serve requests until standard input closes."""
    if hasattr(os, "nice"):
        os.nice(5)  # the window comes first
    replies = fdopen(quiet_native_output(), "w", encoding="utf-8", newline="\n")
    requests: SimpleQueue[str] = SimpleQueue()
    threading.Thread(target=_read, args=(requests,), daemon=True).start()
    while True:
        _answer(json.loads(requests.get()), replies)


def _read(requests: SimpleQueue[str]) -> None:
    """Pass requests on; the moment there can be no more, nobody waits for the answer either."""
    for line in iter(sys.stdin.readline, ""):
        requests.put(line)
    os._exit(0)


def _answer(request: dict[str, Any], replies: IO[str]) -> None:
    number = request["number"]

    def say(kind: str, **values: Any) -> None:
        replies.write(json.dumps({"number": number, "kind": kind, **values}) + "\n")
        replies.flush()

    def heard(bound: float, objective: float, x: Floats | None) -> None:
        say("news", bound=bound, objective=objective, x=None if x is None else x.tolist())

    try:
        result = whole(
            matrix_from_json(request["matrix"]),
            EngineName(request["engine"]),
            seconds=request["seconds"],
            start=request["start"],
            heard=heard,
        )
    except Exception as failure:  # one engine failing leaves the race to the other
        say("failed", says=repr(failure))
    else:
        say("done", **_result(result))


def _result(result: WholeResult) -> dict[str, Any]:
    x = None if result.x is None else result.x.tolist()
    return {"status": result.status.value, "objective": result.objective, "bound": result.bound, "x": x}
