"""Published rules of the trade and of apportionment, each with its source and how it is known.

seen: read in a public source. memory: known, not looked up, solved again with SciPy's HiGHS here or
before. computed: by HiGHS or exact arithmetic, not published.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from decimal import Decimal
from fractions import Fraction
from typing import ClassVar

import pytest

from solver.answer import State
from solver.plan import Category, Plan, Ratio, Sense, Share
from solver.rounding import largest_remainder
from solver.solve import solve

ONE_DAY = Decimal(8)  # paid hours; people are counted here, their hours are not used up


class TestApportionment:
    # Census of 1790 and Hamilton's bill for 120 seats (seen)
    PEOPLE: ClassVar = {
        "VA": 630560,
        "MA": 475327,
        "PA": 432879,
        "NC": 353523,
        "NY": 331589,
        "MD": 278514,
        "CT": 236841,
        "SC": 206236,
        "NJ": 179570,
        "NH": 141822,
        "VT": 85533,
        "GA": 70835,
        "KY": 68705,
        "RI": 68446,
        "DE": 55540,
    }
    SEATS: ClassVar = {
        "NJ": 6,
        "VA": 21,
        "CT": 8,
        "SC": 7,
        "DE": 2,
        "VT": 3,
        "MA": 16,
        "NC": 12,
        "NH": 5,
        "PA": 14,
        "GA": 2,
        "KY": 2,
        "RI": 2,
        "MD": 9,
        "NY": 11,
    }

    def apportioned(self, shares: Sequence[int], seats: int) -> tuple[int, ...]:
        """Hamilton's apportionment: the quotas are a crew of fractional people, the seats its head count."""
        quotas = [share * seats / sum(shares) for share in shares]
        return largest_remainder(quotas, [Fraction(1)] * len(quotas), 1)

    def test_hamilton_1790(self) -> None:
        seats = self.apportioned(list(self.PEOPLE.values()), 120)
        assert dict(zip(self.PEOPLE, seats, strict=True)) == self.SEATS

    # COMAP, For All Practical Purposes, 10th ed., ch. 14, Table 14.5: the smallest Alabama paradox (seen)
    @pytest.mark.parametrize(("seats", "shares"), [(10, (4, 4, 2)), (11, (5, 5, 1))])
    def test_alabama_paradox(self, seats: int, shares: tuple[int, ...]) -> None:
        assert self.apportioned((6, 6, 2), seats) == shares


def fixed(name: str, people: int) -> Category:
    """People who are there whatever else is decided, at no cost."""
    return Category(name, Decimal(0), ONE_DAY, at_least=Decimal(people), at_most=Decimal(people))


class TestRulesOfTheTrade:
    def fewest(self, plan: Plan, name: str) -> float:
        answer = solve(plan)
        assert answer.state is State.PROVED
        assert answer.exact is not None
        return answer.exact.crew[name][0]

    # 14 CFR 91.533(a): flight attendants by passengers (seen)
    @pytest.mark.parametrize(
        ("passengers", "attendants"),
        {20: 1, 50: 1, 51: 2, 100: 2, 101: 3, 150: 3, 151: 4, 250: 5}.items(),
    )
    def test_cabin_attendants(self, passengers: int, attendants: int) -> None:
        """Up to 19 passengers need none: a plan says so by leaving the rule out."""
        cabin = Category("Attendant", Decimal(300), ONE_DAY)
        rule = Ratio("Cabin", ("Passenger",), ("Attendant",), Decimal(50))
        plan = Plan(categories=(cabin, fixed("Passenger", passengers)), rules=(rule,))
        assert self.fewest(plan, "Attendant") == attendants
        assert self.fewest(replace(plan, rules=()), "Attendant") == 0

    # Nev. Admin. Code 610.438(1)(a): apprentices by journeymen, 1 + 1 for every 3 more (seen)
    @pytest.mark.parametrize(("journeymen", "apprentices"), {1: 1, 3: 1, 4: 2, 7: 3, 10: 4}.items())
    def test_apprentices(self, journeymen: int, apprentices: int) -> None:
        """3 A <= J + 2 as a share: J + 2 at least three quarters of J + 2 + A."""
        share = Share(
            "Apprentices", ("Journeyman", "Two more"), ("Journeyman", "Two more", "Apprentice"),
            Sense.AT_LEAST, Decimal("0.75"),
        )  # fmt: skip
        for asked, state in ((apprentices, State.PROVED), (apprentices + 1, State.IMPOSSIBLE)):
            people = (fixed("Journeyman", journeymen), fixed("Two more", 2), fixed("Apprentice", asked))
            assert solve(Plan(categories=people, rules=(share,))).state is state

    # England, early years framework (EYFS) 2023: children per adult (seen)
    @pytest.mark.parametrize(
        ("per_adult", "children", "adults"),
        [(3, 9, 3), (3, 10, 4), (5, 11, 3), (8, 24, 3), (8, 25, 4), (13, 26, 2), (13, 27, 3)],
    )
    def test_children_per_adult(self, per_adult: int, children: int, adults: int) -> None:
        adult = Category("Adult", Decimal(120), ONE_DAY)
        rule = Ratio("Children", ("Child",), ("Adult",), Decimal(per_adult))
        plan = Plan(categories=(adult, fixed("Child", children)), rules=(rule,))
        assert self.fewest(plan, "Adult") == adults

    # 45 CFR 1302.21(b): two teachers a class, of at most 8, 17 or 20 children (seen)
    @pytest.mark.parametrize(("size", "per_teacher"), [(8, "4"), (17, "8.5"), (20, "10")])
    def test_two_teachers_a_class(self, size: int, per_teacher: str) -> None:
        pair = Category("Teacher", Decimal(120), ONE_DAY, lot=Decimal(2))
        rule = Ratio("Class", ("Child",), ("Teacher",), Decimal(per_teacher))
        for children, teachers in ((size, 2), (size + 1, 4), (3 * size, 6)):
            plan = Plan(categories=(pair, fixed("Child", children)), rules=(rule,))
            assert self.fewest(plan, "Teacher") == teachers

    # FEMA, NIMS: span of control 3 to 7, best 5 (seen); 36 reports need 6 leads at 7, 8 at 5 (computed)
    @pytest.mark.parametrize(("span", "leads"), [(7, 6), (5, 8), (3, 12)])
    def test_span_of_control(self, span: int, leads: int) -> None:
        lead = Category("Lead", Decimal(200), ONE_DAY)
        rule = Ratio("Span", ("Report",), ("Lead",), Decimal(span))
        plan = Plan(categories=(lead, fixed("Report", 36)), rules=(rule,))
        assert self.fewest(plan, "Lead") == leads
