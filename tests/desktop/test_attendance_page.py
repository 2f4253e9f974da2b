from dataclasses import replace
from decimal import Decimal

import pyqtgraph as pg
import pytest
from PySide6.QtCore import QPointF, Qt

from desktop import attendance_words as say
from desktop import theme
from desktop.messages import CAUTION
from desktop.pages.attendance_page import AttendancePage, lines_of
from desktop.pictures.attendance_curve import AttendanceCurve
from desktop.pictures.chances import curve_of, share
from desktop.rail import PAGES
from solver.answer import Attendance, CrewChance, Critical, PhaseAttendance, SafeCrew
from solver.plan import Budget
from tests.desktop import samples
from tests.desktop.test_question_pages import make as make

NB = "\u00a0"
EXACT, SAFER, SAFEST = (
    samples.crew(3, 9, 6, 8, 0.5),
    samples.crew(4, 9, 6, 8, 0.5),
    samples.crew(4, 11, 6, 8, 1),
)


def safe(wanted, crew, cost, covered, proved=True):
    return SafeCrew(
        wanted, crew, cost, cost - 133690, covered, (covered,), proved, cost if proved else cost - 900
    )


def phase_days(name="Whole job", covered=0.62) -> PhaseAttendance:
    return PhaseAttendance(
        phase=name,
        covered=covered,
        error=0.0,
        by_line={"Planting": 0.8, "Supervision by Lead hand": 0.7, "First aid": 0.9997},
        expected_short={"Planting": 212.4, "Supervision by Lead hand": 0.0},
        expected_error={"Planting": 0.0, "Supervision by Lead hand": 0.0},
        survives=1,
        first_miss={"Lead hand": 2.0},
        critical=(Critical("Lead hand", 0.38), Critical("Learner", 0.0)),
        patterns=900,
        drawn=0,
    )


def attended(**changes) -> Attendance:
    found = Attendance(
        chance=0.95,
        phases=(phase_days(),),
        wanted=safe(0.95, SAFEST, 139000, 0.961),
        why_none="",
        beyond_budget=None,
        compared=(
            CrewChance("exact", EXACT, True, 133690, 0.62, (0.62,)),
            CrewChance("patched", SAFER, True, 134900, 0.55, (0.55,)),
            CrewChance("up", SAFEST, False, None, 0.97, (0.97,)),
            CrewChance("own", SAFER, True, 134950, 0.56, (0.56,)),
        ),
        curve=(
            safe(0.62, EXACT, 133690, 0.62),
            safe(0.8, SAFER, 135000, 0.83, proved=False),
            safe(0.95, SAFEST, 139000, 0.961),
        ),
        simulated=False,
    )
    return replace(found, **changes)


@pytest.fixture
def page(make):
    page, _, answers = make(AttendancePage)
    answers.give("attend", attended())
    yield page
    page.close()


def test_the_wanted_chance_is_asked_for_and_cancelled(make, qtbot):
    page, _, answers = make(AttendancePage)
    assert answers.asked == [("attend", {"chance": 0.95})]
    assert page.says.text() == "Half way"
    assert not page.sentence.isVisible()
    assert not page.take.isEnabled()
    qtbot.mouseClick(page.cancel_button, Qt.MouseButton.LeftButton)
    assert answers.progress("attend") is None
    page.chance.setValue(99)
    qtbot.waitUntil(lambda: answers.asked[-1] == ("attend", {"chance": 0.99}))
    page.close()


def test_what_the_planner_reads_first(page):
    assert page.sentence.text() == f"The exact crew is enough on 62{NB}% of days."
    assert page.wanted.text() == (
        f"For 95{NB}% of days: 4{NB}Lead hand · 11{NB}Contract hand · 6{NB}Learner · 8{NB}Fencing gang · "
        f"1{NB}First-aider, EUR{NB}5,310 more than the exact crew; it is enough on 96.1{NB}%."
    )
    assert page.caution.text() == CAUTION
    assert "independently of the others" in page.method.text()
    assert say.EXACT_CHANCES in page.method.text()


