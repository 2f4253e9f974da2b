"""What leaves for other programs: nothing lost, nothing calculated; another solver finds the same optimum."""

import csv
import io
from dataclasses import replace
from datetime import datetime
from decimal import Decimal

import highspy
import numpy as np
import openpyxl
import pytest

from resources import example_paths
from solver.answer import NearBest, NearCrew, State
from solver.caution import CAUTION
from solver.commands import main
from solver.export import SUFFIXES, NeedsAnswer, UnknownFormat, export_plan
from solver.exportcommand import export
from solver.plan import Budget, Plan, Presence, Ratio, Sense, Share
from solver.planfile import CannotSave, content_hash, read_plan
from solver.program import Program
from solver.programfile import lp_text, mps_text, number
from solver.programnames import column_names, row_names
from solver.solve import solve
from solver.tableimport import What, import_rows, propose_mapping, read_table
from tests.solver.random_plans import random_plan

TEXTS = {"lp": lp_text, "mps": mps_text}


@pytest.fixture(scope="module")
def museum():
    plan = next(read_plan(p) for p in example_paths() if "museum" in p.name)
    return plan, solve(plan)


@pytest.fixture
def hostile(museum):
    """The museum plan with names that spreadsheets would calculate or link."""
    plan, _ = museum
    first, second, *rest = plan.categories
    renamed = {first.name: "=1+1", second.name: "@SUM(A1)"}
    plan = replace(
        plan,
        title="=cmd|' /C calc'!A0",
        categories=(
            replace(first, name="=1+1", supervision=replace(first.supervision, by=())),
            replace(second, name="@SUM(A1)"),
            *(
                replace(
                    c,
                    supervision=replace(c.supervision, by=tuple(renamed.get(n, n) for n in c.supervision.by)),
                )
                for c in rest
            ),
        ),
        works=(replace(plan.works[0], unit="https://example.org"), *plan.works[1:]),
        rules=(),
    )
    return plan, solve(plan)


# the integer program


def optimum(path):
    """The least cost another solver finds in the file at `path`; None where it finds no crew at all."""
    highs = highspy.Highs()
    highs.silent()
    highs.setOptionValue("mip_rel_gap", 0.0)
    highs.setOptionValue("mip_abs_gap", 0.0)
    assert highs.readModel(str(path)) == highspy.HighsStatus.kOk
    highs.run()
    status = highs.getModelStatus()
    if status in (highspy.HighsModelStatus.kInfeasible, highspy.HighsModelStatus.kUnboundedOrInfeasible):
        return None
    assert status in (highspy.HighsModelStatus.kOptimal, highspy.HighsModelStatus.kModelEmpty)
    return highs.getInfo().objective_function_value


def plans_with_answers(count):
    rng = np.random.default_rng(20310)
    for _ in range(count):
        plan = random_plan(rng)
        yield plan, solve(plan)


@pytest.mark.parametrize("suffix", TEXTS)
def test_another_solver_finds_the_exact_cost_in_the_file(suffix, tmp_path):
    path = tmp_path / f"crew.{suffix}"
    checked = 0
    for plan, answer in plans_with_answers(60):
        if answer.state is State.BEST_FOUND:
            continue
        path.write_text(TEXTS[suffix](plan), encoding="utf-8")
        found = optimum(path)
        if answer.state is State.IMPOSSIBLE:
            assert found is None
        else:
            assert found == pytest.approx(answer.exact.cost, rel=1e-6, abs=1e-4)
            checked += 1
    assert checked > 25


@pytest.mark.parametrize("suffix", TEXTS)
@pytest.mark.parametrize("path", example_paths(), ids=lambda p: p.stem)
def test_the_examples_are_found_again(path, suffix, tmp_path):
    plan = read_plan(path)
    answer = solve(plan)
    out = tmp_path / f"crew.{suffix}"
    export_plan(plan, None, out)
    expected = answer.exact.cost if answer.exact else None
    assert optimum(out) == (None if expected is None else pytest.approx(expected, rel=1e-7))


