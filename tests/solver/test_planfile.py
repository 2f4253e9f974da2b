"""Reading and saving plan files: nothing lost, nothing guessed, every refusal a sentence."""

from __future__ import annotations

import errno
import hashlib
import os
import stat
from decimal import Decimal
from pathlib import Path
from types import MappingProxyType

import pytest
import simplejson
from hypothesis import given, settings

from solver import plandocument
from solver.plan import Category, Phase, Plan, Ratio, Work
from solver.planfile import (
    CannotSave,
    PlanProblems,
    UnreadableFile,
    content_hash,
    dump_plan,
    parse_plan,
    plan_from_document,
    plan_to_document,
    read_plan,
    save_plan,
)
from tests.solver.strategies import plans

FULL = """{
  "format": "full-complement/plan", "version": 1,
  "title": "Slope", "site": "North", "prepared_by": "M. Okafor", "notes": "two\\nlines",
  "currency": "EUR", "period": "week",
  "phases": [{"name": "First", "periods": 2.50}, {"name": "Second", "periods": 1e1}],
  "categories": [
    {"name": "Lead hand", "on_books": 1, "at_least": 0, "at_most": null, "least_if_any": 0, "lot": 0.50,
     "pay": 980.00, "join_cost": 1e3, "leave_cost": 0, "open_cost": 0, "hours": 38, "absence": 0.050,
     "overtime_hours": 4, "overtime_rate": 31.2345, "settling_hours": 6,
     "supervision": {"hours": 0, "by": []}, "output": {"Planting": 21.5}},
    {"name": "Learner", "pay": 610, "hours": 38, "supervision": {"hours": 1.5, "by": ["Lead hand"]},
     "output": {}}],
  "works": [{"name": "Planting", "unit": "trees", "amounts": [52000, 0],
             "buy_in_price": 0.1234, "buy_in_most": null}],
  "rules": [
    {"kind": "presence", "name": "Saw tickets", "weights": {"Lead hand": 1}, "sense": "at least",
     "bound": 2, "phases": ["Second"]},
    {"kind": "ratio", "name": "Learners per lead", "of": ["Learner"], "per": ["Lead hand"], "at_most": 3,
     "phases": null},
    {"kind": "share", "name": "Own staff", "of": ["Lead hand"], "within": ["Lead hand", "Learner"],
     "sense": "exactly", "fraction": 0.25, "phases": null},
    {"kind": "budget", "name": "Budget", "at_most": 60000.10}]
}"""


def problems_of(text: str) -> dict[str, str]:
    with pytest.raises(PlanProblems) as refused:
        parse_plan(text)
    return {problem.place: problem.says for problem in refused.value.problems}


def refusal_of(text: str | bytes) -> str:
    with pytest.raises(UnreadableFile) as refused:
        parse_plan(text)
    assert "\n" not in str(refused.value)
    return str(refused.value)