def test_crews_side_by_side(page, qtmodeltester):
    qtmodeltester.check(page.crews)
    shown = [[page.crews.index(i, j).data() for j in range(1, 4)] for i in range(4)]
    assert shown[0] == [f"62{NB}%", "133,690", "–"]
    assert shown[1] == [f"55{NB}%", "134,900", "1,210"]
    assert shown[2] == [f"97{NB}%", "not workable", "–"]
    page.crews_view.selectRow(1)
    assert page.who.text().startswith(f"patched: 4{NB}Lead hand")


def test_lines_and_who_is_missed(page, qtmodeltester):
    qtmodeltester.check(page.lines)
    qtmodeltester.check(page.missed)
    assert [row[0] for row in lines_of(phase_days())] == ["Supervision by Lead hand", "Planting", "First aid"]
    shown = [[page.lines.index(i, j).data() for j in range(3)] for i in range(3)]
    assert shown[0] == ["Supervision by Lead hand", f"70{NB}%", "–"]
    assert shown[1] == ["Planting", f"80{NB}%", f"212{NB}trees"]
    assert shown[2] == ["First aid", f"over{NB}99.9{NB}%", ""]
    assert page.missed.index(0, 1).data() == f"38{NB}%"
    assert page.survives.text() == (
        "Whoever it is, one person may be away and the day is still covered. "
        f"2{NB}Lead hand away stops the day."
    )


def test_the_cursor_starts_on_the_wanted_crew_and_moves_by_keyboard(page, qtbot):
    assert page.picture.crew.cost == 139000
    page.picture.setFocus()
    qtbot.keyClick(page.picture, Qt.Key.Key_Left)
    assert page.picture.crew.cost == 135000
    assert page.looked.text().endswith(
        f"Not proved: there may be a cheaper one, but none below EUR{NB}134,100."
    )
    qtbot.keyClick(page.picture, Qt.Key.Key_Left)
    qtbot.keyClick(page.picture, Qt.Key.Key_Left)
    assert page.picture.crew.cost == 133690


def test_a_crew_of_the_curve_becomes_the_own_crew(page, qtbot):
    qtbot.mouseClick(page.take, Qt.MouseButton.LeftButton)
    own = page.document.plan.own
    assert own["Contract hand"] == (Decimal(11),)
    assert own["First-aider"] == (Decimal(1),)
    page.document.undo_stack.undo()
    assert not page.document.plan.own


def test_an_own_crew_that_changed_since_is_not_compared(page):
    assert [crew.name for crew in page.crews.rows][-1] == "own"
    page.picture.look_at(1)
    page.take_crew()
    page.refresh()
    assert [crew.name for crew in page.crews.rows] == ["exact", "patched", "up"]
    assert page.own_changed.isVisible()
    assert page.ask_button.isVisible()


def test_the_picture_has_its_table_and_is_described(page):
    rows = page.picture.rows()
    assert len(rows) == 1 + 3 + 2
    assert rows[1][1:3] == [f"62{NB}%", f"EUR{NB}133,690"]
    assert rows[-1][0] == "own"
    assert (
        page.picture.accessibleDescription() == f"3 crews, from enough people on 62{NB}% of days to 96.1{NB}%"
    )


def drawn(picture, kind):
    return [item for item in picture.plot.getPlotItem().items if isinstance(item, kind)]


def test_the_picture_follows_the_zoom(page, qapp):
    def sizes():
        marks = [mark.opts["size"] for mark in drawn(page.picture, pg.ScatterPlotItem)]
        names = [name.textItem.font().pointSizeF() for name in drawn(page.picture, pg.TextItem)]
        axis = page.picture.plot.getAxis("left").style["tickFont"].pointSizeF()
        return [*marks, *names, axis, page.picture.minimumHeight()]

    before = sizes()
    theme.apply(qapp, replace(theme.light(), zoom=1.5))
    try:
        assert len(before) > 6
        assert sizes() == pytest.approx([1.5 * size for size in before])
    finally:
        theme.apply(qapp, theme.light())


