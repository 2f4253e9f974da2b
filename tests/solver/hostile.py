"""Hostile files: what every reader must survive, and random damage done to good files.

Used by the suite (a few seconds) and by `tests/fuzz_files.py` (as long as one likes).
"""

from __future__ import annotations

import io
import json
import random
import zipfile
from collections.abc import Callable, Iterator
from contextlib import suppress
from pathlib import Path
from typing import Any

import resources
from solver.plan import Plan
from solver.planfile import PlanProblems, Problem, UnreadableFile, dump_plan, parse_plan, read_plan
from solver.review import review
from solver.sheet import tables_in
from solver.tableimport import (
    ImportRefused,
    NotANumber,
    Sheet,
    UnreadableTable,
    What,
    import_rows,
    likeliest,
    parse_number,
    pasted_table,
    propose_mapping,
    write_template,
)

# what damage is made of: numbers, keys and characters that have broken readers before
TOKENS = [
    *("1e999999", "-1e999999", "1e-999999", "NaN", "Infinity", "-Infinity", "9" * 5000, "0." + "1" * 5000),
    *("null", "true", "-1", "0", "-0", "1e3", "1E+400", '"', "{", "}", "[", "]", ",", ":", "\\", "\\ud800"),
    *(
        "\\u0000",
        "\x00",
        "\ufeff",
        "\u202e",
        "\u2028",
        "\x1b",
        "=1+1",
        "<b>",
        "[" * 300,
        '{"a":' * 300,
        "/*",
        "'",
    ),
    *(
        '"name": "Lead hand",',
        '"kind": "share",',
        '"phases": [],',
        '"lot": 0,',
        '"version": 99,',
        '"by": [[]],',
    ),
    *("1.234,5", "1,2,3", "5 %", "12 EUR", "\t", ";", "\n", "\r\n", '"\n"', "none", "Lead hand; Learner = x"),
]


def survive_plan(raw: bytes) -> str:
    """Read `raw` as a plan; AssertionError or any other exception than the two allowed is a finding.

    Gives "plan", "problems" or "refused".
    """
    try:
        plan = parse_plan(raw)
    except UnreadableFile as refused:
        assert_sentence(str(refused))
        return "refused"
    except PlanProblems as found:
        assert_problems(found.problems)
        return "problems"
    assert review(plan) == ()
    written = dump_plan(plan)
    assert parse_plan(written) == plan
    assert dump_plan(parse_plan(written)) == written
    return "plan"


def survive_table(raw: bytes, name: str) -> str:
    """Read `raw` as a table file and import every sheet of it as everything it could be."""
    try:
        sheets = tables_in(raw, Path(name))
    except UnreadableTable as refused:
        assert_sentence(str(refused))
        return "refused"
    return "table" if any(survive_sheet(sheet) for sheet in sheets[:4]) else "no rows"


def survive_pasted(text: str) -> str:
    """Import `text` as if it had been pasted."""
    try:
        return "table" if survive_sheet(pasted_table(text)) else "no rows"
    except UnreadableTable as refused:
        assert_sentence(str(refused))
        return "refused"


def survive_sheet(sheet: Sheet) -> bool:
    """Import `sheet` in every way; True if something came in, and then the plan has no problem."""
    came_in = False
    plan = base_plan()
    assert likeliest(sheet, plan) in What
    for what in What:
        mapping = propose_mapping(sheet, what, plan)
        with suppress(UnreadableTable, ImportRefused):
            result = import_rows(sheet, mapping, plan)
            for row in result.rows:
                for said in (*row.reasons, *row.remarks):
                    assert_sentence(said)
            assert review(result.plan_after(without_refused=True)) == ()
            came_in = True
    return came_in


def survive_number(text: str) -> None:
    """Read `text` as a number."""
    with suppress(NotANumber):
        assert parse_number(text).number.is_finite()


def assert_problems(problems: tuple[Problem, ...]) -> None:
    assert problems
    for problem in problems:
        assert problem.place
        assert_sentence(problem.says)


def assert_sentence(said: str) -> None:
    assert said
    assert len(said) < 2000
    assert "\n" not in said
    assert "Traceback" not in said


_PLANS: list[bytes] = []
_BOOKS: list[bytes] = []


def good_plans() -> list[bytes]:
    """The example plans as bytes."""
    if not _PLANS:
        _PLANS.extend(path.read_bytes() for path in resources.example_paths())
    return _PLANS


def base_plan() -> Plan:
    """The plan that tables are imported into."""
    return read_plan(resources.example_paths()[0])


def good_workbooks(folder: Path) -> list[bytes]:
    """Template workbooks, written once into `folder`."""
    if not _BOOKS:
        for index, plan in enumerate((None, base_plan())):
            path = folder / f"{index}.xlsx"
            write_template(path, plan)
            _BOOKS.append(path.read_bytes())
    return _BOOKS


GOOD_TABLE = (
    "Category;Pay (EUR per week);Paid hours;Absence (%);At most;Supervised by;Supervision;Output Planting\n"
    "Sawyer;1.180,50;38;5;none;;;21,5\nRaker;450;36;12,5;8;Sawyer; Lead hand;1,5;9\n"
    "Kind;Rule;People;Per or within;Sense;Number;Phases\n"
    'share;Own;"Lead hand; Learner";Lead hand;at least;25 %;\n'
)


# damage


