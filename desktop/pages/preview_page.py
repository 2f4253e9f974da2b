"""The Page: the recommendation exactly as it will be printed, with paper, ink, printer and PDF."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import QLocale, QSettings
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QFileDialog,
    QHBoxLayout,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from desktop import page_words as say
from desktop.answers import Answers, Status
from desktop.document import Document
from desktop.page import (
    Details,
    PageTooFull,
    PaperSize,
    Recommendation,
    lay_out,
    paper,
    recommend,
    save_page,
    stamp,
)
from desktop.pages.page_parts import AnswerPage, label
from desktop.pictures.paper_view import PaperView
from desktop.theme import Size, current
from solver.answer import Attendance, Policy
from solver.planfile import CannotSave

_SIZE_KEY, _GREY_KEY = "page/size", "page/grey"
_MORE = {"room": {}, "near": {"within": 2, "most": 20}}


class PreviewPage(AnswerPage):
    """Shows the page and puts it on paper."""

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(answers, parent)
        self._document = document
        self._what: Recommendation | None = None
        self.paper_choice = _choice(say.SIZE, say.TIP_SIZE, [size.value for size in PaperSize])
        self.ink_choice = _choice(say.INK, say.TIP_INK, [say.COLOUR, say.GREYSCALE])
        self.own = QCheckBox(say.OWN)
        self.own.setToolTip(say.TIP_OWN)
        self.more = _button(say.MORE, say.TIP_MORE, self.work_out_more)
        self.print_button = _button(say.PRINT, say.TIP_PRINT, self.print_page)
        self.pdf_button = _button(say.SAVE_PDF, say.TIP_SAVE_PDF, self.save_pdf)
        self.told = label(size=Size.SMALL)
        self.view = PaperView()
        self._restore()
        self._fill()
        self._connect()
        self.refresh()

    def _fill(self) -> None:
        bar = QHBoxLayout()
        bar.setSpacing(current().px(1))
        for widget in (self.paper_choice, self.ink_choice):
            bar.addWidget(widget)
        bar.addStretch(1)
        for button in (self.more, self.print_button, self.pdf_button):
            bar.addWidget(button)
        outer = self.layout()
        assert isinstance(outer, QVBoxLayout)
        outer.insertLayout(1, bar)
        outer.insertWidget(2, self.own)  # a line of its own: beside the buttons it widens the window at 150 %
        outer.insertWidget(3, self.told)
        self.told.hide()
        self.body.addWidget(self.view)
        self.body.addStretch(1)

    def _connect(self) -> None:
        self.paper_choice.currentIndexChanged.connect(self._on_choice)
        self.ink_choice.currentIndexChanged.connect(self._on_choice)
        self.own.toggled.connect(self.show_answer)
        self.answers.detail_changed.connect(self._on_detail)
        self._document.renamed.connect(self.show_answer)

    # what is shown

    @property
    def grey(self) -> bool:
        """True for greyscale."""
        return self.ink_choice.currentIndex() == 1

    def show_answer(self) -> None:
        """Lay the page out anew; only while it can be seen."""
        self._offer()
        if self.isVisible():
            self._lay_page_out()

    def _offer(self) -> None:
        """Enable what can be done with the answer there is."""
        answer = self.answers.answer
        report = answer.report(Policy.OWN) if answer else None
        has_own = report is not None and report.crew is not None
        self.own.setVisible(has_own)
        for button in (self.print_button, self.pdf_button):
            button.setEnabled(self._printable())
        working = any(self.answers.progress(question) for question in _MORE)
        known = all(self.answers.detail(question) is not None for question in _MORE)
        self.more.setVisible(answer is not None and answer.exact is not None and not known)
        self.more.setEnabled(not working and self.answers.status is Status.READY)
        self.more.setText(say.MORE_WORKING if working else say.MORE)

    def _printable(self) -> bool:
        usable = self.answers.status in (Status.READY, Status.SOLVING)
        return usable and self.answers.answer is not None and not self.answers.stale

    def _lay_page_out(self) -> None:
        self._what = self.recommendation()
        if self._what is None:
            self.view.show_sheet(None)
            return
        try:
            self.view.show_sheet(lay_out(self._what, paper(self.paper_choice.currentText())), self.grey)
        except PageTooFull as too_full:
            self.view.show_sheet(None)
            self.tell(str(too_full))

    def recommendation(self) -> Recommendation | None:
        """What the page says, None while there is no answer."""
        answer, plan = self.answers.answer, self.answers.plan
        if answer is None or plan is None:
            return None
        own = self.own.isChecked() and not self.own.isHidden()
        details = Details() if self.answers.stale else self._details()
        mark = stamp(plan, self._document.path)
        return recommend(plan, answer, mark, own=own, details=details)

    def _details(self) -> Details:
        found = self.answers.detail("attend")
        attendance = found if isinstance(found, Attendance) else None
        room, near = (self.answers.detail(question) for question in _MORE)
        return Details(room=room, near=near, attendance=attendance)

    def tell(self, sentence: str) -> None:
        """Say an outcome above the page; empty to take it back."""
        self.told.setText(sentence)
        self.told.setVisible(bool(sentence))

    # what can be done

    def work_out_more(self) -> None:
        """Ask for the loosenings and the near-best crews that are not known yet."""
        for question, options in _MORE.items():
            if self.answers.detail(question) is None:
                self.answers.ask(question, **options)
        self._offer()

    def print_page(self) -> None:
        """Choose a printer and print the page as shown."""
        from desktop.page.printing import ask_printer, print_sheet  # loads the print support when needed

        if not self._ready():
            return
        sheet, what = self.view.sheet, self._what
        if sheet is None or what is None:
            return
        printer = ask_printer(sheet, grey=self.grey, title=what.title, parent=self)
        if printer is not None:
            self.tell(say.PRINTED if print_sheet(sheet, printer, grey=self.grey) else say.NOT_PRINTED)

    def save_pdf(self) -> None:
        """Choose a file and write the page as shown into it."""
        if not self._ready():
            return
        chosen, _ = QFileDialog.getSaveFileName(self, say.SAVE_PDF, str(self._suggested()), say.PDF_FILES)
        if chosen:
            self.write_pdf(Path(chosen))

    def write_pdf(self, path: Path) -> None:
        """Write the page to `path` and tell the outcome."""
        if self._what is None:
            return
        target = path if path.suffix else path.with_suffix(".pdf")
        try:
            save_page(self._what, target, size=self.paper_choice.currentText(), grey=self.grey)
        except CannotSave as refusal:
            self.tell(str(refusal))
        else:
            self.tell(say.SAVED.format(name=target.name))

    def _ready(self) -> bool:
        """The page on the screen is made anew, so that its time and details are those of the paper."""
        if not self._printable():
            self.tell(say.NOT_NOW)
            return False
        self.tell("")
        self._lay_page_out()
        return self.view.sheet is not None

    def _suggested(self) -> Path:
        path = self._document.path
        if path is None:
            return Path(f"{say.PAGE_SUFFIX}.pdf")
        stem = path.name.removesuffix(".json").removesuffix(".crew")
        return path.with_name(f"{stem}.pdf")

    # choices are remembered

    def _restore(self) -> None:
        settings = QSettings()
        letter = QLocale().measurementSystem() is QLocale.MeasurementSystem.ImperialUSSystem
        size = str(settings.value(_SIZE_KEY, PaperSize.LETTER if letter else PaperSize.A4))
        self.paper_choice.setCurrentIndex(max(0, self.paper_choice.findText(size)))
        self.ink_choice.setCurrentIndex(1 if settings.value(_GREY_KEY, "no") == "yes" else 0)

    def _on_choice(self) -> None:
        settings = QSettings()
        settings.setValue(_SIZE_KEY, self.paper_choice.currentText())
        settings.setValue(_GREY_KEY, "yes" if self.grey else "no")
        self.show_answer()

    def _on_detail(self, question: str) -> None:
        if question in _MORE or question == "attend":
            self.show_answer()

    def showEvent(self, event: QShowEvent) -> None:
        """Lay the page out when first seen."""
        super().showEvent(event)
        self.refresh()


def _choice(title: str, tip: str, entries: list[str]) -> QComboBox:
    made = QComboBox()
    made.addItems(entries)
    made.setAccessibleName(title)
    made.setToolTip(tip)
    return made


def _button(text: str, tip: str, act: Callable[[], None]) -> QPushButton:
    made = QPushButton(text)
    made.setToolTip(tip)
    made.clicked.connect(lambda: act())
    return made
