"""What an answer must agree with: HiGHS, the engine-free checker, brute force. Used by tests and long runs.

Every function raises AssertionError, with what differs, where an answer disagrees.
"""

from __future__ import annotations

from collections.abc import Iterator
from fractions import Fraction
from itertools import pairwise

from solver.answer import Answer, Break, CrewReport, LineKind, State
from solver.found import tie_width
from solver.nearbest import near_best
from solver.plan import Plan
from solver.room import room
from tests.solver import bruteforce, checker, reference
from tests.solver.solved import Workable

HOURS = (LineKind.WORK, LineKind.SUPERVISION)


def same(ours: float | None, theirs: float | None) -> bool:
    """Both absent, or equal to the cent; of sums beyond 5,000 to one part in a million."""
    if ours is None or theirs is None:
        return ours is theirs
    return abs(ours - theirs) <= max(0.005, 1e-6 * abs(theirs))


def near(a: float, b: float, slack: float = 1e-6) -> bool:
    """Equal but for what floating point leaves, relative to the sizes involved."""
    return abs(a - b) <= slack * (1 + abs(a) + abs(b))


def crews_of(answer: Answer) -> Iterator[CrewReport]:
    """The crews that exist."""
    return (report for report in answer.crews if report.crew is not None)


# ---- costs -----------------------------------------------------------------------------------------


def assert_floor_and_exact_equal_highs(plan: Plan, answer: Answer) -> None:
    """Also: proved where there is a crew, impossible where there is none."""
    floor, exact = reference.reference_costs(plan)
    cost = answer.exact.cost if answer.exact else None
    assert same(answer.floor, floor), f"floor {answer.floor}, HiGHS {floor}"
    assert same(cost, exact), f"exact {cost}, HiGHS {exact}"
    assert answer.state is (State.IMPOSSIBLE if exact is None else State.PROVED), answer.state
    assert answer.proof is not None


def assert_exact_crew_stands(plan: Plan, answer: Answer) -> None:
    """The exact crew breaks no line and costs, joins and leaves as said."""
    best = answer.exact
    if best is None:
        return
    checker.assert_stands(plan, best.crew, best.cost, best.overtime, best.bought_in)
    moves = tuple(float(n) for n in checker.joiners_and_leavers(plan, best.crew))
    assert near(best.joiners, moves[0]), (best.joiners, moves)
    assert near(best.leavers, moves[1]), (best.leavers, moves)


def assert_crews_are_called_rightly(plan: Plan, answer: Answer) -> None:
    """Workable or not, cost and paper cost of every crew; none is cheaper than the exact one."""
    for report in answer.crews:
        if report.crew is None:
            assert report.why_none, report.policy
            continue
        cost = checker.cost_if_workable(plan, report.crew)
        assert (cost is not None) == report.workable, (report.policy, report.workable, cost)
        assert same(report.cost, cost), (report.policy, report.cost, cost)
        paper = float(checker.cost_of_heads(plan, report.crew))
        assert same(report.paper_cost, paper), (report.policy, report.paper_cost, paper)
        if cost is not None and answer.state is State.PROVED:
            assert answer.exact is not None
            assert cost >= answer.exact.cost - max(0.005, 1e-9 * abs(cost)), (report.policy, cost)


# ---- margins and breaks ----------------------------------------------------------------------------


def assert_margins_of_heads_are_exact(plan: Plan, answer: Answer) -> None:
    """Lines of head counts: the misses are those of the checker."""
    for report in crews_of(answer):
        theirs = {(m.line, m.phase): float(m.by) for m in checker.missed_by_heads(plan, report.crew)}
        ours = {
            (line.line, line.phase): -line.margin
            for line in report.lines
            if line.margin < 0 and line.kind not in (*HOURS, LineKind.BUDGET)
        }
        assert ours.keys() == theirs.keys(), (report.policy, ours, theirs)
        assert all(near(ours[x], theirs[x], 1e-12) for x in ours), (report.policy, ours, theirs)


def assert_margins_of_hours_equal_highs(plan: Plan, answer: Answer) -> None:
    """Work and supervision lines: the most extra, or what is short, by an independent program."""
    for report in crews_of(answer):
        run = checker.Running(plan, report.crew)
        cheapest = run.cheapest()
        if cheapest is None:
            assert_shorts_equal(plan, run, report)
            continue
        margins = {(line.line, line.phase): line.margin for line in report.lines if line.kind in HOURS}
        money = _money_for_running(plan, report, cheapest[0])
        for line in run.lines:
            extra, ours = run.most_extra(line, money), margins[run.title(line)]
            assert extra is not None
            assert near(ours, extra, 1e-5), (report.policy, line, ours, extra)


