"""What the headline says, as data: a big line, facts, a state with its sign, and what can be done."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum

from desktop import figures, messages
from desktop.answers import Answers, Status
from desktop.document import Document
from desktop.places import TABLES, in_words
from solver.answer import Answer, Crew, Proof, State
from solver.plan import Plan

_CENT = 0.005


class Action(StrEnum):
    """What the headline's button does."""

    NONE = ""
    GO_TO = "go to"
    ASK_AGAIN = "ask again"
    MEND = "mend"


@dataclass(frozen=True)
class Headline:
    """`crew` are the parts of the big line, dropped from the end where there is no room for all; `loud`
    False greys them. `sign` stands before `state`; `tone` is a colour of the theme. `note` warns."""

    crew: tuple[str, ...]
    facts: str
    state: str
    sign: str
    tone: str = "ink"
    loud: bool = True
    note: str = ""
    action: Action = Action.NONE
    place: str = ""
    tooltip: str = ""


def headline(document: Document, answers: Answers) -> Headline:
    """What is true now."""
    status = answers.status
    if status is Status.EMPTY:
        return _empty(document.plan)
    if status is Status.PROBLEMS:
        return _problems(document.plan, answers)
    if status is Status.FAILED:
        return Headline(
            (messages.NO_ANSWER,), answers.failure, messages.FAILED, "!", "short", action=Action.ASK_AGAIN
        )
    return _answered(document, answers)


def _empty(plan: Plan) -> Headline:
    next_step = messages.EMPTY_NOTHING_ASKED if plan.categories else messages.EMPTY_NOBODY
    return Headline((messages.EMPTY_PLAN,), next_step, messages.EMPTY_STATE, "○", "faint", loud=False)


def _problems(plan: Plan, answers: Answers) -> Headline:
    first, count = answers.problems[0], len(answers.problems)
    said = messages.ONE_PROBLEM if count == 1 else messages.PROBLEMS.format(count=count)
    return Headline(
        (said,),
        f"{in_words(plan, first.place)}: {first.says}",
        messages.TO_BE_MENDED,
        "!",
        "short",
        action=Action.GO_TO,
        place=first.place,
    )


def _answered(document: Document, answers: Answers) -> Headline:
    """Everything that has, had or soon has an answer."""
    note = _refused(len(document.refused))
    place = _first_refused(document)
    action = Action.GO_TO if place else Action.NONE
    answer, plan = answers.answer, answers.plan
    if answer is None or plan is None:
        return Headline(
            (messages.FIRST_ANSWER,), _floor_ahead(document.plan, answers), *_waiting(answers), loud=False
        )
    crew, facts = _crew_and_facts(plan, answer)
    if answers.stale:
        return Headline(crew, facts, *_waiting(answers), "faint", False, note, action, place)
    if answer.state is State.IMPOSSIBLE and not place:
        action = Action.MEND
    state, sign, tone = _state(plan, answer, answers.status)
    return Headline(crew, facts, state, sign, tone, True, note, action, place, _tooltip(plan, answer))


def _waiting(answers: Answers) -> tuple[str, str]:
    """State and sign while something is worked on."""
    if answers.status is Status.RESTARTING:
        return messages.SOLVER_RESTARTING, "↻"
    return (messages.OUT_OF_DATE if answers.answer is not None else messages.IN_WORK), "…"


def _floor_ahead(plan: Plan, answers: Answers) -> str:
    ahead = answers.fractional
    return messages.FLOOR.format(money=figures.money(ahead.floor, plan.currency)) if ahead else ""


def _crew_and_facts(plan: Plan, answer: Answer) -> tuple[tuple[str, ...], str]:
    if answer.exact is not None:
        return crew_parts(answer.exact.crew), _facts(plan, answer)
    if answer.state is State.IMPOSSIBLE:
        whole = answer.conflict is not None and answer.conflict.whole_people
        said = messages.IMPOSSIBLE_WHOLE if whole else messages.IMPOSSIBLE
        lines = answer.conflict.lines if answer.conflict else ()
        return (said,), messages.CONFLICT.format(lines=messages.listed(tuple(c.says for c in lines), 3))
    return (messages.NOTHING_FOUND,), _floor(plan, answer)


