"""Tables from offices: imported rightly or refused with a sentence, never half and never silently guessed."""

from __future__ import annotations

import datetime
import io
import struct
import time
import tracemalloc
import zipfile
from collections.abc import Callable
from dataclasses import replace
from decimal import Decimal
from pathlib import Path
from typing import Any

import openpyxl
import pytest
import xlsxwriter

from solver.plan import Budget, Category, Phase, Plan, Presence, Ratio, Sense, Share, Supervision, Work
from solver.planfile import CannotSave
from solver.review import review
from solver.tableimport import (
    Fate,
    ImportRefused,
    ImportResult,
    Mapping,
    Sheet,
    UnreadableTable,
    What,
    cell_name,
    column_letters,
    import_rows,
    likeliest,
    pasted_table,
    propose_mapping,
    read_table,
    write_template,
)

D = Decimal

ONE_WORK = Plan(works=(Work("Planting", "trees", (D(100),)),))
TWO_PHASES = Plan(phases=(Phase("First"), Phase("Second")))

CATEGORIES = """Category;Paid hours;Pay (EUR per week);Absence (%);Output Planting;Supervised by;Supervision
Lead hand;38;1.180,50;5;21,5;;
Learner;36;450;12,5;9;Lead hand;6
"""


def brought_in(text: str, what: What = What.CATEGORIES, plan: Plan = ONE_WORK) -> ImportResult:
    sheet = pasted_table(text)
    return import_rows(sheet, propose_mapping(sheet, what, plan), plan)


def mapped(header: str, what: What = What.CATEGORIES, plan: Plan = ONE_WORK) -> dict[str, str]:
    """What each header of a line means, by its key; '-' where it was not understood."""
    mapping = propose_mapping(pasted_table(header + "\n"), what, plan, header_row=0)
    return {c.header: c.meaning.key if c.meaning else "-" for c in mapping.columns}


def says(header: str, what: What = What.CATEGORIES, plan: Plan = ONE_WORK) -> str:
    return propose_mapping(pasted_table(header + "\n"), what, plan, header_row=0).columns[0].says


def written(path: Path, fill: Callable[[Any, Any], None]) -> Path:
    with xlsxwriter.Workbook(str(path)) as book:
        fill(book, book.add_worksheet("Crew"))
    return path


def rows_of(path: Path) -> tuple[tuple[Any, ...], ...]:
    return read_table(path)[0].rows


def reasons(result: ImportResult) -> dict[str, str]:
    return {row.name: "; ".join(row.reasons) for row in result.refused}


class TestCategories:
    def test_come_in_with_units_and_both_decimal_signs(self) -> None:
        plan = brought_in(CATEGORIES).plan_after()
        lead, learner = plan.categories
        assert (lead.pay, lead.hours, lead.absence) == (D("1180.50"), 38, D("0.05"))
        assert lead.output == {"Planting": D("21.5")}
        assert learner.supervision == Supervision(D(6), ("Lead hand",))
        assert learner.absence == D("0.125")
        assert review(plan) == ()

    def test_known_ones_are_changed_and_keep_what_is_not_in_the_table(self) -> None:
        before = replace(
            ONE_WORK,
            categories=(Category("Lead hand", D(1), D(38), join_cost=D(70), output={"Planting": D(5)}),),
        )
        result = brought_in("Category;Pay\nLead hand;900\n", plan=before)
        assert [row.fate for row in result.rows] == [Fate.CHANGED]
        after = result.plan_after().categories[0]
        assert after == replace(before.categories[0], pay=D(900))

    def test_new_ones_need_pay_and_hours(self) -> None:
        result = brought_in("Category;Pay\nLead hand;900\n")
        assert reasons(result) == {"Lead hand": "Paid hours (hours per week) is missing"}

    def test_limits_may_be_none(self) -> None:
        text = "Category;Pay;Hours;At most\nA;1;1;3\nB;1;1;none\nC;1;1;\n"
        assert [c.at_most for c in brought_in(text).plan_after().categories] == [3, None, None]

    def test_a_percent_sign_in_a_cell_is_a_hundredth(self) -> None:
        text = "Category;Pay;Hours;Absence\nA;1;1;5 %\nB;1;1;0,05\n"
        assert [c.absence for c in brought_in(text).plan_after().categories] == [D("0.05"), D("0.05")]

    def test_rows_may_refer_to_each_other_in_any_order(self) -> None:
        text = "Category;Pay;Hours;Supervision hours;Supervised by\nA;1;1;2;B; C\nB;1;1;;\n"
        assert brought_in(text.replace("B; C", "B")).refused == ()

    def test_blank_rows_are_passed_over(self) -> None:
        assert len(brought_in(CATEGORIES.replace("Learner", ";;;;;;\n\nLearner")).rows) == 2


