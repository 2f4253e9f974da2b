"""The page that gets signed: what it says, in what state, and how it is written."""

import os
from dataclasses import replace
from datetime import datetime
from itertools import pairwise
from pathlib import Path

import numpy as np
import pymupdf
import pytest
from pypdf import PdfReader
from PySide6.QtCore import QLocale

from desktop import messages
from desktop.page import (
    Details,
    PageTooFull,
    lay_out,
    page_bytes,
    paper,
    recommend,
    save_page,
    stamp,
    write_page,
)
from desktop.page.crew_grid import phases_shown
from desktop.page.detail import SMALLEST, STAGES
from desktop.page.fullest import fullest
from desktop.page.paper import PaperSize
from desktop.page.text import name, plain, shortened, text
from resources import example_paths
from solver.answer import (
    Attendance,
    CrewChance,
    Critical,
    LineKind,
    LineRoom,
    NearBest,
    NearCrew,
    PhaseAttendance,
    Policy,
    Proof,
    Room,
    SafeCrew,
    State,
)
from solver.plan import Plan
from solver.planfile import CannotSave, PlanProblems, UnreadableFile, content_hash, read_plan, save_plan
from solver.solve import solve
from tests.desktop import samples
from tests.desktop.page_reading import sizes_of, text_of
from tests.desktop.page_samples import Sample

ENGLISH = QLocale(QLocale.Language.English, QLocale.Country.UnitedKingdom)
WHEN = datetime(2031, 5, 6, 7, 8)


def made(plan, answer, **kept):
    return recommend(plan, answer, stamp(plan, Path("hill.crew.json"), WHEN, ENGLISH), locale=ENGLISH, **kept)


def spaced(words):
    """`words` with ordinary spaces."""
    return words.replace("\u00a0", " ")


def printed(plan, answer, size="A4", grey=False, **kept):
    return text_of(page_bytes(made(plan, answer, **kept), size=size, grey=grey))


@pytest.fixture
def hillside():
    return samples.hillside_plan(), samples.hillside_answer()


# what it says


def test_the_page_says_who_to_have_and_what_it_costs(qapp, hillside):
    words = printed(*hillside)
    assert (
        "Have 3 × Lead hand, 9 × Contract hand, 6 × Learner, 8 × Fencing gang and 0.5 × First-aider" in words
    )
    assert "EUR 133,690" in words
    assert "EUR 131,245.50" in words  # the floor
    assert "EUR 2,444.50 (1.83 %)" in words
    assert messages.CAUTION in words
    for label in ("Prepared by", "Checked by", "Date", "Signature"):
        assert label in words


def test_the_origin_of_the_page_is_on_it(qapp, hillside):
    words = printed(*hillside)
    assert "hill.crew.json" in words
    assert content_hash(hillside[0]) in words
    assert "proved (own search)" in words
    assert "every line was checked again exactly, hours to one second of work" in words
    assert "6 May 2031, 07:08" in words


def test_each_rounding_has_its_reason(qapp, hillside):
    reasons = {reason.label: spaced(reason.says) for reason in made(*hillside).rounding}
    assert list(reasons) == [
        "Rounded to nearest and largest remainder",
        "Rounded up",
        "Patched",
        "Rounded down",
        "Best corner",
    ]
    assert "Breaks 3 lines" in reasons["Rounded to nearest and largest remainder"]
    assert "because Lead hand went from 2.24 to 2" in reasons["Rounded to nearest and largest remainder"]
    assert "EUR 7,770 (5.81 %) more than the exact crew" in reasons["Rounded up"]
    assert "EUR 2,430 (1.82 %) more" in reasons["Patched"]
    assert reasons["Best corner"] == "No choice of down or up is workable: Planting stays short."


def test_a_proved_exact_crew_has_no_banner(qapp, hillside):
    assert made(*hillside).banner is None