def crew_parts(crew: Crew) -> tuple[str, ...]:
    """`3 Lead hand`, or `2 to 5 Lead hand` where phases differ; nobody needed is a sentence."""
    parts = [f"{_counts(counts)} {name}" for name, counts in crew.items() if any(counts)]
    return tuple(parts) or (messages.NOBODY_NEEDED,)


def _counts(counts: Sequence[float]) -> str:
    low, high = min(counts), max(counts)
    if low == high:
        return figures.people(high)
    return messages.RANGE.format(low=figures.people(low) if low else "0", high=figures.people(high))


def _facts(plan: Plan, answer: Answer) -> str:
    assert answer.exact is not None
    said = [
        messages.COSTS.format(money=figures.money(answer.exact.cost, plan.currency)),
        _floor(plan, answer),
    ]
    extra = answer.whole_people_cost
    if extra is not None and answer.state is State.PROVED:
        money = figures.money(extra.absolute, plan.currency)
        said.append(messages.WHOLE_PEOPLE.format(money=money, percent=figures.percent(extra.percent)))
    said.append(_moves(answer.exact.joiners, answer.exact.leavers))
    return messages.SEPARATOR.join(part.replace(" ", figures.NBSP) for part in said if part)


def _floor(plan: Plan, answer: Answer) -> str:
    if answer.floor is None:
        return ""
    return messages.FLOOR.format(money=figures.money(answer.floor, plan.currency))


def _moves(joiners: float, leavers: float) -> str:
    moves = [(messages.JOIN, joiners), (messages.LEAVE, leavers)]
    return ", ".join(word.format(count=figures.people(n)) for word, n in moves if n)


def _state(plan: Plan, answer: Answer, status: Status) -> tuple[str, str, str]:
    """State, sign and tone of an answer that fits the plan."""
    if answer.state is State.IMPOSSIBLE:
        return messages.IMPOSSIBLE_STATE, "✗", "short"
    if answer.state is State.PROVED:
        once = answer.proof is Proof.ONE_ENGINE
        return messages.PROVED_ONCE if once else messages.PROVED, "✓", "exact"
    if status is Status.RESTARTING:
        return messages.SOLVER_RESTARTING, "↻", "ink"
    return _distance(plan, answer, status is Status.READY), "△", "ink"


def _distance(plan: Plan, answer: Answer, final: bool) -> str:
    """How far from the cheapest a crew that is not proved can be."""
    if answer.exact is None or answer.bound is None:
        return messages.BEST_FOUND_NO_BOUND if final else messages.SO_FAR_NO_BOUND
    gap = answer.exact.cost - answer.bound
    if gap < _CENT:
        return messages.BEST_FOUND_NO_GAP if final else messages.SO_FAR_NO_GAP
    share = figures.percent(100 * gap / answer.exact.cost)
    said = messages.GAP.format(money=figures.money(gap, plan.currency), percent=share)
    return (messages.BEST_FOUND if final else messages.SO_FAR).format(gap=said)


_PROOFS = {
    Proof.OWN_SEARCH: messages.PROOF_OWN,
    Proof.TWO_ENGINES: messages.PROOF_TWO,
    Proof.ONE_ENGINE: messages.PROOF_ONE,
}


def _tooltip(plan: Plan, answer: Answer) -> str:
    if answer.proof is not None:
        return _PROOFS[answer.proof]
    if answer.state is not State.BEST_FOUND or answer.bound is None:
        return ""
    return messages.GAP_TIP.format(bound=figures.money(answer.bound, plan.currency))


def _refused(count: int) -> str:
    if not count:
        return ""
    return messages.REFUSED_ENTRY if count == 1 else messages.REFUSED_ENTRIES.format(count=count)


def _first_refused(document: Document) -> str:
    """The place of the first refused entry, as problems name places."""
    for table, name, key in document.refused:
        rows = [entry.name for entry in getattr(document.plan, table)]
        place = _place_of(document.plan, table, rows.index(name) if name in rows else -1, key)
        if place:
            return place
    return ""


def _place_of(plan: Plan, key: str, row: int, column: str) -> str:
    table = next((t for t in TABLES if t.key == key), None)
    if table is None or row < 0:
        return ""
    return next((c.place(row) for c in table.columns(plan) if c.key == column), "")