def test_hours_that_were_worked_out_are_not_vouched_for_after_a_table_changed_them() -> None:
    worked = Category("A", D(900), D(38), hours_note="Hours: 38 h a week.")
    plan = replace(ONE_WORK, categories=(worked,))
    same = brought_in("Category;Hours;On books\nA;38;3\n", plan=plan).plan_after()
    assert same.category("A").hours_note == "Hours: 38 h a week."
    other = brought_in("Category;Hours\nA;40\n", plan=plan).plan_after()
    assert other.category("A").hours_note == "Hours: 38 h a week. Changed by an imported table since."


class TestRefusedRows:
    def test_say_where_and_why(self) -> None:
        text = "Category;Pay;Hours\nA;12 EUR;38\nB;1;x\nC;-3;38\n;5;38\nD;1;38\nD;2;38\n"
        result = brought_in(text)
        told = [(row.row, row.fate, "; ".join(row.reasons)) for row in result.rows]
        assert told[0][:2] == (2, Fate.REFUSED)
        assert told[0][2].startswith('Pay (B2): "12 EUR" is not a number')
        assert told[1][2].startswith('Paid hours (C3): "x" is not a number')
        assert told[2][2] == "Pay: -3 is negative; allowed is 0 or more"
        assert told[3][2] == "it has no name"
        assert told[4] == (6, Fate.NEW, "")
        assert told[5][2] == '"D" stands in row 6 already'

    def test_take_rows_that_depend_on_them_along(self) -> None:
        text = "Category;Pay;Hours;Supervision hours;Supervised by\nA;1;1;2;B\nB;x;1;;\nC;1;1;2;A\nD;1;1;;\n"
        result = brought_in(text)
        assert [row.name for row in result.understood] == ["D"]
        assert 'no category is called "B"' in reasons(result)["A"]
        assert 'no category is called "A"' in reasons(result)["C"]

    def test_keep_the_plan_back_until_the_caller_agrees(self) -> None:
        result = brought_in("Category;Pay;Hours\nA;1;1\nB;x;1\n")
        with pytest.raises(ImportRefused, match="1 of 2 rows"):
            result.plan_after()
        assert [c.name for c in result.plan_after(without_refused=True).categories] == ["A"]

    def test_all_of_them_give_no_plan_at_all(self) -> None:
        with pytest.raises(ImportRefused, match="No row"):
            brought_in("Category;Pay;Hours\nB;x;1\n").plan_after(without_refused=True)

    def test_problems_the_plan_had_before_are_not_blamed_on_rows(self) -> None:
        broken = replace(ONE_WORK, categories=(Category("Old", D(-1), D(1)),))
        assert brought_in("Category;Pay;Hours\nA;1;1\n", plan=broken).refused == ()

    def test_doubtful_numbers_are_remarked(self) -> None:
        result = brought_in("Category;Pay;Hours;Output Planting\nA;1.180;38;1\n")
        assert result.rows[0].remarks == ('Pay (B2): "1.180" is read as 1.180 with decimals, not as 1180',)


