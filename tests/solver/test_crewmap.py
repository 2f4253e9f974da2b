from __future__ import annotations

from fractions import Fraction
from functools import cache
from itertools import pairwise
from math import hypot
from pathlib import Path
from time import perf_counter

import numpy as np
import pytest

from solver import heads
from solver.answer import Policy, from_json, to_json
from solver.crewmap import crew_map
from solver.levelline import level_line
from solver.mapanswer import CrewMap
from solver.outline import outline
from solver.plan import Plan
from solver.planfile import read_plan
from solver.solve import Case, solve
from tests.solver import checker, reference
from tests.solver.random_plans import FEATURES, random_plan

EXAMPLES = Path(__file__).parents[2] / "resources" / "examples"
CONVEX = FEATURES - {"unreachable", "least_if_any", "open_cost"}


@cache
def mapped(seed: int, features: frozenset[str] = CONVEX) -> tuple[Case, CrewMap, int] | None:
    rng = np.random.default_rng(3_000_000 + seed)
    plan = random_plan(rng, features=features, max_phases=1 + seed % 2)
    case = Case(plan)
    if case.proved.best is None or len(plan.categories) < 2:
        return None
    a, b = (plan.categories[int(i)].name for i in rng.permutation(len(plan.categories))[:2])
    t = int(rng.integers(len(plan.phases)))
    return case, crew_map(plan, a, b, plan.phases[t].name), t


def maps(count: int, features: frozenset[str] = CONVEX) -> list[tuple[Case, CrewMap, int]]:
    found, seed = [], 0
    while len(found) < count:
        one = mapped(seed, features)
        seed += 1
        if one is not None:
            found.append(one)
    return found


def exact_crew(case: Case) -> dict[str, list[float]]:
    best = case.proved.best
    assert best is not None
    return {name: list(counts) for name, counts in heads.crew_of(case.program, best.lots).items()}


def is_workable(case: Case, found: CrewMap, t: int, x: float, y: float) -> bool:
    """Whether fractional people could do it, by SciPy's HiGHS."""
    plan: Plan = case.plan
    crew = exact_crew(case)
    crew[found.across][t], crew[found.up][t] = x, y
    model = reference.written_out(plan, relax=True)
    for category in plan.categories:
        for at, people in enumerate(crew[category.name]):
            i = model.index["n", category.name, at]
            lots = people / float(category.lot)
            if not model.lower[i] - 1e-9 <= lots <= model.upper[i] + 1e-9:
                return False
            model.lower[i] = model.upper[i] = lots
    return model.solve().status == 0


def inside(polygon: tuple[tuple[float, float], ...], x: float, y: float) -> float:
    """How far inside the polygon a point is; negative outside."""
    closed = [*polygon, polygon[0]]
    return min(
        ((b[0] - a[0]) * (y - a[1]) - (b[1] - a[1]) * (x - a[0])) / hypot(b[0] - a[0], b[1] - a[1])
        for a, b in pairwise(closed)
    )


def window(found: CrewMap) -> tuple[float, float, float, float]:
    xs, ys = [p.x for p in found.points], [p.y for p in found.points]
    return min(xs), max(xs), min(ys), max(ys)


@pytest.mark.parametrize("block", range(4))
def test_the_polygon_is_where_fractional_people_can_do_it(block: int):
    rng = np.random.default_rng(block)
    for case, found, t in maps(40)[block * 10 : block * 10 + 10]:
        left, right, low, high = window(found)
        for _ in range(6):
            x, y = float(rng.uniform(left, right)), float(rng.uniform(low, high))
            if len(found.polygon) < 3:
                assert not is_workable(case, found, t, x, y)
                continue
            depth = inside(found.polygon, x, y)
            if abs(depth) > 1e-4:
                assert is_workable(case, found, t, x, y) == (depth > 0), (case.plan, found, x, y)


def test_the_polygons_are_not_all_empty_or_everything():
    sizes = [len(found.polygon) for _, found, _ in maps(40)]
    assert sum(size >= 3 for size in sizes) > 20
    assert max(sizes) >= 6


def test_corners_lie_just_on_the_border():
    for case, found, t in maps(25):
        if len(found.polygon) < 3:
            continue
        cx = sum(x for x, _ in found.polygon) / len(found.polygon)
        cy = sum(y for _, y in found.polygon) / len(found.polygon)
        left, right, low, high = window(found)
        for x, y in found.polygon:
            assert is_workable(case, found, t, x + 1e-4 * (cx - x), y + 1e-4 * (cy - y))
            out = x + 1e-4 * (x - cx), y + 1e-4 * (y - cy)
            if left < out[0] < right and low < out[1] < high and hypot(x - cx, y - cy) > 1e-2:
                assert not is_workable(case, found, t, *out)


def test_whole_crews_are_told_like_the_appraisal_does():
    kinds = set()
    for case, found, t in maps(30, FEATURES - {"unreachable"}):
        crew = exact_crew(case)
        rng = np.random.default_rng(len(found.points))
        for i in rng.permutation(len(found.points))[:15].tolist():
            point = found.points[i]
            crew[found.across][t], crew[found.up][t] = point.x, point.y
            lots = heads.lots_of(case.program, crew)
            assert point.workable == case.appraiser.workable(lots)
            report = case.appraiser.appraise(Policy.OWN, lots)
            assert set(point.breaks) == {line.line for line in report.lines if line.margin < 0}
            expected = checker.cost_if_workable(
                case.plan, {name: tuple(map(Fraction, map(str, counts))) for name, counts in crew.items()}
            )
            assert (point.cost is None) == (expected is None) == bool(point.breaks)
            if point.cost is not None:
                assert point.cost == pytest.approx(expected, abs=0.01)
            kinds.add(point.workable)
    assert kinds == {True, False}


