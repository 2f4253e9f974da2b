"""The short help: what the words mean."""

from __future__ import annotations

WORDS: tuple[tuple[str, str], ...] = (
    ("Plan", "One document: phases, categories, works, rules."),
    ("Phase", "A stretch of equal periods (8 weeks of planting); a plan has at least one."),
    ("Category", "A kind of worker: a grade, a trade, a contract type."),
    ("On the books", "People of a category who are there before the first phase."),
    ("Work", "Something to be delivered, in a unit, a known amount per phase."),
    ("Output", "Units of a work that one person of a category delivers per attended hour."),
    ("Attended hours", "Paid hours x (1 - absence)."),
    (
        "Supervision",
        "Hours per period that one person of a category takes from named supervising categories.",
    ),
    ("Rule", "A limit on head counts or money: presence, ratio, share, budget."),
    ("Lot", "People of a category come in whole multiples of it: 4 = gangs of four, 0.5 = half posts."),
    ("Line", "One condition in one phase: a work, a supervision group, a rule, a bound."),
    ("Crew", "A head count for every category in every phase."),
    (
        "Fractional crew",
        "The optimum of the linear relaxation, as if people could be divided. Its cost is the floor: no crew "
        "can cost less.",
    ),
    ("Exact crew", "The optimum over whole lots of people, proved."),
    (
        "Rounded crew",
        "The fractional crew after a rounding policy: down, nearest, up, largest remainder, best corner.",
    ),
    ("Patched crew", "A rounded crew made workable by the cheapest additions of people."),
    ("Own crew", "Head counts you type yourself, on the Crew page; appraised like every other crew."),
    ("Margin", "Room left on a line, or what it is short by, in the line's own unit."),
    ("Broken, workable", "A line with a negative margin is broken; a crew with no broken line is workable."),
    ("Whole-people cost", "Exact cost less floor: the integrality gap, in money and in % of the exact cost."),
    (
        "Net worth",
        "What one more person of a category adds to a line that is short: attended hours at the best price, "
        "less the supervision that person draws.",
    ),
)

KEYS: tuple[tuple[str, str], ...] = (
    ("Return, F2", "Edit the cell or the rule; Return again goes to the cell below, Tab to the one beside"),
    ("Escape", "Leave a cell as it was; drop an entry that was refused"),
    ("Typing into the last line", "Adds a category, work or phase"),
    ("Space", "Tick a name in a list"),
    ("Ctrl+.", "Stop looking for a cheaper crew and keep the best one found"),
    ("Ctrl+Shift+L", "Look further, from the best crew found"),
    ("F6", "From one part of the page to the next"),
)
