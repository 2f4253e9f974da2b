"""Names that look like HTML are shown as typed: on every page, in tooltips, in pictures, on paper."""

from dataclasses import replace

import pymupdf
import pytest
from PySide6.QtCore import QAbstractItemModel, QAbstractListModel, QTimer
from PySide6.QtGui import QAction, Qt, QTextDocument
from PySide6.QtWidgets import (
    QAbstractItemView,
    QApplication,
    QGraphicsTextItem,
    QGraphicsView,
    QLabel,
    QTextEdit,
    QWidget,
)

import resources
from desktop.answers import Status
from desktop.dialogs.question import Choice, tell
from desktop.document import Document
from desktop.page import write_page
from desktop.rail import PAGES
from solver.plan import Plan
from solver.planfile import dump_plan, parse_plan, read_plan, save_plan

MARK = "zork"
NAME = "<i>zork</i>&amp;"  # shown as HTML, the tags are gone and the ampersand stands alone


def named_in_html() -> Plan:
    """The hillside example with HTML in every name."""
    text = dump_plan(read_plan(resources.example_paths()[0]))
    for name in (
        "Lead hand",
        "Contract hand",
        "Planting",
        "Chainsaw tickets",
        "Season budget",
        "trees",
        "ha",
    ):
        text = text.replace(f'"{name}"', f'"{name}{NAME}"')
    plan = parse_plan(text)
    phases = tuple(replace(phase, name=phase.name + NAME) for phase in plan.phases)
    return replace(plan, phases=phases, title=NAME, site=NAME, prepared_by=NAME, notes=NAME)


def as_shown(text: str, kind: Qt.TextFormat = Qt.TextFormat.AutoText) -> str:
    """What a reader sees of `text` in a widget that takes it as `kind`; tooltips are AutoText."""
    rich = kind == Qt.TextFormat.RichText or (kind == Qt.TextFormat.AutoText and Qt.mightBeRichText(text))
    if not rich:
        return text
    document = QTextDocument()
    document.setHtml(text)
    return document.toPlainText()


def is_text(shown: str) -> bool:
    """True if every name in it stands there as it was typed (or cut short)."""
    return shown.count(MARK) == shown.count(f"<i>{MARK}")


def texts(root: QWidget):
    """(where, what is seen) of everything below `root` that shows or tells text."""
    for widget in (root, *root.findChildren(QWidget)):
        where = f"{type(widget).__name__} {widget.objectName()}"
        yield f"{where} tooltip", as_shown(widget.toolTip())
        yield f"{where} what's this", as_shown(widget.whatsThis())
        if isinstance(widget, QLabel):
            yield where, as_shown(widget.text(), widget.textFormat())
        if isinstance(widget, QTextEdit):
            yield where, widget.toPlainText()
        if isinstance(widget, QAbstractItemView) and widget.model() is not None:
            yield from tooltips(where, widget.model())
        if isinstance(widget, QGraphicsView):
            for item in widget.scene().items() if widget.scene() else ():
                if isinstance(item, QGraphicsTextItem):
                    yield f"{where} scene", item.toPlainText()
    for action in root.findChildren(QAction):
        yield f"action {action.text()}", as_shown(action.toolTip())


def tooltips(where: str, model: QAbstractItemModel):
    columns = 1 if isinstance(model, QAbstractListModel) else model.columnCount()
    for row in range(model.rowCount()):
        yield f"{where} row {row}", header(model, row, Qt.Orientation.Vertical)
        for column in range(columns):
            tip = model.index(row, column).data(Qt.ItemDataRole.ToolTipRole)
            yield f"{where} cell {row}, {column}", as_shown(tip or "")
    for column in range(columns):
        yield f"{where} column {column}", header(model, column, Qt.Orientation.Horizontal)


def header(model: QAbstractItemModel, section: int, way: Qt.Orientation) -> str:
    tip = model.headerData(section, way, Qt.ItemDataRole.ToolTipRole)
    return as_shown(tip) if isinstance(tip, str) else ""


@pytest.fixture
def window(open_window):
    return open_window(Document(named_in_html()))


def test_names_are_text_on_every_page(window, qtbot):
    qtbot.waitUntil(lambda: window.answers.status is Status.READY, timeout=30_000)
    assert f"<i>{MARK}" in window.headline.crew.text()
    read = 0
    for at, page in enumerate(PAGES):
        window.show_page(at)
        qtbot.waitUntil(lambda: settled(window), timeout=60_000)
        seen = list(texts(window))
        read += sum(MARK in shown for _, shown in seen)
        assert [(page.title, *entry) for entry in seen if not is_text(entry[1])] == []
    assert read > 20, "names were looked for where there are none"


def settled(window) -> bool:
    """True when no question of the page is being worked on any more."""
    questions = ("cost", "room", "near", "steps", "map", "attend")
    return not window.answers.busy and all(window.answers.progress(q) is None for q in questions)


def test_a_question_shows_names_as_text(qtbot, qapp):
    seen = []

    def look():
        box = QApplication.activeModalWidget()
        try:
            seen.extend(texts(box))
        finally:
            box.reject()

    QTimer.singleShot(0, look)
    parent = QWidget()
    qtbot.addWidget(parent)
    tell(parent, f"{NAME} cannot be saved.")
    assert any(MARK in shown for _, shown in seen)
    assert [entry for entry in seen if not is_text(entry[1])] == []
    assert Choice("a", NAME).text == NAME


def test_names_are_text_on_paper(tmp_path, qapp):
    plan, out = tmp_path / "named.crew.json", tmp_path / "out.pdf"
    save_plan(named_in_html(), plan)
    write_page(plan, out)
    with pymupdf.open(out) as paper:
        said = "".join(page.get_text() for page in paper).replace("\n", "").replace(" ", "")
    assert said.count(MARK) > 5
    assert is_text(said)


def test_what_this_test_sees():
    assert not is_text(as_shown(NAME))
    assert is_text(as_shown(NAME, Qt.TextFormat.PlainText))
    assert is_text(as_shown("<b>&lt;i&gt;zork&lt;/i&gt;</b>"))
