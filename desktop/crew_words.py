"""What the crew and rounding pages and their pictures say: words and sentences, no layout.

Sentences take ready-made texts of numbers (`desktop.figures`), never numbers.
"""

from __future__ import annotations

from collections.abc import Sequence

from solver.answer import LineKind, Policy
from solver.phrases import listed as listed

COPY_IMAGE = "Copy image"
COPY_DATA = "Copy data"
SHOW_TABLE = "Show as table"

TALLY = "People tally"
FRACTIONAL = "fractional"
EXACT = "exact"
LEGEND_FRACTIONAL = "fractional crew"
LEGEND_EXACT = "exact crew"
LEGEND_BEST_FOUND = "best crew found"
OWN_HEIGHT = "each category to its own height"
LEGEND_STAYS = "exact crew, on the books"
LEGEND_BEST_FOUND_STAYS = "best crew found, on the books"
LEGEND_JOINS = "joins"
LEGEND_LEAVES = "leaves"
NO_CREW = "no crew"
CREW = "Crew"
CATEGORY = "Category"
PHASE = "Phase"
JOIN = "join"
LEAVE = "leave"


def legend_scale(people: str) -> str:
    """What the largest figure stands for."""
    return f"one figure marked {people} = {people} people"


def joining(people: str) -> str:
    """Beside the figures of a category."""
    return f"{people} join"


def leaving(people: str) -> str:
    """Beside the figures of a category."""
    return f"{people} leave"


def in_lots(lot: str) -> str:
    """Under the name of a category that comes in lots."""
    return f"in lots of {lot}"


def tally_row(name: str, fractional: str, exact: str, moves: str) -> str:
    """One category of the tally, for tooltips and screen readers."""
    return f"{name}: fractional {fractional}, exact {exact}{moves}"


def periods(count: str, period: str) -> str:
    """How long a phase is."""
    return f"{count} {period}" if count == "1" else f"{count} {period}s"


def on_the_books(people: str) -> str:
    """Under the name of a category."""
    return f"{people} on the books"


# why a crew is not workable

WATERFALL = "How the line came to be short"
FRACTIONAL_MARGIN = "Room of the fractional crew"
ROUNDING = "Rounding"


def _effect(gives: bool, amount: str) -> str:
    return f"gives {amount}" if gives else f"takes {amount}"


def move_down(name: str, was: str, now: str, gives: bool, amount: str) -> str:
    """A category that lost part of its people."""
    return f"{was} {name} down to {now} {_effect(gives, amount)}"


def move_up(name: str, was: str, now: str, gives: bool, amount: str) -> str:
    """A category that gained."""
    return f"{was} {name} up to {now} {_effect(gives, amount)}"


def move_to_none(name: str, was: str, gives: bool, amount: str) -> str:
    """A category that lost all its people."""
    return f"{was} {name} down to none {_effect(gives, amount)}"


def move_instead(name: str, was: str, now: str, gives: bool, amount: str) -> str:
    """A category in the planner's own crew, which is not a rounding."""
    return f"{now} {name} instead of {was} {_effect(gives, amount)}"


def move_over_phases(name: str, gives: bool, amount: str) -> str:
    """A category whose counts changed in several phases."""
    return f"{name} {_effect(gives, amount)}"


def others_move(gives: bool, amount: str) -> str:
    """The categories that moved least, together."""
    return f"the others together {_effect(gives, amount).replace('gives', 'give').replace('takes', 'take')}"


def fractional_room(amount: str) -> str:
    """The line under the fractional crew."""
    return f"The fractional crew had {amount} to spare."


def given_up(amount: str, line: str) -> str:
    """Supervision nobody gives frees hours for work."""
    return f"{line}, left undone, frees {amount}."


def left_short(lines: str, short: str, phase: str) -> str:
    """The end of it."""
    where = f" in {phase}" if phase else ""
    return f"That leaves {lines}{where} {short} short."


def short_unit(unit: str) -> str:
    """A unit as it stands behind a number in a sentence."""
    return "h" if unit.startswith("hours") else unit


