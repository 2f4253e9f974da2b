"""Whatever the plan: one page, nothing cut, nothing on top of something else, every number the answer's."""

import re
from datetime import datetime
from decimal import Decimal
from functools import cache
from pathlib import Path

import pytest
from PySide6.QtCore import QLocale

from desktop.page import Details, lay_out, page_bytes, paper, recommend, stamp
from desktop.page.crew_grid import crew_grid
from desktop.page.detail import SMALLEST
from desktop.page.marks import TextMark
from desktop.page.text import height
from solver.answer import Policy
from tests.desktop.page_reading import letters, overlapping, signs_of, sizes_of
from tests.desktop.page_samples import Sample, moves

ENGLISH = QLocale(QLocale.Language.English, QLocale.Country.UnitedKingdom)
WHEN = datetime(2031, 5, 6, 7, 8)
SLACK = 1.5  # points: boxes are as high as the tallest letter of their font, fallback fonts are taller
SEEDS = range(100)


LARGE = ((20, 52), (40, 12), (200, 1), (3, 104), (200, 52))  # categories, phases


@cache
def page_of(seed, shape=None):
    sample = Sample(seed, shape)
    own = seed % 4 == 0 and sample.answer.report(Policy.OWN).crew is not None
    return sample, recommend(
        sample.plan,
        sample.answer,
        stamp(sample.plan, Path("plan.crew.json"), WHEN, ENGLISH),
        own=own,
        details=Details(near=sample.near),
        locale=ENGLISH,
    )


def text_marks(sheet):
    return [mark for mark in sheet.marks if isinstance(mark, TextMark)]


CASES = [(seed, None) for seed in SEEDS] + [(seed, shape) for shape in LARGE for seed in (1, 2)]


@pytest.mark.parametrize(("seed", "shape"), CASES)
def test_one_page_with_every_word_in_its_own_place(qapp, seed, shape):
    _, what = page_of(seed, shape)
    size = "A4" if seed % 2 else "Letter"
    sheet = lay_out(what, paper(size))
    content = page_bytes(what, size=size, grey=seed % 3 == 0)
    signs, box = signs_of(content)
    assert (box.width, box.height) == pytest.approx((sheet.paper.width, sheet.paper.height), abs=1)
    left, right = sheet.paper.left - 0.5, sheet.paper.width - sheet.paper.left + 0.5
    outside = [s.text for s in signs if s.left < left or s.right > right or s.bottom > box.height - 20]
    assert outside == []
    assert overlapping(signs, SLACK) == []
    assert min(sizes_of(content)) >= SMALLEST - 0.01
    _every_mark_is_read_whole(sheet, signs)


def _every_mark_is_read_whole(sheet, signs):
    """What was laid out is what is read, paragraph by paragraph: nothing is cut and nothing is added."""
    unread = list(signs)
    for mark in text_marks(sheet):
        bottom = mark.y + height(mark.text, mark.width)
        mine = [s for s in unread if mark.y - 1 < (s.top + s.bottom) / 2 < bottom + 1]
        mine = [s for s in mine if mark.x - 1 <= s.left and s.right <= mark.x + mark.width + 1]
        read = set(mine)
        unread = [s for s in unread if s not in read]
        assert letters("".join(s.text for s in mine)) == letters(mark.text.words)
    assert unread == []


def value(text):
    """A printed number; a dash is nothing."""
    return Decimal(0) if text in ("–", "0") else Decimal(text.replace(",", "").replace("−", "-"))


def rounded(x):
    return Decimal(x).quantize(Decimal("0.01"), "ROUND_HALF_UP")


@pytest.mark.parametrize("seed", SEEDS)
def test_the_table_says_what_the_answer_says(qapp, seed):
    sample, what = page_of(seed)
    if what.table is None:
        assert sample.answer.exact is None
        return
    plan, answer = sample.plan, sample.answer
    own = seed % 4 == 0
    report = answer.report(Policy.OWN)
    crew = report.crew if own else answer.exact.crew
    names = {row.name.strip("\u2068\u2069"): row for row in what.table.rows}
    assert len(names) == len(plan.categories)
    grid = crew_grid(what, what.table, 10**6)
    for at, category in enumerate(plan.categories):
        cells = [value(column.cells[at]) for column in grid.columns]
        heads = [Decimal(repr(n)) for n in crew[category.name]]
        before = [category.on_books, *heads[:-1]]
        joins = sum(max(0, n - b) for n, b in zip(heads, before, strict=True))
        leaves = sum(max(0, b - n) for n, b in zip(heads, before, strict=True))
        pay = sum(p.periods * category.pay * n for p, n in zip(plan.phases, heads, strict=True))
        one_off = joins * category.join_cost + leaves * category.leave_cost
        one_off += category.open_cost if any(heads) else 0
        expected = [category.on_books, *heads, joins, leaves, rounded(pay), rounded(one_off)]
        assert cells == expected[: len(cells)]
        assert len(cells) == len(expected) or one_off == 0
    joined, left = moves(plan, crew)
    assert (sum(what.table.joiners), sum(what.table.leavers)) == (Decimal(joined), Decimal(left))
    if not own:
        assert float(what.table.total) == pytest.approx(answer.exact.cost, rel=1e-12, abs=0.005)