def test_a_page_that_is_not_proved_says_so_in_a_band(qapp):
    what = made(samples.museum_plan(), samples.museum_answer())
    assert what.banner.title == "Not proved cheapest"
    assert "EUR 350 (0.5 %)" in spaced(what.banner.says)
    words = text_of(page_bytes(what))
    assert "NOT PROVED CHEAPEST" in words
    assert "Proved" not in words
    assert "best found, not proved" in words


def test_the_planners_own_crew_is_marked_with_its_extra_cost(qapp):
    own = samples.crew(3, 9, 7, 8, 0.5)
    what = made(samples.hillside_plan(), samples.hillside_answer(own), own=True)
    assert what.banner.title == "The planner’s own choice"
    assert "EUR 810 (0.61 %) more than the cheapest whole crew" in spaced(what.banner.says)
    words = text_of(page_bytes(what))
    assert "THE PLANNER’S OWN CHOICE" in words
    assert "7 × Learner" in words


def test_an_own_crew_that_breaks_lines_is_called_not_workable(qapp):
    answer = samples.hillside_answer(samples.crew(2, 9, 7, 8, 0.5))
    down = answer.report(Policy.NEAREST)
    broken = replace(down, policy=Policy.OWN)
    answer = replace(answer, crews=(*(r for r in answer.crews if r.policy is not Policy.OWN), broken))
    what = made(samples.hillside_plan(), answer, own=True)
    assert what.banner.title == "The planner’s own choice: not workable"
    assert "Learners per lead" in spaced(what.banner.says)
    assert "cannot do the job" in what.consequence


def test_an_own_crew_that_was_never_typed_cannot_be_recommended(qapp, hillside):
    with pytest.raises(ValueError, match="no crew of the planner's own"):
        made(*hillside, own=True)


def test_an_impossible_plan_gets_its_conflict_and_repairs(qapp):
    what = made(samples.hillside_plan(), samples.impossible_answer())
    assert what.table is None
    words = text_of(page_bytes(what))
    assert "NO WORKABLE CREW EXISTS" in words
    assert "Planting needs 52,000 trees" in words
    assert "Repair: 4,100 trees fewer." in words
    assert messages.CAUTION in words


def test_nothing_found_in_time_recommends_nobody(qapp, hillside):
    plan, answer = hillside
    nothing = replace(
        answer, state=State.BEST_FOUND, exact=None, proof=None, whole_people_cost=None, crews=()
    )
    words = printed(plan, nothing)
    assert "NO CREW TO RECOMMEND YET" in words
    assert "Have " not in words


def test_two_engines_are_named(qapp, hillside):
    plan, answer = hillside
    words = printed(plan, replace(answer, proof=Proof.TWO_ENGINES))
    assert "proved (two engines)" in words
    assert "CBC and HiGHS" in words


# what was worked out beside the answer


def room_line(line, saving, says, tighten=0.0):
    return LineRoom(line, LineKind.WORK, None, "trees", tighten, 5.0, saving, {}, 1.0, None, None, says)


def test_the_loosening_that_saves_most_is_told(qapp, hillside):
    room = Room(
        (room_line("Fencing", 90.0, "Less."), room_line("Planting", 700.0, "300 trees fewer.")), (), 4
    )
    what = made(*hillside, details=Details(room=room))
    assert what.loosening == "300 trees fewer."
    assert "One loosening: 300 trees fewer." in text_of(page_bytes(what))


def test_two_other_crews_at_most_and_never_the_same_one(qapp, hillside):
    plan, answer = hillside
    other = [samples.crew(3, 10, 5, 8, 0.5), samples.crew(4, 8, 6, 8, 0.5), samples.crew(3, 9, 8, 8, 0.5)]
    crews = [NearCrew(answer.exact.crew, 133690, 0, 19, 0, 26, "Planting")]
    crews += [NearCrew(c, 133690 + 50 * i, 50.0 * i, 20, 1, 27, "Planting") for i, c in enumerate(other)]
    what = made(plan, answer, details=Details(near=NearBest(tuple(crews), True)))
    assert [line.label for line in what.alternatives] == ["At the same cost", "EUR\u00a050 more"]
    assert "10\u00a0×\u00a0Contract hand" in what.alternatives[0].says


