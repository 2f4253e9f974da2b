"""From a plan and its answer to everything the page says."""

from __future__ import annotations

from dataclasses import dataclass, replace

from PySide6.QtCore import QLocale

from desktop.page.assumptions import assumptions
from desktop.page.attendance_line import attendance_line
from desktop.page.chosen import Chosen, exact_choice, own_choice
from desktop.page.crew_table import crew_table
from desktop.page.decision import banner, consequence, crew_words, decisions
from desktop.page.margins import best_loosening, binding_lines
from desktop.page.recommendation import Amount, Labelled, Recommendation, Stamp, Standing, Words
from desktop.page.rounding_reasons import rounding_reasons
from desktop.page.speech import Speech, exact_decimal
from desktop.page.text import ALL_OF_IT, Run, name, plain, sentence
from desktop.pictures.tally_layout import Tally, tally_of
from solver.answer import Answer, Attendance, Conflict, Conflicting, NearBest, NearCrew, Proof, Room, State
from solver.plan import Plan


@dataclass(frozen=True)
class Details:
    """What was worked out beside the answer; None where it was not."""

    room: Room | None = None
    near: NearBest | None = None
    attendance: Attendance | None = None


def page_locale(locale: QLocale | None = None) -> QLocale:
    """The user's locale; English where the system names none ("C" writes 1250000 without a comma)."""
    chosen = locale or QLocale()
    unnamed = chosen.language() == QLocale.Language.C
    return QLocale(QLocale.Language.English, QLocale.Country.UnitedKingdom) if unnamed else chosen


def recommend(
    plan: Plan,
    answer: Answer,
    stamp: Stamp,
    *,
    own: bool = False,
    details: Details | None = None,
    locale: QLocale | None = None,
) -> Recommendation:
    """The page for `answer`; with `own` the planner's own crew is recommended, and marked as that.

    Raises ValueError when the own crew is wanted and the answer has none.
    """
    speech = Speech(plan, page_locale(locale))
    chosen = own_choice(answer) if own else exact_choice(answer)
    if own and chosen is None:
        raise ValueError("the answer has no crew of the planner's own to recommend")
    extra = details or Details()
    return Recommendation(
        standing=_standing(answer),
        title=plain(plan.title) or "Plan without a title",
        site=plain(plan.site),
        banner=banner(speech, answer, chosen, own=own),
        decisions=decisions(speech, chosen) if chosen else (_no_decision(answer),),
        consequence=consequence(speech, answer, chosen, own=own) if chosen else _no_consequence(answer),
        tally=_tally(plan, answer, chosen),
        table=crew_table(plan, chosen) if chosen else None,
        conflict=_conflict(speech, answer.conflict),
        rounding=rounding_reasons(speech, answer) if chosen else (),
        costs=_costs(speech, answer, chosen, own=own),
        method=_method(answer, own=own),
        binding=binding_lines(speech, chosen, extra.room) if chosen else (),
        loosening=best_loosening(extra.room) if chosen and not own else "",
        attendance=attendance_line(speech, extra.attendance, own=own) if chosen else "",
        alternatives=_alternatives(speech, answer, chosen, extra.near),
        assumptions=assumptions(speech),
        prepared_by=plain(plan.prepared_by),
        stamp=stamp,
        proof=_proof(answer),
        currency=name(plan.currency, 12),
        phase_lengths=tuple(speech.periods(p.periods) for p in plan.phases),
        locale=speech.locale,
    )


def _standing(answer: Answer) -> Standing:
    if answer.state is State.IMPOSSIBLE:
        return Standing.IMPOSSIBLE
    if answer.exact is None:
        return Standing.NOTHING_FOUND
    return Standing.PROVED if answer.state is State.PROVED else Standing.BEST_FOUND


def _no_decision(answer: Answer) -> Words:
    if answer.state is State.IMPOSSIBLE:
        return (Run("No crew can meet this plan as it stands.", True, "short"),)
    return (Run("No crew can be recommended yet.", True, "short"),)


def _no_consequence(answer: Answer) -> str:
    if answer.state is not State.IMPOSSIBLE:
        return "Give the program more time, or loosen a line, and print the page again."
    if answer.conflict is None or not answer.conflict.lines:
        return "Which lines cannot hold together was not worked out."
    count = len(answer.conflict.lines)
    if count == 1:
        return "One line cannot be kept by itself. It has to give:"
    return f"These {count} lines cannot all hold together; without any one of them they can. One has to give:"


