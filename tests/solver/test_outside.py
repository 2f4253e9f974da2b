"""Published cases and facts, each with its source and how it is known.

seen: read in a public source. memory: known, not looked up, solved again with SciPy's HiGHS here or
before. computed: by HiGHS or exact arithmetic, not published.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from decimal import Decimal
from fractions import Fraction
from math import ceil
from typing import ClassVar

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import Bounds, LinearConstraint, linprog, milp

from solver.answer import Answer, Policy, State
from solver.engine import EngineName, LpStatus, Relaxation, WholeStatus, whole
from solver.found import Limits
from solver.matrix import Matrix, RowSense
from solver.plan import Category, Phase, Plan, Presence, Rule, Sense, Share, Supervision, Work
from solver.rounding import rounded
from solver.search import Search
from solver.solve import solve
from tests.solver import checker
from tests.solver.bare import BareProgram
from tests.solver.reference import reference_costs

ONE_DAY = Decimal(8)  # paid hours; people are counted here, their hours are not used up


def present(
    need: Sequence[int],
    pay: Sequence[str],
    there: Mapping[int, Sequence[int]],
    own: Sequence[int] | None = None,
) -> Plan:
    """Category c is there in the spans `there[c]`; span s needs `need[s]` people."""
    names = [f"Start {c}" for c in there]
    categories = tuple(Category(n, Decimal(p), ONE_DAY) for n, p in zip(names, pay, strict=True))
    rules: list[Rule] = []
    for s, people in enumerate(need):
        weights = {n: Decimal(1) for n, c in zip(names, there, strict=True) if s in there[c]}
        rules.append(Presence(f"Span {s}", weights, Sense.AT_LEAST, Decimal(people)))
    typed = {} if own is None else {n: (Decimal(x),) for n, x in zip(names, own, strict=True)}
    return Plan(categories=categories, rules=tuple(rules), own=typed)


def costs(answer: Answer) -> tuple[float | None, float | None]:
    return answer.floor, answer.exact.cost if answer.exact else None


def crew(answer: Answer) -> list[float]:
    assert answer.exact is not None
    return [n for counts in answer.exact.crew.values() for n in counts]


class TestPostOffice:
    """Winston, Operations Research: Applications and Algorithms, 4th ed., sec. 3.5: post office, five
    days on, two off. Need: seen; LP 67/3, whole people 23, rounding up 25: memory."""

    NEED = (17, 13, 15, 19, 14, 16, 11)
    THERE: ClassVar = {s: [(s + d) % 7 for d in range(5)] for s in range(7)}
    VERTEX = tuple(float(Fraction(x)) for x in ("4/3", "10/3", "2", "22/3", "0", "10/3", "5"))
    UP = (2, 4, 2, 8, 0, 4, 5)
    NEAREST = (1, 3, 2, 7, 0, 3, 5)

    def plan(self, own: Sequence[int] | None = None) -> Plan:
        return present(self.NEED, ["1"] * 7, self.THERE, own)

    def test_floor_and_exact_crew(self) -> None:
        answer = solve(self.plan())
        assert answer.state is State.PROVED
        assert costs(answer) == (pytest.approx(67 / 3, abs=1e-6), 23)

    def test_rounding_the_published_vertex(self) -> None:
        lots = [Fraction(1)] * 7
        assert rounded(Policy.UP, self.VERTEX, lots) == self.UP
        assert rounded(Policy.NEAREST, self.VERTEX, lots) == self.NEAREST

    def test_rounded_up_works_and_costs_25(self) -> None:
        report = solve(self.plan(self.UP)).report(Policy.OWN)
        assert report is not None
        assert (report.workable, report.cost) == (True, 25)

    def test_rounded_to_nearest_is_one_short_on_six_days(self) -> None:
        report = solve(self.plan(self.NEAREST)).report(Policy.OWN)
        assert report is not None
        assert [line.margin for line in report.lines] == [-1, -1, -1, -1, -1, -1, 6]
        assert (report.workable, report.cost, report.paper_cost) == (False, None, 21)
        assert len(report.breaks) == 6


class TestAirlineCounters:
    """Hillier & Lieberman, Introduction to Operations Research, sec. 3.4, Table 3.19. Need: seen; wages
    and Z: memory. Whole people cost nothing here."""

    NEED = (48, 79, 65, 87, 64, 73, 82, 43, 52, 15)
    COVER = ([0], [0, 1], [0, 1], [0, 1, 2], [1, 2], [2, 3], [2, 3], [3], [3, 4], [4])

    def test_floor_and_exact_crew(self) -> None:
        there = {c: [s for s, shifts in enumerate(self.COVER) if c in shifts] for c in range(5)}
        answer = solve(present(self.NEED, ["170", "160", "175", "180", "195"], there))
        assert costs(answer) == (pytest.approx(30610), 30610)
        assert crew(answer) == [48, 31, 39, 43, 15]
        assert answer.whole_people_cost is not None
        assert answer.whole_people_cost.absolute == 0


class TestCyclicStaffing:
    """Bartholdi, Orlin & Ratliff, Cyclic scheduling via integer programs with circular ones, Operations
    Research 28 (1980) 1074-1085 (memory): k consecutive of n spans at equal pay: exact = floor rounded up.
    """

    @settings(max_examples=60, deadline=None, derandomize=True)
    @given(st.data())
    def test_the_exact_number_is_the_floor_rounded_up(self, data: st.DataObject) -> None:
        n = data.draw(st.integers(3, 8))
        k = data.draw(st.integers(2, n - 1))
        need = data.draw(st.lists(st.integers(0, 20), min_size=n, max_size=n))
        there = {s: [(s + d) % n for d in range(k)] for s in range(n)}
        floor, exact = costs(solve(present(need, ["1"] * n, there)))
        assert floor is not None
        assert exact == ceil(floor - 1e-6)


class TestFlugpl:
    """MIPLIB 3 "flugpl" (H. M. Wagner; hiring and training of airline staff), seen: LP 1167185.73,
    whole people 1201500."""

    NEED = (8000, 9000, 8000, 10000, 9000, 12000)
    FLOOR, EXACT = 1167185.7255923, 1201500

    def matrix(self) -> Matrix:
        """Columns S_0..S_5, A_0..A_5 (integer), U_0..U_5."""
        m, months = Matrix(), range(6)
        staff = [m.add_column(2700, 57 if t else 60, 75 if t else 60, integer=True) for t in months]
        trainees = [m.add_column(1500, 0, 18, integer=True) for _ in months]
        overtime = [m.add_column(30, 0, 20 * 75) for _ in months]
        for t in months:
            if t:
                terms = [staff[t], staff[t - 1], trainees[t - 1]]
                m.add_row(terms, [1.0, -0.9, -1.0], RowSense.EQUAL, 0.0)
            terms = [staff[t], trainees[t], overtime[t]]
            m.add_row(terms, [150.0, -100.0, 1.0], RowSense.AT_LEAST, self.NEED[t])
            m.add_row([overtime[t], staff[t]], [1.0, -20.0], RowSense.AT_MOST, 0.0)
        return m

    def test_floor(self) -> None:
        relaxation = Relaxation(self.matrix())
        assert relaxation.solve() is LpStatus.OPTIMAL
        assert relaxation.objective == pytest.approx(self.FLOOR, rel=1e-9)

    @pytest.mark.parametrize("engine", EngineName)
    def test_exact_by_each_engine(self, engine: EngineName) -> None:
        result = whole(self.matrix(), engine, seconds=20)
        assert result.status is WholeStatus.OPTIMAL
        assert result.objective == pytest.approx(self.EXACT, abs=0.005)

    def test_exact_by_our_own_search(self) -> None:
        outcome = Search(BareProgram(self.matrix())).cheapest(Limits(nodes=200_000, seconds=20))
        assert outcome.complete
        assert outcome.best is not None
        assert outcome.best.objective == pytest.approx(self.EXACT, abs=0.005)

    def plan(self, own: Mapping[str, Sequence[Decimal]]) -> Plan:
        """The case as far as a plan can say it: months as phases, 150 hours each, up to 20 of overtime,
        trainees who need 100 hours of supervision and deliver nothing, limits on both.

        What a plan cannot say: that a tenth of the staff leaves every month by itself, and that this
        month's trainees are next month's staff.
        """
        staff = Category(
            "Staff", Decimal(2700), Decimal(150), on_books=Decimal(60), at_least=Decimal(57),
            at_most=Decimal(75), overtime_hours=Decimal(20), overtime_rate=Decimal(30),
            output={"Flying": Decimal(1)},
        )  # fmt: skip
        trainee = Category(
            "Trainee", Decimal(1500), Decimal(150), at_most=Decimal(18),
            supervision=Supervision(Decimal(100), ("Staff",)),
        )  # fmt: skip
        phases = tuple(Phase(f"Month {t + 1}") for t in range(6))
        work = Work("Flying", "hours", tuple(Decimal(n) for n in self.NEED))
        return Plan(phases=phases, categories=(staff, trainee), works=(work,), own=own)

    def test_the_published_crew_as_a_plan_costs_what_it_should(self) -> None:
        """Trainees needing supervision, in a plan: the optimum's head counts, appraised."""
        outcome = Search(BareProgram(self.matrix())).cheapest(Limits(nodes=200_000, seconds=20))
        assert outcome.best is not None
        lots = [Decimal(n) for n in outcome.best.lots]
        plan = self.plan({"Staff": tuple(lots[:6]), "Trainee": tuple(lots[6:])})
        answer = solve(plan)
        report = answer.report(Policy.OWN)
        assert report is not None
        assert report.workable
        assert report.cost == pytest.approx(self.EXACT, abs=0.005)
        assert costs(answer) == pytest.approx(reference_costs(plan), abs=0.005)

    def test_one_trainee_more_in_the_last_month_goes_short_of_hours(self) -> None:
        outcome = Search(BareProgram(self.matrix())).cheapest(Limits(nodes=200_000, seconds=20))
        assert outcome.best is not None
        lots = [Decimal(n) for n in outcome.best.lots]
        late = (*lots[6:11], Decimal(18))
        report = solve(self.plan({"Staff": tuple(lots[:6]), "Trainee": late})).report(Policy.OWN)
        assert report is not None
        assert {(line.line, line.phase) for line in report.lines if line.margin < 0} == {
            ("Flying", "Month 6")
        }