class TestMapping:
    def test_knows_its_headers(self) -> None:
        assert mapped(
            "Name;On the books (people);Pay (EUR per week);Planting;OUTPUT planting (trees per hour)"
        ) == {
            "Name": "name",
            "On the books (people)": "on_books",
            "Pay (EUR per week)": "pay",
            "Planting": "output:Planting",
            "OUTPUT planting (trees per hour)": "-",
        }

    @pytest.mark.parametrize(
        ("header", "part"),
        [
            ("Payy", "is it Pay (EUR per week)?"),
            ("Shoe size", 'no column is called "Shoe size"'),
            ("Pay (EUR per month)", "it counts per month, the plan per week"),
            ("Monthly pay", "no column is called"),
            ("Pay (GBP per week)", "it is in GBP, the plan in EUR"),
            ("Pay (% of scale)", "it is in per cent"),
            ("Output Felling", "import the works first"),
            (" ", "it has no header"),
            ("Absence (%)", "understood as Absence (share), in per cent"),
        ],
    )
    def test_says_what_it_made_of_a_header(self, header: str, part: str) -> None:
        assert part in says(f'"{header}";Name')

    def test_can_be_corrected_by_hand(self) -> None:
        text = "Category;Cost a week;Pay;Hours\nA;900;1;38\n"
        sheet = pasted_table(text)
        mapping = propose_mapping(sheet, What.CATEGORIES, ONE_WORK)
        pay = next(m for m in mapping.choices if m.key == "pay")
        changed = mapping.assigned(1, pay)
        assert [c.meaning.key if c.meaning else "-" for c in changed.columns] == ["name", "pay", "-", "hours"]
        assert import_rows(sheet, changed, ONE_WORK).plan_after().categories[0].pay == 900
        assert changed.assigned(1, None).missing == (pay,)

    def test_finds_the_header_below_a_title(self) -> None:
        sheet = pasted_table("Crew table 2031\n\n" + CATEGORIES)
        mapping = propose_mapping(sheet, What.CATEGORIES, ONE_WORK)
        assert mapping.header_row == 2
        assert [r.row for r in import_rows(sheet, mapping, ONE_WORK).rows] == [4, 5]

    def test_without_a_header_is_refused_until_one_is_named(self) -> None:
        sheet = pasted_table("Lead hand;38;900\nLearner;36;450\n")
        mapping = propose_mapping(sheet, What.CATEGORIES, ONE_WORK)
        assert (mapping.header_row, mapping.understood) == (None, 0)
        with pytest.raises(UnreadableTable, match="No row was recognised as the header"):
            import_rows(sheet, mapping, ONE_WORK)

    def test_wrong_header_brings_nothing_in(self) -> None:
        result = brought_in("Name;Wages;Shoe size\nA;1;43\n")
        assert reasons(result) == {"A": "Paid hours (hours per week) is missing"}

    def test_suggests_what_a_sheet_holds(self) -> None:
        assert likeliest(pasted_table(CATEGORIES), ONE_WORK) is What.CATEGORIES
        assert likeliest(pasted_table("Work;Unit;Amount\nP;m;3\n"), Plan()) is What.WORKS
        assert likeliest(pasted_table("Kind;Rule;People;Sense;Number\n"), Plan()) is What.RULES

    @pytest.mark.parametrize(
        ("index", "letters"), [(0, "A"), (25, "Z"), (26, "AA"), (701, "ZZ"), (702, "AAA")]
    )
    def test_cells_are_called_as_in_a_spreadsheet(self, index: int, letters: str) -> None:
        assert column_letters(index) == letters
        assert cell_name(2, index) == f"{letters}3"


class TestWorks:
    def test_of_one_phase(self) -> None:
        text = (
            "Work\tUnit\tAmount (units)\tBuy-in price\nPlanting\ttrees\t52.000,5\t0,25\nFencing\tm\t1e3\t\n"
        )
        works = brought_in(text, What.WORKS, Plan()).plan_after().works
        assert works == (
            Work("Planting", "trees", (D("52000.5"),), D("0.25")),
            Work("Fencing", "m", (D(1000),)),
        )

    def test_of_several_phases_by_their_names(self) -> None:
        text = "Work;Second;Amount First\nPlanting;2;1\n"
        assert brought_in(text, What.WORKS, TWO_PHASES).plan_after().works == (
            Work("Planting", "units", (D(1), D(2))),
        )
        lacking = brought_in("Work;Second\nPlanting;2\n", What.WORKS, TWO_PHASES)
        assert reasons(lacking) == {"Planting": "Amount First (units) is missing"}


