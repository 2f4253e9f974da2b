from collections import Counter
from dataclasses import replace
from itertools import pairwise

import pytest
from pypdf import PdfReader
from PySide6.QtCore import QRect, QRectF
from PySide6.QtGui import QImage, QPainter, QPdfWriter

from desktop import figures
from desktop import theme as themes
from desktop.pictures.figure import Mark
from desktop.pictures.phase_tally import phase_edges, step_points
from desktop.pictures.sideways import Sideways
from desktop.pictures.tally import TallyPicture, _legend, paint_tally, tally_height
from desktop.pictures.tally_layout import (
    Tally,
    TallyMetrics,
    TallyPhase,
    TallyRow,
    coins,
    tally_layout,
    tally_of,
)
from tests.desktop import samples
from tests.family import family_plan

METRICS = TallyMetrics(figures_width=600)


def told(figures, *marks):
    return sum(f.people * f.filled for f in figures if f.mark in marks)


@pytest.mark.parametrize(
    ("fractional", "exact", "before", "lot"),
    [
        (9.41, 9, 0, 1),
        (0.4, 1, 1, 1),
        (0.5, 0.5, 0, 0.5),
        (6.8, 8, 4, 4),
        (3.2, 3, 5, 1),
        (391.6, 400, 380, 1),
        (0, 0, 2, 1),
        (12345.25, 12346, 0.7, 1),
    ],
)
def test_the_figures_add_up_to_the_people(fractional, exact, before, lot):
    row = TallyRow("Hand", (fractional,), (exact,), before, lot)
    (placed,) = tally_layout([row], METRICS).rows
    assert told(placed.figures, Mark.FRACTIONAL) == pytest.approx(fractional)
    assert told(placed.figures, Mark.STAYS, Mark.JOINS) == pytest.approx(exact)
    assert told(placed.figures, Mark.JOINS) == pytest.approx(max(0, exact - before))
    assert told(placed.figures, Mark.LEAVES) == pytest.approx(max(0, before - exact))


def test_a_fractional_person_is_one_partly_filled_figure():
    (placed,) = tally_layout([TallyRow("Hand", (9.41,), (9,))], METRICS).rows
    partly = [f for f in placed.figures if f.filled < 1]
    assert len(partly) == 1
    assert partly[0].filled == pytest.approx(0.41)
    assert partly[0].mark is Mark.FRACTIONAL
    assert partly[0] == max((f for f in placed.figures if f.mark is Mark.FRACTIONAL), key=lambda f: f.x)


def test_the_fractional_crew_stands_above_the_exact_one():
    (placed,) = tally_layout([TallyRow("Hand", (2.2,), (3,), before=1)], METRICS).rows
    upper = max(f.y + f.height for f in placed.figures if f.mark is Mark.FRACTIONAL)
    lower = min(f.y for f in placed.figures if f.mark is not Mark.FRACTIONAL)
    assert upper <= lower


def test_a_gang_of_four_stands_together():
    (placed,) = tally_layout([TallyRow("Gang", None, (8,), lot=4)], METRICS).rows
    gaps = [round(b.x - a.x - a.width, 3) for a, b in pairwise(placed.figures)]
    assert gaps[3] > gaps[0]
    assert gaps == [*gaps[:3], gaps[3], *gaps[:3]]


@pytest.mark.parametrize(("peak", "scale"), [(30, 1), (43, 10), (400, 100), (7000, 1000)])
def test_large_crews_have_a_scale_that_fits_one_line(peak, scale):
    layout = tally_layout([TallyRow("Many", (peak - 0.4,), (peak,)), TallyRow("Few", (2.5,), (3,))], METRICS)
    assert layout.scale == scale
    for row in layout.rows:
        assert all(f.x + f.width <= METRICS.figures_width + 1e-9 for f in row.figures)
    few = [f for f in layout.rows[1].figures if f.mark is Mark.JOINS]
    assert [f.people for f in few] == [1, 1, 1]


def test_coins():
    assert coins(43.5, 10) == [(10, 1.0)] * 4 + [(1, 1.0)] * 3 + [(1, 0.5)]
    assert coins(243.5, 100) == [(100, 1.0)] * 2 + [(10, 1.0)] * 4 + [(10, 0.35)]
    assert coins(2.9999999, 1) == [(1, 1.0)] * 3
    assert coins(0, 10) == []


@pytest.fixture(params=["hillside", "museum", "many"])
def tally(request):
    if request.param == "hillside":
        answer = samples.hillside_answer()
        return tally_of(samples.hillside_plan(), answer.fractional, answer.exact.crew)
    if request.param == "museum":
        answer = samples.museum_answer()
        return tally_of(samples.museum_plan(), answer.fractional, answer.exact.crew)
    rows = (TallyRow("Picker", (391.6,), (400,), 380), TallyRow("Half post", (0.4,), (0.5,), 1, 0.5))
    return Tally((TallyPhase("Harvest", 3),), rows, "week")


def colours(image):
    return {image.pixelColor(x, y).rgb() for x in range(image.width()) for y in range(image.height())}


def test_the_painter_shows_both_crews_and_keeps_inside(qapp, tally):
    theme = themes.light()
    height = round(tally_height(tally, theme))
    image = QImage(700, height + 40, QImage.Format.Format_RGB32)
    image.fill(theme.paper)
    painter = QPainter(image)
    paint_tally(painter, QRectF(20, 20, 660, height), tally, theme)
    painter.end()
    assert {theme.exact.rgb(), theme.fractional.rgb()} <= colours(image)
    for edge in (QRect(0, 0, 700, 18), QRect(0, 0, 18, height), QRect(682, 0, 18, height)):
        assert colours(image.copy(edge)) == {theme.paper.rgb()}


