"""The page in the window: the page itself, with paper, ink, own crew, printer and PDF."""

import pymupdf
import pytest
from PySide6.QtPrintSupport import QPrinter
from PySide6.QtWidgets import QFileDialog

from desktop import page_words as say
from desktop.answers import Answers
from desktop.document import Document
from desktop.page.printing import print_sheet
from desktop.pages.preview_page import PreviewPage
from solver.answer import NearBest, NearCrew
from tests.desktop import samples
from tests.desktop.page_reading import text_of


class KnowingAnswers(Answers):
    """Answers with details that somebody worked out."""

    def __init__(self, document):
        self.known = {}
        self.asked = []
        super().__init__(document)

    def detail(self, question):
        return self.known.get(question)

    def ask(self, question, **options):
        self.asked.append(question)


@pytest.fixture
def preview(qtbot):
    document = Document(samples.hillside_plan())
    answers = KnowingAnswers(document)
    page = PreviewPage(document, answers)
    qtbot.addWidget(page)
    page.resize(1100, 700)
    page.show()
    return page


def answered(page, own=None):
    page.answers.receive(page._document.plan, samples.hillside_answer(own))


def test_before_the_first_answer_there_is_nothing_to_print(preview):
    assert preview.view.sheet is None
    assert not preview.print_button.isEnabled()
    assert not preview.pdf_button.isEnabled()


def test_the_page_is_shown_as_soon_as_there_is_an_answer(preview, qtbot):
    answered(preview)
    assert preview.print_button.isEnabled()
    assert "9\u00a0×\u00a0Contract hand" in preview.view.accessibleDescription()
    qtbot.waitUntil(lambda: preview.view.height() > 100)
    picture = preview.view.grab().toImage()
    spots = [(x, y) for x in range(0, picture.width(), 3) for y in range(0, picture.height(), 3)]
    dark = [spot for spot in spots if picture.pixelColor(*spot).lightness() < 100]
    assert len(dark) > 500  # letters, not only paper


def test_paper_and_ink_are_remembered(preview, qtbot):
    answered(preview)
    preview.paper_choice.setCurrentText("A4")
    preview.paper_choice.setCurrentText("Letter")
    assert preview.view.sheet.paper.size == "Letter"
    preview.ink_choice.setCurrentText(say.GREYSCALE)
    assert preview.grey
    again = PreviewPage(preview._document, preview.answers)
    qtbot.addWidget(again)
    assert again.paper_choice.currentText() == "Letter"
    assert again.grey


def test_the_own_crew_can_be_recommended_where_there_is_one(preview):
    answered(preview)
    assert preview.own.isHidden()
    answered(preview, samples.crew(3, 9, 7, 8, 0.5))
    assert not preview.own.isHidden()
    preview.own.setChecked(True)
    assert "THE PLANNER’S OWN CHOICE" in preview.view.accessibleDescription()
    answered(preview)
    assert "OWN CHOICE" not in preview.view.accessibleDescription()


def test_an_answer_to_an_older_plan_cannot_be_printed(preview):
    from dataclasses import replace

    answered(preview)
    plan = preview._document.plan
    first = replace(plan.categories[0], pay=plan.categories[0].pay + 1)
    preview._document.edit("pay", replace(plan, categories=(first, *plan.categories[1:])))
    assert not preview.pdf_button.isEnabled()
    preview.save_pdf()
    assert preview.told.text() == say.NOT_NOW


def test_more_is_worked_out_when_asked_for(preview):
    answered(preview)
    preview.more.click()
    assert preview.answers.asked == ["room", "near"]
    exact = preview.answers.answer.exact
    other = NearCrew(samples.crew(3, 10, 5, 8, 0.5), 133700, 10.0, 20, 0, 26.5, "Planting")
    same = NearCrew(exact.crew, exact.cost, 0.0, 19.5, 0, 26.5, "Planting")
    preview.answers.known["near"] = NearBest((same, other), True)
    preview.answers.detail_changed.emit("near")
    assert "Almost as good" in preview.view.accessibleDescription()


def test_the_pdf_is_the_page_that_is_seen(preview, tmp_path, monkeypatch):
    answered(preview)
    target = tmp_path / "hill"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *a: (str(target), ""))
    preview.pdf_button.click()
    written = target.with_suffix(".pdf").read_bytes()
    assert preview.told.text() == say.SAVED.format(name="hill.pdf")
    seen = " ".join(preview.view.accessibleDescription().split())
    assert sorted(seen.split()) == sorted(text_of(written).split())


def test_a_folder_that_is_gone_is_told_in_a_sentence(preview, tmp_path):
    answered(preview)
    preview.write_pdf(tmp_path / "gone" / "page.pdf")
    assert preview.told.isVisible()
    assert preview.told.text().endswith(".")


def test_a_printer_gets_one_sheet(preview, tmp_path):
    answered(preview)
    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(tmp_path / "printed.pdf"))
    assert print_sheet(preview.view.sheet, printer, grey=False)
    with pymupdf.open(tmp_path / "printed.pdf") as document:
        assert document.page_count == 1
        assert tuple(document[0].rect)[2:] == pytest.approx(_sheet_size(preview), abs=1)
    assert "Contract hand" in text_of((tmp_path / "printed.pdf").read_bytes())


def _sheet_size(preview):
    return preview.view.sheet.paper.width, preview.view.sheet.paper.height


@pytest.mark.qt_log_ignore("QPainter::begin")
def test_a_printer_that_refuses_is_noticed(preview, tmp_path):
    answered(preview)
    printer = QPrinter()
    printer.setOutputFormat(QPrinter.OutputFormat.PdfFormat)
    printer.setOutputFileName(str(tmp_path / "gone" / "printed.pdf"))
    assert not print_sheet(preview.view.sheet, printer, grey=False)


def test_the_page_does_not_scroll_sideways(preview):
    answered(preview)
    assert preview._holder.horizontalScrollBar().maximum() == 0