class TestRules:
    HEADER = "Kind;Rule;People;Per or within;Sense;Number;Phases\n"
    PLAN = replace(TWO_PHASES, categories=(Category("A", D(1), D(1)), Category("B", D(1), D(1))))

    def rules(self, *lines: str) -> ImportResult:
        return brought_in(self.HEADER + "\n".join(lines) + "\n", What.RULES, self.PLAN)

    def test_of_every_kind(self) -> None:
        lines = (
            'Presence;Tickets;"A; B = 0,5";;>=;2;Second',
            "ratio;Learners;A;B;;3;",
            'Share;Own;A;"A; B";at least;25 %;',
            "budget;Money;;;;60000,10;",
        )
        assert self.rules(*lines).plan_after().rules == (
            Presence("Tickets", {"A": D(1), "B": D("0.5")}, Sense.AT_LEAST, D(2), ("Second",)),
            Ratio("Learners", ("A",), ("B",), D(3)),
            Share("Own", ("A",), ("A", "B"), Sense.AT_LEAST, D("0.25")),
            Budget("Money", D("60000.10")),
        )

    @pytest.mark.parametrize(
        ("line", "part"),
        [
            ("roster;X;A;;at least;1;", 'Kind "roster" is not known'),
            ("presence;X;;;at least;1;", "People is missing"),
            ("presence;X;A;B;at least;1;", "Per or within is filled"),
            ("presence;X;A;;around;1;", 'Sense "around" is not known'),
            ("presence;X;A;;;1;", "Sense is missing"),
            ("presence;X;Z;;at least;1;", 'People: no category is called "Z"'),
            ("presence;X;A;;at least;;", "Number (people, ratio, share or money) is missing"),
            ("presence;X;A;;at least;1;Third", 'Phases: no phase is called "Third"'),
            ("ratio;X;A=2;B;;1;", "only a presence rule has"),
            ("ratio;X;A;B;at least;1;", "Sense of a ratio is at most"),
            ("ratio;X;A;;;1;", "Per or within is missing"),
            ("share;X;A;B;at most;25;", "Number: 25 is not a fraction"),
            ("budget;X;A;;;1;", "People is filled"),
        ],
    )
    def test_that_make_no_sense_are_refused(self, line: str, part: str) -> None:
        assert part in reasons(self.rules(line))["X"]


class TestTextFiles:
    @pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "cp1252"])
    @pytest.mark.parametrize("delimiter", [";", ",", "\t"])
    def test_of_any_usual_kind(self, tmp_path: Path, encoding: str, delimiter: str) -> None:
        path = tmp_path / "crew.csv"
        path.write_bytes(f"Kategorie{delimiter}Größe\r\nSäger{delimiter}12.5\r\n".encode(encoding))
        (sheet,) = read_table(path)
        assert sheet.rows == (("Kategorie", "Größe"), ("Säger", "12.5"))
        assert any("Windows-1252" in remark for remark in sheet.remarks) == (encoding == "cp1252")

    def test_decimal_commas_do_not_cut_columns(self) -> None:
        assert pasted_table("Work;Amount\nA;1,5\nB;2,5\n").rows[1] == ("A", "1,5")

    def test_a_declared_separator_is_believed(self) -> None:
        assert pasted_table("sep=,\na,b;c\n").rows == (("a", "b;c"),)

    def test_cells_may_hold_separators_and_line_breaks(self) -> None:
        assert pasted_table('a\t"two\nlines"\nb\tc\n').rows == (("a", "two\nlines"), ("b", "c"))

    @pytest.mark.parametrize(
        ("content", "part"),
        [
            (b"", "nothing in it"),
            (b" ; \n;\n", "nothing in it"),
            (b"MZ\x90\0\x03\0\0\0\x04\0", "not a text file"),
            (b"a;b\n\x07;c\n", "control character U.0007"),
            (b"a;b\x81\xff\n", "not text in UTF-8, UTF-16 or Windows-1252"),
            (b"\xff\xfea", "does not go on so"),
            (b"a;b\n" * 20_001, "more than 20,000 rows"),
            (b";" * 501, "500 columns"),
            (b'"' + b"x" * 200_000, "not a table of text"),
            (b"x" * 8_000_001, "larger than 8 MB"),
            (b"x" * 20_000_001, "larger than 20 MB"),
        ],
    )
    def test_that_are_none_are_refused(self, tmp_path: Path, content: bytes, part: str) -> None:
        path = tmp_path / "crew.csv"
        path.write_bytes(content)
        with pytest.raises(UnreadableTable, match=part) as refused:
            read_table(path)
        assert str(refused.value).startswith("crew.csv: ")

    def test_missing_files_and_folders_are_refused(self, tmp_path: Path) -> None:
        with pytest.raises(UnreadableTable, match="no such file"):
            read_table(tmp_path / "gone.csv")
        with pytest.raises(UnreadableTable, match="not a file"):
            read_table(tmp_path)