def matrix_read(path):
    """The program in the file, as another reader understands it: columns and rows by name."""
    highs = highspy.Highs()
    highs.silent()
    assert highs.readModel(str(path)) == highspy.HighsStatus.kOk
    lp = highs.getLp()
    starts, index, values = list(lp.a_matrix_.start_), list(lp.a_matrix_.index_), list(lp.a_matrix_.value_)
    by_column = lp.a_matrix_.format_ == highspy.MatrixFormat.kColwise
    entries = {}
    for outer in range(len(starts) - 1):
        for at in range(starts[outer], starts[outer + 1]):
            row, column = (index[at], outer) if by_column else (outer, index[at])
            entries[lp.row_names_[row], lp.col_names_[column]] = values[at]
    bounds = dict(
        zip(lp.col_names_, zip(lp.col_cost_, lp.col_lower_, lp.col_upper_, strict=True), strict=True)
    )
    sides = dict(zip(lp.row_names_, zip(lp.row_lower_, lp.row_upper_, strict=True), strict=True))
    return entries, bounds, sides


@pytest.mark.parametrize("suffix", TEXTS)
def test_every_coefficient_comes_back_to_the_last_digit(museum, suffix, tmp_path):
    plan, _ = museum
    path = tmp_path / f"crew.{suffix}"
    export_plan(plan, None, path)
    entries, bounds, sides = matrix_read(path)
    program = Program(plan)
    columns = [named.name for named in column_names(program)]
    rows = [named.name for named in row_names(program)]
    matrix = program.matrix
    expected = {
        (rows[at], columns[i]): coef
        for at, row in enumerate(matrix.rows)
        for i, coef in zip(row.columns, row.coefs, strict=True)
        if coef
    }
    assert entries == expected
    assert bounds == dict(
        zip(columns, zip(matrix.cost, matrix.lower, matrix.upper, strict=True), strict=True)
    )
    for name, row in zip(rows, matrix.rows, strict=True):
        low, high = sides[name]
        assert {"G": low, "L": high, "E": low}[row.sense] == row.rhs


@pytest.mark.parametrize("suffix", TEXTS)
def test_names_of_any_script_are_legal_and_explained(museum, suffix, tmp_path):
    plan, _ = museum
    names = ["领班", "عامل ماهر", "e5", "Élodie's crew: 3 <= 4", "line\nbreak" * 30]
    categories = tuple(
        replace(c, name=n, supervision=replace(c.supervision, by=(), hours=Decimal(0)))
        for c, n in zip(plan.categories, names, strict=True)
    )
    plan = replace(plan, categories=categories, rules=())
    path = tmp_path / f"crew.{suffix}"
    export_plan(plan, None, path)
    text = path.read_text("utf-8")
    assert "head count of 领班 in Checking" in text
    assert "people_Elodie_s_crew_3_4" in text
    assert optimum(path) == pytest.approx(solve(plan).exact.cost, rel=1e-7)


def test_names_are_all_different():
    for plan, _ in ((random_plan(np.random.default_rng(seed)), None) for seed in range(30)):
        program = Program(plan)
        for named in (column_names(program), row_names(program)):
            assert len({one.name.casefold() for one in named}) == len(named)
            assert all(one.name.isascii() and " " not in one.name and one.means for one in named)


def test_numbers_are_written_with_every_digit():
    for value in (0.1, 1 / 3, 1e-9, 123456789.125, 1e22, -0.0004, 7.0):
        assert float(number(value)) == value
    assert number(7.0) == "7"


@pytest.mark.parametrize("suffix", TEXTS)
def test_an_empty_plan_is_still_a_program(suffix, tmp_path):
    path = tmp_path / f"crew.{suffix}"
    path.write_text(TEXTS[suffix](Plan()), encoding="utf-8")
    assert optimum(path) == 0


# workbooks


def opened(path):
    book = openpyxl.load_workbook(path)
    return {sheet.title: [list(row) for row in sheet.iter_rows(values_only=True)] for sheet in book}, book


