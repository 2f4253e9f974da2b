"""Variants side by side: a row per figure, a column per plan, what differs from the first one bold."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

from PySide6.QtCore import Qt

from desktop import figures
from desktop import variant_words as say
from desktop.comparison import Compared, Stage
from desktop.tables.crew_text import counts_text
from desktop.tables.shown_table import Index, ShownColumn, ShownTable
from desktop.theme import current
from solver.answer import Answer, State

_STAGES = {
    Stage.UNREADABLE: f"\u2717 {say.UNREADABLE}",
    Stage.TO_MEND: f"! {say.TO_MEND}",
    Stage.EMPTY: f"\u25cb {say.EMPTY}",
    Stage.WAITING: f"\u2026 {say.WAITING}",
    Stage.WORKING: f"\u2026 {say.WORKING}",
    Stage.LOST: f"! {say.LOST}",
}


@dataclass(frozen=True)
class Figure:
    """One row: its title, what it means, its text for a plan; `tone` is a colour of the theme."""

    title: str
    tip: str
    text: Callable[[Compared], str]
    tone: str = "ink"
    bold: bool = True  # where it differs from the first plan


def figures_of(compared: Sequence[Compared]) -> list[Figure]:
    """The rows for these plans: every category of any of them, in the order they are met."""
    names = dict.fromkeys(c.name for entry in compared if entry.plan for c in entry.plan.categories)
    first = compared[0] if compared else None
    return [
        Figure(say.STATE, say.TIP_STATE, state_of, bold=False),
        *(Figure(name, say.people_of(name), _counts(name), "exact") for name in names),
        Figure(say.PEOPLE, say.TIP_PEOPLE, _people),
        Figure(say.COST, say.TIP_COST, _money(lambda a: a.exact.cost if a.exact else None)),
        Figure(say.AGAINST, say.TIP_AGAINST, lambda entry: _against(entry, first), bold=False),
        Figure(say.FLOOR, say.TIP_FLOOR, _money(lambda a: a.floor)),
        Figure(say.WHOLE_PEOPLE, say.TIP_WHOLE, _whole_people),
        Figure(say.JOINERS, say.TIP_JOINERS, _number(lambda a: a.exact.joiners if a.exact else None)),
        Figure(say.LEAVERS, say.TIP_LEAVERS, _number(lambda a: a.exact.leavers if a.exact else None)),
        Figure(say.TIGHTEST, say.TIP_TIGHTEST, lambda entry: entry.tightest),
    ]


def state_of(entry: Compared) -> str:
    """How far a plan is, with its sign."""
    if entry.answer is None:
        return _STAGES.get(entry.stage, "")
    if entry.answer.state is State.IMPOSSIBLE:
        return f"\u2717 {say.IMPOSSIBLE}"
    if entry.answer.exact is None:
        return f"\u25b3 {say.NO_CREW}"
    proved = entry.answer.state is State.PROVED
    return f"\u2713 {say.PROVED}" if proved else f"\u25b3 {say.BEST_FOUND}"


def _counts(name: str) -> Callable[[Compared], str]:
    """Head counts of a category, per phase where they differ."""

    def text(entry: Compared) -> str:
        exact = entry.answer.exact if entry.answer else None
        counts = exact.crew.get(name) if exact else None
        if not counts:
            return say.NOT_THERE
        return counts_text(counts)

    return text


def _people(entry: Compared) -> str:
    exact = entry.answer.exact if entry.answer else None
    if exact is None:
        return say.NOT_THERE
    return figures.people(max(map(sum, zip(*exact.crew.values(), strict=True)), default=0.0))


def _money(value: Callable[[Answer], float | None]) -> Callable[[Compared], str]:
    def text(entry: Compared) -> str:
        found = value(entry.answer) if entry.answer else None
        return say.NOT_THERE if found is None else figures.money(found, _currency(entry))

    return text


def _number(value: Callable[[Answer], float | None]) -> Callable[[Compared], str]:
    def text(entry: Compared) -> str:
        found = value(entry.answer) if entry.answer else None
        return say.NOT_THERE if found is None else figures.people(found)

    return text


def _against(entry: Compared, first: Compared | None) -> str:
    """Cost less that of the first plan; nothing where they count in other money."""
    ours = entry.answer.exact if entry.answer else None
    theirs = first.answer.exact if first and first.answer else None
    if ours is None or theirs is None or entry is first or first is None:
        return say.NOT_THERE
    if _currency(entry) != _currency(first):
        return say.NOT_THERE
    text = figures.money(ours.cost - theirs.cost)
    return text if text == figures.NIL or text.startswith("\u2212") else f"+{text}"


def _whole_people(entry: Compared) -> str:
    cost = entry.answer.whole_people_cost if entry.answer else None
    if cost is None:
        return say.NOT_THERE
    return say.with_percent(figures.money(cost.absolute, _currency(entry)), figures.percent(cost.percent))


def _currency(entry: Compared) -> str:
    return entry.plan.currency if entry.plan else ""


class VariantTable(ShownTable[Figure]):
    """Rows are figures, columns are plans."""

    def __init__(self, parent: Any = None) -> None:
        super().__init__(title=lambda figure, _at: figure.title, parent=parent)
        self._compared: tuple[Compared, ...] = ()

    @property
    def compared(self) -> tuple[Compared, ...]:
        """The plans shown."""
        return self._compared

    def show_plans(self, compared: Sequence[Compared], titles: Sequence[str], tips: Sequence[str]) -> None:
        """Show these plans; a selection of columns survives while there are as many of them."""
        self._compared = tuple(compared)
        columns = [
            ShownColumn(title, tip, _text(entry))
            for entry, title, tip in zip(compared, titles, tips, strict=True)
        ]
        rows = figures_of(compared)
        if [r.title for r in rows] != [r.title for r in self.rows] or len(columns) != len(self.columns):
            self.show(rows, columns)
            return
        self._rows, self._columns = tuple(rows), tuple(columns)
        last = self.index(self.rowCount() - 1, self.columnCount() - 1)
        self.dataChanged.emit(self.index(0, 0), last)
        self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, len(columns) - 1)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """What Qt asks of a cell."""
        if not index.isValid() or index.row() >= len(self.rows) or index.column() >= len(self._compared):
            return None
        figure, entry = self.rows[index.row()], self._compared[index.column()]
        if role == Qt.ItemDataRole.FontRole:
            return current().font(bold=self._differs(figure, entry))
        if role == Qt.ItemDataRole.ForegroundRole:
            return getattr(current(), figure.tone)
        return super().data(index, role)

    def _differs(self, figure: Figure, entry: Compared) -> bool:
        text, first = figure.text(entry), figure.text(self._compared[0])
        return figure.bold and bool(text) and bool(first) and text != first


def _text(entry: Compared) -> Callable[[Figure], str]:
    return lambda figure: figure.text(entry)
