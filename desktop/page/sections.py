"""The blocks of the page, each as a piece of a given width, from top to bottom."""

from __future__ import annotations

from decimal import Decimal

from desktop import figures
from desktop.messages import CAUTION
from desktop.page.crew_grid import crew_grid, phase_key, phases_shown
from desktop.page.detail import SMALLEST, Detail
from desktop.page.marks import (
    NOTHING,
    FillMark,
    Mark,
    Piece,
    RuleMark,
    TextMark,
    evenly,
    paragraph,
    stacked,
)
from desktop.page.recommendation import Amount, Labelled, Recommendation
from desktop.page.speech import count_of
from desktop.page.table import table
from desktop.page.text import LEADING, Run, Side, Text, balanced_width, height, natural_width, shortened, text

COLUMN_GAP = 24.0


def heading(words: str, width: float, detail: Detail) -> Piece:
    """A thin rule with the block's name under it."""
    title = text(words, detail.body, bold=True)
    return Piece(
        3.0 + height(title, width),
        (RuleMark(0.0, 0.0, width, 0.5, "faint"), TextMark(0.0, 3.0, width, title)),
    )


def block(words: str, body: Piece, width: float, detail: Detail) -> Piece:
    """A headed block; nothing where its body is empty."""
    return stacked([heading(words, width, detail), body], 2.0) if body.height else NOTHING


def masthead(what: Recommendation, width: float) -> Piece:
    """What kind of paper this is, the day, and the plan's title and site."""
    kind = Text((Run("CREW RECOMMENDATION"),), SMALLEST, "faint", spacing=1.1)
    day = text(what.stamp.day, SMALLEST, role="faint", side=Side.RIGHT)
    site = f"  ·  {what.site}" if what.site else ""
    room = width - 2.0
    title = shortened(text(what.title + site, 11.0, bold=True), room, 2)
    top = Piece(
        SMALLEST * LEADING,
        (TextMark(0.0, 0.0, width * 0.6, kind), TextMark(width * 0.6, 0.0, width * 0.4, day)),
    )
    rule = Piece(1.0, (RuleMark(0.0, 0.0, width, 1.2, "ink"),))
    return stacked([top, paragraph(title, width), rule], 3.0)


def banner(what: Recommendation, width: float) -> Piece:
    """A dark band that nobody can miss."""
    if what.banner is None:
        return NOTHING
    inner = width - 20.0
    title = text(what.banner.title.upper(), 12.0, bold=True, role="paper")
    says = text(what.banner.says, 9.0, role="paper")
    words = stacked([paragraph(title, inner), paragraph(says, inner)], 1.0)
    fill = FillMark(0.0, 0.0, width, words.height + 12.0, "short")
    return Piece(words.height + 12.0, (fill, *words.at(10.0, 5.5)))


def decision(what: Recommendation, width: float, detail: Detail) -> Piece:
    """The largest words of the page, and what they cost."""
    wording = what.decisions[min(detail.wording, len(what.decisions) - 1)]
    says = Text(wording, detail.headline)
    balanced = balanced_width(says, width)
    costs = text(what.consequence, detail.body + 1.0)
    return stacked([paragraph(says, balanced), paragraph(costs, width)], 4.0)


def crew(what: Recommendation, width: float, detail: Detail) -> Piece:
    """The table now -> recommended with its sums, further costs, and what the phases are."""
    if what.table is None:
        return NOTHING
    grid = crew_grid(what, what.table, detail.table, detail.phases)
    pieces = [table(grid, width, detail.body, detail.name_lines)]
    notes = [words for words in (_sums(what), _phases(what, detail)) if words]
    pieces += [paragraph(text(words, SMALLEST, role="faint"), width) for words in notes]
    return stacked(pieces, 3.0)


def _sums(what: Recommendation) -> str:
    """Pay and one-off costs, and what makes them the cost of the crew."""
    assert what.table is not None
    if not what.table.running:
        return ""
    extra = " and ".join(f"{label} {_money(what, money)}" for label, money in what.table.running)
    total = _money(what, what.table.total)
    return f"Beside pay and one-off costs: {extra}; everything together {total}."


