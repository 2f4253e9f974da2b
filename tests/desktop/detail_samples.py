"""Answers to long questions about the hillside plan of `samples`, made by hand."""

from __future__ import annotations

from itertools import pairwise

from solver.answer import (
    CategorySaving,
    FloorPoint,
    LineKind,
    LineRoom,
    NearBest,
    NearCrew,
    PayRange,
    Room,
    RoundedPoint,
    Rung,
    Step,
    Steps,
    WholePeopleDetail,
)
from tests.desktop.samples import crew

PHASE = "Whole job"


def cost_detail() -> WholePeopleDetail:
    return WholePeopleDetail(
        floor=131245.5,
        exact=133690,
        absolute=2444.5,
        percent=1.83,
        by_category=(
            CategorySaving("Lead hand", 1310, 690),
            CategorySaving("Contract hand", 420, 180),
            CategorySaving("Learner", 0, 0),
            CategorySaving("Fencing gang", 980, 980),
            CategorySaving("First-aider", 0, 0),
        ),
        ladder=(
            Rung("floor", 131245.5, ()),
            Rung("exact", 133690, ()),
            Rung("best corner", None, ("Planting",)),
            Rung("patched", 136120, ()),
            Rung("up", 141460, ()),
        ),
    )


def room_detail() -> Room:
    supervision = "Supervision by Lead hand"
    return Room(
        lines=(
            LineRoom(
                "Planting",
                LineKind.WORK,
                PHASE,
                "trees",
                118,
                None,
                None,
                None,
                2.31,
                49800,
                53950,
                "Planting: no loosening makes a cheaper whole crew possible.",
            ),
            LineRoom(
                supervision,
                LineKind.SUPERVISION,
                PHASE,
                "h",
                0,
                12,
                1980,
                crew(2, 9, 6, 8, 0.5),
                0,
                None,
                None,
                "12 more supervision hours a week would let you drop to 2 Lead hand and save EUR 1,980.",
            ),
            LineRoom(
                "First aid",
                LineKind.PRESENCE,
                PHASE,
                "people",
                0,
                0.5,
                255,
                crew(3, 9, 6, 8, 0),
                510,
                0,
                1.5,
                "Doing without 0.5 people of first aid would save EUR 255.",
            ),
        ),
        pay=(PayRange("Lead hand", 912, None), PayRange("Learner", None, 455.5)),
        programs=14,
    )


def near_detail() -> NearBest:
    return NearBest(
        crews=(
            NearCrew(crew(3, 9, 6, 8, 0.5), 133690, 0, 19.5, 0.5, 26.5, "Planting"),
            NearCrew(crew(3, 9, 7, 8, 0.5), 134000, 310, 20.5, 0.5, 27.5, "First aid"),
            NearCrew(crew(4, 9, 4, 8, 0.5), 135210, 1520, 19, 0.5, 25.5, "Supervision by Lead hand"),
        ),
        complete=True,
    )


def steps_detail() -> Steps:
    """A staircase of the planting work: 1 more hand per step, one step sloping with overtime."""
    borders = (26000, 34000, 41000, 48000, 53400, 66000, 80000, 104000)
    made = []
    for at, (low, high) in enumerate(pairwise(borders)):
        cost = 70000.0 + 9000 * at
        slope = 1500.0 if at == 4 else 0.0
        made.append(Step(low, high, crew(2 + at // 3, 4 + at, 6, 8, 0.5), cost + slope, cost))
    floor = tuple(FloorPoint(x, 64000 + 0.76 * (x - 26000)) for x in (26000, 60000, 104000))
    up = tuple(RoundedPoint(p.amount, p.cost + 9000) for p in floor)
    return Steps("Planting", "trees", 52000, tuple(made), floor, up, False)