class TestWorkbooks:
    def test_numbers_are_the_decimals_a_spreadsheet_shows(self, tmp_path: Path) -> None:
        def fill(_book: Any, sheet: Any) -> None:
            sheet.write_row(0, 0, [0.1, 0.1 + 0.2, 1e12, 1e-7, 38, -0.05])

        got = rows_of(written(tmp_path / "a.xlsx", fill))[0]
        assert got == (D("0.1"), D("0.3"), D(10) ** 12, D("1E-7"), D(38), D("-0.05"))

    def test_formulas_give_their_stored_result_and_say_so(self, tmp_path: Path) -> None:
        def fill(_book: Any, sheet: Any) -> None:
            sheet.write_row(0, 0, ["Category", "Pay", "Hours"])
            sheet.write_row(1, 0, ["A", "", 38])
            sheet.write_formula(1, 1, "=900+80", None, 980)
            sheet.write_row(2, 0, ["B", "", 38])
            sheet.write_formula(2, 1, "=1/0", None, "#DIV/0!")
            sheet.write_row(3, 0, ["C", "", 38])
            sheet.write_formula(3, 1, "=1", None, "")

        (sheet,) = read_table(written(tmp_path / "a.xlsx", fill))
        result = import_rows(sheet, propose_mapping(sheet, What.CATEGORIES), Plan())
        assert result.rows[0].remarks == ("Pay (B2) is a formula; its stored result was taken: 980",)
        assert reasons(result) == {
            "B": "Pay (B3) holds the error #DIV/0!",
            "C": "Pay (B4) is a formula without a stored result",
        }
        assert result.plan_after(without_refused=True).categories[0].pay == 980

    def test_formulas_of_a_program_that_does_not_reckon(self, tmp_path: Path) -> None:
        book = openpyxl.Workbook()
        assert book.active is not None
        book.active.append(["Category", "Pay", "Hours"])
        book.active.append(["A", "=1+1", 38])
        book.save(tmp_path / "a.xlsx")
        (sheet,) = read_table(tmp_path / "a.xlsx")
        result = import_rows(sheet, propose_mapping(sheet, What.CATEGORIES), Plan())
        assert reasons(result) == {"A": "Pay (B2) is a formula without a stored result"}

    def test_merged_cells_are_refused_where_they_matter(self, tmp_path: Path) -> None:
        def fill(_book: Any, sheet: Any) -> None:
            sheet.merge_range("A1:D1", "Crew of the season")
            sheet.write_row(1, 0, ["Category", "Pay", "Hours", "Remarks"])
            sheet.merge_range("A3:A4", "A")
            sheet.write_row(2, 1, [1, 38])
            sheet.write_row(3, 1, [2, 38])
            sheet.write_row(4, 0, ["B", 3, 38])
            sheet.merge_range("D4:D5", "not needed")

        (sheet,) = read_table(written(tmp_path / "a.xlsx", fill))
        result = import_rows(sheet, propose_mapping(sheet, What.CATEGORIES), Plan())
        assert [(row.row, row.fate) for row in result.rows] == [
            (3, Fate.REFUSED),
            (4, Fate.REFUSED),
            (5, Fate.NEW),
        ]
        assert "part of merged cells" in result.rows[0].reasons[0]

    def test_dates_and_yes_no_are_no_numbers(self, tmp_path: Path) -> None:
        def fill(book: Any, sheet: Any) -> None:
            sheet.write_row(0, 0, ["Category", "Pay", "Hours"])
            sheet.write(1, 0, "A")
            sheet.write_datetime(
                1, 1, datetime.datetime(2031, 2, 1), book.add_format({"num_format": "d.m.yy"})
            )
            sheet.write_boolean(1, 2, True)

        (sheet,) = read_table(written(tmp_path / "a.xlsx", fill))
        told = reasons(import_rows(sheet, propose_mapping(sheet, What.CATEGORIES), Plan()))["A"]
        assert "Pay (B2) is the date or time 2031-02-01" in told
        assert 'Paid hours (C2): "TRUE" is not a number' in told

    def test_text_cells_with_german_decimals_and_percent_formats(self, tmp_path: Path) -> None:
        def fill(book: Any, sheet: Any) -> None:
            sheet.write_row(0, 0, ["Category", "Pay", "Hours", "Absence"])
            sheet.write_row(1, 0, ["A", "1.180,50", "38,5"])
            sheet.write_number(1, 3, 0.05, book.add_format({"num_format": "0 %"}))

        (sheet,) = read_table(written(tmp_path / "a.xlsx", fill))
        a = import_rows(sheet, propose_mapping(sheet, What.CATEGORIES), Plan()).plan_after().categories[0]
        assert (a.pay, a.hours, a.absence) == (D("1180.50"), D("38.5"), D("0.05"))

    def test_pictures_charts_and_hidden_sheets_do_no_harm(self, tmp_path: Path) -> None:
        def fill(book: Any, sheet: Any) -> None:
            sheet.write_row(0, 0, ["Category", "Pay"])
            chart = book.add_chart({"type": "column"})
            chart.add_series({"values": "=Crew!$B$1:$B$2"})
            sheet.insert_chart("D2", chart)
            sheet.write_comment("A1", "a remark")
            sheet.write_url("A2", "https://example.org")
            other = book.add_chart({"type": "pie"})
            other.add_series({"values": "=Crew!$B$1:$B$2"})
            book.add_chartsheet("Chart").set_chart(other)
            book.add_worksheet("Secret").hide()

        sheets = read_table(written(tmp_path / "a.xlsx", fill))
        assert [sheet.name for sheet in sheets] == ["Crew", "Secret"]
        assert sheets[1].remarks == ("This sheet is hidden in the workbook.",)

    def test_ten_thousand_rows_are_read_but_no_plan_holds_them(self, tmp_path: Path) -> None:
        def fill(_book: Any, sheet: Any) -> None:
            sheet.write_row(0, 0, ["Category", "Pay", "Hours"])
            for row in range(10_000):
                sheet.write_row(row + 1, 0, [f"Grade {row}", 900 + row, 38])

        path = written(tmp_path / "a.xlsx", fill)
        started = time.process_time()
        (sheet,) = read_table(path)
        assert sheet.rows[10_000] == ("Grade 9999", D(10_899), D(38))
        with pytest.raises(UnreadableTable, match="10,000 rows of categories; a plan holds at most 1,000"):
            import_rows(sheet, propose_mapping(sheet, What.CATEGORIES), Plan())
        short = Sheet("Crew", sheet.rows[:1001])
        mapping = propose_mapping(short, What.CATEGORIES)
        assert len(import_rows(short, mapping, Plan()).plan_after().categories) == 1000
        assert time.process_time() - started < 5


