"""Replies with their values made into what they stand for."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from typing import Any

from desktop.replies import Reply
from solver.answer import from_json
from solver.review import Problem


class Rubbish(Exception):
    """A reply that is framed rightly and says nothing that can be understood."""


@dataclass(frozen=True)
class Progress:
    """How far a question is: a sentence and a share in 0..1 (None = not known)."""

    says: str
    done: float | None


@dataclass(frozen=True)
class Fractional:
    """What the relaxation says ahead of the exact answer: money and head counts per phase."""

    floor: float
    crew: Mapping[str, tuple[float, ...]]


def understood(reply: Reply, kind: type[Any] | None) -> Reply:
    """`reply` with its value as a Progress, Fractional, tuple of Problems, sentence, or as a `kind`.

    `kind` is the class of the answer, None for plain dicts and lists. Raises Rubbish.
    """
    read = _READERS.get(reply.part, lambda raw: raw if kind is None else from_json(raw, kind))
    try:
        return replace(reply, value=read(reply.value))
    except Exception as error:  # what can go wrong in rubbish has no end
        raise Rubbish(f"{reply.part}: {error!r}"[:2000]) from error


def _progress(raw: Any) -> Progress:
    return Progress(str(raw["says"])[:200], None if raw["done"] is None else float(raw["done"]))


def _fractional(raw: Any) -> Fractional | None:
    if raw["crew"] is None:
        return None  # not even fractional people can do it
    crew = {str(name): tuple(float(n) for n in counts) for name, counts in raw["crew"].items()}
    return Fractional(float(raw["floor"]), crew)


def _problems(raw: Any) -> tuple[Problem, ...]:
    return tuple(Problem(str(p["place"]), str(p["says"])) for p in raw)


_READERS: Mapping[str, Callable[[Any], Any]] = {
    "progress": _progress,
    "fractional": _fractional,
    "problems": _problems,
    "refused": str,
    "failed": str,
}
