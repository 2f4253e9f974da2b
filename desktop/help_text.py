"""The short help: what the words mean, what each page is for, how an answer is proved, and keys."""

from __future__ import annotations

WORDS: tuple[tuple[str, str], ...] = (
    ("Plan", "One document: phases, categories, works, rules."),
    ("Phase", "A stretch of equal periods (8 weeks of planting); a plan has at least one."),
    ("Category", "A kind of worker: a grade, a trade, a contract type."),
    ("On the books", "People of a category who are there before the first phase."),
    ("Work", "Something to be delivered, in a unit, a known amount per phase."),
    ("Output", "Units of a work that one person of a category delivers per attended hour."),
    ("Attended hours", "Paid hours \u00d7 (1 \u2212 absence)."),
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
    (
        "Paper cost",
        "What the head counts of a crew cost that is not workable; never to be compared with a crew that is.",
    ),
    ("Margin", "Room left on a line (0 or more) or what it is short by (below 0), in the line's own unit."),
    ("Broken, workable", "A line with a negative margin is broken; a crew with no broken line is workable."),
    ("Whole-people cost", "Exact cost less floor: the integrality gap, in money and in % of the exact cost."),
    (
        "Net worth",
        "What one more person of a category adds to a line that is short: attended hours at the best price, "
        "less the supervision that person draws.",
    ),
)

# title of a page: what it is for
PAGES: tuple[tuple[str, str], ...] = (
    ("Plan", "What is asked: phases, categories, works and rules. Every edit is answered by itself."),
    (
        "To mend",
        "There only while something keeps the plan from having a crew: entries that make no plan, or "
        "lines that cannot hold together, each with how far it alone would have to give way. The button "
        "\u201cDo this\u201d carries a repair out.",
    ),
    ("Crew", "Who, and how many: the exact crew beside the fractional and the rounded ones, and your own."),
    ("Rounding", "Which lines each rounding breaks, by how much, and which categories the miss comes from."),
    (
        "Whole people",
        "What it costs that people are whole, and what one shared or part-time post would save.",
    ),
    (
        "Room",
        "How far each line can tighten, and the least loosening that makes a cheaper whole crew possible.",
    ),
    ("Near best", "All other whole crews within so many per cent of the cheapest, cheapest first."),
    (
        "Workload",
        "The cheapest crew for more or less of one work, or of all: each step is a crew and the workloads "
        "it is the cheapest for. Type a workload to see what it takes.",
    ),
    (
        "Crew map",
        "Every whole crew of two categories, all others as in the exact crew: which are workable, what "
        "they cost, and where the fractional, rounded and exact crews lie.",
    ),
    (
        "Attendance",
        "On how many days enough people are there when each may be away, who is missed, and the cheapest "
        "crew for a wanted chance.",
    ),
    (
        "Variants",
        "Several plans side by side, each a file of its own. What differs from the plan in the window is "
        "bold.",
    ),
    ("The page", "The recommendation to be signed, as it is printed."),
)

PROOF: tuple[tuple[str, str], ...] = (
    ("Own search", "Every crew that could be cheaper was ruled out, by branch and bound with safe bounds."),
    (
        "Two engines",
        "Two independent solvers, CBC and HiGHS, each proved its crew, and they agree to the cent.",
    ),
    ("One engine", "One of the two solvers proved the crew; the other had no time to confirm it."),
    (
        "Best found",
        "The time was up, or you stopped, and no cheaper crew is known; the headline says how much above "
        "the floor it costs at most.",
    ),
    (
        "Checked again",
        "Whatever proved it, every line is checked again in exact arithmetic on the numbers as typed. "
        "Rules and limits hold exactly; hours lines hold within one second of work.",
    ),
    ("Stop here", "Ends the search and keeps the best crew found so far."),
    ("Look further", "Goes on from the best crew found, for twice as long."),
    (
        "Time and tolerance",
        "How long to look at most, and how close to the cheapest is good enough. With a tolerance of 0 % the "
        "search goes on until the crew is proved cheapest or the time is up.",
    ),
)

# keys of parts of the window; those of the menus are read off the menus
KEYS: tuple[tuple[str, str], ...] = (
    ("Return, F2", "Edit the cell or the rule; Return again goes to the cell below, Tab to the one beside"),
    ("Escape", "Leave a cell as it was; drop an entry that was refused"),
    ("Typing into the last line", "Adds a category, work or phase"),
    ("Space", "Tick a name in a list; on the crew map, take the crew under the cursor as own"),
    ("Typing into a list of names", "Goes to the name; a comma or Return ticks it"),
    ("Arrow keys", "In the crew map, the stairs of the workload and the attendance curve: move the cursor"),
    ("Ctrl+C", "Copy a table's cells, or a picture as an image"),
    ("Ctrl+Shift+C", "Copy what is behind a picture, as a table"),
    ("Return", "On a picture: show the table behind it"),
)