def counted(amount: str, unit: str) -> str:
    """An amount, with how its hours are counted where that is not plain."""
    how = unit.removeprefix("hours").strip() if unit.startswith("hours") else ""
    return f"{amount} ({how})" if how else amount


def miss_sentence(verb: str, moves: str, between: Sequence[str], end: str) -> str:
    """The whole explanation of one miss."""
    first = f"{verb} {moves}.".strip() if moves else ""
    return " ".join(part for part in (first, *between, end) if part)


BAR = "What"
BY = "by"
AFTER = "margin after it"


def in_unit(title: str, unit: str) -> str:
    """A column title with its unit."""
    return f"{title} ({unit})" if unit else title


def move_title(name: str, was: str, now: str) -> str:
    """Before the bar of a category."""
    return f"{name} {was} \u2192 {now}"


def given_up_title(line: str) -> str:
    """Before the bar of supervision left undone."""
    return f"{line}, left undone"


def end_title(lines: str) -> str:
    """Before the last bar."""
    return f"Margin of {lines}"


# the table of all crews

PEOPLE = "People"
JOINERS = "Joiners"
LEAVERS = "Leavers"
COST = "Cost"
MORE = "More than exact"
OVERTIME = "Overtime (hours)"
BOUGHT_IN = "Bought in"
TIGHTEST = "Tightest line"
VERDICT = "Verdict"
WORKABLE = "workable"
NOT_WORKABLE = "not workable"
A_BOUND = "only a bound"
TIP_PEOPLE = "Head count; over several phases, of the fullest one"
TIP_JOINERS = "People taken on, over all phases"
TIP_LEAVERS = "People let go, over all phases"
TIP_COST = (
    "Pay, joining, leaving and opening costs, overtime and bought-in work; only for crews that are workable"
)
TIP_MORE = "What the crew costs above the exact crew"
TIP_OVERTIME = "Hours of overtime over all phases"
TIP_BOUGHT_IN = "Work bought in over all phases"
TIP_VERDICT = "Whether every line holds, or the lines that are broken"
TIP_FRACTIONAL = "The cheapest crew if people could be divided; no whole crew costs less"
POLICY_TIPS = {
    Policy.DOWN: "Every category of the fractional crew rounded down to a whole lot",
    Policy.NEAREST: "Every category rounded to the nearest whole lot, halves up",
    Policy.UP: "Every category rounded up to a whole lot",
    Policy.LARGEST_REMAINDER: "The head count kept; the largest remainders rounded up, the others down",
    Policy.BEST_CORNER: "The cheapest workable choice of down or up for each category",
    Policy.PATCHED: "Nearest, made workable by the cheapest additions of people",
    Policy.EXACT: "The cheapest workable whole crew",
    Policy.OWN: "Your own crew: type head counts here; the other categories start from the exact crew",
}


BEST_FOUND = "best\nfound"
TIP_BEST_FOUND = "The cheapest workable whole crew found; not proved that there is no cheaper one"


def policy_title(policy: Policy) -> str:
    """A column title: two lines where the name is long."""
    return str(policy).replace(" ", "\n")


def in_phase(name: str, phase: str) -> str:
    """A row of a plan with several phases."""
    return f"{name}, {phase}"


def in_the_phase(what: str, phase: str) -> str:
    """Something that happens in one of several phases."""
    return f"{what} in {phase}"


SAME_PEOPLE = "the same people, at less cost"


def count_tip(name: str, lot: str, phase: str) -> str:
    """What a head-count row means."""
    lots = "" if lot == "1" else f", in lots of {lot}"
    where = f" in {phase}" if phase else ""
    return f"People of {name}{where}{lots}"


def cell_tip(row: str, column: str, text: str) -> str:
    """A cell in words."""
    return f"{row}, {column}: {text}" if text else f"{row}, {column}: empty"


def breaks_lines(lines: Sequence[str]) -> str:
    """Verdict of a crew that is not workable."""
    return "breaks 1 line" if len(lines) == 1 else f"breaks {len(lines)} lines"


def below_nobody(text: str, name: str) -> str:
    """A refused head count."""
    return f"{name}: {text} is less than nobody. Allowed are 0 and more."


