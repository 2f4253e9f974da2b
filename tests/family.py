"""The seeded family of job-in-phases plans the benchmark runs: categories x works x phases.

Hours, pay, joining and leaving costs, supervision, a ratio rule and seasonal amounts; all invented.
"""

from __future__ import annotations

from decimal import Decimal
from math import cos, pi

import numpy as np

from solver.plan import Category, Phase, Plan, Ratio, Supervision, Work

SIZES = ((3, 1, 4), (6, 3, 6), (6, 3, 12), (10, 4, 12), (20, 8, 52))
SEEDS = range(5)


def family_plan(categories: int, works: int, phases: int, seed: int) -> Plan:
    """One plan; the same arguments give the same plan on every machine."""
    rng = np.random.default_rng([categories, works, phases, seed])
    work_names = [f"Work {k + 1}" for k in range(works)]
    people = [_category(rng, j, categories, work_names) for j in range(categories)]
    return Plan(
        title=f"{categories} x {works} x {phases}, seed {seed}",
        phases=tuple(Phase(f"Phase {t + 1}", Decimal(int(rng.integers(2, 6)))) for t in range(phases)),
        categories=tuple(people),
        works=tuple(_work(rng, name, people, phases) for name in work_names),
        rules=(_ratio(people),),
    )


def _category(rng: np.random.Generator, j: int, categories: int, works: list[str]) -> Category:
    leads = j < max(1, categories // 4)
    able = [name for k, name in enumerate(works) if rng.random() < 0.5 or k == j % len(works)]
    supervisors = tuple(f"Category {i + 1}" for i in range(max(1, categories // 4)))
    hours = Decimal(int(rng.integers(1, 9))) / 2
    return Category(
        name=f"Category {j + 1}",
        pay=Decimal(int(rng.integers(900, 1300) if leads else rng.integers(450, 900))),
        hours=Decimal(int(rng.integers(34, 41))),
        absence=Decimal(int(rng.integers(0, 12))) / 100,
        on_books=Decimal(int(rng.integers(0, 5))),
        join_cost=Decimal(int(rng.integers(100, 900))),
        leave_cost=Decimal(int(rng.integers(0, 700))),
        supervision=Supervision() if leads else Supervision(hours, supervisors),
        output={name: Decimal(int(rng.integers(20, 100))) / 10 for name in able},
    )


def _work(rng: np.random.Generator, name: str, people: list[Category], phases: int) -> Work:
    able = [c for c in people if name in c.output]
    each = np.mean([float(c.output[name] * c.hours) for c in able])
    crew, peak = rng.uniform(2.0, 6.0), rng.uniform(0, phases)
    season = [1 + 0.7 * cos(2 * pi * (t - peak) / max(phases, 4)) for t in range(phases)]
    amounts = [round(3.5 * each * crew * s * rng.uniform(0.85, 1.15)) for s in season]
    return Work(name, "units", tuple(Decimal(a) for a in amounts))


def _ratio(people: list[Category]) -> Ratio:
    leads = tuple(c.name for c in people if not c.supervision.by)
    others = tuple(c.name for c in people if c.supervision.by)
    return Ratio("Charges per lead", others, leads, Decimal(5))
