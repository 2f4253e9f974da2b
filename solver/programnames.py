"""Names for the columns and rows of a matrix program that any solver's reader takes, near the planner's own.

A name is a word for what it is, the planner's names in plain letters and digits, and a number where two would
be alike: `people_Lead_hand_Planting`. The planner's names as typed stand in the comments of the files.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterable
from dataclasses import dataclass

from solver.lines import Column, Line
from solver.matrix import Row
from solver.program import Program

_WORDS = {
    "n": "people",  # not "n": a name that starts with a letter e or n alone is a number or a keyword to some
    "p": "join",
    "q": "leave",
    "u": "any",
    "o": "open",
    "e": "hours",
    "s": "guide",
    "v": "overtime",
    "b": "buy",
}
_MEANINGS = {
    "n": "head count of {category} in {phase}, in lots of {lot}",
    "p": "joiners of {category} before {phase}",
    "q": "leavers of {category} before {phase}",
    "u": "1 if any of {category} is there in {phase}",
    "o": "1 if any of {category} is ever there",
    "e": "hours of {category} on {other} in {phase}",
    "s": "hours of {category} as {other}, supervising, in {phase}",
    "v": "overtime hours of {category} in {phase}",
    "b": "units of {other} bought in, in {phase}",
}
_TIES = {
    "np": ("joining", "joiners of {category} at least what the head count rises by"),
    "nq": ("leaving", "leavers of {category} at least what the head count falls by"),
    "nv": ("most_overtime", "overtime of {category} within what its people may work"),
    "nu": ("switch", "nobody of {category} while its switch is 0"),
    "no": ("switch_ever", "nobody of {category} while its switch is 0"),
}
_LONGEST = 50


@dataclass(frozen=True)
class Named:
    """A legal name and what it stands for, in the planner's words."""

    name: str
    means: str


def column_names(program: Program) -> tuple[Named, ...]:
    """One name per column of `program`."""
    lots = {c.name: f"{c.lot.normalize():f}" for c in program.categories}
    several = len(program.phases) > 1
    taken: set[str] = set()
    return tuple(_column(column, lots, several, taken) for column in program.columns)


def row_names(program: Program) -> tuple[Named, ...]:
    """One name per row; rows that are no line of the planner's tie columns together."""
    several = len(program.phases) > 1
    lines = {line.row: line for line in program.lines if line.row is not None}
    taken: set[str] = set()
    rows = enumerate(program.matrix.rows)
    return tuple(_row(program, row, lines.get(at), several, taken) for at, row in rows)


def _column(column: Column, lots: dict[str, str], several: bool, taken: set[str]) -> Named:
    phase = column.phase if several else None
    parts = [_WORDS[column.letter], column.category, column.other, phase]
    means = _MEANINGS[column.letter].format(
        category=column.category,
        other=column.other,
        phase=column.phase,
        lot=lots.get(column.category or "", "1"),
    )
    return Named(_unlike(parts, taken), one_line(means))


def _row(program: Program, row: Row, line: Line | None, several: bool, taken: set[str]) -> Named:
    if line is None:
        return _tie([program.columns[i] for i in row.columns], several, taken)
    parts = [str(line.kind), line.name, line.phase if several else None]
    unit = f", in {line.unit} / {line.scale!r}" if line.scale != 1 else ""
    where = f" in {line.phase}" if line.phase and several else ""
    says = line.says if line.says.startswith(line.name) else f"{line.name}: {line.says}"
    return Named(_unlike(parts, taken), one_line(f"{says}{where}{unit}"))


def _tie(columns: list[Column], several: bool, taken: set[str]) -> Named:
    """A row that ties columns of one category together: what for is seen from their letters."""
    letters = "".join(sorted({column.letter for column in columns}))
    word, means = _TIES.get(letters, ("hours_of", "hours spent by {category} within those there are"))
    head = next(column for column in columns if column.letter == "n")
    named = [word, head.category, head.phase if several else None]
    where = f" in {head.phase}" if several else ""
    return Named(_unlike(named, taken), one_line(means.format(category=head.category) + where))


def _unlike(parts: Iterable[str | None], taken: set[str]) -> str:
    """A name made of `parts` that nobody has yet."""
    wanted = "_".join(word for part in parts if part and (word := _plain(part)))[:_LONGEST].rstrip("_")
    name, number = wanted, 1
    while name.casefold() in taken:
        number += 1
        name = f"{wanted}_{number}"
    taken.add(name.casefold())
    return name


def _plain(words: str) -> str:
    """Letters and digits of `words` without their accents; other scripts have none."""
    split = unicodedata.normalize("NFKD", words)
    return re.sub(r"[^A-Za-z0-9]+", "_", "".join(c for c in split if not unicodedata.combining(c))).strip("_")


def one_line(words: str) -> str:
    """`words` for a comment: no line break can end it."""
    return " ".join("".join(c if c.isprintable() else " " for c in words).split())