def packed(parts: dict[str, bytes], like: Path | None = None) -> bytes:
    """A workbook with some of its parts replaced."""
    out = io.BytesIO()
    kept: dict[str, bytes] = {}
    if like is not None:
        with zipfile.ZipFile(like) as archive:
            kept = {name: archive.read(name) for name in archive.namelist()}
    with zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in {**kept, **parts}.items():
            archive.writestr(name, content)
    return out.getvalue()


SHEET = "xl/worksheets/sheet1.xml"


class TestHostileWorkbooks:
    @pytest.fixture
    def good(self, tmp_path: Path) -> Path:
        return written(tmp_path / "good.xlsx", lambda _book, sheet: sheet.write_row(0, 0, ["Category", 1]))

    def refusal(self, tmp_path: Path, content: bytes, name: str = "crew.xlsx") -> str:
        """The sentence; found within 5 s and 300 MB of Python's memory."""
        path = tmp_path / name
        path.write_bytes(content)
        started = time.process_time()
        tracemalloc.start()
        try:
            with pytest.raises(UnreadableTable) as refused:
                read_table(path)
            assert tracemalloc.get_traced_memory()[1] < 300_000_000
        finally:
            tracemalloc.stop()
        assert time.process_time() - started < 5
        assert "\n" not in str(refused.value)
        return str(refused.value)

    def sheet(self, good: Path, cells: str) -> bytes:
        return packed({SHEET: f"<worksheet><sheetData>{cells}</sheetData></worksheet>".encode()}, good)

    def test_password(self, tmp_path: Path) -> None:
        ole = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + b"\0" * 504 + "EncryptedPackage".encode("utf-16-le")
        assert "protected by a password" in self.refusal(tmp_path, ole)
        assert "old kind" in self.refusal(tmp_path, ole[:512])

    def test_encrypted_part(self, tmp_path: Path, good: Path) -> None:
        raw = bytearray(good.read_bytes())
        at = raw.find(b"PK\x01\x02")
        while at >= 0:  # set the flag "encrypted" of every entry in the directory
            raw[at + 8] |= 1
            at = raw.find(b"PK\x01\x02", at + 4)
        assert "protected by a password" in self.refusal(tmp_path, bytes(raw))

    def test_renamed_program(self, tmp_path: Path) -> None:
        assert "called a workbook, but it is not one" in self.refusal(tmp_path, b"MZ\x90\0\x03" * 1000)

    def test_other_zips(self, tmp_path: Path) -> None:
        assert "not an .xlsx workbook" in self.refusal(tmp_path, packed({"a.txt": b"x"}))
        assert "damaged" in self.refusal(tmp_path, b"PK\x03\x04" + b"x" * 100)

    def test_zip_bomb(self, tmp_path: Path, good: Path) -> None:
        assert "unfold to more than 25 MB" in self.refusal(tmp_path, packed({SHEET: b" " * 60_000_000}, good))

    def test_zip_that_lies_about_its_size(self, tmp_path: Path, good: Path) -> None:
        raw = bytearray(packed({SHEET: b" " * 60_000_000}, good))
        at = raw.find(SHEET.encode(), raw.find(b"PK\x01\x02")) - 46
        raw[at + 24 : at + 28] = struct.pack("<I", 100)
        assert "damaged" in self.refusal(tmp_path, bytes(raw))

    @pytest.mark.parametrize(
        "cell",
        [
            '<row r="1048576"><c r="XFD1048576"><v>1</v></c></row>',
            '<row r="1048576"><c><v>1</v></c></row>',
            '<row r="20001"><c r="A20001"><v>1</v></c></row>',
            '<row r="1"><c r="XFD1"><v>1</v></c></row>',
            '<row r="19999"><c r="SA19999"><v>1</v></c></row>',
        ],
    )
    def test_cell_in_the_last_corner(self, tmp_path: Path, good: Path, cell: str) -> None:
        assert "A sheet reaches to row" in self.refusal(tmp_path, self.sheet(good, cell))

    def test_one_text_shared_by_many_cells(self, tmp_path: Path, good: Path) -> None:
        texts = b"<sst><si><t>" + b"x" * 30_000 + b"</t></si></sst>"
        row = '<row><c t="s"><v>0</v></c></row>' * 5000
        raw = packed(
            {
                "xl/sharedStrings.xml": texts,
                SHEET: f"<worksheet><sheetData>{row}</sheetData></worksheet>".encode(),
            },
            good,
        )
        assert "more text than a table" in self.refusal(tmp_path, raw)

    @pytest.mark.parametrize(
        "xml",
        [
            b"<worksheet><sheetData><row><c><v>1</v>",
            b"<worksheet><sheetData><row r='x'/></sheetData></worksheet>",
            b"<worksheet><sheetData><row r='1'><c r='A0A'><v>1</v></c></row></sheetData></worksheet>",
            b"\0\1\2",
            b"",
            b"<a>" * 200_000,
        ],
    )
    def test_broken_xml(self, tmp_path: Path, good: Path, xml: bytes) -> None:
        assert "damaged" in self.refusal(tmp_path, packed({SHEET: xml}, good))

    def test_entities(self, tmp_path: Path, good: Path) -> None:
        xml = b'<!DOCTYPE x [<!ENTITY a "aaaa"><!ENTITY b "&a;&a;">]><worksheet>&b;</worksheet>'
        assert "document type" in self.refusal(tmp_path, packed({SHEET: xml}, good))

    def test_parts_that_are_gone(self, tmp_path: Path, good: Path) -> None:
        with zipfile.ZipFile(good) as archive:
            parts = {name: archive.read(name) for name in archive.namelist()}
        for gone in ("xl/_rels/workbook.xml.rels", SHEET):
            raw = packed({name: content for name, content in parts.items() if name != gone})
            assert "damaged" in self.refusal(tmp_path, raw)

    def test_many_merged_cells(self, tmp_path: Path, good: Path) -> None:
        filled = '<row r="1999"><c r="GR1999"><v>1</v></c></row>'
        merges = '<mergeCell ref="A1:GR1999"/>' * 5000
        xml = f"<worksheet><sheetData>{filled}</sheetData><mergeCells>{merges}</mergeCells></worksheet>"
        assert "merged cells overlap" in self.refusal(tmp_path, packed({SHEET: xml.encode()}, good))

    def test_numbers_that_are_none(self, tmp_path: Path, good: Path) -> None:
        cells = '<row r="1"><c r="A1"><v>NaN</v></c><c r="B1"><v>1e999</v></c></row>'
        path = tmp_path / "odd.xlsx"
        path.write_bytes(self.sheet(good, cells))
        (sheet,) = read_table(path)
        assert all(isinstance(cell, str) for cell in sheet.rows[0])
        assert all(odd.refused for odd in sheet.oddities.values())
        assert len(sheet.oddities) == 2