@pytest.mark.parametrize("seed", [s for s in SEEDS if len(Sample(s).plan.categories) > 8])
def test_categories_that_share_a_line_are_summed(qapp, seed):
    _, what = page_of(seed)
    if what.table is None:
        return
    whole, some = (crew_grid(what, what.table, rows) for rows in (10**6, 5))
    hidden = len(what.table.rows) - 5
    assert some.names[-1] == f"and {hidden} more categories"
    for full, short in zip(whole.columns, some.columns, strict=True):
        assert sum(map(value, full.cells)) == pytest.approx(sum(map(value, short.cells)), abs=Decimal("0.5"))
        assert full.feet == short.feet


def numbers_on(what):
    """Every number in the sentences of the page; names of the samples have no digits."""
    sentences = ["".join(run.words for run in wording) for wording in what.decisions]
    sentences += [what.consequence, *(a.value for a in what.costs), *(r.says for r in what.rounding)]
    sentences += [what.banner.says] if what.banner else []
    sentences += [part for other in what.alternatives for part in (other.label, other.says)]
    return [value(n) for s in sentences for n in re.findall(r"(?<![\w.])\d[\d,]*(?:\.\d+)?", s)]


def known_numbers(sample):
    """Everything a sentence may say, as numbers: counts, sums, costs, differences and shares."""
    plan, answer = sample.plan, sample.answer
    known = {Decimal(n) for n in range(13)} | {Decimal(len(plan.categories)), Decimal(len(plan.phases))}
    known |= {sum(p.periods for p in plan.phases), Decimal(len(plan.works))}
    known |= {Decimal(k) for k in range(len(plan.categories) + 1)}
    costs = [c for c in (answer.floor, answer.bound, answer.exact and answer.exact.cost) if c is not None]
    crews = [r.crew for r in answer.crews if r.crew] + ([answer.fractional] if answer.fractional else [])
    for report in answer.crews:
        costs += [c for c in (report.cost, report.paper_cost) if c is not None]
        known |= {Decimal(repr(b.short)) for b in report.breaks}
    near = sample.near
    for other in near.crews if near else ():
        crews.append(other.crew)
        costs.append(other.cost)
        known.add(Decimal(repr(other.over)))
    for crew in crews:
        known |= {Decimal(repr(n)) for counts in crew.values() for n in counts}
        known |= set(map(Decimal, moves(plan, crew)))
        known |= {sum(Decimal(repr(n[t])) for n in crew.values()) for t in range(len(plan.phases))}
    for cost in costs:
        known.add(Decimal(repr(cost)))
        known |= {abs(Decimal(repr(cost)) - Decimal(repr(c))) for c in costs}
        known |= {100 * abs(Decimal(repr(cost)) - Decimal(repr(c))) / Decimal(repr(c)) for c in costs if c}
    return known


def is_known(printed, known):
    """True where some known number rounds to `printed` at the digits printed, or to three that matter."""
    places = Decimal(1).scaleb(printed.as_tuple().exponent)
    return any(abs(n - printed) <= places / 2 or abs(n - printed) <= abs(n) / 200 for n in known)


@pytest.mark.parametrize("seed", SEEDS)
def test_every_number_in_a_sentence_is_the_answers(qapp, seed):
    sample, what = page_of(seed)
    known = known_numbers(sample)
    exact = {n for n in known if n == n.to_integral_value()}
    rest = [n for n in numbers_on(what) if n not in exact and not is_known(n, known)]
    crowd = _rest_of_the_crew(sample, rest)
    assert [n for n in rest if n not in crowd] == []


def _rest_of_the_crew(sample, numbers):
    """Head counts of "and 16 people of 3 more categories": sums of the smaller counts of one crew."""
    near = sample.near
    crews = [r.crew for r in sample.answer.crews if r.crew] + [n.crew for n in (near.crews if near else ())]
    sums = set()
    for crew in crews:
        counts = sorted((Decimal(repr(max(n))) for n in crew.values()), reverse=True)
        sums |= {sum(counts[at:]) for at in range(len(counts))}
    return {n for n in numbers if n in sums}
