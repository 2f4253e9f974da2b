from dataclasses import replace
from itertools import pairwise

import pytest

from desktop.pictures.margin_bars import bar_length, is_broken
from desktop.pictures.waterfall import WaterfallPicture, waterfall_axis
from desktop.pictures.waterfall_bars import BarKind, Miss, waterfall_bars, waterfall_sentence
from solver.answer import Policy
from tests.desktop import samples

NB = "\u00a0"


def misses():
    for answer, several in ((samples.hillside_answer(), False), (samples.museum_answer(), True)):
        for report in answer.crews:
            for broken in report.breaks:
                at = samples.MUSEUM_PHASES.index(broken.phase) if several else 0
                yield Miss(report.policy, broken, report.crew, answer.fractional, at)


def test_the_bars_sum_to_what_is_short():
    every = list(misses())
    assert len(every) > 10
    for miss in every:
        *build, end = waterfall_bars(miss)
        assert sum(bar.size for bar in build) == pytest.approx(-miss.broken.short)
        assert (end.start, end.end) == (0, pytest.approx(-miss.broken.short))
        assert end.kind is BarKind.END
        assert all(a.end == b.start for a, b in pairwise(build))


def test_what_is_given_up_has_a_bar():
    first = next(misses())
    freed = replace(first.broken, given_up={"Supervision by Lead hand": 40.0}, short=first.broken.short - 40)
    bars = waterfall_bars(replace(first, broken=freed))
    assert [b.name for b in bars if b.kind is BarKind.GIVEN_UP] == ["Supervision by Lead hand"]
    assert bars[-2].end == pytest.approx(bars[-1].end)


def one_move(policy=Policy.DOWN, was=9.41, now=9.0, size=-31.0, start=19.0):
    counts = {"Contract hand": (now,)}
    broken = samples.miss(
        ("Planting",), "h", {"Contract hand": size / (now - was)}, counts, {"Contract hand": (was,)}, 0
    )
    broken = replace(broken, fractional_margin=start, short=-(start + size))
    return Miss(policy, broken, counts, {"Contract hand": (was,)}, 0)


def test_the_sentence_is_plain():
    assert waterfall_sentence(one_move()) == (
        f"Rounding 9.41 Contract hand down to 9 takes 31{NB}h. "
        f"The fractional crew had 19{NB}h to spare. That leaves Planting 12{NB}h short."
    )


def test_the_sentence_of_an_own_crew_does_not_speak_of_rounding():
    text = waterfall_sentence(one_move(Policy.OWN, start=0.0))
    assert text == f"9 Contract hand instead of 9.41 takes 31{NB}h. That leaves Planting 31{NB}h short."


def test_a_category_rounded_away_and_a_phase_are_named():
    text = waterfall_sentence(replace(one_move(was=0.4, now=0.0, start=0.0), phase="The move"))
    assert "0.4 Contract hand down to none takes" in text
    assert "leaves Planting in The move" in text


def test_moves_over_several_phases_have_no_head_counts():
    text = waterfall_sentence(replace(one_move(start=0.0), crew={"Contract hand": (9.0, 8.0)}, at=None))
    assert text.startswith(f"Rounding Contract hand takes 31{NB}h.")


def test_the_axis_holds_zero_and_every_bar():
    for miss in misses():
        bars = waterfall_bars(miss)
        axis = waterfall_axis(bars, 100, 500)
        for value in [0, *(b.start for b in bars), *(b.end for b in bars)]:
            assert 100 <= axis.x(value) <= 500


def test_the_widget_tells_its_bars_in_words_and_as_a_table(qtbot):
    picture = WaterfallPicture()
    qtbot.addWidget(picture)
    miss = next(misses())
    picture.show_miss(miss)
    assert picture.accessibleDescription() == waterfall_sentence(miss)
    head, *rows = picture.rows()
    assert head[1] == "by (trees)"
    assert len(rows) == len(waterfall_bars(miss))
    assert rows[-1][0] == "Margin of Planting"
    picture.show_miss(None)
    assert picture.isHidden()


def test_bars_are_in_proportion_and_never_invisible():
    assert bar_length(-50, 100, 40) == pytest.approx(20)
    assert bar_length(100, 100, 40) == pytest.approx(40)
    assert bar_length(-0.01, 1e6, 40) > 1
    assert bar_length(0, 100, 40) == 0


def test_noise_is_not_a_miss():
    assert not is_broken(-1e-12)
    assert is_broken(-0.001)