def test_a_workbook_has_a_sheet_for_everything(museum, tmp_path):
    plan, answer = museum
    out = tmp_path / "crew.xlsx"
    other = NearCrew(answer.exact.crew, answer.exact.cost + 12.5, 12.5, 3, 2, 14, "Packing")
    when = datetime(2031, 5, 6, 7, 8)
    export_plan(plan, answer, out, near=NearBest((other,), True), source="store.crew.json", now=when)
    sheets, _ = opened(out)
    assert list(sheets) == [
        "Plan",
        "Categories",
        "Works",
        "Rules",
        "Crews",
        "Costs",
        "Lines",
        "Near-best",
        "Method",
    ]
    method = {row[0]: row[1] for row in sheets["Method"]}
    assert method["State"] == "proved"
    assert method["Cost of the exact crew"] == pytest.approx(answer.exact.cost, rel=1e-15)
    assert content_hash(plan) in method["Content of the plan"]
    assert method["Plan file"] == "store.crew.json"
    assert method["Time"] == "2031-05-06 07:08"
    assert CAUTION in method
    assert sheets["Near-best"][1][1] == 12.5
    assert "These are all crews within the limit." in [row[0] for row in sheets["Near-best"]]


def test_head_counts_and_margins_are_numbers(museum, tmp_path):
    plan, answer = museum
    out = tmp_path / "crew.xlsx"
    export_plan(plan, answer, out)
    sheets, _ = opened(out)
    header, *rows = sheets["Crews"]
    at = header.index("Exact (people)")
    for category in plan.categories:
        counts = tuple(row[at] for row in rows if row[0] == category.name)
        assert counts == answer.exact.crew[category.name]
    header, *rows = sheets["Lines"]
    told = {(row[0], row[2]): row[header.index("Margin of nearest")] for row in rows}
    nearest = next(r for r in answer.crews if r.policy == "nearest")
    assert told == {(m.line, m.phase): pytest.approx(m.margin, abs=1e-9) for m in nearest.lines}


def test_no_name_becomes_a_formula_or_a_link(hostile, tmp_path):
    plan, answer = hostile
    out = tmp_path / "crew.xlsx"
    export_plan(plan, answer, out)
    sheets, book = opened(out)
    assert sheets["Plan"][1][1] == plan.title
    assert "=1+1" in [row[0] for row in sheets["Crews"]]
    for sheet in book:
        for row in sheet.iter_rows():
            assert [cell.value for cell in row if cell.data_type == "f" or cell.hyperlink] == []


def test_the_tables_of_the_plan_are_read_back_by_the_import(museum, tmp_path):
    plan, answer = museum
    out = tmp_path / "crew.xlsx"
    export_plan(plan, answer, out)
    sheets = {sheet.name: sheet for sheet in read_table(out)}
    bare = replace(plan, categories=(), rules=(), works=plan.works)
    for what in (What.CATEGORIES, What.RULES):
        sheet = sheets[what.value.capitalize()]
        result = import_rows(sheet, propose_mapping(sheet, what, bare), bare)
        assert result.refused == ()
        bare = result.plan_after()
    assert bare.categories == plan.categories
    assert bare.rules == plan.rules


def test_rules_of_every_kind_have_their_cells(tmp_path, museum):
    plan, answer = museum
    one, two, *_ = (c.name for c in plan.categories)
    rules = (
        Presence("Weights", {one: Decimal(1), two: Decimal("0.5")}, Sense.EXACTLY, Decimal(3), ("Checking",)),
        Ratio("Ratio", (one,), (two,), Decimal(2)),
        Share("Share", (one,), (one, two), Sense.AT_MOST, Decimal("0.25")),
        Budget("Money", Decimal("1234.56")),
    )
    out = tmp_path / "crew.xlsx"
    export_plan(replace(plan, rules=rules), answer, out)
    rows = opened(out)[0]["Rules"][1:]
    assert rows[0][:6] == ["presence", "Weights", f"{one}; {two} = 0.5", None, "exactly", 3]
    assert rows[1][:6] == ["ratio", "Ratio", one, two, "at most", 2]
    assert rows[2][:6] == ["share", "Share", one, f"{one}; {two}", "at most", 0.25]
    assert rows[3][:6] == ["budget", "Money", None, None, None, 1234.56]