def _money(what: Recommendation, money: Decimal) -> str:
    return figures.money(money, what.currency, what.locale)


def _phases(what: Recommendation, detail: Detail) -> str:
    """What the phases are, and how many have no column."""
    if what.table is None or len(what.table.phases) == 1:
        return ""
    shown = phases_shown(what.table, detail.phases)
    if len(shown) < len(what.table.phases):
        rest = (
            f"The {len(shown)} fullest of {len(what.table.phases)} phases, numbered in the order of the plan."
        )
        return f"{rest} {phase_key(what, what.table, shown)}" if detail.phase_key else rest
    if not detail.phase_key:
        return "Phases are numbered in the order of the plan."
    return phase_key(what, what.table, shown)


def conflict(what: Recommendation, width: float, detail: Detail) -> Piece:
    """The lines that cannot hold together, each with its repair."""
    shown = what.conflict[: detail.conflict]
    pieces = [_numbered(at + 1, line, width, detail) for at, line in enumerate(shown)]
    more = len(what.conflict) - len(shown)
    if more > 0:
        pieces.append(paragraph(text(f"and {count_of(more, 'more line')}", detail.body), width))
    return stacked(pieces, 5.0 * detail.air)


def _numbered(number: int, line: Labelled, width: float, detail: Detail) -> Piece:
    says = text(line.label, detail.body + 1.0, bold=True)
    way = text(line.says, detail.body + 0.5)
    words = stacked([paragraph(says, width - 22.0), paragraph(way, width - 22.0)], 1.0)
    label = text(f"{number}.", detail.body + 1.0, bold=True, role="short")
    return Piece(words.height, (TextMark(0.0, 0.0, 20.0, label), *words.at(22.0, 0.0)))


def rounding(what: Recommendation, width: float, detail: Detail) -> Piece:
    """Each policy: what it breaks, or what it costs more."""
    shown = what.rounding[: detail.rounding]
    pieces = [labelled(line, width, detail) for line in shown]
    return block("Why not simply round?", stacked(pieces, 2.5), width, detail)


def labelled(line: Labelled, width: float, detail: Detail) -> Piece:
    """A bold label and its sentence as one paragraph."""
    note = f" ({line.note})" if line.note else ""
    runs = (Run(line.label, True), Run(f"{note}: {line.says}"))
    return paragraph(Text(runs, detail.body), width)


def costs(what: Recommendation, width: float, detail: Detail) -> Piece:
    """Floor, exact cost and whole-people cost, and how they were found."""
    pieces = [_amount(line, width, detail) for line in what.costs]
    if what.method:
        pieces.append(paragraph(text(what.method, SMALLEST, role="faint"), width))
    return block("What whole people cost", stacked(pieces, 1.5), width, detail)


def _amount(line: Amount, width: float, detail: Detail) -> Piece:
    value = text(line.value, detail.body, bold=line.strong, role="exact" if line.strong else "ink")
    wide = natural_width(value)
    label = text(line.label, detail.body, bold=line.strong)
    if wide > width * 0.6:
        return stacked([paragraph(label, width), paragraph(_right(value), width)])
    room = width - wide - 8.0
    high = height(label, room)
    top = high - height(value, wide)
    marks: tuple[Mark, ...] = (
        TextMark(0.0, 0.0, room, label),
        TextMark(width - wide, top, wide, _right(value)),
    )
    return Piece(high, marks)


def _right(what: Text) -> Text:
    return Text(what.runs, what.points, what.role, Side.RIGHT)


def binding(what: Recommendation, width: float, detail: Detail) -> Piece:
    """Lines without room, and the one loosening that would save most."""
    shown = what.binding[: detail.binding]
    pieces = [paragraph(text(line, detail.body), width) for line in shown]
    if what.loosening:
        pieces.append(labelled(Labelled("One loosening", what.loosening), width, detail))
    return block("What binds", stacked(pieces, 1.5), width, detail)


