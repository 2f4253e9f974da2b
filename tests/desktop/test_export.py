"""Export from the window: every form, what stands against it, the near-best crews a workbook waits for."""

from dataclasses import replace
from decimal import Decimal

import openpyxl
import pytest
from PySide6.QtWidgets import QFileDialog, QPushButton

from desktop import export as export_module
from desktop.document import Document
from desktop.export import Export
from solver.plan import Plan
from tests.desktop import samples
from tests.desktop.detail_samples import near_detail
from tests.desktop.test_question_pages import Told

D = Decimal


@pytest.fixture
def made(qtbot, monkeypatch):
    """Answers that are told what to say; refusals are noted."""
    document = Document(samples.hillside_plan())
    answers = Told(document)
    window = QPushButton()
    qtbot.addWidget(window)
    export = Export(document, answers, window)
    export.said, export.refused = [], []
    export.told.connect(export.said.append)
    monkeypatch.setattr(
        export_module, "tell", lambda _parent, text, more: export.refused.append((text, more))
    )
    return export, document, answers


def ready(document, answers):
    answers.receive(document.plan, samples.hillside_answer())


def test_a_workbook_waits_for_the_near_best_crews(made, tmp_path):
    export, document, answers = made
    ready(document, answers)
    export.write(tmp_path / "hill.xlsx")
    assert answers.asked == [("near", {"within": 2.0, "most": 20})]
    assert export.said == [
        "Working out the near-best crews for hill.xlsx; it is written when they are there."
    ]
    assert not (tmp_path / "hill.xlsx").exists()
    answers.give("near", near_detail())
    assert export.said[-1] == "Exported as hill.xlsx."
    book = openpyxl.load_workbook(tmp_path / "hill.xlsx")
    near = next(sheet for sheet in book if "ear" in sheet.title)
    assert near.max_row > len(near_detail().crews)


def test_a_workbook_is_written_at_once_when_they_are_known(made, tmp_path):
    export, document, answers = made
    ready(document, answers)
    answers.given["near"] = near_detail()
    export.write(tmp_path / "hill.xlsx")
    assert answers.asked == []
    assert export.said == ["Exported as hill.xlsx."]


def test_a_running_question_is_not_asked_twice(made, tmp_path):
    export, document, answers = made
    ready(document, answers)
    answers.ask("near", within=5, most=3)
    export.write(tmp_path / "hill.xlsx")
    assert len(answers.asked) == 1
    answers.give("near", near_detail())
    assert (tmp_path / "hill.xlsx").exists()


def test_a_plan_changed_meanwhile_is_not_written(made, tmp_path):
    export, document, answers = made
    ready(document, answers)
    export.write(tmp_path / "hill.xlsx")
    document.edit("x", replace(document.plan, works=document.plan.works[:1]))
    answers.cancel("near")
    assert export.said[-1].startswith("hill.xlsx was not written: the plan was changed")
    assert not (tmp_path / "hill.xlsx").exists()


def test_another_title_is_no_other_plan(made, tmp_path):
    export, document, answers = made
    ready(document, answers)
    export.write(tmp_path / "hill.xlsx")
    document.edit("x", replace(document.plan, title="Another"))
    answers.give("near", near_detail())
    assert (tmp_path / "hill.xlsx").exists()


@pytest.mark.parametrize(
    ("name", "start"), [("a.csv", b"\xef\xbb\xbf"), ("a.lp", b"\\"), ("a.mps", b"*"), ("A.LP", b"\\")]
)
def test_other_forms_are_written_at_once(made, tmp_path, name, start):
    export, document, answers = made
    ready(document, answers)
    export.write(tmp_path / name)
    assert export.refused == []
    assert export.said == [f"Exported as {name}."]
    assert (tmp_path / name).read_bytes().startswith(start)


def test_the_program_needs_no_answer_but_the_crews_do(made, tmp_path):
    export, _, _ = made
    export.write(tmp_path / "a.lp")
    export.write(tmp_path / "a.csv")
    assert export.said == ["Exported as a.lp."]
    assert export.refused[0][0] == "a.csv was not written."
    assert "no answer yet" in export.refused[0][1]


def test_an_impossible_plan_is_exported_without_near_best_crews(made, tmp_path):
    export, document, answers = made
    answers.receive(document.plan, samples.impossible_answer())
    export.write(tmp_path / "hill.xlsx")
    assert answers.asked == []
    assert export.said == ["Exported as hill.xlsx."]


@pytest.mark.parametrize("plan", [Plan(), "bad"])
def test_what_cannot_be_answered_is_not_exported(made, tmp_path, plan):
    export, document, _ = made
    good = document.plan
    bad = replace(good, categories=(replace(good.categories[0], pay=D(-1)), *good.categories[1:]))
    document.edit("x", bad if plan == "bad" else plan)
    export.write(tmp_path / "a.lp")
    assert "nothing to be answered yet" in export.refused[0][1]


def test_what_cannot_be_written_is_told(made, tmp_path):
    export, document, answers = made
    ready(document, answers)
    export.write(tmp_path / "a.docx")
    export.write(tmp_path / "gone" / "a.csv")
    assert "cannot be exported; allowed are .xlsx" in export.refused[0][1]
    assert export.refused[1][0] == "a.csv was not written."
    assert export.said == []


def test_the_form_chosen_gives_the_suffix(made, tmp_path, monkeypatch):
    export, document, answers = made
    ready(document, answers)
    asked = []

    def choose(_parent, _title, start, forms):
        asked.append((start, forms))
        return str(tmp_path / "hill"), forms.split(";;")[2]

    monkeypatch.setattr(QFileDialog, "getSaveFileName", choose)
    document.save(tmp_path / "job.crew.json")
    export.ask()
    assert asked[0][0] == str(tmp_path / "job.xlsx")
    assert (tmp_path / "hill.lp").exists()
