"""The decision in one sentence, what follows from it in money, and the banner over it."""

from __future__ import annotations

from decimal import Decimal

from desktop.page.chosen import ZERO, Chosen, moves, people_per_phase
from desktop.page.recommendation import Banner, Words
from desktop.page.speech import Speech, count_of
from desktop.page.text import Run, name
from solver.answer import Answer, State
from solver.phrases import listed

_LISTS = (6, 4, 3)  # most categories named in the decision, fullest wording first
_PHASES_NAMED = 4
Counted = tuple[Decimal, str]


def decisions(speech: Speech, chosen: Chosen) -> tuple[Words, ...]:
    """The decision, in fewer and fewer words."""
    moved = _moves_words(speech, chosen)
    if len(speech.plan.phases) == 1:
        crew = [(chosen.heads(c.name)[0], c.name) for c in speech.plan.categories]
        return tuple((*words, *moved) for words in _crew_wordings(speech, crew))
    return tuple((*words, *moved) for words in _phase_wordings(speech, chosen))


def crew_words(speech: Speech, crew: list[Counted], most: int) -> str:
    """9 × Lead hand, 14 × Planter and 31 people of 7 more categories."""
    named, people, others = _named(crew, most)
    parts = [f"{speech.people(n)}\u00a0×\u00a0{name(who, 32)}" for n, who in named]
    return listed(parts + _rest(speech, people, others)) or "nobody"


def _named(crew: list[Counted], most: int) -> tuple[list[Counted], Decimal, int]:
    """The `most` largest categories in plan order; people and number of the others."""
    there = [(n, who) for n, who in crew if n]
    if len(there) > most:
        kept = sorted(there, key=lambda part: -part[0])[: most - 1]
        named = [part for part in there if part in kept][: most - 1]
    else:
        named = there
    rest = [n for n, who in there if (n, who) not in named]
    return named, sum(rest, ZERO), len(rest)


def _rest(speech: Speech, people: Decimal, others: int) -> list[str]:
    if not others:
        return []
    return [f"{speech.people(people)} of {count_of(others, 'more category', 'more categories')}"]


def _crew_wordings(speech: Speech, crew: list[Counted]) -> list[Words]:
    if not any(n for n, _ in crew):
        return [(Run("Have nobody"),)]
    made = [_crew_runs(speech, crew, most) for most in _LISTS]
    total = sum((n for n, _ in crew), ZERO)
    there = sum(1 for n, _ in crew if n)
    people = Run(f"{speech.people(total)} people", True, "exact")
    return [*made, (Run("Have "), people, Run(f" of {count_of(there, 'category', 'categories')}"))]


def _crew_runs(speech: Speech, crew: list[Counted], most: int) -> Words:
    named, people, others = _named(crew, most)
    pieces = [(f"{speech.people(n)}", f"\u00a0×\u00a0{name(who, 32)}") for n, who in named]
    if others:
        more = count_of(others, "more category", "more categories")
        pieces.append((speech.people(people), f" people of {more}"))
    runs = [Run("Have ")]
    for at, (count, who) in enumerate(pieces):
        joint = "" if at == 0 else (" and " if at == len(pieces) - 1 else ", ")
        runs += [Run(joint), Run(count, True, "exact"), Run(who)]
    return tuple(runs)


def _phase_wordings(speech: Speech, chosen: Chosen) -> list[Words]:
    totals = people_per_phase(speech.plan, chosen)
    phases = [name(p.name, 24) for p in speech.plan.phases]
    peak, low = max(totals), min(totals)
    span = speech.people(peak) if peak == low else f"{speech.people(low)} to {speech.people(peak)}"
    most = "" if peak == low else f", most in {phases[totals.index(peak)]}"
    short: Words = (
        Run("Have "),
        Run(f"{span} people", True, "exact"),
        Run(f" over {len(phases)} phases{most}"),
    )
    return [_each_phase(speech, totals, phases), short] if len(phases) <= _PHASES_NAMED else [short]


def _each_phase(speech: Speech, totals: tuple[Decimal, ...], phases: list[str]) -> Words:
    runs = [Run("Have ")]
    for at, (people, phase) in enumerate(zip(totals, phases, strict=True)):
        joint = "" if at == 0 else (" and " if at == len(phases) - 1 else ", ")
        unit = " people" if at == 0 else ""
        runs += [Run(joint), Run(f"{speech.people(people)}{unit}", True, "exact"), Run(f" in {phase}")]
    return tuple(runs)


