from decimal import Decimal
from functools import partial

import pytest
from PySide6.QtCore import Qt

from desktop.messages import CAUTION
from desktop.pages.rounding_page import RoundingPage
from desktop.pictures.waterfall_bars import waterfall_sentence
from desktop.tables.margin_rows import moving_cost
from solver.answer import Policy
from tests.desktop import samples


@pytest.fixture
def make(show_page):
    return partial(show_page, RoundingPage)


@pytest.fixture
def hillside(make):
    return make(samples.hillside_plan(), samples.hillside_answer())[0]


def cell(page, title, policy):
    row = next(i for i, r in enumerate(page.table.rows) if r.title == title)
    column = next(j for j, c in enumerate(page.table.columns) if c.policy == policy)
    return page.table.index(row, column)


def test_margins_carry_their_sign(hillside, qtmodeltester):
    qtmodeltester.check(hillside.table, force_py=True)
    assert cell(hillside, "Planting (trees)", Policy.UP).data() == "+1,410"
    assert cell(hillside, "Planting (trees)", Policy.NEAREST).data() == "−546"
    assert cell(hillside, "Planting (trees)", Policy.EXACT).data() == "–"
    assert cell(hillside, "Planting (trees)", Policy.BEST_CORNER).data() == ""
    assert cell(hillside, "Lines broken", Policy.NEAREST).data() == "3 of 5"
    assert cell(hillside, "Lines broken", Policy.UP).data() == "none"
    assert cell(hillside, "Lines broken", Policy.BEST_CORNER).data() == "no crew"


def test_the_first_broken_line_is_explained_at_once(hillside):
    assert hillside.waterfall.isVisible()
    assert hillside.waterfall.miss.policy is Policy.DOWN
    assert hillside.sentence.text() == waterfall_sentence(hillside.waterfall.miss)


def test_another_cell_is_chosen_by_keyboard(hillside, qtbot):
    hillside.view.setFocus()
    qtbot.keyClick(hillside.view, Qt.Key.Key_Right)
    assert hillside.waterfall.miss.policy is Policy.NEAREST
    assert hillside.waterfall.miss.broken.lines == ("Planting",)
    qtbot.keyClick(hillside.view, Qt.Key.Key_Right)
    assert not hillside.waterfall.isVisible()
    assert hillside.sentence.text() == "Planting holds under up, with 1,410\u00a0trees to spare."


def test_a_cell_is_chosen_by_mouse(hillside, qtbot):
    index = cell(hillside, "Learners per lead (people)", Policy.NEAREST)
    where = hillside.view.visualRect(index).center()
    qtbot.mouseClick(hillside.view.viewport(), Qt.MouseButton.LeftButton, pos=where)
    assert hillside.waterfall.miss.broken.lines == ("Learners per lead",)
    assert "Learners per lead 1\u00a0person short" in hillside.sentence.text()


def test_why_there_is_no_crew(hillside):
    hillside.view.setCurrentIndex(cell(hillside, "Planting (trees)", Policy.BEST_CORNER))
    assert hillside.sentence.text() == "No choice of down or up is workable: Planting stays short."
    assert hillside.waterfall.miss is None
    column = cell(hillside, "Planting (trees)", Policy.BEST_CORNER).column()
    tip = hillside.table.headerData(column, Qt.Orientation.Horizontal, Qt.ItemDataRole.ToolTipRole)
    assert "Planting stays short" in tip


def test_the_chosen_cell_stays_chosen_with_the_next_answer(make, qtbot):
    page, _, answers = make(samples.hillside_plan(), samples.hillside_answer())
    page.view.setFocus()
    page.view.setCurrentIndex(cell(page, "Fencing (m)", Policy.DOWN))
    answers.receive(samples.hillside_plan(), samples.hillside_answer(samples.crew(3, 9, 6, 8, 1)))
    assert page.waterfall.miss.broken.lines == ("Fencing",)
    assert page.table.columns[-1].policy is Policy.OWN


def test_rounding_over_time(make):
    page, _, _ = make(samples.museum_plan(), samples.museum_answer())
    broken = cell(page, "Phases that break", Policy.NEAREST)
    assert broken.data() == "2 of 3"
    page.view.setCurrentIndex(broken)
    assert page.sentence.text() == "Phases that break, nearest: Packing up, Unpacking"
    assert cell(page, "Joiners and leavers", Policy.NEAREST).data() == "+9 −5"
    assert cell(page, "Joining and leaving (EUR)", Policy.EXACT).data() == "2,160"
    page.view.setCurrentIndex(cell(page, "Packing, Unpacking (crates)", Policy.NEAREST))
    assert "leaves Packing in Unpacking" in page.sentence.text()


def test_moving_cost_counts_every_joiner_and_leaver():
    plan = samples.museum_plan()  # packers join at 300, porters leave at 120; two conservators on the books
    crew = {"Conservator": (2.0, 1.0, 2.0), "Packer": (4.0, 1.0, 3.0), "Porter": (1.0, 5.0, 2.0)}
    assert moving_cost(plan, crew) == Decimal(4 * 300 + 2 * 300 + 3 * 120)


def test_one_phase_has_no_phase_clutter(hillside):
    titles = [row.title for row in hillside.table.rows]
    assert not [t for t in titles if "Whole job" in t or "hase" in t]


def test_cells_are_told_in_words(hillside):
    text = cell(hillside, "Fencing (m)", Policy.DOWN).data(Qt.ItemDataRole.AccessibleTextRole)
    assert text == "Fencing is 1,277\u00a0m short under down."


def test_the_caution_stands_at_the_foot(hillside):
    assert hillside.caution.text() == CAUTION
    assert hillside.caution.isVisible()


def test_an_impossible_plan_has_no_margins(make):
    page, _, _ = make(samples.hillside_plan(), samples.impossible_answer())
    assert page.waterfall.miss is None
