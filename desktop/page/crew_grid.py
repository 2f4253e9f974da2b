"""The crew table as a printed grid: phases as columns, what does not fit summed into one row."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal

from desktop import figures
from desktop.page.detail import ALL
from desktop.page.fullest import fullest
from desktop.page.recommendation import CrewRow, CrewTable, Recommendation
from desktop.page.speech import count_of
from desktop.page.table import Column, Grid
from desktop.page.text import name, natural_width, text, widest_word

ZERO = Decimal(0)
_NAMED_PHASES = 4
_WIDEST_PHASE = 58.0


def crew_grid(what: Recommendation, table: CrewTable, rows: int, phases: int = ALL) -> Grid:
    """At most `rows` categories; the others share a row of sums, so that every column still adds up.

    Of more than `phases` phases the fullest are shown.
    """
    shown = table.rows if len(table.rows) <= rows else _with_rest(table.rows, rows)
    columns = _Columns(what, table, shown, phases_shown(table, phases))
    several = len(table.phases) > 1
    feet = ("Together", "Joining", "Leaving") if several else ("Together",)
    return Grid("Category", tuple(row.name for row in shown), feet, columns.every())


def _weight(row: CrewRow) -> Decimal:
    """How much a row has to say: people there, on the books, coming and going."""
    return max(row.heads) + row.now + row.joiners + row.leavers


def _with_rest(rows: Sequence[CrewRow], most: int) -> tuple[CrewRow, ...]:
    kept = fullest(rows, [_weight(row) for row in rows], most)
    rest = [row for row in rows if row not in kept]
    label = f"and {count_of(len(rest), 'more category', 'more categories')}"
    spans = range(len(rest[0].heads))
    summed = CrewRow(
        label,
        sum((r.now for r in rest), ZERO),
        tuple(sum((r.heads[t] for r in rest), ZERO) for t in spans),
        sum((r.joiners for r in rest), ZERO),
        sum((r.leavers for r in rest), ZERO),
        sum((r.pay for r in rest), ZERO),
        sum((r.one_off for r in rest), ZERO),
    )
    return (*kept, summed)


class _Columns:
    """Builds the columns of one grid."""

    def __init__(
        self, what: Recommendation, table: CrewTable, shown: Sequence[CrewRow], phases: Sequence[int]
    ) -> None:
        self._phases = phases
        self._what = what
        self._table = table
        self._shown = shown
        self._several = len(table.phases) > 1

    def every(self) -> tuple[Column, ...]:
        """On the books, recommended per phase, joiners, leavers, pay, one-off costs."""
        now = [row.now for row in self._shown]
        total = sum((row.now for row in self._table.rows), ZERO)
        made = [Column("On the books", "people", self._people(now), self._feet(total))]
        made += [self._phase(t) for t in self._phases]
        made.append(self._moves("Join", [r.joiners for r in self._shown], self._table.joiners, 1))
        made.append(self._moves("Leave", [r.leavers for r in self._shown], self._table.leavers, 2))
        made.append(self._money("Pay", [r.pay for r in self._shown], [r.pay for r in self._table.rows]))
        one_off = [r.one_off for r in self._table.rows]
        if any(one_off):
            made.append(self._money("One-off costs", [r.one_off for r in self._shown], one_off))
        return tuple(made)

    def _people(self, counts: Sequence[Decimal]) -> tuple[str, ...]:
        return tuple(figures.people(n, self._what.locale) for n in counts)

    def _feet(self, *values: Decimal) -> tuple[str, ...]:
        """Cells of the foot rows; what is not given stays empty."""
        feet = self._people(values)
        return (*feet, "", "")[:3] if self._several else feet[:1]

    def _phase(self, at: int) -> Column:
        heads = [row.heads[at] for row in self._shown]
        total = sum((row.heads[at] for row in self._table.rows), ZERO)
        title = phase_titles(self._table)[at] if self._several else "Recommended"
        feet = self._feet(total, self._table.joiners[at], self._table.leavers[at])
        numbered = self._several and phases_numbered(self._table)
        return Column(title, "people", self._people(heads), feet, True, numbered)

    def _moves(self, title: str, counts: list[Decimal], per_phase: tuple[Decimal, ...], foot: int) -> Column:
        total = self._people([sum(per_phase, ZERO)])[0]
        feet = tuple(total if at == foot else "" for at in range(3)) if self._several else (total,)
        return Column(title, "people", self._people(counts), feet)

    def _money(self, title: str, shown: list[Decimal], every: list[Decimal]) -> Column:
        cells = tuple(figures.money(x, "", self._what.locale) for x in shown)
        total = figures.money(sum(every, ZERO), "", self._what.locale)
        return Column(title, self._what.currency, cells, (total, "", "") if self._several else (total,))


def phases_numbered(table: CrewTable) -> bool:
    """True where the phases' names would not fit over their columns."""
    if len(table.phases) > _NAMED_PHASES:
        return True
    return any(_too_wide(phase) for phase in table.phases)


def _too_wide(phase: str) -> bool:
    what = text(phase, 8.5)
    return widest_word(what) > _WIDEST_PHASE or natural_width(what) > 2 * _WIDEST_PHASE


def phase_titles(table: CrewTable) -> tuple[str, ...]:
    """What stands over the columns: names, or numbers that `phase_key` explains."""
    if not phases_numbered(table):
        return table.phases
    return tuple(f"Phase {at + 1}" for at in range(len(table.phases)))


def phases_shown(table: CrewTable, most: int) -> list[int]:
    """Which phases get a column: all, or the `most` with the most people."""
    totals = [sum((row.heads[t] for row in table.rows), ZERO) for t in range(len(table.phases))]
    return fullest(range(len(totals)), totals, most)


def phase_key(what: Recommendation, table: CrewTable, shown: Sequence[int], letters: int = 28) -> str:
    """1 Clearing (3 weeks), 2 Planting (8 weeks)."""
    lengths = what.phase_lengths
    if not phases_numbered(table):
        return "; ".join(f"{name(p)}: {long}" for p, long in zip(table.phases, lengths, strict=True))
    parts = [f"{at + 1}\u00a0{name(table.phases[at], letters)} ({lengths[at]})" for at in shown]
    return "Phases: " + "; ".join(parts)