def test_beside_the_own_crew_the_exact_one_is_an_alternative(qapp):
    own = samples.crew(3, 9, 7, 8, 0.5)
    answer = samples.hillside_answer(own)
    near = NearBest((NearCrew(answer.exact.crew, 133690, 0, 19, 0, 26, "Planting"),), True)
    what = made(samples.hillside_plan(), answer, own=True, details=Details(near=near))
    assert [spaced(line.label) for line in what.alternatives] == ["The exact crew, EUR 133,690"]


def days(covered, error=0.0, critical=()):
    return PhaseAttendance("Whole job", covered, error, {}, {}, {}, 0, {}, critical, 40, 0)


def attended(*phases, wanted=None, compared=()):
    return Attendance(0.95, phases, wanted, "", None, compared, (), False)


def test_the_attendance_line_stands_where_it_was_worked_out(qapp, hillside):
    assert "If people are away" not in printed(*hillside)
    crew = samples.crew(4, 10, 6, 8, 0.5)
    wanted = SafeCrew(0.95, crew, 136000, 2310.0, 0.961, (0.961,), True, 136000)
    found = attended(days(0.8725, 0.0, (Critical("Lead hand", 0.38),)), wanted=wanted)
    words = printed(*hillside, details=Details(attendance=found))
    assert "If people are away Enough of them are there on 87.3 % of days." in words
    assert "With one Lead hand away, 38 % of days are stopped." in words
    assert "The cheapest crew for 95 % of days costs EUR 2,310 more: 4 × Lead hand" in words


def test_an_attendance_is_never_rounded_up_to_always(qapp, hillside):
    def line(found, **kept):
        return spaced(made(*hillside, details=Details(attendance=found), **kept).attendance)

    assert "more than 99.9 % of days" in line(attended(days(0.99999)))
    assert "on 100 % of days" in line(attended(days(1.0)))
    assert "(from drawn days, standard error 0.2 %)" in line(attended(days(0.9, 0.002)))


def test_the_own_crew_has_its_own_chance(qapp):
    own = samples.crew(3, 9, 7, 8, 0.5)
    chance = CrewChance("own", own, True, 134500, 0.91, (0.91,))
    details = Details(attendance=attended(days(0.8), compared=(chance,)))
    answer = samples.hillside_answer(own)
    line = made(samples.hillside_plan(), answer, own=True, details=details).attendance
    assert spaced(line) == "Enough of them are there on 91 % of days."


# the sheet


@pytest.mark.parametrize("size", list(PaperSize))
@pytest.mark.parametrize("path", example_paths(), ids=lambda p: p.stem.split(".")[0])
def test_every_example_fits_both_papers(qapp, path, size):
    plan = read_plan(path)
    what = made(plan, solve(plan))
    content = page_bytes(what, size=size)
    with pymupdf.open(stream=content, filetype="pdf") as document:
        assert document.page_count == 1
        assert tuple(document[0].rect)[2:] == pytest.approx((paper(size).width, paper(size).height), abs=1)
    assert min(sizes_of(content)) >= SMALLEST - 0.01


def test_greyscale_has_no_colour(qapp):
    what = made(samples.museum_plan(), samples.museum_answer())
    assert _colourful(page_bytes(what)) > 0
    assert _colourful(page_bytes(what, grey=True)) == 0


def _colourful(content):
    """How many pixels are not grey."""
    with pymupdf.open(stream=content, filetype="pdf") as document:
        picture = document[0].get_pixmap(dpi=72)
        pixels = np.frombuffer(picture.samples, np.uint8).reshape(-1, picture.n)[:, :3].astype(int)
    return int((pixels.max(axis=1) - pixels.min(axis=1) > 3).sum())


def test_an_unknown_paper_is_refused_by_name(qapp):
    with pytest.raises(ValueError, match="paper size 'A7': use A4 or Letter"):
        paper("A7")