class TestNumbers:
    def test_are_written_back_as_typed(self) -> None:
        written = dump_plan(parse_plan(FULL))
        for typed in ("980.00", "1e3", "0.050", "0.50", "2.50", "1e1", "60000.10", "31.2345", "0.1234"):
            assert typed in written

    def test_are_exact_decimals(self) -> None:
        plan = parse_plan(FULL)
        assert plan.categories[0].absence == Decimal("0.05")
        assert plan.categories[0].join_cost * 3 == 3000
        assert plan.phases[1].periods + 1 == 11

    def test_built_in_the_program_are_written_plainly(self) -> None:
        plan = Plan(phases=(Phase("Job", Decimal("1E+1")),), works=(Work("W", "u", (Decimal("1E-7"),)),))
        written = dump_plan(plan)
        assert '"periods": 10}' in written
        assert "[0.0000001]" in written

    @pytest.mark.parametrize(
        "number",
        [
            *("NaN", "Infinity", "-Infinity", "1e999999", "-1e999999", "1e13", "1e-16", "0e999999"),
            *("9" * 50, "1e99999999999999999999999", "0." + "3" * 20),
        ],
    )
    def test_beyond_all_sizes_are_refused_with_their_place(self, number: str) -> None:
        says = problems_of(FULL.replace("980.00", number))
        assert list(says) == ["categories[0].pay"]
        assert number[:20] in says["categories[0].pay"]
        assert "allowed are" in says["categories[0].pay"]

    def test_of_ten_million_digits_cost_nothing(self) -> None:
        text = FULL.replace("980.00", "9" * 3_900_000)
        assert "3,900,000 characters" in problems_of(text)["categories[0].pay"]

    @pytest.mark.parametrize("wrong", ["true", '"980"', "null", "[]", "{}"])
    def test_of_a_wrong_type_are_refused(self, wrong: str) -> None:
        says = problems_of(FULL.replace("980.00", wrong))
        assert list(says) == ["categories[0].pay"]
        assert "allowed is a number" in says["categories[0].pay"]

    def test_as_binary_floats_are_refused(self) -> None:
        document = plan_to_document(parse_plan(FULL))
        document["categories"][0]["pay"] = 980.1
        with pytest.raises(PlanProblems, match=r"categories\[0\]\.pay: is 980\.1"):
            plan_from_document(document)

    def test_in_a_document_may_be_whole_python_numbers(self) -> None:
        document = plan_to_document(parse_plan(FULL))
        document["categories"][0]["pay"] = 981
        assert plan_from_document(document).categories[0].pay == 981
        document["categories"][0]["pay"] = 10**5000
        with pytest.raises(PlanProblems, match="huge whole number"):
            plan_from_document(document)


class TestDefaults:
    def test_everything_but_names_and_own_numbers_may_be_left_out(self) -> None:
        plan = parse_plan(
            '{"categories": [{"name": "A", "pay": 1, "hours": 2}], "works": [{"name": "W", "amounts": [3]}]}'
        )
        assert plan.categories == (Category("A", Decimal(1), Decimal(2)),)
        assert (plan.phases, plan.currency, plan.period) == ((Phase("Whole job"),), "EUR", "week")

    @pytest.mark.parametrize(
        ("entry", "missing"),
        [
            ('"categories": [{}]', {"name", "pay", "hours"}),
            ('"works": [{}]', {"name", "amounts"}),
            ('"phases": [{}]', {"name"}),
            ('"rules": [{"kind": "presence"}]', {"name", "weights", "bound"}),
            ('"rules": [{"kind": "ratio"}]', {"name", "of", "per", "at_most"}),
            ('"rules": [{"kind": "share"}]', {"name", "of", "within", "fraction"}),
            ('"rules": [{"kind": "budget"}]', {"name", "at_most"}),
            ('"rules": [{}]', {"kind"}),
        ],
    )
    def test_what_may_not_be_left_out(self, entry: str, missing: set[str]) -> None:
        says = problems_of("{" + entry + "}")
        assert {place.rpartition(".")[2] for place in says} == missing
        assert all(said.startswith("is missing") for said in says.values())

    def test_optional_keys_are_written_only_when_given(self) -> None:
        plain = dump_plan(parse_plan(FULL))
        assert not any(key in plain for key in ("own", "day_absence", "hours_note", "by_day"))
        text = FULL.replace('"at_most": 3,', '"at_most": 3, "by_day": true,').replace(
            '"lot": 0.50', '"lot": 0.50, "day_absence": 0.125, "hours_note": "38 h less leave"'
        )
        plan = parse_plan(text.removesuffix("}") + ', "own": {"Learner": [2, 3.0]}}')
        assert isinstance(plan.rules[1], Ratio)
        assert plan.rules[1].by_day
        assert plan.own == {"Learner": (2, 3)}
        written = dump_plan(plan)
        assert parse_plan(written) == plan
        assert all(
            part in written
            for part in (
                '"own": {"Learner": [2, 3.0]}',
                '"day_absence": 0.125',
                '"by_day": true',
                "hours_note",
            )
        )


