"""What the solver process writes, taken apart: records among noise, within bounds.

A record is the byte 0x1E, one JSON value and a line feed (RFC 7464). Everything else on the stream is noise
of native libraries and is skipped.
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from typing import Any

START = b"\x1e"
LARGEST_RECORD = 64_000_000  # bytes; the answer to the largest plan that can be opened stays below
MOST_NOISE = 16_000_000  # bytes between two records


class Flooded(Exception):
    """The process writes without end; nothing more of it can be used."""


@dataclass(frozen=True)
class Reply:
    """One record: to which request, which part of its answer, and the value."""

    id: int
    part: str
    value: Any


class ReplyReader:
    """Bytes in, replies out, whatever way the bytes are cut."""

    def __init__(self) -> None:
        self._pending = bytearray()
        self._inside = False
        self._noise = 0

    def feed(self, chunk: bytes) -> list[Reply]:
        """The replies completed by `chunk`. Raises Flooded beyond the bounds."""
        replies: list[Reply] = []
        for index, piece in enumerate(chunk.split(START)):
            if index > 0:
                self._pending.clear()  # a record cut off by the next one is lost
                self._inside = True
            self._take(piece, replies)
        return replies

    def _take(self, piece: bytes, replies: list[Reply]) -> None:
        if not self._inside:
            self._skip(len(piece))
            return
        end = piece.find(b"\n")
        self._pending += piece if end < 0 else piece[:end]
        if len(self._pending) > LARGEST_RECORD:
            raise Flooded
        if end >= 0:
            self._inside = False
            self._keep(bytes(self._pending), replies)
            self._pending.clear()
            self._skip(len(piece) - end - 1)

    def _keep(self, raw: bytes, replies: list[Reply]) -> None:
        reply = _reply(raw)
        if reply is None:
            self._skip(len(raw))
        else:
            self._noise = 0
            replies.append(reply)

    def _skip(self, count: int) -> None:
        self._noise += count
        if self._noise > MOST_NOISE:
            raise Flooded


def _reply(raw: bytes) -> Reply | None:
    """The reply in `raw`, None if it is none: rubbish is noise, never an error."""
    try:
        value = json.loads(raw)
    except (ValueError, RecursionError):
        return None
    if not isinstance(value, dict):
        return None
    number, part = value.get("id"), value.get("part")
    if isinstance(number, bool) or not isinstance(number, int) or not isinstance(part, str):
        return None
    return Reply(number, part, value.get("value"))