def test_every_stage_takes_away_and_none_goes_below_eight_points():
    assert all(stage.body >= SMALLEST and stage.headline >= SMALLEST for stage in STAGES)
    for fuller, barer in pairwise(STAGES):
        for field in ("headline", "body", "air", "assumptions", "tally", "alternatives", "rounding", "table"):
            assert getattr(fuller, field) >= getattr(barer, field)


def test_a_crowded_page_is_laid_out_at_the_first_stage_that_fits(qapp):
    plan = samples.hillside_plan()
    what = made(plan, samples.hillside_answer())
    crowded = replace(what, assumptions=what.assumptions * 40)
    detail = lay_out(crowded, paper("A4")).detail
    assert detail.assumptions < len(crowded.assumptions)
    assert detail.tally >= len(plan.categories)


def test_of_very_many_phases_the_fullest_are_shown(qapp):
    sample = Sample(1, (20, 52))
    what = made(sample.plan, sample.answer)
    detail = lay_out(what, paper("A4")).detail
    shown = phases_shown(what.table, detail.phases)
    totals = [sum(row.heads[t] for row in what.table.rows) for t in range(52)]
    assert 1 <= len(shown) < 52
    assert min(totals[t] for t in shown) >= max(totals[t] for t in range(52) if t not in shown)
    words = text_of(page_bytes(what))
    assert f"The {len(shown)} fullest of 52 phases" in words


def test_a_page_no_stage_can_hold_is_refused_in_a_sentence(qapp, hillside):
    what = replace(made(*hillside), consequence="word " * 3000)
    with pytest.raises(PageTooFull, match=r"too long for one page .*\.$"):
        lay_out(what, paper("A4"))


def test_markup_in_names_is_text(qapp):
    plan = replace(samples.hillside_plan(), title="<b>Hill</b> &amp; <script>alert(1)</script>")
    assert "<b>Hill</b> &amp; <script>alert(1)</script>" in printed(plan, samples.hillside_answer())


def test_names_are_one_line_and_turn_nothing_around():
    assert plain(" a\n\tb\u202e c\x00 ") == "a b c"
    assert name("long " * 30, 12) == "long long l…"
    assert name("עובד") == "\u2068עובד\u2069"


def test_shortened_text_keeps_its_lines(qapp):
    short = shortened(text("word " * 60, 9.0), 100.0, 2)
    assert short.words.endswith("…")
    assert shortened(short, 100.0, 2) == short


def test_the_fullest_entries_stay_in_their_order():
    assert fullest("abcd", [1.0, 5.0, 5.0, 7.0], 2) == ["b", "d"]


# writing it


def test_write_page_needs_only_a_plan_file(qapp, tmp_path):
    path, out = example_paths()[0], tmp_path / "page.pdf"
    write_page(path, out)
    reader = PdfReader(out)
    assert len(reader.pages) == 1
    words = " ".join(reader.pages[0].extract_text().split())
    answer = solve(read_plan(path))
    for category, counts in answer.exact.crew.items():
        assert f"{counts[0]:.0f} × {category}" in words
    assert messages.CAUTION in words


def test_a_plan_with_problems_writes_no_page(qapp, tmp_path):
    path, out = tmp_path / "bad.crew.json", tmp_path / "page.pdf"
    save_plan(Plan(), path)
    path.write_text(path.read_text().replace('"periods": 1', '"periods": -1'), "utf-8")
    with pytest.raises(PlanProblems):
        write_page(path, out)
    with pytest.raises(UnreadableFile):
        write_page(tmp_path / "missing.crew.json", out)
    assert not out.exists()


@pytest.mark.skipif(os.name == "nt", reason="file permissions of POSIX")
def test_a_page_that_cannot_be_written_leaves_the_old_one(qapp, tmp_path, hillside):
    out = tmp_path / "page.pdf"
    out.write_bytes(b"the old page")
    out.chmod(0o444)
    with pytest.raises(CannotSave):
        save_page(made(*hillside), out)
    assert out.read_bytes() == b"the old page"
    with pytest.raises(CannotSave):
        save_page(made(*hillside), tmp_path / "nowhere" / "page.pdf")
    assert [p.name for p in tmp_path.iterdir()] == ["page.pdf"]