def test_the_window_holds_the_exact_crew_and_the_lattice_is_whole():
    for case, found, t in maps(40):
        crew = exact_crew(case)
        here = (crew[found.across][t], crew[found.up][t])
        points = {(p.x, p.y): p for p in found.points}
        assert points[here].workable
        assert len(points) == len(found.points)
        columns, rows = {p.x for p in found.points}, {p.y for p in found.points}
        assert len(found.points) == len(columns) * len(rows)
        assert 10 < len(columns) <= 25
        assert 10 < len(rows) <= 25
        named = {one.name: (one.x, one.y) for one in found.named}
        assert named["exact"] == here
        assert {"fractional", "down", "up"} <= named.keys()


def test_crews_on_the_line_are_as_dear_as_the_exact_one():
    lines = 0
    for case, found, t in maps(40):
        if found.equal_cost is None:
            continue
        lines += 1
        crew = exact_crew(case)
        level = checker.cost_of_heads(case.plan, crew)
        left, right, low, high = window(found)
        points = [*found.equal_cost]
        points += [((a[0] + b[0]) / 2, (a[1] + b[1]) / 2) for a, b in pairwise(found.equal_cost)]
        for x, y in points:
            assert left - 1e-9 <= x <= right + 1e-9
            assert low - 1e-9 <= y <= high + 1e-9
            crew[found.across][t], crew[found.up][t] = x, y
            assert float(checker.cost_of_heads(case.plan, crew)) == pytest.approx(float(level), rel=1e-9)
        ends = found.equal_cost[0], found.equal_cost[-1]
        assert all(x in (left, right) or y in (low, high) for x, y in ends)
    assert lines > 20


def test_hillside_in_time_and_through_json():
    plan = read_plan(EXAMPLES / "hillside.crew.json")
    solve(plan)
    answer = crew_map(plan, "Lead hand", "Contract hand", plan.phases[0].name)
    assert from_json(to_json(answer), CrewMap) == answer
    began = perf_counter()
    crew_map(plan, "Contract hand", "Learner", plan.phases[0].name)
    assert perf_counter() - began < 0.3


def test_names_that_are_not_there_are_refused():
    plan = read_plan(EXAMPLES / "hillside.crew.json")
    phase = plan.phases[0].name
    with pytest.raises(ValueError, match="two different"):
        crew_map(plan, "Learner", "Learner", phase)
    for names in (
        ("Nobody", "Learner", phase),
        ("Learner", "Nobody", phase),
        ("Learner", "Lead hand", "Never"),
    ):
        with pytest.raises(KeyError):
            crew_map(plan, *names)


# ---- plane geometry ------------------------------------------------------------------------------


@pytest.mark.parametrize("seed", range(30))
def test_outline_of_random_corners(seed: int):
    rng = np.random.default_rng(seed)
    cloud = [tuple(map(float, p)) for p in rng.normal(size=(int(rng.integers(1, 12)), 2))]
    found = outline(lambda dx, dy: max(cloud, key=lambda p: (p[0] * dx + p[1] * dy, p)))
    assert set(found) <= set(cloud)
    for angle in rng.uniform(0, 7, 50):
        dx, dy = float(np.cos(angle)), float(np.sin(angle))
        farthest = max(p[0] * dx + p[1] * dy for p in cloud)
        assert max(p[0] * dx + p[1] * dy for p in found) == pytest.approx(farthest, abs=1e-6)
    turns = [
        (b[0] - a[0]) * (c[1] - b[1]) - (b[1] - a[1]) * (c[0] - b[0])
        for a, b, c in zip(found, found[1:] + found[:1], found[2:] + found[:2], strict=True)
    ]
    assert len(found) < 3 or min(turns) > 0


def test_outline_of_nothing_a_point_and_a_stretch():
    assert outline(lambda dx, dy: None) == []
    assert outline(lambda dx, dy: (2.0, 3.0)) == [(2.0, 3.0)]
    stretch = outline(lambda dx, dy: (0.0, 0.0) if dx + dy < 0 else (1.0, 1.0))
    assert sorted(stretch) == [(0.0, 0.0), (1.0, 1.0)]


def test_a_level_line_round_a_lowest_point():
    """Leaving can be dearer than staying: the crews cheaper than the exact one then lie in a pocket."""
    found = level_line(abs, abs, [-5.0, 0.0, 5.0], [-5.0, 0.0, 5.0], 2.0)
    assert found is not None
    assert set(found) == {(2.0, 0.0), (0.0, 2.0), (-2.0, 0.0), (0.0, -2.0)}
    assert level_line(abs, abs, [-1.0, 0.0, 1.0], [-1.0, 0.0, 1.0], 9.0) is None
    assert level_line(abs, abs, [3.0, 4.0], [3.0, 4.0], 2.0) is None