def test_an_impossible_plan_says_what_cannot_hold_together(tmp_path):
    plan = next(read_plan(p) for p in example_paths() if "no-crew" in p.name)
    answer = solve(plan)
    out = tmp_path / "crew.xlsx"
    export_plan(plan, answer, out)
    method = {row[0]: row[1] for row in opened(out)[0]["Method"]}
    assert method["State"] == "impossible"
    for line in answer.conflict.lines:
        assert method[f"Cannot hold together: {line.says}"] == line.repair


# text


def test_csv_has_every_head_count(museum, tmp_path):
    plan, answer = museum
    out = tmp_path / "crew.csv"
    export_plan(plan, answer, out)
    assert out.read_bytes().startswith(b"\xef\xbb\xbf")
    header, *rows = csv.reader(io.StringIO(out.read_text("utf-8-sig"), newline=""))
    at = header.index("Exact (people)")
    found = {(row[0], row[1]): float(row[at]) for row in rows}
    for name, counts in answer.exact.crew.items():
        assert [found[name, phase.name] for phase in plan.phases] == list(counts)


def test_csv_text_that_would_calculate_is_only_text(hostile, tmp_path):
    plan, answer = hostile
    out = tmp_path / "crew.csv"
    export_plan(plan, answer, out)
    cells = [c for row in csv.reader(io.StringIO(out.read_text("utf-8-sig"))) for c in row]
    assert "'=1+1" in cells
    assert "'@SUM(A1)" in cells
    assert not [cell for cell in cells if cell.startswith(("=", "@", "+"))]


# refusals


def test_other_suffixes_are_refused_by_name(museum, tmp_path):
    plan, answer = museum
    with pytest.raises(UnknownFormat, match=r"'\.doc' cannot be exported; allowed are \.xlsx, \.csv"):
        export_plan(plan, answer, tmp_path / "crew.doc")
    with pytest.raises(UnknownFormat, match="without a suffix"):
        export_plan(plan, answer, tmp_path / "crew")
    assert SUFFIXES == (".xlsx", ".csv", ".lp", ".mps")


def test_tables_need_an_answer(museum, tmp_path):
    with pytest.raises(NeedsAnswer, match=r"\.xlsx is written from an answer"):
        export_plan(museum[0], None, tmp_path / "crew.xlsx")


def test_a_failed_write_leaves_nothing(museum, tmp_path):
    plan, answer = museum
    for suffix in SUFFIXES:
        with pytest.raises(CannotSave):
            export_plan(plan, answer, tmp_path / "gone" / f"crew{suffix}")
    assert list(tmp_path.iterdir()) == []


# the command


def test_the_command_writes_what_the_suffix_says(tmp_path):
    plan = str(next(p for p in example_paths() if "hillside" in p.name))
    for suffix in SUFFIXES:
        out = tmp_path / f"crew{suffix}"
        assert main(["export", plan, str(out)]) == 0
        assert out.stat().st_size > 200
    assert export(read_plan(plan), plan, str(out)) == "Wrote crew.mps."
    rows = opened(tmp_path / "crew.xlsx")[0]["Near-best"]
    assert rows[1][1] == pytest.approx(0)  # the exact crew stands first


def test_the_command_refuses_in_one_line(tmp_path, capfd):
    plan = str(example_paths()[0])
    for out in ("crew.doc", "gone/crew.lp"):
        assert main(["export", plan, str(tmp_path / out)]) == 2
        assert len(capfd.readouterr().err.strip().splitlines()) == 1
    assert main(["export", str(tmp_path / "missing.crew.json"), str(tmp_path / "crew.lp")]) == 2