class TestTechnicians:
    """Winston, Operations Research, sec. 3.12 (multiperiod work scheduling), computer service technicians:
    hours 6000 to 11000 over five months, 50 technicians of 160 h, trainees who take 50 h of one, 5 % leave
    each month; $2000 and $1000 a month. LP optimum $593,777 (memory; solved again here)."""

    NEED = (6000, 7000, 8000, 9500, 11000)

    def test_floor_as_a_program(self) -> None:
        m, months = Matrix(), range(5)
        staff = [m.add_column(2000, 0 if t else 50, 1000 if t else 50) for t in months]
        trainees = [m.add_column(1000, 0, 1000) for _ in months]
        for t in months:
            m.add_row([staff[t], trainees[t]], [160.0, -50.0], RowSense.AT_LEAST, self.NEED[t])
            if t:
                terms = [staff[t], staff[t - 1], trainees[t - 1]]
                m.add_row(terms, [1.0, -0.95, -1.0], RowSense.EQUAL, 0.0)
        relaxation = Relaxation(m)
        assert relaxation.solve() is LpStatus.OPTIMAL
        assert relaxation.objective == pytest.approx(593_777, abs=1)

    def test_each_month_as_a_plan_needs_the_technicians_the_program_has(self) -> None:
        """As a plan: supervision is said, quitting and training are not; with the published number of
        trainees (none in the first month, then 8.45, 11.45, 9.52, none) the fewest technicians."""
        trainees = ("0", "8.45", "11.45", "9.52", "0")
        for hours, count in zip(self.NEED, trainees, strict=True):
            staff = Category("Technician", Decimal(2000), Decimal(160), output={"Service": Decimal(1)})
            trainee = Category(
                "Trainee", Decimal(1000), Decimal(160), at_least=Decimal(count), lot=Decimal("0.01"),
                supervision=Supervision(Decimal(50), ("Technician",)),
            )  # fmt: skip
            work = Work("Service", "hours", (Decimal(hours),))
            answer = solve(Plan(categories=(staff, trainee), works=(work,)))
            assert answer.exact is not None
            assert answer.exact.crew["Technician"] == (ceil((hours + 50 * float(count)) / 160),)