def _money_for_running(plan: Plan, report: CrewReport, least: float) -> float:
    """What a budget leaves for overtime and bought-in units; without limit where it is missed anyway."""
    budget = checker.budget_of(plan)
    if budget is None:
        return float("inf")
    left = float(budget - checker.cost_of_heads(plan, report.crew))
    return left if left >= least else float("inf")


def assert_shorts_equal(plan: Plan, run: checker.Running, report: CrewReport) -> None:
    """Which of several lines goes short may be chosen freely; how much in all may not."""
    for t, phase in enumerate(plan.phases):
        mine = [line for line in report.lines if line.phase == phase.name and line.margin < 0]
        supervision = sum(-line.margin for line in mine if line.kind is LineKind.SUPERVISION)
        work = sum(
            -line.margin / float(checker.best_output(plan, line.line))
            for line in mine
            if line.kind is LineKind.WORK
        )
        least = run.shorts(t)
        assert near(supervision, least[0], 1e-5), (report.policy, t, supervision, least)
        assert near(work, least[1], 1e-5), (report.policy, t, work, least)


def assert_breaks_split_exactly(plan: Plan, answer: Answer) -> None:
    """The identity, what is short, the moves, and a break for every broken line and no other."""
    for report in crews_of(answer):
        broken = {(line.line, line.phase) for line in report.lines if line.margin < 0}
        named = {(name, one.phase) for one in report.breaks for name in one.lines}
        assert named == broken, (report.policy, named, broken)
        assert report.workable == (not broken), report.policy
        for one in report.breaks:
            assert_split(one)
            _assert_short_is_that_of_the_lines(plan, report, one)
            _assert_moves_are_worth_times_people(plan, answer, report, one)


def assert_split(one: Break) -> None:
    """fractional_margin + moves + given_up = -short."""
    assert one.short > 0, one
    total = one.fractional_margin + sum(one.moves.values()) + sum(one.given_up.values())
    size = max(1.0, *map(abs, one.moves.values()), abs(one.fractional_margin))
    assert abs(total + one.short) <= 1e-6 * size, one


def _assert_short_is_that_of_the_lines(plan: Plan, report: CrewReport, one: Break) -> None:
    margins = [
        (line.line, line.margin)
        for line in report.lines
        if line.line in one.lines and line.phase == one.phase and line.kind is one.kind
    ]
    if one.kind is LineKind.WORK and len(one.lines) > 1:
        margins = [(name, margin / float(checker.best_output(plan, name))) for name, margin in margins]
    assert near(sum(margin for _, margin in margins), -one.short, 1e-5), (one, margins)


def _assert_moves_are_worth_times_people(plan: Plan, answer: Answer, report: CrewReport, one: Break) -> None:
    if one.phase is None:  # a budget over all phases: only the moves themselves are exact
        return
    assert answer.fractional is not None
    assert report.crew is not None
    t = [phase.name for phase in plan.phases].index(one.phase)
    for name, move in one.moves.items():
        ours, fractional = report.crew[name], answer.fractional[name]
        expected = one.net_worth.get(name, 0.0) * (ours[t] - fractional[t])
        if t and name in one.net_worth_before:
            expected += one.net_worth_before[name] * (ours[t - 1] - fractional[t - 1])
        assert near(move, expected, 1e-5), (one, name, move, expected)


# ---- brute force over a box ------------------------------------------------------------------------


def assert_preferred_crew_is_taken(plan: Plan, answer: Answer, workable: Workable) -> None:
    """The cheapest; of equals the one with fewest moves, then fewest people, and so on."""
    if not workable:
        assert answer.state is State.IMPOSSIBLE, answer.state
        return
    assert answer.exact is not None
    least = min(cost for cost, _ in workable)
    equals = [crew for cost, crew in workable if cost <= least + tie_width(least)]
    preferred = min(equals, key=lambda crew: checker.preference(plan, crew))
    ours = {name: tuple(map(checker.number, ns)) for name, ns in answer.exact.crew.items()}
    assert ours == preferred, (ours, preferred)


def assert_preferred_crew_by_goals(plan: Plan, answer: Answer) -> None:
    """As above, without brute force: by SciPy's HiGHS, goal after goal with the goals before it held.

    What HiGHS finds counts only where its crew is workable, as cheap, and preferred to ours. As cheap: within
    a quarter of what is called equal, for the cost that ours were sought by may be off by as much, where a
    unit bought in for 150 hangs on the seventh digit of an hour (small:1009249 of the long run).
    """
    if answer.exact is None or answer.state is not State.PROVED:
        return
    theirs = _by_goals(plan, answer.exact.cost)
    if theirs is None:
        return
    cost, ours = checker.cost_if_workable(plan, theirs), answer.exact.crew
    if cost is not None and cost <= answer.exact.cost + tie_width(cost) / 4:
        assert checker.preference(plan, ours) <= checker.preference(plan, theirs), (ours, theirs)