def _tally(plan: Plan, answer: Answer, chosen: Chosen | None) -> Tally | None:
    if chosen is None:
        return None
    proved = answer.state is not State.BEST_FOUND
    tally = tally_of(plan, answer.fractional, chosen.crew, proved=proved)
    rows = tuple(replace(row, name=name(row.name, ALL_OF_IT)) for row in tally.rows)
    phases = tuple(replace(phase, name=name(phase.name, ALL_OF_IT)) for phase in tally.phases)
    return replace(tally, rows=rows, phases=phases)


_SHARE = "Repair: share people with another site, or have them part time."


def _repair(line: Conflicting) -> str:
    """How this member of the conflict alone could give; whole people themselves may be one."""
    if line.kind is None:
        return _SHARE
    repair = sentence(line.repair).rstrip(".")
    return f"Repair: {repair}." if line.move is not None and repair else "Moving it alone is not enough."


def _conflict(speech: Speech, conflict: Conflict | None) -> tuple[Labelled, ...]:
    if conflict is None:
        return ()
    phased = len(speech.plan.phases) > 1
    made = []
    for line in conflict.lines:
        where = f" in {name(line.phase, 32)}" if line.phase and phased else ""
        says = sentence(line.says)
        made.append(Labelled(f"{says[:1].upper()}{says[1:]}{where}", _repair(line)))
    return tuple(made)


def _costs(speech: Speech, answer: Answer, chosen: Chosen | None, *, own: bool) -> tuple[Amount, ...]:
    made: list[Amount] = []
    if answer.exact is None:
        return ()
    if answer.floor is not None:
        made.append(Amount("Floor (fractional people)", speech.money(answer.floor)))
    proved = answer.state is State.PROVED
    label = "Exact cost (whole people)" if proved else "Cost of the best crew found"
    made.append(Amount(label, speech.money(answer.exact.cost), not own))
    if answer.whole_people_cost is not None:
        gap = answer.whole_people_cost
        share = f" ({speech.percent(gap.percent)})" if gap.percent else ""
        made.append(Amount("Whole-people cost", f"{speech.money(gap.absolute)}{share}"))
    if own and chosen is not None and chosen.cost is not None:
        made.append(Amount("This crew, chosen by hand", speech.money(chosen.cost), True))
    return tuple(made)


_PROOFS = {
    Proof.OWN_SEARCH: "by branch and bound with safe bounds",
    Proof.TWO_ENGINES: "by two engines (CBC and HiGHS) that agree to the cent",
    Proof.ONE_ENGINE: "by one engine (the other had no time to confirm it)",
}


def _method(answer: Answer, *, own: bool) -> str:
    if answer.exact is None:
        return ""
    crew = "the crew is the best integer solution found, not proved"
    if answer.proof is not None:
        crew = f"the exact crew is the integer optimum, proved {_PROOFS[answer.proof]}"
    floor = "The floor is the optimum of the linear relaxation"
    return f"{floor}; {crew}; every line was checked again exactly, hours to one second of work."


def _proof(answer: Answer) -> str:
    if answer.state is State.BEST_FOUND:
        return "best found, not proved"
    word = "proved" if answer.state is State.PROVED else "proved impossible"
    return f"{word} ({answer.proof})" if answer.proof is not None else word


def _alternatives(
    speech: Speech, answer: Answer, chosen: Chosen | None, near: NearBest | None
) -> tuple[Labelled, ...]:
    if near is None or chosen is None:
        return ()
    others = [crew for crew in near.crews if dict(crew.crew) != dict(chosen.crew)]
    return tuple(_alternative(speech, answer, crew) for crew in others[:2])


def _over(speech: Speech, answer: Answer, crew: NearCrew) -> str:
    """What the crew costs beside the exact one."""
    if answer.exact is not None and dict(crew.crew) == dict(answer.exact.crew):
        return f"The exact crew, {speech.money(crew.cost)}"
    return f"{speech.money(crew.over)} more" if crew.over >= 0.005 else "At the same cost"


def _alternative(speech: Speech, answer: Answer, crew: NearCrew) -> Labelled:
    over = _over(speech, answer, crew)
    peaks = [(max(exact_decimal(n) for n in counts), who) for who, counts in crew.crew.items()]
    words = crew_words(speech, peaks, 6)
    at_most = "at most " if len(speech.plan.phases) > 1 else ""
    moved = f"{speech.people(crew.joiners)} join, {speech.people(crew.leavers)} leave"
    tight = f"; tightest line: {name(crew.tightest, 40)}" if crew.tightest else ""
    return Labelled(over, f"{at_most}{words}; {moved}{tight}.")