class TestBankTellers:
    """Render, Stair & Hanna, Quantitative Analysis for Management, linear programming applications: bank
    tellers over the hours of a day, part-timers who arrive at the full hour and leave after four, part-time
    at most half of the 112 hours required. Full-time $100, part-time $32 a day; optimum $1,448 (memory;
    solved again here)."""

    NEED = (10, 12, 14, 16, 18, 17, 15, 10)

    def plan(self) -> Plan:
        """All of it can be said where each arrival time is a category of its own."""
        full = Category("Full time", Decimal(100), ONE_DAY, at_most=Decimal(12))
        starts = [Category(f"From hour {s}", Decimal(32), Decimal(4)) for s in range(5)]
        rules: list[Rule] = []
        for hour, people in enumerate(self.NEED):
            lunch = Decimal("0.5") if hour in (2, 3) else Decimal(1)
            weights = {f"From hour {s}": Decimal(1) for s in range(5) if s <= hour < s + 4}
            weights["Full time"] = lunch
            rules.append(Presence(f"Hour {hour}", weights, Sense.AT_LEAST, Decimal(people)))
        half = {c.name: Decimal(4) for c in starts}
        rules.append(Presence("Part time", half, Sense.AT_MOST, Decimal(sum(self.NEED)) / 2))
        return Plan(categories=(full, *starts), rules=tuple(rules))

    def test_exact_cost(self) -> None:
        answer = solve(self.plan())
        assert answer.state is State.PROVED
        assert costs(answer) == (pytest.approx(1448), 1448)
        assert crew(answer)[0] == 10

    def test_as_hours_with_arrivals_departures_and_a_share(self) -> None:
        """Hours as phases. What a plan cannot say this way: that whoever arrives stays four hours, and a
        share over the whole day; the share holds in every hour instead. Compared with HiGHS."""
        full = Category("Full time", Decimal("12.5"), Decimal(1), on_books=Decimal(10), at_most=Decimal(12))
        part = Category("Part time", Decimal(8), Decimal(1), join_cost=Decimal(2), leave_cost=Decimal(1))
        hours = tuple(Phase(f"{9 + h}:00") for h in range(8))
        rules: list[Rule] = [
            Presence(
                f"Tellers at {phase.name}",
                {"Full time": Decimal("0.5") if h in (2, 3) else Decimal(1), "Part time": Decimal(1)},
                Sense.AT_LEAST,
                Decimal(self.NEED[h]),
                (phase.name,),
            )
            for h, phase in enumerate(hours)
        ]
        rules.append(
            Share("Part time", ("Part time",), ("Full time", "Part time"), Sense.AT_MOST, Decimal("0.5"))
        )
        plan = Plan(phases=hours, categories=(full, part), rules=tuple(rules))
        answer = solve(plan)
        assert answer.state is State.PROVED
        assert costs(answer) == pytest.approx(reference_costs(plan), abs=0.005)
        assert answer.exact is not None
        assert checker.missed_by_heads(plan, answer.exact.crew) == []
        assert max(answer.exact.crew["Part time"]) > min(answer.exact.crew["Part time"])