def _by_goals(plan: Plan, cost: float) -> dict[str, tuple[Fraction, ...]] | None:
    model, span = reference.written_out(plan, relax=False), range(len(plan.phases))
    names, money = list(model.index), list(model.cost)
    model.row({n: money[i] for n, i in model.index.items() if money[i]}, high=cost + tie_width(cost) / 4)
    moves = {n: 1.0 for n in names if n[0] in ("p", "q")}
    people = {n: float(plan.category(n[1]).lot) for n in names if n[0] == "n"}
    goals = [moves, people, *({("n", c.name, t): -1.0 for t in span} for c in plan.categories)]
    goals += [{("n", c.name, t): -1.0} for c in plan.categories for t in span]
    for i, goal in enumerate(goals):
        model.cost = [goal.get(name, 0.0) for name in names]
        found = model.solve()
        if found.status != 0:
            return None
        model.row(goal, high=found.fun + (1e-5 if i < 2 else 0.5))
    return {
        c.name: tuple(round(found.x[model.index["n", c.name, t]]) * Fraction(c.lot) for t in span)
        for c in plan.categories
    }


def assert_inequalities_hold(plan: Plan, answer: Answer, workable: Workable) -> None:
    """Every break's inequality, for every workable crew of the box."""
    for report in answer.crews:
        for one in report.breaks:
            if one.phase is None and (len(plan.phases) > 1 or any(c.open_cost for c in plan.categories)):
                continue  # spread over phases, or with opening costs as a constant: none is claimed
            for _, crew in workable:
                if one.lines[0].endswith("least if any") and not value(plan, crew, one):
                    continue  # nobody there is allowed as well
                reached = value(plan, crew, one)
                assert reached >= one.need - 1e-6 * (1 + abs(one.need)), (one, crew, reached)


def value(plan: Plan, crew, one: Break) -> float:
    """The left-hand side of a break's inequality for a crew."""
    t = 0 if one.phase is None else [phase.name for phase in plan.phases].index(one.phase)
    now = sum(worth * float(checker.number(crew[name][t])) for name, worth in one.net_worth.items())
    before = one.net_worth_before.items()
    return now + sum(worth * float(checker.number(crew[name][t - 1])) for name, worth in before)


def assert_near_crews_are_complete(plan: Plan, answer: Answer, workable: Workable) -> None:
    """All crews within a fifth of the best cost, each once, in order of cost."""
    if answer.exact is None:
        return
    limit = answer.exact.cost * 1.2
    expected = {_key(crew): cost for cost, crew in workable if cost <= limit + 1e-6}
    found = near_best(plan, within=20, most=1000)
    listed = [_key({n: map(checker.number, ns) for n, ns in one.crew.items()}) for one in found.crews]
    assert found.complete
    assert len(listed) == len(set(listed)), "a crew is listed twice"
    assert set(listed) == expected.keys(), (len(listed), len(expected))
    costs = [one.cost for one in found.crews]
    assert all(same(cost, expected[crew]) for cost, crew in zip(costs, listed, strict=True))
    assert all(b >= a - tie_width(a) for a, b in pairwise(costs)), costs


def _key(crew) -> tuple[tuple[str, tuple[Fraction, ...]], ...]:
    return tuple((name, tuple(counts)) for name, counts in crew.items())


def assert_room_is_exact(plan: Plan, answer: Answer) -> None:
    """Tighten is the margin; the least loosening and its saving are those of every crew looked at."""
    if answer.exact is None:
        return
    every = bruteforce.Room(plan, answer.exact.cost)
    for line in room(plan).lines:
        if line.kind is LineKind.BUDGET or line.line.endswith(": settling in") or line.phase is None:
            continue
        expected = every.loosened(line.line, line.phase)
        if expected is None:  # too many crews to look at
            continue
        place = (line.line, line.phase, line.loosen, line.saving, expected)
        assert (line.loosen is None) == (expected.by is None), place
        if line.loosen is not None and expected.by is not None and expected.cost is not None:
            # a cent is found to a ten-thousandth, which at a few cents a unit shows in the loosening
            assert near(line.loosen, expected.by, 3e-4), place
            assert line.saving is not None
            assert abs(line.saving - (answer.exact.cost - expected.cost)) <= 0.005, place