class TestProblems:
    def test_are_listed_together_in_the_order_of_the_file(self) -> None:
        text = (
            FULL.replace('"by": ["Lead hand"]', '"by": ["Lead hnd"]')
            .replace('"hours": 38, "absence"', '"hours": "x", "absence"')
            .replace('"title"', '"titel"')
            .replace("[52000, 0]", "[-1]")
        )
        assert list(problems_of(text)) == [
            "categories[0].hours",
            "categories[1].supervision.by",
            "works[0].amounts",
            "works[0].amounts[0]",
            "titel",
        ]

    def test_name_place_value_and_what_was_meant(self) -> None:
        text = FULL.replace('"by": ["Lead hand"]', '"by": ["Led hand"]')
        assert problems_of(text) == {
            "categories[1].supervision.by": 'no category is called "Led hand"; did you mean "Lead hand"?'
        }

    @pytest.mark.parametrize(
        ("old", "new", "place", "part"),
        [
            ('"lot"', '"lott"', "categories[0].lott", 'did you mean "lot"?'),
            ('"lot": 0.50', '"lot": 0.50, "lot": 1', "categories[0].lot", "more than once"),
            ('"kind": "budget"', '"kind": "bugdet"', "rules[3].kind", 'did you mean "budget"?'),
            ('"exactly"', '"exact"', "rules[2].sense", 'did you mean "exactly"?'),
            ('"exactly"', "7", "rules[2].sense", "is 7; allowed is"),
            ('"Slope"', "7", "title", "allowed is a text"),
            ('"per": ["Lead hand"]', '"per": "Lead hand"', "rules[1].per", "a list"),
            ('"per": ["Lead hand"]', '"per": [1]', "rules[1].per", "has 1 as entry 1"),
            ('{"Planting": 21.5}', "[]", "categories[0].output", "an object"),
            ('"phases": ["Second"]', '"phases": ["Secnd"]', "rules[0].phases", 'did you mean "Second"?'),
            ('"at_most": 3,', '"at_most": 3, "by_day": 1,', "rules[1].by_day", "true or false"),
        ],
    )
    def test_of_one_entry(self, old: str, new: str, place: str, part: str) -> None:
        says = problems_of(FULL.replace(old, new, 1))
        assert list(says) == [place]
        assert part in says[place]

    def test_keep_the_plan_when_only_its_meaning_is_wrong(self) -> None:
        with pytest.raises(PlanProblems) as refused:
            parse_plan(FULL.replace("980.00", "-980.00"))
        assert refused.value.plan is not None
        assert refused.value.plan.categories[0].pay == -980
        with pytest.raises(PlanProblems) as refused:
            parse_plan(FULL.replace("980.00", "true"))
        assert refused.value.plan is None

    def test_of_a_hostile_number_are_counted(self) -> None:
        text = '{"categories": [' + ",".join("{}" for _ in range(900)) + "]}"
        with pytest.raises(PlanProblems) as refused:
            parse_plan(text)
        assert len(refused.value.problems) == 501
        assert "more problems that are not listed" in str(refused.value.problems[-1])

    @pytest.mark.parametrize(
        ("text", "place"),
        [
            ('{"categories": [' + "{}," * 1000 + "{}]}", "categories"),
            ('{"rules": [' + "{}," * 5000 + "{}]}", "rules"),
            ('{"own": {"A": [' + "1," * 1000 + "1]}}", "own.A"),
            ("{" + ",".join(f'"k{i}": 1' for i in range(1001)) + "}", "plan"),
        ],
    )
    def test_of_lists_beyond_all_sizes_do_not_look_inside(self, text: str, place: str) -> None:
        says = problems_of(text)
        assert list(says) == [place]
        assert "entries; allowed are" in says[place]


