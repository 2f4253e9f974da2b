import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QCheckBox, QComboBox, QLabel, QScrollBar, QSpinBox, QVBoxLayout, QWidget

from desktop import theme as themes

EVERY = [themes.light(), themes.dark(), themes.print_theme(), themes.print_theme(greyscale=True)]


@pytest.mark.parametrize("theme", EVERY, ids=lambda t: t.name)
def test_text_stands_out_from_its_ground(theme):
    weak = {
        name: round(themes.contrast(text, ground), 2)
        for name, text, ground in theme.text_pairs()
        if themes.contrast(text, ground) < 4.5
    }
    assert weak == {}


def test_contrast_of_black_on_white_is_21():  # WCAG 2.1, definition of contrast ratio: 1 to 21
    assert themes.contrast(QColor("#000000"), QColor("#ffffff")) == pytest.approx(21)
    assert themes.contrast(QColor("#777777"), QColor("#ffffff")) == pytest.approx(4.48, abs=0.005)


def test_the_applied_theme_is_the_current_one(qapp):
    themes.apply(qapp, themes.dark())
    assert themes.current().dark
    assert qapp.palette().window().color() == themes.dark().paper
    themes.apply(qapp, themes.light())
    assert not themes.current().dark


def test_sizes_follow_zoom(qtbot, qapp):
    from dataclasses import replace

    themes.apply(qapp, replace(themes.light(), zoom=1.5))
    label = themes.dress(QLabel("12"), themes.Size.LARGE, "exact")
    qtbot.addWidget(label)
    label.ensurePolished()
    assert label.font().pointSizeF() == pytest.approx(30)
    assert themes.current().px(1) == 12
    themes.apply(qapp, themes.light())
    assert label.font().pointSizeF() == pytest.approx(20)
    assert label.palette().windowText().color() == themes.light().exact


@pytest.mark.parametrize("theme", [themes.light(), themes.dark()], ids=lambda t: t.name)
def test_boxes_to_tick_are_seen_ticked_or_not(theme, qtbot, qapp):
    themes.apply(qapp, theme)
    box = QCheckBox("x")
    qtbot.addWidget(box)
    seen = {}
    for ticked in (False, True):
        box.setChecked(ticked)
        image = box.grab().toImage()
        middle = image.height() // 2
        line = [image.pixelColor(x, middle) for x in range(theme.px(2))]
        seen[ticked] = line
        # WCAG 2.1, 1.4.11 non-text contrast: at least 3 to 1
        assert max(themes.contrast(colour, theme.paper) for colour in line) >= 3
    assert seen[False] != seen[True]
    image = box.grab().toImage()  # nobody has the focus: nothing is framed but the box
    assert image.pixelColor(image.width() - 1, 0) == image.pixelColor(image.width() - 1, image.height() // 2)
    assert image.pixelColor(image.width() // 2, 0) == theme.paper
    themes.apply(qapp, themes.light())


@pytest.mark.parametrize("theme", [themes.light(), themes.dark()], ids=lambda t: t.name)
@pytest.mark.parametrize("kind", [QComboBox, QSpinBox])
def test_the_focus_is_seen_on_choices_and_numbers(theme, kind, qtbot, qapp):
    themes.apply(qapp, theme)
    window = QWidget()
    qtbot.addWidget(window)
    layout = QVBoxLayout(window)
    parts = [kind(), kind()]
    for part in parts:
        layout.addWidget(part)
    with qtbot.waitActive(window):
        window.show()
        window.activateWindow()
    parts[0].setFocus(Qt.FocusReason.TabFocusReason)
    QTest.keyClick(parts[0], Qt.Key.Key_Tab)
    edges = []
    for part in parts:
        image = part.grab().toImage()
        edges.append([image.pixelColor(x, image.height() // 2) for x in range(2)])
    assert parts[1].hasFocus()
    assert max(themes.contrast(colour, theme.paper) for colour in edges[1]) >= 3
    assert edges[0] != edges[1]
    themes.apply(qapp, themes.light())


@pytest.mark.parametrize("theme", [themes.light(), themes.dark()], ids=lambda t: t.name)
@pytest.mark.parametrize("way", list(Qt.Orientation))
def test_the_handle_of_a_scroll_bar_stands_out(theme, way, qtbot, qapp):
    themes.apply(qapp, theme)
    bar = QScrollBar(way)
    qtbot.addWidget(bar)
    bar.setRange(0, 100)
    bar.setPageStep(50)
    bar.resize(*((160, theme.px(1.25)) if way is Qt.Orientation.Horizontal else (theme.px(1.25), 160)))
    image = bar.grab().toImage()
    across = way is Qt.Orientation.Horizontal
    middle = theme.px(0.625)
    line = [image.pixelColor(*((at, middle) if across else (middle, at))) for at in range(160)]
    # WCAG 2.1, 1.4.11 non-text contrast: at least 3 to 1
    assert themes.contrast(line[20], theme.paper) >= 3
    assert line[140] == theme.paper
    themes.apply(qapp, themes.light())


@pytest.mark.parametrize("theme", [themes.light(), themes.dark()], ids=lambda t: t.name)
def test_a_number_to_type_has_a_frame_like_a_text_to_type(theme, qtbot, qapp):
    themes.apply(qapp, theme)
    box = QSpinBox()
    qtbot.addWidget(box)
    image = box.grab().toImage()
    edge = max(themes.contrast(image.pixelColor(x, image.height() // 2), theme.paper) for x in range(2))
    assert edge >= 0.95 * themes.contrast(theme.rule, theme.paper)
    themes.apply(qapp, themes.light())


def test_an_unknown_system_scheme_is_light(qapp):
    assert themes.of_system().name in ("light", "dark")