class TestTemplate:
    def test_comes_back_as_it_was_written(self, tmp_path: Path) -> None:
        path = tmp_path / "template.xlsx"
        write_template(path)
        sheets = {sheet.name: sheet for sheet in read_table(path)}
        assert list(sheets) == ["Categories", "Works", "Rules"]
        plan = Plan()
        for what in (What.WORKS, What.CATEGORIES, What.RULES):
            sheet = sheets[what.value.capitalize()]
            mapping = propose_mapping(sheet, what, plan)
            assert mapping.header_row == 0
            assert mapping.missing == ()
            assert all(column.meaning is not None for column in mapping.columns)
            assert likeliest(sheet, plan) is what
            plan = import_rows(sheet, mapping, plan).plan_after()
        assert review(plan) == ()
        assert plan.categories[0].output == {"Paving": D("2.5")}
        assert plan.categories[0].absence == D("0.06")

    def test_carries_the_plan_s_currency_period_works_and_phases(self, tmp_path: Path) -> None:
        plan = replace(
            TWO_PHASES, currency="CHF", period="month", works=(Work("Survey", "plots", (D(1), D(2))),)
        )
        write_template(tmp_path / "t.xlsx", plan)
        categories, works, _ = read_table(tmp_path / "t.xlsx")
        assert "Pay (CHF per month)" in categories.rows[0]
        assert "Output Survey (plots per hour)" in categories.rows[0]
        assert {"Amount First (units)", "Amount Second (units)"} <= set(works.rows[0])

    def test_that_cannot_be_written_says_so(self, tmp_path: Path) -> None:
        with pytest.raises(CannotSave, match="was not saved"):
            write_template(tmp_path / "gone" / "t.xlsx")


def test_a_mapping_is_a_value() -> None:
    sheet = pasted_table(CATEGORIES)
    assert isinstance(propose_mapping(sheet, What.CATEGORIES, ONE_WORK), Mapping)
    assert propose_mapping(sheet, What.CATEGORIES, ONE_WORK) == propose_mapping(
        sheet, What.CATEGORIES, ONE_WORK
    )
