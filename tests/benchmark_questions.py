"""How long `cost`, `room` and `near --within 2 --most 20` take together, and how many searches they run.

python -m tests.benchmark_questions [SEEDS [RANDOM]]: the hillside example (must stay within 2 s), SEEDS plans
of one phase with 8 categories and about a dozen lines, and RANDOM plans of 5 to 8 categories with every
feature (half lots, opening costs, least-if-any, people without pay), of which the slowest are shown.
"""

from __future__ import annotations

import os
import sys
from collections import Counter
from collections.abc import Iterator
from contextlib import contextmanager
from decimal import Decimal
from math import inf
from pathlib import Path
from time import perf_counter
from typing import Any
from unittest.mock import patch

import numpy as np

from solver.answer import State
from solver.engine import quiet_native_output
from solver.plan import Category, Phase, Plan, Presence, Ratio, Sense, Share, Supervision, Work
from solver.planfile import read_plan
from solver.questions import QUESTIONS
from solver.search import Search
from solver.solve import Case
from solver.unanswered import Unanswered
from tests.solver.random_plans import random_plan

HILLSIDE = Path(__file__).parents[1] / "resources" / "examples" / "hillside.crew.json"
FIRST_RANDOM = 1001
LIMIT = 2.0
ASKED: dict[str, dict[str, Any]] = {"cost": {}, "room": {}, "near": {"within": 2, "most": 20}}


def one_phase_plan(seed: int) -> Plan:
    """Eight categories, four works, supervision, five rules; invented numbers."""
    rng = np.random.default_rng(seed)
    works = [f"Work {k + 1}" for k in range(4)]
    categories = tuple(_category(rng, j, works) for j in range(8))
    names = [c.name for c in categories]
    amounts = [Decimal(int(rng.integers(8_000, 40_000))) for _ in works]
    return Plan(
        phases=(Phase("Season", Decimal(8)),),
        categories=categories,
        works=tuple(Work(name, "units", (amount,)) for name, amount in zip(works, amounts, strict=True)),
        rules=(
            Presence("Keys", {names[0]: Decimal(1), names[1]: Decimal(1)}, Sense.AT_LEAST, Decimal(3)),
            Presence("Places", {names[5]: Decimal(1)}, Sense.AT_MOST, Decimal(5)),
            Ratio("Span", (names[3], names[4]), (names[0],), Decimal(2)),
            Ratio("Helpers", (names[6],), (names[1], names[2]), Decimal("1.5")),
            Share("Own staff", tuple(names[:3]), tuple(names), Sense.AT_LEAST, Decimal("0.3")),
        ),
    )


def _category(rng: np.random.Generator, j: int, works: list[str]) -> Category:
    by = ("Category 1",) if rng.random() < 0.6 else ("Category 2", "Category 3")
    drawn = j > 2 and rng.random() < 0.7
    return Category(
        f"Category {j + 1}",
        Decimal(int(rng.integers(400, 1200))),
        Decimal(int(rng.integers(30, 41))),
        on_books=Decimal(int(rng.integers(0, 4))),
        at_most=Decimal(int(rng.integers(6, 20))) if rng.random() < 0.3 else None,
        join_cost=Decimal(int(rng.integers(0, 500))),
        leave_cost=Decimal(int(rng.integers(0, 900))),
        absence=Decimal("0.05"),
        overtime_hours=Decimal(4 if rng.random() < 0.3 else 0),
        overtime_rate=Decimal(40),
        supervision=Supervision(Decimal(int(rng.integers(2, 8))), by) if drawn else Supervision(),
        output={w: Decimal(int(rng.integers(10, 60))) / 2 for w in works if rng.random() < 0.6},
    )


@contextmanager
def counted() -> Iterator[Counter[str]]:
    """Counts the integer programs that are searched meanwhile."""
    count: Counter[str] = Counter()
    cheapest, within = Search.cheapest, Search.within

    def counting_cheapest(search: Search, *args: Any, **options: Any) -> Any:
        count["programs"] += 1
        return cheapest(search, *args, **options)

    def counting_within(search: Search, *args: Any, **options: Any) -> Any:
        count["programs"] += 1
        return within(search, *args, **options)

    with patch.object(Search, "cheapest", counting_cheapest), patch.object(Search, "within", counting_within):
        yield count


def measured(plan: Plan) -> tuple[dict[str, float], int]:
    """Seconds of each question, the exact solve it starts from included, and integer programs of all."""
    seconds = {}
    with counted() as count:
        for name, options in ASKED.items():
            began = perf_counter()
            QUESTIONS[name].ask(plan, options, lambda part, value: None)
            seconds[name] = perf_counter() - began
    return seconds, count["programs"]


def random_one_phase_plans(count: int) -> Iterator[tuple[str, Plan]]:
    """Plans of every feature that have an exact crew."""
    seed = FIRST_RANDOM
    while count:
        plan = random_plan(np.random.default_rng(seed), max_categories=8, max_works=3, max_phases=1)
        if len(plan.categories) >= 5 and Case(plan).proved.state is State.PROVED:
            count -= 1
            yield f"random plan, seed {seed}", plan
        seed += 1


def line(title: str, plan: Plan) -> tuple[float, str]:
    """Seconds together (infinite where a question was not answered) and a line of the table."""
    try:
        seconds, programs = measured(plan)
    except Unanswered as why:
        return inf, f"{title:28}{str(why).splitlines()[0]:>36}"
    each = "".join(f"{seconds[name]:8.2f}" for name in ASKED)
    together = sum(seconds.values())
    return together, f"{title:28}{each}{together:10.2f}{programs:10}"


def main(seeds: int, random: int) -> None:
    """Print the tables, past what native code prints."""
    with os.fdopen(quiet_native_output(), "w", encoding="utf-8", buffering=1) as out:
        hillside = read_plan(HILLSIDE)
        QUESTIONS["solve"].ask(hillside, {}, lambda part, value: None)  # loads the libraries
        print(f"{'plan':28}{'cost':>8}{'room':>8}{'near':>8}{'together':>10}{'programs':>10}", file=out)
        print(line("hillside", hillside)[1], file=out)
        for seed in range(seeds):
            print(line(f"8 categories, seed {seed}", one_phase_plan(seed))[1], file=out)
        found = sorted((line(title, plan) for title, plan in random_one_phase_plans(random)), reverse=True)
        late = sum(seconds > LIMIT for seconds, _ in found)
        print(f"{random} random plans: {late} beyond {LIMIT:g} s; the slowest:", file=out)
        for _, shown in found[:5]:
            print(shown, file=out)


if __name__ == "__main__":
    asked = [int(number) for number in sys.argv[1:]]
    main(*(asked + [8, 40][len(asked) :]))