def damaged(raw: bytes, rng: random.Random, times: int = 4) -> bytes:
    """`raw` with a few random pieces cut, doubled, swapped, flipped or replaced by a hostile token."""
    for _ in range(rng.randint(1, times)):
        raw = rng.choice(_DAMAGES)(raw, rng)
    return raw


def _span(raw: bytes, rng: random.Random) -> tuple[int, int]:
    start = rng.randint(0, len(raw))
    return start, min(len(raw), start + rng.choice([0, 1, 1, 2, 8, 40]))


def _cut(raw: bytes, rng: random.Random) -> bytes:
    start, end = _span(raw, rng)
    return raw[:start] + raw[end:]


def _cut_off(raw: bytes, rng: random.Random) -> bytes:
    return raw[: rng.randint(0, len(raw))]


def _doubled(raw: bytes, rng: random.Random) -> bytes:
    start, end = _span(raw, rng)
    return raw[:end] + raw[start:end] * rng.randint(1, 5) + raw[end:]


def _flipped(raw: bytes, rng: random.Random) -> bytes:
    at = rng.randrange(len(raw)) if raw else 0
    return raw[:at] + bytes([rng.randrange(256)]) + raw[at + 1 :]


def _token(raw: bytes, rng: random.Random) -> bytes:
    start, end = _span(raw, rng)
    token = rng.choice(TOKENS).encode("utf-8", "surrogatepass")
    return raw[:start] + token + raw[end:]


def _word_replaced(raw: bytes, rng: random.Random) -> bytes:
    """One word or number replaced whole, so that the file often stays well-formed."""
    words = list(_words(raw))
    if not words:
        return raw
    start, end = rng.choice(words)
    other_start, other_end = rng.choice(words)
    token = rng.choice(TOKENS).encode("utf-8", "surrogatepass")
    return raw[:start] + rng.choice([token, raw[other_start:other_end]]) + raw[end:]


def _words(raw: bytes) -> list[tuple[int, int]]:
    spans, start = [], None
    for at, byte in enumerate(raw[:20_000]):
        inside = chr(byte).isalnum() or byte in b".-_ "
        if inside and start is None:
            start = at
        elif not inside and start is not None:
            spans.append((start, at))
            start = None
    return spans


_DAMAGES: list[Callable[[bytes, random.Random], bytes]] = [
    _cut,
    _cut_off,
    _doubled,
    _flipped,
    _token,
    _word_replaced,
    _word_replaced,
    _word_replaced,
]


# raw pieces of JSON that may stand where a value stands
VALUES = [
    *(
        "null",
        "true",
        "-1",
        "0",
        "-0",
        "0.5",
        "1",
        "2",
        "1e3",
        "1e13",
        "1e999999",
        "NaN",
        "-Infinity",
        "0.001",
    ),
    *('""', '" "', '"x"', '"Lead hand"', '"at most"', '"\\u0000"', '"\\ud800"', '"ratio"', '"budget"'),
    *("[]", "{}", "[[]]", "[null]", "[1, 2]", '["x", "x"]', '{"x": 1}', '{"x": 1, "x": 2}', "9" * 500),
]


def damaged_plan(raw: bytes, rng: random.Random) -> bytes:
    """A plan with a few values, keys or entries exchanged, removed or doubled, still JSON most often."""
    if rng.random() < 0.3:
        return damaged(raw, rng)
    try:
        document = json.loads(raw, parse_constant=str)
    except (ValueError, RecursionError):
        return damaged(raw, rng)
    pieces: list[str] = []
    for _ in range(rng.choice([1, 1, 1, 2, 4])):
        _exchange(document, rng, pieces)
    text = json.dumps(document, ensure_ascii=rng.random() < 0.5)
    for index, piece in enumerate(pieces):
        text = text.replace(f'"@{index}@"', piece, 1)
    return text.encode("utf-8", "surrogatepass")


def _exchange(document: Any, rng: random.Random, pieces: list[str]) -> None:
    """One change somewhere below `document`."""
    places = list(_places(document))
    if not places:
        return
    inside, key = rng.choice(places)
    change = rng.random()
    if change < 0.1:
        del inside[key]
    elif change < 0.2 and isinstance(inside, list):
        inside.append(inside[key])
    elif change < 0.2:
        inside[rng.choice(["name", "kind", "lot", "x", "phases"])] = inside.pop(key)
    elif change < 0.45:
        other, other_key = rng.choice(places)
        inside[key] = json.loads(json.dumps(other[other_key]))
    else:
        inside[key] = f"@{len(pieces)}@"
        pieces.append(rng.choice(VALUES))


def _places(value: Any) -> Iterator[tuple[Any, Any]]:
    if isinstance(value, dict | list):
        for key in list(value) if isinstance(value, dict) else range(len(value)):
            yield value, key
            yield from _places(value[key])


def damaged_workbook(raw: bytes, rng: random.Random) -> bytes:
    """A workbook damaged in its zip, or in one of the parts inside a sound zip."""
    if rng.random() < 0.2:
        return damaged(raw, rng)
    with zipfile.ZipFile(io.BytesIO(raw)) as archive:
        parts = {name: archive.read(name) for name in archive.namelist()}
    name = rng.choice([n for n in parts if n.startswith("xl/")])
    parts[name] = damaged(parts[name], rng)
    if rng.random() < 0.05:
        del parts[name]
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as archive:
        for part, content in parts.items():
            archive.writestr(part, content)
    return packed.getvalue()
