"""A whole table pasted into a grid or the list of rules: matched by its headers, if the planner wants it."""

from dataclasses import replace
from decimal import Decimal

import pytest
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QPushButton

from desktop import pasting
from desktop.dialogs.import_dialog import ImportDialog
from desktop.document import Document
from desktop.rules.rule_list import RuleList
from desktop.tables.category_table import CATEGORIES
from desktop.tables.grid import Grid
from desktop.tables.grid_model import GridModel
from desktop.tables.phase_table import PHASES
from solver.plan import Phase, Presence, Sense, Work
from solver.tableimport import What
from tests.desktop.test_import import CREW, PLAN

D = Decimal


@pytest.fixture
def grid(qtbot):
    def make(table=CATEGORIES, plan=PLAN):
        document = Document(plan)
        view = Grid(GridModel(document, table))
        qtbot.addWidget(view)
        view.setCurrentIndex(view.model().index(0, 0))
        return view, document

    return make


def clip(text):
    QGuiApplication.clipboard().setText(text.replace(";", "\t"))


def test_a_pasted_table_with_headers_is_matched_by_them(grid, monkeypatch):
    view, document = grid()
    asked = []
    monkeypatch.setattr(pasting, "ask", lambda _p, text, *_: asked.append(text) or "match")
    monkeypatch.setattr(ImportDialog, "exec", lambda dialog: dialog.accept_button.click())
    remarks = []
    view.remarked.connect(remarks.append)
    clip(CREW)
    view.paste()
    assert "Trade, Wage, Hours, Output Planting" in asked[0]
    assert [c.name for c in document.plan.categories] == ["Lead hand", "Driver"]
    assert remarks == ["2 categories imported from what was pasted."]


def test_it_can_be_pasted_as_it_stands(grid, monkeypatch):
    view, document = grid()
    monkeypatch.setattr(pasting, "ask", lambda *_: "cells")
    clip("Trade;On books\nDriver;3\n")
    view.paste()
    assert [c.name for c in document.plan.categories] == ["Trade", "Driver"]


def test_cancelling_pastes_nothing(grid, monkeypatch):
    view, document = grid()
    monkeypatch.setattr(pasting, "ask", lambda *_: "cancel")
    clip(CREW)
    view.paste()
    assert document.plan == PLAN


@pytest.mark.parametrize(
    "text", ["Driver;3\nHelper;4\n", "Trade;Wage;Hours", "Driver;Helper\nA;B\n", "7;8\n9;3\n"]
)
def test_cells_are_pasted_without_a_question(text, grid, monkeypatch):
    view, _ = grid()
    monkeypatch.setattr(pasting, "ask", lambda *_: pytest.fail("nothing to ask"))
    clip(text)
    view.paste()


def test_phases_are_pasted_as_cells(grid):
    view, document = grid(PHASES)
    clip("Name;Amount\nStart;3\n")
    view.paste()
    assert [p.name for p in document.plan.phases] == ["Name", "Start"]


def test_a_table_of_rules_is_pasted_into_the_list(qtbot, monkeypatch):
    document = Document(PLAN)
    view = RuleList(document)
    qtbot.addWidget(view)
    monkeypatch.setattr(ImportDialog, "exec", lambda dialog: dialog.accept_button.click())
    clip("Kind;Rule;People;Sense;Number\npresence;Leads;Lead hand;at least;1\n")
    view.paste()
    assert document.plan.rules == (Presence("Leads", {"Lead hand": D(1)}, Sense.AT_LEAST, D(1)),)
    remarks = []
    view.remarked.connect(remarks.append)
    clip(" ")
    view.paste()
    assert remarks == ["There is nothing in it."]


def test_amounts_of_each_phase_are_matched(grid, monkeypatch):
    plan = replace(PLAN, phases=(Phase("Start"), Phase("Peak")), works=())
    sheet = pasting.headed_table("Work\tStart\tPeak\nFencing\t10\t20\n", What.WORKS, plan)
    document = Document(plan)
    monkeypatch.setattr(ImportDialog, "exec", lambda dialog: dialog.accept_button.click())
    pasting.map_pasted(QPushButton(), document, What.WORKS, sheet, lambda _: None)
    assert document.plan.works == (Work("Fencing", "units", (D(10), D(20))),)