def test_names_and_the_budget_keep_off_the_curve(page):
    plan = replace(samples.hillside_plan(), rules=(Budget("Money", Decimal(136000)),))
    page.picture.show_curve(plan, curve_of(plan, attended()))
    page.picture.resize(500, 300)
    box = page.picture.plot.getPlotItem().getViewBox()
    names = [name.mapRectToScene(name.boundingRect()) for name in drawn(page.picture, pg.TextItem)]
    dots = [box.mapViewToScene(QPointF(100 * c.covered, c.cost)) for c in attended().curve]
    assert len(names) == 3
    for name in names:
        assert box.sceneBoundingRect().contains(name)
        assert not any(name.contains(dot) for dot in dots)
    key = [label.text for _, label in page.picture.plot.getPlotItem().legend.items]
    assert say.BUDGET in key


def test_other_crews_are_shown_beside_the_curve_once():
    plan = replace(samples.hillside_plan(), rules=(Budget("Money", Decimal(136000)),))
    shown = curve_of(plan, attended())
    assert [crew.name for crew in shown.others] == ["patched", "own"]
    assert shown.budget == 136000


def test_no_crew_within_the_budget_says_what_it_would_take(make):
    page, _, answers = make(AttendancePage)
    why = "No workable crew covers 95 % of days within the budget."
    beyond = safe(0.95, SAFEST, 139000, 0.961)
    answers.give("attend", attended(wanted=None, why_none=why, beyond_budget=beyond))
    assert page.wanted.text().startswith(f"{why} Without the budget, for 95{NB}% of days: 4{NB}Lead hand")
    answers.give("attend", attended(wanted=None, why_none="None at all."))
    assert page.wanted.text() == "None at all."
    page.close()


def test_phases_are_chosen_and_the_worst_is_first(make):
    page, _, answers = make(AttendancePage, samples.museum_plan(), samples.museum_answer())
    crew = samples.museum_answer().exact.crew
    names = [phase.name for phase in samples.museum_plan().phases]
    phases = tuple(phase_days(name, covered) for name, covered in zip(names, (0.9, 0.5, 0.7), strict=True))
    curve = (SafeCrew(0.5, crew, 70250, 0, 0.5, (0.9, 0.5, 0.7), True, 70250),)
    compared = (CrewChance("exact", crew, True, 70250, 0.5, (0.9, 0.5, 0.7)),)
    answers.give(
        "attend", attended(phases=phases, curve=curve, compared=compared, wanted=None, why_none="None.")
    )
    assert page.phase.isVisible()
    assert page.phase.currentText() == names[1]
    assert (
        page.sentence.text() == f"The exact crew is enough on 50{NB}% of days in {names[1]}, the worst phase."
    )
    page.phase.setCurrentIndex(0)
    assert page.lines.rowCount() == 3
    page.close()


def test_drawn_days_are_told_with_their_error(make):
    page, _, answers = make(AttendancePage)
    phase = replace(phase_days(), drawn=20000, error=0.0034)
    answers.give("attend", attended(phases=(phase,), simulated=True))
    assert (
        f"20,000 drawn days, the same for every crew, with a standard error of 0.34{NB}%"
        in page.method.text()
    )
    page.close()


@pytest.mark.parametrize(
    ("chance", "text"),
    [(0.0, "–"), (1.0, f"100{NB}%"), (0.99999, f"over{NB}99.9{NB}%"), (1e-5, f"under{NB}0.1{NB}%"),
     (0.9494, f"94.9{NB}%")],
)  # fmt: skip
def test_a_share_never_claims_always_or_never(chance, text):
    assert share(chance) == text


@pytest.mark.parametrize(
    ("count", "missing", "says"),
    [
        (None, [], "Even with everybody there"),
        (0, ["1 Lead hand"], "A single absence can stop a day: 1 Lead hand away stops the day."),
        (0, [], "A single absence can stop a day."),
        (3, [], "Whoever it is, any 3 people may be away"),
    ],
)
def test_absences_survived_in_words(count, missing, says):
    assert say.survives(count, missing).startswith(says)


def test_an_empty_picture_stands(qtbot):
    picture = AttendanceCurve()
    qtbot.addWidget(picture)
    assert picture.crew is None
    assert picture.sentence() == ""
    assert picture.rows() == [[say.CREW, say.AXIS_CHANCE, say.COST, say.WHO]]
    picture.look_at(3)
    picture.close()


def test_the_rail_leads_there():
    spec = next(page for page in PAGES if page.name == "AttendancePage")
    assert spec.title == "Attendance"
    assert len({page.shortcut for page in PAGES}) == len(PAGES)
