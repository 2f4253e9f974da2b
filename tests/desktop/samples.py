"""Plans and answers made by hand, for pictures and pages that need no solver.

The breaks are computed from head counts and net worths, so the exact split of a miss holds in them; the
other numbers are invented.
"""

from __future__ import annotations

from decimal import Decimal

from solver.answer import (
    Answer,
    Break,
    Conflict,
    Conflicting,
    CrewReport,
    ExactCrew,
    LineKind,
    LineMargin,
    Policy,
    Proof,
    State,
    WholePeopleCost,
)
from solver.plan import Category, Phase, Plan, Presence, Ratio, Sense, Supervision, Work

D = Decimal
KINDS = {
    "Planting": LineKind.WORK,
    "Fencing": LineKind.WORK,
    "Packing": LineKind.WORK,
    "Carrying": LineKind.WORK,
    "Supervision by Lead hand": LineKind.SUPERVISION,
    "Learners per lead": LineKind.RATIO,
    "First aid": LineKind.PRESENCE,
    "Two conservators": LineKind.PRESENCE,
}


def hillside_plan() -> Plan:
    return Plan(
        phases=(Phase("Whole job", D(8)),),
        categories=(
            Category("Lead hand", D(980), D(38), on_books=D(2), output={"Planting": D("21.5")}),
            Category("Contract hand", D(720), D(40), output={"Planting": D(34)}, join_cost=D(150)),
            Category(
                "Learner",
                D(430),
                D(36),
                on_books=D(4),
                supervision=Supervision(D(6), ("Lead hand",)),
                output={"Planting": D(19)},
            ),
            Category("Fencing gang", D(690), D(38), lot=D(4), output={"Fencing": D(12)}),
            Category("First-aider", D(510), D(20), lot=D("0.5"), on_books=D(1)),
        ),
        works=(Work("Planting", "trees", (D(52000),)), Work("Fencing", "m", (D(3100),))),
        rules=(
            Ratio("Learners per lead", ("Learner",), ("Lead hand",), D(3)),
            Presence("First aid", {"First-aider": D(1)}, Sense.AT_LEAST, D("0.5")),
        ),
        title="Hillside after the storm",
        site="Upper slope",
    )


HILLSIDE_FRACTIONAL = {
    "Lead hand": (2.2353,),
    "Contract hand": (9.41,),
    "Learner": (6.7,),
    "Fencing gang": (6.8,),
    "First-aider": (0.5,),
}


def crew(*counts: float) -> dict[str, tuple[float, ...]]:
    return {name: (n,) for name, n in zip(HILLSIDE_FRACTIONAL, counts, strict=True)}


def margins(units: dict[str, str], values: dict[str, float], phase: str) -> tuple[LineMargin, ...]:
    return tuple(LineMargin(line, KINDS[line], phase, value, units[line]) for line, value in values.items())


def miss(
    lines: tuple[str, ...],
    unit: str,
    worth: dict[str, float],
    rounded: dict[str, tuple[float, ...]],
    fractional: dict[str, tuple[float, ...]],
    need: float,
    phase: str = "Whole job",
    at: int = 0,
    given_up: dict[str, float] | None = None,
) -> Break:
    """A break whose split of the miss holds by construction."""
    moves = {c: a * (rounded[c][at] - fractional[c][at]) for c, a in worth.items()}
    start = sum(a * fractional[c][at] for c, a in worth.items()) - need
    given = given_up or {}
    short = -(start + sum(moves.values()) + sum(given.values()))
    return Break(lines, KINDS[lines[0]], phase, unit, short, worth, need, start, moves, given, {})


HILL_UNITS = {
    "Planting": "trees",
    "Fencing": "m",
    "Supervision by Lead hand": "h",
    "Learners per lead": "people",
    "First aid": "people",
}
PLANTING_WORTH = {"Lead hand": 776.0, "Contract hand": 1292.0, "Learner": 555.0}


