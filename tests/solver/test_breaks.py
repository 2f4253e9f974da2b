"""Why a crew is not workable: margins, and inequalities that every workable crew satisfies."""

from __future__ import annotations

from decimal import Decimal

import pytest

from solver.answer import LineKind, Policy
from solver.plan import Category, Phase, Plan, Presence, Sense, Supervision, Work
from solver.solve import solve
from tests.solver import agreement, checker, solved

pytestmark = pytest.mark.xdist_group("solved")  # one process, so that every plan is solved once

MIXED = [range(start, start + 30) for start in range(0, 300, 30)]
FULL = [range(start, start + 27) for start in range(0, 81, 27)]
BOXED = [range(start, start + 40) for start in range(0, 120, 40)]


class TestMargins:
    @pytest.mark.parametrize("seeds", MIXED, ids=str)
    def test_lines_of_head_counts_are_exact(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_margins_of_heads_are_exact(*solved.mixed(seed))

    @pytest.mark.parametrize("seeds", MIXED[:5], ids=str)
    def test_hours_lines_equal_an_independent_program(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_margins_of_hours_equal_highs(*solved.mixed(seed))

    @pytest.mark.parametrize("seeds", [range(15)], ids=str)
    def test_also_within_a_budget_and_over_two_phases(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_margins_of_hours_equal_highs(*solved.full(seed))

    def test_money_left_of_a_budget(self) -> None:
        checked = 0
        for seed in range(60):
            plan, answer = solved.full(seed)
            for report in answer.crews:
                budget = checker.budget_of(plan)
                if report.workable and budget is not None and report.cost is not None:
                    line = next(line for line in report.lines if line.kind is LineKind.BUDGET)
                    assert line.margin == pytest.approx(float(budget) - report.cost, abs=0.01)
                    checked += 1
        assert checked > 100


class TestTheSplit:
    """The identity, what is short, the moves; a break for every broken line and no other."""

    @pytest.mark.parametrize("seeds", MIXED, ids=str)
    def test_is_exact_on_every_break(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_breaks_split_exactly(*solved.mixed(seed))

    @pytest.mark.parametrize("seeds", FULL, ids=str)
    def test_is_exact_on_every_break_of_everything_at_once(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_breaks_split_exactly(*solved.full(seed))

    def test_plans_enough_were_broken(self) -> None:
        cases = [solved.mixed(seed) for seed in range(300)] + [solved.full(seed) for seed in range(81)]
        breaks = [b for case in cases for report in agreement.crews_of(case[1]) for b in report.breaks]
        by_kind = {kind: sum(b.kind is kind for b in breaks) for kind in LineKind}
        assert len(breaks) > 500
        assert all(count >= 5 for count in by_kind.values()), by_kind
        assert any(b.given_up for b in breaks)
        assert any(b.net_worth_before for b in breaks)


class TestTheInequality:
    """sum net_worth x n (+ before) >= need for every workable crew; this one misses it by its short."""

    @pytest.mark.parametrize("seeds", BOXED, ids=str)
    def test_holds_for_every_workable_crew_of_the_box(self, seeds: range) -> None:
        for seed in seeds:
            agreement.assert_inequalities_hold(*solved.boxed(seed))

    def test_is_missed_by_exactly_the_short(self) -> None:
        missed = 0
        for seed in range(120):
            plan, answer, _ = solved.boxed(seed)
            for report in answer.crews:
                for one in report.breaks:
                    if one.phase is not None:
                        given_up = sum(one.given_up.values())
                        assert agreement.near(
                            agreement.value(plan, report.crew, one) + given_up, one.need - one.short
                        )
                        missed += 1
        assert missed > 100


class TestByHand:
    def test_a_work_short_in_its_own_unit(self) -> None:
        """9.41 hands round to 9: 0.41 hands x 38 h x 20 trees."""
        hand = Category("Hand", Decimal(500), Decimal(38), output={"Planting": Decimal(20)})
        plan = Plan(categories=(hand,), works=(Work("Planting", "trees", (Decimal("7151.6"),)),))
        report = solve(plan).report(Policy.NEAREST)
        assert report is not None
        (one,) = report.breaks
        assert (one.lines, one.kind, one.unit, one.phase) == (
            ("Planting",),
            LineKind.WORK,
            "trees",
            "Whole job",
        )
        assert one.short == pytest.approx(0.41 * 38 * 20)
        assert one.net_worth == pytest.approx({"Hand": 760})
        assert one.need == pytest.approx(7151.6)
        assert one.fractional_margin == pytest.approx(0, abs=1e-9)
        assert one.moves == pytest.approx({"Hand": -0.41 * 760})
        assert one.given_up == {}

    def test_supervision_short_frees_hours_that_work_counts_as_given_up(self) -> None:
        """Leads give 40 h each; four learners draw 12 h each: 8 h are short, and the work has them too."""
        lead = Category("Lead", Decimal(900), Decimal(40), output={"Work": Decimal(1)})
        learner = Category(
            "Learner", Decimal(100), Decimal(40), supervision=_by_lead("12"), output={"Work": Decimal("0.1")}
        )
        plan = Plan(
            categories=(lead, learner),
            works=(Work("Work", "h", (Decimal(60),)),),
            own={"Lead": (Decimal(1),), "Learner": (Decimal(4),)},
        )
        report = solve(plan).report(Policy.OWN)
        assert report is not None
        supervision, work = sorted(report.breaks, key=lambda b: b.kind)
        assert supervision.short == pytest.approx(8)
        assert supervision.net_worth == pytest.approx({"Lead": 40, "Learner": -12})
        assert work.short == pytest.approx(60 - 16)
        assert work.net_worth == pytest.approx({"Lead": 40, "Learner": 4 - 12})
        assert work.given_up == pytest.approx({"Supervision by Lead": 8})

    def test_settling_in_brings_the_phase_before_into_it(self) -> None:
        """Joiners lose 10 of 40 h: each person now is worth 30 h, each person of the phase before 10 h."""
        hand = Category(
            "Hand", Decimal(500), Decimal(40), settling_hours=Decimal(10), output={"Work": Decimal(1)}
        )
        plan = Plan(
            phases=(Phase("First"), Phase("Second")),
            categories=(hand,),
            works=(Work("Work", "h", (Decimal(60), Decimal(130))),),
            own={"Hand": (Decimal(2), Decimal(3))},
        )
        report = solve(plan).report(Policy.OWN)
        assert report is not None
        (one,) = report.breaks
        assert (one.phase, one.short) == ("Second", pytest.approx(20))
        assert one.net_worth == pytest.approx({"Hand": 30})
        assert one.net_worth_before == pytest.approx({"Hand": 10})
        assert one.need == pytest.approx(130)

    def test_a_rule_keeps_its_own_coefficients(self) -> None:
        driver = Category("Driver", Decimal(100), Decimal(40))
        rule = Presence("Licences", {"Driver": Decimal("0.5")}, Sense.AT_LEAST, Decimal("1.7"))
        report = solve(Plan(categories=(driver,), rules=(rule,))).report(Policy.DOWN)
        assert report is not None
        (one,) = report.breaks
        assert (one.lines, one.kind, one.unit) == (("Licences",), LineKind.PRESENCE, "people")
        assert (one.short, one.need) == pytest.approx((0.2, 1.7))
        assert one.net_worth == pytest.approx({"Driver": 0.5})
        assert one.moves == pytest.approx({"Driver": -0.2})


def _by_lead(hours: str) -> Supervision:
    return Supervision(Decimal(hours), ("Lead",))