def attendance(what: Recommendation, width: float, detail: Detail) -> Piece:
    """How often enough of them are there."""
    body = paragraph(text(what.attendance, detail.body), width) if what.attendance else NOTHING
    return block("If people are away", body, width, detail)


def alternatives(what: Recommendation, width: float, detail: Detail) -> Piece:
    """The best other crews."""
    shown = what.alternatives[: detail.alternatives]
    pieces = [labelled(line, width, detail) for line in shown]
    return block("Almost as good", stacked(pieces, 2.5), width, detail)


_GRANTED = Run("Taken for granted", True, "ink")
_ALL_IN_FILE = "Amounts, hours, absence, outputs and rules as in the plan file"


def assumptions(what: Recommendation, width: float, detail: Detail) -> Piece:
    """Amounts, hours, absence and outputs, in small print: entry by entry, or run together."""
    shown = what.assumptions[: detail.assumptions]
    more = len(what.assumptions) - len(shown)
    if detail.listed and not more:
        column = (width - COLUMN_GAP) / 2
        entries = [_small((Run(f"{e.label}: ", False, "ink"), Run(e.says)), column) for e in shown]
        return stacked([_small((_GRANTED,), width), evenly(entries, 1.5, column + COLUMN_GAP)], 1.0)
    runs: list[Run] = [_GRANTED, Run("  ")]
    for at, line in enumerate(shown):
        runs += [Run("  ·  " if at else ""), Run(f"{line.label}: ", False, "ink"), Run(line.says)]
    if more:
        runs.append(Run(f"  ·  {more} more in the plan file" if shown else _ALL_IN_FILE))
    return _small((*runs, Run(".")), width)


def _small(runs: tuple[Run, ...], width: float) -> Piece:
    return paragraph(Text(runs, SMALLEST, "faint"), width)


def caution(width: float) -> Piece:
    """The sentence that stands on every page."""
    first, rest = CAUTION.split(". ", 1)
    words = Text((Run(first + ". ", True), Run(rest)), 8.5)
    body = paragraph(words, width)
    rules = (RuleMark(0.0, 0.0, width, 0.5, "faint"), RuleMark(0.0, body.height + 6.0, width, 0.5, "faint"))
    return Piece(body.height + 6.5, (*rules, *body.at(0.0, 3.0)))


def signatures(what: Recommendation, width: float) -> Piece:
    """Lines to sign on; who prepared it is printed where the plan says so."""
    labels = ("Prepared by", "Checked by", "Date", "Signature")
    shares = (0.27, 0.27, 0.16, 0.30)
    gap = 14.0
    room = width - gap * (len(labels) - 1)
    marks: list[Mark] = []
    x, line = 0.0, 27.0
    for label, share in zip(labels, shares, strict=True):
        wide = room * share
        marks.append(RuleMark(x, line, wide, 0.6, "ink"))
        marks.append(TextMark(x, line + 2.0, wide, text(label, SMALLEST, role="faint")))
        if label == "Prepared by" and what.prepared_by:
            who = shortened(text(what.prepared_by, 9.0), wide, 2)
            marks.append(TextMark(x, line - 1.5 - height(who, wide), wide, who))
        x += wide + gap
    return Piece(line + 2.0 + SMALLEST * LEADING, tuple(marks))


def origin(what: Recommendation, width: float) -> Piece:
    """File, content hash, program version, state of proof and time."""
    stamp = what.stamp
    first = f"{_file(stamp.file)}  ·  Full Complement {stamp.version}  ·  {what.proof}  ·  {stamp.made}"
    second = f"Content of the plan: {stamp.content_hash}"
    lines = [text(words, SMALLEST, role="faint") for words in (first, second)]
    return stacked([paragraph(line, width) for line in lines])


def _file(file: str, most: int = 60) -> str:
    return file if len(file) <= most else f"{file[: most // 2]}…{file[-most // 2 :]}"