def hill_report(
    policy: Policy, counts: dict[str, tuple[float, ...]], values: tuple[float, ...], cost: float, *, broken=()
) -> CrewReport:
    people = sum(n[0] for n in counts.values())
    workable = not broken
    lines = margins(HILL_UNITS, dict(zip(HILL_UNITS, values, strict=True)), "Whole job")
    return CrewReport(
        policy=policy,
        crew=counts,
        workable=workable,
        cost=cost if workable else None,
        paper_cost=cost,
        joiners=max(0.0, people - 7),
        leavers=0,
        people=people,
        lines=lines,
        breaks=tuple(broken),
        overtime={"Contract hand": (12.0,)} if workable else {},
        bought_in={},
        why_none="",
    )


def none_report(policy: Policy, why: str) -> CrewReport:
    return CrewReport(policy, None, False, None, None, 0, 0, 0, (), (), {}, {}, why)


def hillside_answer(own: dict[str, tuple[float, ...]] | None = None) -> Answer:
    exact = crew(3, 9, 6, 8, 0.5)
    down, nearest, up = crew(2, 9, 6, 4, 0.5), crew(2, 9, 7, 8, 0.5), crew(3, 10, 7, 8, 0.5)
    need = sum(a * HILLSIDE_FRACTIONAL[c][0] for c, a in PLANTING_WORTH.items())
    fencing = {"Fencing gang": 456.0}
    ratio = {"Lead hand": 3.0, "Learner": -1.0}

    def short_planting(n: dict[str, tuple[float, ...]]) -> Break:
        return miss(("Planting",), "trees", PLANTING_WORTH, n, HILLSIDE_FRACTIONAL, need)

    def short_ratio(n: dict[str, tuple[float, ...]]) -> Break:
        return miss(("Learners per lead",), "people", ratio, n, HILLSIDE_FRACTIONAL, 0.0)

    short_fencing = miss(("Fencing",), "m", fencing, down, HILLSIDE_FRACTIONAL, 3100.8)
    planting_down, planting_near = short_planting(down), short_planting(nearest)
    crews = [
        hill_report(
            Policy.DOWN,
            down,
            (-planting_down.short, -short_fencing.short, 4, 0, 0),
            118240,
            broken=(planting_down, short_fencing),
        ),
        hill_report(
            Policy.NEAREST,
            nearest,
            (-planting_near.short, 548, -2.25, -1, 0),
            127900,
            broken=(
                planting_near,
                miss(
                    ("Supervision by Lead hand",),
                    "h",
                    {"Lead hand": 36.1, "Learner": -6.0},
                    nearest,
                    HILLSIDE_FRACTIONAL,
                    32.45,
                ),
                short_ratio(nearest),
            ),
        ),
        hill_report(Policy.UP, up, (1410, 548, 66, 2, 0), 141460),
        hill_report(
            Policy.LARGEST_REMAINDER,
            nearest,
            (-planting_near.short, 548, -2.25, -1, 0),
            127900,
            broken=(planting_near, short_ratio(nearest)),
        ),
        none_report(Policy.BEST_CORNER, "No choice of down or up is workable: Planting stays short."),
        hill_report(Policy.PATCHED, crew(3, 9, 7, 8, 0.5), (118, 548, 66, 2, 0), 136120),
        hill_report(Policy.EXACT, exact, (0, 548, 72.3, 3, 0), 133690),
    ]
    if own is not None:
        crews.append(hill_report(Policy.OWN, own, (12, 548, 72.3, 3, 0), 134500))
    return Answer(
        state=State.PROVED,
        proof=Proof.OWN_SEARCH,
        floor=131245.5,
        fractional=HILLSIDE_FRACTIONAL,
        exact=ExactCrew(exact, 133690, 19.5, 0, {"Contract hand": (12.0,)}, {}),
        bound=133690,
        whole_people_cost=WholePeopleCost(2444.5, 1.83),
        crews=tuple(crews),
        conflict=None,
        seconds=0.012,
    )


MUSEUM_PHASES = ("Packing up", "The move", "Unpacking")


