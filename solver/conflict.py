"""No workable crew: a smallest set of lines that cannot hold together, and how far each alone must move.

The set is smallest in the sense that without any one member whole people can keep the others. Where
fractional people could keep all of it, "whole people" is a member too. A move is measured on the whole
plan: how far the number behind the line must change, everything else as typed, until a crew is workable.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial

from solver.answer import Conflict, Conflicting, LineKind
from solver.deletion import deletion_filter
from solver.inquiry import Inquiry
from solver.lines import Line
from solver.moves import Moves
from solver.plan import Plan
from solver.removable import People, Removable

SECONDS = 10.0
WHOLE_PEOPLE = "Whole people"
SEVERAL_ORDERS = 80  # lines; above it the first set found is taken

# the lines a planner can least talk about are tried away first, those easiest to talk about last
_ORDER = {
    LineKind.SHARE: 0,
    LineKind.RATIO: 1,
    LineKind.PRESENCE: 2,
    LineKind.SUPERVISION: 3,
    LineKind.BUDGET: 4,
    LineKind.WORK: 5,
    LineKind.BOUND: 6,
}


def find_conflict(plan: Plan, seconds: float = SECONDS) -> Conflict:
    """Why no crew of `plan` is workable; meant for plans proved impossible.

    After `seconds` / 2 the set found so far is taken; after `seconds` moves are no longer worked out: their
    `move` is None and `repair` says so.
    """
    removable = Removable(plan, Inquiry(seconds / 2))
    lines = smallest_set(removable)
    together = not removable.impossible(lines, People.FRACTIONAL)
    moves = Moves(plan, Inquiry(seconds / 2))
    members = [moves.conflicting(line) for line in lines]
    if together:
        members.append(_whole_people(plan))
    return Conflict(tuple(members), together)


def smallest_set(removable: Removable) -> list[Line]:
    """A smallest set of lines that whole people cannot keep, in the order of the program."""
    fractional = removable.relaxed_impossible(removable.lines)
    candidates = [_filtered(removable, order, fractional) for order in _orders(removable.lines)]
    best = min(candidates, key=len)
    chosen = {id(line) for line in best}
    return [line for line in removable.lines if id(line) in chosen]


def _filtered(removable: Removable, order: Sequence[Line], fractional: bool) -> list[Line]:
    kept: Sequence[Line] = order
    if fractional:  # cheap, and leaves little for whole people to be tried on
        kept = deletion_filter(order, removable.relaxed_impossible)
    return deletion_filter(kept, partial(removable.impossible, people=People.WHOLE))


def _orders(lines: Sequence[Line]) -> list[list[Line]]:
    natural = sorted(lines, key=lambda line: _ORDER[line.kind])
    return [natural, natural[::-1], list(lines)] if len(lines) <= SEVERAL_ORDERS else [natural]


def _whole_people(plan: Plan) -> Conflicting:
    lots = {category.lot for category in plan.categories}
    says = "people come whole" if lots <= {1} else "people come in whole lots"
    repair = "Share someone with another site or take someone part-time: fractional people could do it."
    return Conflicting(WHOLE_PEOPLE, None, None, "", None, says, repair)