class TestTheReferencesThemselves:
    """What is marked "memory" above, solved with SciPy's HiGHS without anything of ours."""

    def test_post_office(self) -> None:
        need = np.array(TestPostOffice.NEED)
        rows = np.array([[float(d in TestPostOffice.THERE[s]) for s in range(7)] for d in range(7)])
        assert linprog(np.ones(7), A_ub=-rows, b_ub=-need).fun == pytest.approx(67 / 3)
        integer = milp(
            np.ones(7),
            integrality=np.ones(7),
            bounds=Bounds(0, 100),
            constraints=LinearConstraint(rows, need, np.inf),
        )
        assert integer.fun == pytest.approx(23)

    def test_bank_tellers(self) -> None:
        rows = [[1.0] + [float(s <= h < s + 4) for s in range(5)] for h in range(8)]
        rows[2][0] = rows[3][0] = 0.5
        need = np.array(TestBankTellers.NEED)
        low = np.append(need, -np.inf)
        high = np.append(np.full(8, np.inf), 56)
        result = milp(
            [100] + [32] * 5,
            integrality=np.ones(6),
            bounds=Bounds(0, [12] + [100] * 5),
            constraints=LinearConstraint(np.array([*rows, [0] + [4] * 5]), low, high),
        )
        assert result.fun == pytest.approx(1448)