def _moves_words(speech: Speech, chosen: Chosen) -> Words:
    every = [moves(chosen.heads(c.name), c.on_books) for c in speech.plan.categories]
    joined = sum((sum(joiners, ZERO) for joiners, _ in every), ZERO)
    left = sum((sum(leavers, ZERO) for _, leavers in every), ZERO)
    parts = []
    if joined:
        parts.append(f"take on {speech.people(joined)}")
    if left:
        parts.append(f"let {speech.people(left)} go")
    return (Run(f": {listed(parts)}." if parts else ": nobody joins or leaves."),)


def consequence(speech: Speech, answer: Answer, chosen: Chosen, *, own: bool) -> str:
    """What the decision costs, and how sure that is."""
    if not chosen.workable or chosen.cost is None:
        return f"On paper it costs {speech.money(chosen.paper_cost or 0)}, but it cannot do the job."
    costs = f"It costs {speech.money(chosen.cost)} for {_whole_job(speech)}."
    if own:
        return costs  # the banner says what it costs more
    if answer.state is State.PROVED:
        return f"{costs} Proved: no workable crew costs less."
    return (
        costs
        if answer.bound is None
        else f"{costs} No whole crew costs less than {speech.money(answer.bound)}."
    )


def _whole_job(speech: Speech) -> str:
    length = sum((p.periods for p in speech.plan.phases), ZERO)
    if len(speech.plan.phases) == 1:
        return f"the whole job of {speech.periods(length)}"
    return f"the whole job of {speech.periods(length)} in {len(speech.plan.phases)} phases"


def own_extra(speech: Speech, answer: Answer, chosen: Chosen) -> str:
    """What the planner's own crew costs more than the cheapest known one."""
    if answer.exact is None or chosen.cost is None:
        return ""
    known = "the cheapest whole crew" if answer.state is State.PROVED else "the best crew found"
    extra = chosen.cost - answer.exact.cost
    if abs(extra) < 0.005:
        return f"That is what {known} costs."
    word = "more" if extra > 0 else "less"
    share = f" ({speech.percent(100 * abs(extra) / answer.exact.cost)})" if answer.exact.cost else ""
    return f"That is {speech.money(abs(extra))}{share} {word} than {known}."


def _open_gap(speech: Speech, answer: Answer, cost: float) -> str:
    if answer.bound is None:
        return "This crew keeps every line; how much cheaper a crew could be is not known."
    gap = max(0.0, cost - answer.bound)
    share = f" ({speech.percent(100 * gap / cost)})" if cost else ""
    return f"This crew keeps every line, but up to {speech.money(gap)}{share} could still be saved."


def banner(speech: Speech, answer: Answer, chosen: Chosen | None, *, own: bool) -> Banner | None:
    """What must not be missed, or None for a proved exact crew."""
    if own and chosen is not None:
        return _own_banner(speech, answer, chosen)
    if answer.state is State.IMPOSSIBLE:
        return Banner("No workable crew exists", _impossible(speech, answer))
    if answer.exact is None:
        says = "No crew that keeps every line was found in the time given; it is not proved that none exists."
        return Banner("No crew to recommend yet", says)
    if answer.state is State.BEST_FOUND:
        return Banner("Not proved cheapest", _open_gap(speech, answer, answer.exact.cost))
    return None


def _impossible(speech: Speech, answer: Answer) -> str:
    if answer.conflict is not None and answer.conflict.whole_people:
        price = f", at {speech.money(answer.floor)}" if answer.floor is not None else ""
        return f"No whole number of people keeps every line of this plan; parts of people would{price}."
    return "No number of people, whole or not, keeps every line of this plan."


def _own_banner(speech: Speech, answer: Answer, chosen: Chosen) -> Banner:
    title = "The planner’s own choice"
    if chosen.workable:
        return Banner(title, f"This crew was chosen by hand. {own_extra(speech, answer, chosen)}".strip())
    broken = [m for m in chosen.lines() if m.margin < 0]
    worst = listed([name(m.line, 32) for m in broken[:3]])
    more = f" and {len(broken) - 3} more" if len(broken) > 3 else ""
    says = f"This crew was chosen by hand and breaks {count_of(len(broken), 'line')}: {worst}{more}."
    return Banner(f"{title}: not workable", says)
