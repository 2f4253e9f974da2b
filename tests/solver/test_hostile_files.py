"""Random damage of plan files and tables: a sentence every time, no traceback, bounded time.

`tests/fuzz_files.py` does the same for as long as one likes.
"""

from __future__ import annotations

import random
import time
from pathlib import Path
from typing import Any

import pytest
import simplejson
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from solver.plandocument import CATEGORY_KEYS, PLAN_KEYS, RULE_KEYS, WORK_KEYS
from solver.planfile import LARGEST_FILE
from tests.solver import hostile

QUICK = settings(max_examples=250, deadline=None, suppress_health_check=[HealthCheck.too_slow])

KEYS = sorted({*CATEGORY_KEYS, *PLAN_KEYS, *WORK_KEYS, *(key for keys in RULE_KEYS.values() for key in keys)})
SCALARS = st.one_of(
    st.none(),
    st.booleans(),
    st.integers(-3, 10**14),
    st.decimals(-2, 2, places=3),
    st.text(max_size=8),
    st.sampled_from(["ratio", "share", "presence", "budget", "at least", "Whole job", "A"]),
)
VALUES = st.recursive(
    SCALARS,
    lambda inner: st.one_of(
        st.lists(inner, max_size=4),
        st.dictionaries(st.one_of(st.sampled_from(KEYS), st.text(max_size=4)), inner, max_size=6),
    ),
    max_leaves=25,
)


@QUICK
@given(st.binary(max_size=200))
def test_any_bytes_as_a_plan(raw: bytes) -> None:
    hostile.survive_plan(raw)


@QUICK
@given(st.dictionaries(st.sampled_from(KEYS), VALUES, max_size=6))
def test_any_object_of_known_keys_as_a_plan(document: dict[str, Any]) -> None:
    hostile.survive_plan(simplejson.dumps(document, use_decimal=True).encode())


def test_damaged_plans() -> None:
    rng = random.Random(20310214)
    ends = [hostile.survive_plan(hostile.damaged(rng.choice(hostile.good_plans()), rng)) for _ in range(700)]
    assert set(ends) == {"plan", "problems", "refused"}


@QUICK
@given(st.binary(max_size=200), st.sampled_from(["a.csv", "a.xlsx", "a"]))
def test_any_bytes_as_a_table(raw: bytes, name: str) -> None:
    hostile.survive_table(raw, name)


@QUICK
@given(st.text(max_size=120))
def test_any_text_pasted(text: str) -> None:
    hostile.survive_pasted(text)
    hostile.survive_number(text)


def test_damaged_tables() -> None:
    rng = random.Random(20310215)
    lines = hostile.GOOD_TABLE.splitlines(keepends=True)
    good = ["".join(lines[:3]).encode(), "".join(lines[3:]).encode()]
    ends = [hostile.survive_table(hostile.damaged(rng.choice(good), rng), "a.csv") for _ in range(300)]
    assert {"table", "no rows"} <= set(ends)


def test_damaged_workbooks(tmp_path: Path) -> None:
    rng = random.Random(20310216)
    books = hostile.good_workbooks(tmp_path)
    ends = [
        hostile.survive_table(hostile.damaged_workbook(rng.choice(books), rng), "a.xlsx") for _ in range(250)
    ]
    assert {"table", "refused"} <= set(ends)


HUGE = {
    "numbers": '{"own":{"a":[' + ",".join(str(i) for i in range(100_000, 670_000)) + "]}}",
    "entries": '{"categories":[' + "{}," * 1_300_000 + "{}]}",
    "keys": "{" + ",".join(f'"k{i}":0' for i in range(300_000)) + "}",
    "repeated keys": '{"rules":[' + '{"a":1,"a":2},' * 280_000 + "{}]}",
    "dangling names": '{"categories":['
    + ",".join(
        f'{{"name":"n{i}","pay":1,"hours":1,"supervision":{{"hours":1,"by":["y{i}"]}}}}' for i in range(1000)
    )
    + "]}",
    "long name": '{"categories":[{"name":"' + "x" * 3_900_000 + '"}]}',
    "long number": '{"categories":[{"pay":' + "7" * 3_900_000 + "}]}",
    "nesting": '{"categories":' + "[" * 3_900_000,
}


@pytest.mark.parametrize("name", HUGE)
def test_huge_plans_are_refused_within_five_seconds(name: str) -> None:
    assert 3_000_000 < len(HUGE[name].encode()) <= LARGEST_FILE or name == "dangling names"
    started = time.process_time()  # not of the clock: the machine may be busy
    assert hostile.survive_plan(HUGE[name].encode()) in ("problems", "refused")
    assert time.process_time() - started < 5