class TestRefusals:
    @pytest.mark.parametrize(
        ("text", "part"),
        [
            ("", "empty"),
            (" \n ", "empty"),
            (FULL[:300], "cut off"),
            (FULL[:302], "starts at line 7, column 14"),
            (FULL + "x", "after the end of the plan (line 23, column 2)"),
            (FULL.replace("38,", "38;"), "; at line 8"),
            ("[]", "a list"),
            ("7", "holds 7"),
            ('{"format": "someone-elses/plan"}', "someone-elses/plan"),
            ('{"format": 1}', '"format" is 1'),
            ('{"version": 2}', "newer program: its version is 2"),
            ('{"version": 1e3}', "newer program"),
            ('{"version": 0}', "no version 0"),
            ("[" * 100_000, "nested too deeply"),
            ('{"a":' * 100_000, "nested too deeply"),
            (b"\x89PNG\r\n\x1a\n\0\0\0", "not a text file"),
            (b"MZ\x90\0", "not a text file"),
            (b"\xff\xfe{\0}\0", "UTF-16"),
            (b'{"title":\n "caf\xe9"}', "not UTF-8 text (line 2)"),
            (b" " * 4_000_001, "larger than 4 MB"),
            (" " * 4_000_001, "larger than 4 MB"),
        ],
    )
    def test_are_one_sentence(self, text: str | bytes, part: str) -> None:
        assert part in refusal_of(text)

    @pytest.mark.parametrize("version", ['"1"', "1.5", "true", "NaN"])
    def test_of_a_version_that_is_no_whole_number(self, version: str) -> None:
        assert list(problems_of(f'{{"version": {version}}}')) == ["version"]

    def test_a_byte_order_mark_is_accepted(self) -> None:
        assert parse_plan(b"\xef\xbb\xbf" + FULL.encode()) == parse_plan(FULL) == parse_plan("\ufeff" + FULL)

    def test_of_files_name_the_file(self, tmp_path: Path) -> None:
        for name, part in (
            ("missing.crew.json", "no such file"),
            ("folder", "folder"),
            ("a\0b", "cannot be"),
        ):
            if name == "folder":
                (tmp_path / name).mkdir()
            with pytest.raises(UnreadableFile, match=part) as refused:
                read_plan(tmp_path / name)
            assert str(refused.value).startswith(f"{name}: ")

    def test_of_a_pipe_does_not_wait_for_it(self, tmp_path: Path) -> None:
        if not hasattr(os, "mkfifo"):
            pytest.skip("this system has no named pipes")
        os.mkfifo(tmp_path / "pipe")
        with pytest.raises(UnreadableFile, match="not an ordinary file"):
            read_plan(tmp_path / "pipe")

    def test_without_permission(self, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
        def refuse(*_: object, **__: object) -> None:
            raise PermissionError(errno.EACCES, "Permission denied")

        (tmp_path / "a.crew.json").write_text(FULL, "utf-8")
        monkeypatch.setattr(Path, "open", refuse)
        with pytest.raises(UnreadableFile, match="no permission"):
            read_plan(tmp_path / "a.crew.json")

    def test_leave_the_file_untouched(self, tmp_path: Path) -> None:
        path = tmp_path / "a.crew.json"
        path.write_bytes(b"\0rubbish")
        with pytest.raises(UnreadableFile):
            read_plan(path)
        assert path.read_bytes() == b"\0rubbish"


class TestVersions:
    def test_older_files_are_upgraded_step_by_step(self, monkeypatch: pytest.MonkeyPatch) -> None:
        def from_1(raw: dict[str, object]) -> dict[str, object]:
            return {("title" if key == "heading" else key): value for key, value in raw.items()}

        def from_2(raw: dict[str, object]) -> dict[str, object]:
            return {**raw, "site": f"{raw['title']} site"}

        monkeypatch.setattr(plandocument, "VERSION", 3)
        monkeypatch.setattr(plandocument, "UPGRADES", {1: from_1, 2: from_2})
        plan = parse_plan('{"version": 1, "heading": "Old"}')
        assert (plan.title, plan.site) == ("Old", "Old site")


class TestRoundTrip:
    @settings(max_examples=150, deadline=None)
    @given(plans(max_phases=3))
    def test_loses_nothing(self, plan: Plan) -> None:
        written = dump_plan(plan)
        assert parse_plan(written) == plan
        assert dump_plan(parse_plan(written)) == written

    def test_through_the_document(self) -> None:
        plan = parse_plan(FULL)
        assert plan_from_document(plan_to_document(plan)) == plan
        sent = simplejson.dumps(plan_to_document(plan), use_decimal=True)
        assert plan_from_document(simplejson.loads(sent, use_decimal=True)) == plan

    def test_keeps_names_of_every_script_as_text(self) -> None:
        names = ("工头", "عامل", "<b>bold</b>", 'quo"te', "back\\slash", "=1+1", "🌲")
        plan = Plan(categories=tuple(Category(n, Decimal(1), Decimal(1)) for n in names))
        again = parse_plan(dump_plan(plan))
        assert tuple(c.name for c in again.categories) == names
        assert "工头" in dump_plan(plan)

    def test_hash_is_the_checksum_of_the_file(self, tmp_path: Path) -> None:
        plan = parse_plan(FULL)
        save_plan(plan, tmp_path / "a.crew.json")
        assert hashlib.sha256((tmp_path / "a.crew.json").read_bytes()).hexdigest() == content_hash(plan)
        assert content_hash(parse_plan(FULL.replace("52000", "52001"))) != content_hash(plan)

    def test_half_characters_survive_saving(self, tmp_path: Path) -> None:
        save_plan(Plan(title="half \ud83c"), tmp_path / "a.crew.json")
        with pytest.raises(PlanProblems) as refused:
            read_plan(tmp_path / "a.crew.json")
        assert refused.value.plan == Plan(title="half \ud83c")


class TestSaving:
    def test_makes_and_replaces_a_file(self, tmp_path: Path) -> None:
        path = tmp_path / "a.crew.json"
        save_plan(Plan(title="one"), path)
        save_plan(Plan(title="two"), path)
        assert read_plan(path).title == "two"
        assert [p.name for p in tmp_path.iterdir()] == ["a.crew.json"]

    def test_keeps_permission_bits(self, tmp_path: Path) -> None:
        path = tmp_path / "a.crew.json"
        save_plan(Plan(), path)
        path.chmod(0o640)
        save_plan(Plan(title="two"), path)
        assert stat.S_IMODE(path.stat().st_mode) == 0o640

    def test_writes_through_a_link(self, tmp_path: Path) -> None:
        (tmp_path / "real.crew.json").write_text("old")
        (tmp_path / "link.crew.json").symlink_to("real.crew.json")
        save_plan(Plan(title="new"), tmp_path / "link.crew.json")
        assert (tmp_path / "link.crew.json").is_symlink()
        assert read_plan(tmp_path / "real.crew.json").title == "new"

    @pytest.mark.parametrize("step", ["fsync", "replace", "open"])
    @pytest.mark.parametrize(
        ("code", "part"),
        [(errno.ENOSPC, "the disk is full"), (errno.EROFS, "read-only"), (errno.EIO, "error")],
    )
    def test_that_fails_leaves_the_old_file(
        self, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: str, code: int, part: str
    ) -> None:
        path = tmp_path / "a.crew.json"
        save_plan(Plan(title="old"), path)

        def fail(*_: object, **__: object) -> None:
            raise OSError(code, os.strerror(code))

        with monkeypatch.context() as patched:
            patched.setattr(os, step, fail)
            with pytest.raises(CannotSave, match=part) as refused:
                save_plan(Plan(title="new"), path)
        assert str(refused.value).startswith("a.crew.json was not saved: ")
        assert read_plan(path).title == "old"
        assert [p.name for p in tmp_path.iterdir()] == ["a.crew.json"]

    def test_over_a_read_only_file_is_refused(self, tmp_path: Path) -> None:
        path = tmp_path / "a.crew.json"
        save_plan(Plan(title="old"), path)
        path.chmod(0o444)
        with pytest.raises(CannotSave, match="the file is read-only"):
            save_plan(Plan(title="new"), path)
        assert read_plan(path).title == "old"

    def test_in_a_folder_that_forbids_it(self, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
        def refuse(*_: object, **__: object) -> None:
            raise PermissionError(errno.EACCES, "Permission denied")

        monkeypatch.setattr(os, "open", refuse)
        with pytest.raises(CannotSave, match="not permitted"):
            save_plan(Plan(), tmp_path / "a.crew.json")

    def test_into_no_folder_or_over_a_folder(self, tmp_path: Path) -> None:
        with pytest.raises(CannotSave, match="does not exist"):
            save_plan(Plan(), tmp_path / "gone" / "a.crew.json")
        with pytest.raises(CannotSave, match="a folder of that name"):
            save_plan(Plan(), tmp_path)

    def test_a_mapping_proxy_is_written_like_any_mapping(self) -> None:
        one = Category("A", Decimal(1), Decimal(1), output=MappingProxyType({"W": Decimal(2)}))
        plan = Plan(categories=(one,), works=(Work("W", "u", (Decimal(1),)),))
        assert parse_plan(dump_plan(plan)) == plan