def printed(tally, target, width, theme, **options):
    """The tally as a page of a PDF."""
    writer = QPdfWriter(str(target))
    writer.setResolution(96)
    painter = QPainter(writer)
    paint_tally(painter, QRectF(0, 0, width, 400), tally, theme, **options)
    painter.end()
    return PdfReader(target).pages[0]


def test_narrow_phases_still_tell_who_joins_and_leaves_and_cut_no_name(qapp, tmp_path):
    answer = samples.museum_answer()
    tally = tally_of(samples.museum_plan(), answer.fractional, answer.exact.crew)
    zoomed = replace(themes.print_theme(), zoom=1.5)
    # as wide as the crew page leaves it in a window of 1366 pixels at 150 %
    words = printed(tally, tmp_path / "tally.pdf", 678, zoomed).extract_text().split()
    moves = [row.joiners(at) or -row.leavers(at) for row in tally.rows for at in range(len(tally.phases))]
    told = Counter(word for word in words if word[0] in "+\u2212" and len(word) > 1)
    assert told == Counter(figures.change(move) for move in moves if move)
    assert not any("\u2026" in word for word in words)


def test_without_a_whole_crew_the_name_stands_beside_the_figures(qapp):
    row, theme = TallyRow("Picker", (3.0,), None, 0, 1), themes.light()
    image = QImage(400, 80, QImage.Format.Format_RGB32)
    image.fill(theme.paper)
    painter = QPainter(image)
    paint_tally(
        painter, QRectF(0, 0, 400, 80), Tally((TallyPhase("Harvest", 3),), (row,)), theme, legend=False
    )
    painter.end()
    top, below = QRect(0, 0, 50, 29), QRect(0, 30, 400, 50)
    assert len(colours(image.copy(top))) > 1
    assert colours(image.copy(below)) == {theme.paper.rgb()}


def test_print_is_vector_with_text(qapp, tally, tmp_path):
    page = printed(tally, tmp_path / "tally.pdf", 600, themes.print_theme(), shrink=0.8)
    assert not list(page.images)
    text = page.extract_text()
    assert all(row.name.split()[0] in text for row in tally.rows)


def test_joiners_and_leavers_follow_from_the_phase_before():
    row = TallyRow("Porter", None, (1, 5, 2), before=2)
    assert [row.joiners(at) for at in range(3)] == [0, 4, 0]
    assert [row.leavers(at) for at in range(3)] == [1, 0, 3]


def test_long_phases_are_wider_and_short_ones_stay_readable():
    phases = (TallyPhase("a", 1), TallyPhase("b", 9))
    left, middle, right = phase_edges(phases, 0, 100)
    assert (left, right) == (0, pytest.approx(100))
    assert middle == pytest.approx(30)


def test_steps_stand_at_their_counts():
    points = step_points((1, 3), (0, 10, 20), base=100, unit=5)
    assert [(p.x(), p.y()) for p in points] == [(0, 95), (10, 95), (10, 85), (20, 85)]


def test_many_phases_scroll_in_their_own_frame_and_the_names_stay(qtbot, qapp):
    plan = family_plan(3, 1, 52, 0)
    crew = {c.name: tuple(float(n % 4) for n in range(52)) for c in plan.categories}
    picture = TallyPicture()
    frame = Sideways(picture)
    qtbot.addWidget(frame)
    frame.resize(700, 400)
    frame.show()
    picture.show_tally(tally_of(plan, None, crew))
    frame.fit()
    bar = frame.horizontalScrollBar()
    qtbot.waitUntil(lambda: bar.maximum() > 2000)
    assert frame.minimumSizeHint().width() < 700  # the page can stay as narrow as it is
    assert frame.height() >= picture.sizeHint().height() + bar.sizeHint().height()
    names = QRect(0, 60, 80, 150)
    before = frame.viewport().grab(names).toImage()
    bar.setValue(1500)
    assert frame.viewport().grab(names).toImage() == before
    picture.show_tally(tally_of(samples.museum_plan(), None, samples.museum_answer().exact.crew))
    frame.fit()
    qtbot.waitUntil(lambda: bar.maximum() == 0)
    assert frame.height() == picture.sizeHint().height()


def test_a_crew_that_is_not_proved_is_not_called_exact(qapp):
    legend = [
        text for _, text in _legend(Tally((), (TallyRow("A", None, (2.0,), 1.0, 1.0),), proved=False), 1)
    ]
    assert "best crew found, on the books" in legend


def test_what_is_seen_is_painted_as_in_the_whole(qapp):
    plan = family_plan(6, 1, 12, 0)
    crew = {c.name: tuple(float((n + j) % 4) for n in range(12)) for j, c in enumerate(plan.categories)}
    tally, whole = tally_of(plan, crew, crew), QRect(0, 0, 1200, 500)
    part = QRect(400, 120, 300, 150)

    def painted(seen):
        image = QImage(whole.size(), QImage.Format.Format_RGB32)
        image.fill(themes.light().paper)
        painter = QPainter(image)
        paint_tally(painter, QRectF(whole), tally, themes.light(), seen=seen)
        painter.end()
        return image

    assert painted(QRectF(part)).copy(part) == painted(None).copy(part)
    assert painted(QRectF(part)) != painted(None)
