"""A grid as data: its rows, its columns and what can be done with rows."""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import dataclass

from desktop.tables.column import Column
from solver.plan import Plan

RowChange = Callable[[Plan, Collection[int]], Plan]


@dataclass(frozen=True)
class Table:
    """One grid of the plan page.

    `names(plan)` are the rows, each with a name of its own; the columns' first is that name. `groups` are
    the columns that are shown on demand: (key, title, tooltip). `loss(plan, indices)` tells in sentences
    what else goes when rows are deleted, "" where nothing does; `alone(plan, row)` is a plan with nothing
    but this row, every number of it at its default. `most` limits the rows.
    """

    key: str
    noun: str
    title: str
    names: Callable[[Plan], tuple[str, ...]]
    columns: Callable[[Plan], tuple[Column, ...]]
    insert: Callable[[Plan, int, int], Plan]
    duplicate: RowChange
    move: Callable[[Plan, Collection[int], int], Plan]
    delete: RowChange
    loss: Callable[[Plan, Collection[int]], str]
    alone: Callable[[Plan, int], Plan]
    groups: tuple[tuple[str, str, str], ...] = ()
    most: int = 1000

    def shown_columns(self, plan: Plan, groups: Collection[str]) -> tuple[Column, ...]:
        """The columns that are always there and those of `groups`."""
        return tuple(c for c in self.columns(plan) if not c.group or c.group in groups)