def not_in_lots(text: str, name: str, lot: str) -> str:
    """A refused head count."""
    return f"{name}: {text} cannot be had. People of this category come in lots of {lot}."


EDIT_FROM_EXACT = "own crew from the exact one"
EDIT_CLEAR_OWN = "clear the own crew"


def edit_own(name: str) -> str:
    """Undo text."""
    return f"own crew: {name}"


# the crew page

ALL_CREWS = "All crews side by side"
WHAT_BINDS = "What binds: lines with no room"
HOW_IT_IS_RUN = "How it is run"
NOTHING_BINDS = "Whole people leave some room on every line."
FROM_EXACT = "Start own from exact"
TIP_FROM_EXACT = "Copy the exact crew into the own column, to change it there"
CLEAR_OWN = "Clear own"
OWN_HINT = "Type your own crew in the last column."
NOTICE_EMPTY = (
    "Nothing to solve yet. Add categories and works, or rules, on the Plan page; the crew appears by itself."
)
NOTICE_PROBLEMS = "Some entries of the plan must be mended first; the Plan page marks them."
NOTICE_FIRST = "Working out the first answer."
NOTICE_SO_FAR = "The best crew so far; cheaper ones are being looked for."
NOTICE_BEST_FOUND = "The best crew found; it is not proved that there is no cheaper one."
NOTICE_STALE = "Out of date: this belongs to the plan before the last change."


def no_room_saving(line: str, loosen: str, saving: str) -> str:
    """A line that binds, with what loosening it would save."""
    return f"{line}: {loosen} looser would save {saving}"


def and_more_lines(count: int) -> str:
    """The lines that are not listed."""
    return f"and {count} more"


def overtime_of(name: str) -> str:
    """What is told about overtime."""
    return f"Overtime of {name}"


def bought_in_of(work: str) -> str:
    """What is told about bought-in work."""
    return f"{work} bought in"


def titled(title: str, text: str) -> str:
    """A title and its figure."""
    return f"{title}: {text}"


def bulleted(lines: Sequence[str]) -> str:
    """Entries below one another; a single one is a sentence."""
    return "\n".join(lines if len(lines) < 2 else [f"\u2022 {line}" for line in lines])


def conflict(lines: Sequence[str]) -> str:
    """Why no crew can meet the plan."""
    return "\n".join(["These lines cannot hold together:", *(f"\u2022 {line}" for line in lines)])


# the rounding page

MARGINS = "Margins of every line under every crew"
LINES_BROKEN = "Lines broken"
TIP_LINES_BROKEN = "How many lines the crew does not keep"
PHASES_BROKEN = "Phases that break"
TIP_PHASES_BROKEN = "Phases in which at least one line is not kept"
COMING_AND_GOING = "Joiners and leavers"
TIP_COMING_AND_GOING = (
    "People taken on and let go over all phases; rounding each phase alone makes them come and go"
)
MOVING_COST = "Joining and leaving"
TIP_MOVING_COST = "What those joiners and leavers cost"
NONE_BROKEN = "none"
WHOLE_JOB = "over all phases"
NOTHING_BROKEN = "Every crew is workable."
LINE_TIPS = {
    LineKind.WORK: "Room: the most extra work the crew could deliver with every other line kept",
    LineKind.SUPERVISION: "Room: hours of supervision to spare",
    LineKind.PRESENCE: "Room: people above what the rule asks for",
    LineKind.RATIO: "Room: people that could be added before the ratio is reached",
    LineKind.SHARE: "Room: people above what the share asks for",
    LineKind.BUDGET: "Room: money left",
    LineKind.BOUND: "Room: people before the limit of the category is reached",
}


def of_lines(broken: int, count: int) -> str:
    """Verdict of one crew."""
    return f"{broken} of {count}"


def line_short(line: str, policy: str, amount: str) -> str:
    """A broken cell."""
    return f"{line} is {amount} short under {policy}."


def line_holds(line: str, policy: str, room: str) -> str:
    """A cell that is not broken."""
    return f"{line} holds under {policy}, {f'with {room} to spare' if room else 'with no room left'}."


def cell_title(row: str, policy: str) -> str:
    """Over the waterfall."""
    return f"{row}, {policy}"
