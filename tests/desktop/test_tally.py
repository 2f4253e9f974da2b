from itertools import pairwise

import pytest

from desktop.pictures.figure import Mark
from desktop.pictures.tally_layout import TallyMetrics, TallyRow, coins, tally_layout

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