def museum_plan() -> Plan:
    return Plan(
        phases=(Phase("Packing up", D(4)), Phase("The move", D(2)), Phase("Unpacking", D(6))),
        categories=(
            Category("Conservator", D(1250), D(36), on_books=D(2), output={"Packing": D("1.4")}),
            Category("Packer", D(760), D(38), join_cost=D(300), output={"Packing": D(3)}),
            Category("Porter", D(640), D(40), leave_cost=D(120), output={"Carrying": D(9)}),
        ),
        works=(
            Work("Packing", "crates", (D(2000), D(300), D(1800))),
            Work("Carrying", "crates", (D(200), D(4000), D(900))),
        ),
        rules=(Presence("Two conservators", {"Conservator": D(1)}, Sense.AT_LEAST, D(2)),),
        title="The museum store moves",
    )


MUSEUM_FRACTIONAL = {"Conservator": (2.0, 2.0, 2.0), "Packer": (3.31, 0.6, 2.42), "Porter": (0.4, 4.83, 1.6)}
MUSEUM_UNITS = {"Packing": "crates", "Carrying": "crates", "Two conservators": "people"}


def museum_report(
    policy: Policy, counts: dict[str, tuple[float, ...]], cost: float, joiners: float, leavers: float
) -> CrewReport:
    lines: list[LineMargin] = []
    breaks: list[Break] = []
    for at, phase in enumerate(MUSEUM_PHASES):
        values = {"Two conservators": counts["Conservator"][at] - 2}
        for work, category, worth in (("Packing", "Packer", 114.0), ("Carrying", "Porter", 360.0)):
            need = worth * MUSEUM_FRACTIONAL[category][at]
            values[work] = worth * counts[category][at] - need
            if values[work] < 0:
                breaks.append(
                    miss((work,), "crates", {category: worth}, counts, MUSEUM_FRACTIONAL, need, phase, at)
                )
        lines += margins(MUSEUM_UNITS, values, phase)
    workable = not breaks
    return CrewReport(
        policy=policy,
        crew=counts,
        workable=workable,
        cost=cost if workable else None,
        paper_cost=cost,
        joiners=joiners,
        leavers=leavers,
        people=sum(max(n) for n in counts.values()),
        lines=tuple(lines),
        breaks=tuple(breaks),
        overtime={},
        bought_in={"Carrying": (0.0, 120.0, 0.0)} if workable else {},
        why_none="",
    )


def museum_answer() -> Answer:
    exact = {"Conservator": (2.0, 2.0, 2.0), "Packer": (4.0, 1.0, 3.0), "Porter": (1.0, 5.0, 2.0)}
    down = {"Conservator": (2.0, 2.0, 2.0), "Packer": (3.0, 0.0, 2.0), "Porter": (0.0, 4.0, 1.0)}
    nearest = {"Conservator": (2.0, 2.0, 2.0), "Packer": (3.0, 1.0, 2.0), "Porter": (0.0, 5.0, 2.0)}
    crews = (
        museum_report(Policy.DOWN, down, 59120, 7, 6),
        museum_report(Policy.NEAREST, nearest, 64200, 9, 5),
        museum_report(Policy.UP, exact, 70250, 11, 6),
        museum_report(Policy.LARGEST_REMAINDER, nearest, 64200, 9, 5),
        museum_report(Policy.BEST_CORNER, exact, 70250, 11, 6),
        museum_report(Policy.PATCHED, exact, 70250, 11, 6),
        museum_report(Policy.EXACT, exact, 70250, 11, 6),
    )
    return Answer(
        state=State.BEST_FOUND,
        proof=None,
        floor=66800,
        fractional=MUSEUM_FRACTIONAL,
        exact=ExactCrew(exact, 70250, 11, 6, {}, {"Carrying": (0.0, 120.0, 0.0)}),
        bound=69900,
        whole_people_cost=WholePeopleCost(3450, 4.91),
        crews=crews,
        conflict=None,
        seconds=1.5,
    )


def impossible_answer() -> Answer:
    line = Conflicting(
        "Planting",
        LineKind.WORK,
        "Whole job",
        "trees",
        4100,
        "Planting needs 52,000 trees",
        "4,100 trees fewer",
    )
    return Answer(
        state=State.IMPOSSIBLE,
        proof=Proof.OWN_SEARCH,
        floor=None,
        fractional=None,
        exact=None,
        bound=None,
        whole_people_cost=None,
        crews=tuple(none_report(p, "No crew can meet this plan.") for p in list(Policy)[:-1]),
        conflict=Conflict((line,), False),
        seconds=0.01,
    )
