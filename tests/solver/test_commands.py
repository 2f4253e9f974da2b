"""The command line: exit codes, JSON with the promised keys, several files, and no traceback ever."""

from __future__ import annotations

import io
import json
import os
import subprocess
import sys
from contextlib import redirect_stderr, redirect_stdout
from dataclasses import replace
from decimal import Decimal
from pathlib import Path
from tempfile import TemporaryFile

import numpy as np
import pytest

import solver
from solver.caution import CAUTION
from solver.commands import main
from solver.plan import Budget, Plan
from solver.planfile import dump_plan, save_plan
from tests.solver.full_plans import full_plan

ROOT = Path(solver.__file__).parent.parent

SOLVE_KEYS = {
    "state", "proof", "floor", "fractional", "exact", "bound", "whole_people_cost", "crews", "conflict",
    "seconds",
}  # fmt: skip
EXACT_KEYS = {"crew", "cost", "joiners", "leavers", "overtime", "bought_in"}
CREW_KEYS = {"policy", "crew", "workable", "cost", "paper_cost", "lines", "breaks"}
LINE_KEYS = {"line", "kind", "phase", "margin", "unit"}
BREAK_KEYS = {
    "lines", "phase", "unit", "short", "net_worth", "need", "fractional_margin", "moves", "given_up",
}  # fmt: skip
POLICIES = ["down", "nearest", "up", "largest remainder", "best corner", "patched", "exact"]


def run(*arguments: str | Path) -> subprocess.CompletedProcess[str]:
    """The command line within this process; it sends standard output elsewhere, which is put back."""
    errors, kept = io.StringIO(), os.dup(1)
    with TemporaryFile("w+", encoding="utf-8") as out:
        os.dup2(out.fileno(), 1)
        try:
            with redirect_stderr(errors), redirect_stdout(out):
                code = main(list(map(str, arguments)))
        finally:
            os.dup2(kept, 1)
            os.close(kept)
        out.seek(0)
        return subprocess.CompletedProcess(arguments, code, out.read(), errors.getvalue())


def run_alone(*arguments: str | Path) -> subprocess.CompletedProcess[str]:
    """The command line in a process of its own."""
    command = [sys.executable, "-m", "solver", *map(str, arguments)]
    return subprocess.run(command, cwd=ROOT, capture_output=True, text=True, timeout=120)


@pytest.fixture
def plan() -> Plan:
    return full_plan(np.random.default_rng(5))


@pytest.fixture
def good(tmp_path: Path, plan: Plan) -> Path:
    path = tmp_path / "good.crew.json"
    save_plan(plan, path)
    return path


@pytest.fixture
def impossible(tmp_path: Path, plan: Plan) -> Path:
    path = tmp_path / "impossible.crew.json"
    budget = Budget("Too little", Decimal("1.00"))
    save_plan(replace(plan, rules=(*plan.rules, budget)), path)
    return path


def text_of(plan: Plan, before: str, after: str) -> str:
    text = dump_plan(plan)
    assert before in text
    return text.replace(before, after, 1)


class TestSolve:
    def test_json_has_the_promised_keys(self, good: Path) -> None:
        done = run_alone("solve", "--json", good)
        assert (done.returncode, done.stderr) == (0, "")
        (line,) = done.stdout.splitlines()
        answer = json.loads(line)
        assert answer.keys() == SOLVE_KEYS
        assert (answer["state"], answer["conflict"]) == ("proved", None)
        assert answer["proof"] in ("own search", "two engines", "one engine")
        assert answer["exact"].keys() == EXACT_KEYS
        assert answer["whole_people_cost"].keys() == {"absolute", "percent"}
        assert [crew["policy"] for crew in answer["crews"]] == POLICIES

    def test_crews_lines_and_breaks_have_the_promised_keys(self, good: Path, plan: Plan) -> None:
        answer = json.loads(run("solve", "--json", good).stdout)
        names, span = [c.name for c in plan.categories], len(plan.phases)
        for crew in answer["crews"]:
            assert crew.keys() >= CREW_KEYS
            assert (crew["cost"] is not None) == crew["workable"]
            if crew["crew"] is not None:
                assert list(crew["crew"]) == names
                assert all(len(counts) == span for counts in crew["crew"].values())
            for line in crew["lines"]:
                assert line.keys() == LINE_KEYS
            for one in crew["breaks"]:
                assert one.keys() >= BREAK_KEYS
                assert one["short"] > 0
        assert any(crew["breaks"] for crew in answer["crews"])

    def test_counts_and_money_are_numbers(self, good: Path) -> None:
        answer = json.loads(run("solve", "--json", good).stdout)
        numbers = [answer["floor"], answer["bound"], answer["exact"]["cost"], answer["seconds"]]
        numbers += [n for counts in answer["exact"]["crew"].values() for n in counts]
        numbers += [n for counts in answer["fractional"].values() for n in counts]
        numbers += [n for counts in answer["exact"]["overtime"].values() for n in counts]
        assert all(isinstance(n, (int, float)) and not isinstance(n, bool) for n in numbers)

    def test_text_names_crew_cost_proof_and_caution(self, good: Path, plan: Plan) -> None:
        done = run("solve", good)
        assert (done.returncode, done.stderr) == (0, "")
        answer = json.loads(run("solve", "--json", good).stdout)
        first = done.stdout.splitlines()[0]
        assert f"{answer['exact']['cost']:,.2f}".rstrip("0").rstrip(".") in first
        assert plan.currency in first
        assert "Proved cheapest (" in done.stdout
        assert CAUTION in done.stdout

    def test_no_workable_crew_is_told_in_full_with_exit_1(self, impossible: Path) -> None:
        done = run("solve", "--json", impossible)
        assert (done.returncode, done.stderr) == (1, "")
        answer = json.loads(done.stdout)
        assert answer.keys() == SOLVE_KEYS
        assert (answer["state"], answer["exact"]) == ("impossible", None)
        told = run("solve", impossible)
        assert told.returncode == 1
        assert told.stdout.startswith("No workable crew exists.")

    def test_a_time_limit_is_taken(self, good: Path) -> None:
        answer = json.loads(run("solve", "--json", "--seconds", "5", good).stdout)
        assert answer["state"] == "proved"

    @pytest.mark.parametrize("seconds", ["-1", "nan", "inf", "soon"])
    def test_an_unusable_time_limit_is_refused_in_one_line(self, good: Path, seconds: str) -> None:
        done = run("solve", "--json", f"--seconds={seconds}", good)
        assert (done.returncode, done.stdout) == (2, "")
        assert len(done.stderr.splitlines()) == 1


class TestCheck:
    def test_nothing_to_say(self, good: Path) -> None:
        done = run("check", "--json", good)
        assert (done.returncode, json.loads(done.stdout), done.stderr) == (0, {"problems": []}, "")
        assert run("check", good).stdout == "No problems found.\n"

    def test_every_problem_with_its_place(self, tmp_path: Path, plan: Plan) -> None:
        path = tmp_path / "bad.crew.json"
        text = text_of(plan, f'"pay": {plan.categories[0].pay}', '"pay": -5')
        path.write_text(text.replace('"by": ["Lead hand"]', '"by": ["Led hand"]', 1), "utf-8")
        done = run("check", "--json", path)
        assert (done.returncode, done.stderr) == (1, "")
        problems = json.loads(done.stdout)["problems"]
        assert [problem.keys() for problem in problems] == [{"place", "says"}] * 2
        assert [problem["place"] for problem in problems] == [
            "categories[0].pay",
            "categories[1].supervision.by",
        ]
        told = run("check", path)
        assert told.returncode == 1
        assert [line.partition(": ")[0] for line in told.stdout.splitlines()] == [
            p["place"] for p in problems
        ]

    def test_a_plan_without_answer_has_no_problem(self, impossible: Path) -> None:
        assert run("check", impossible).returncode == 0


BAD_FILES: dict[str, tuple[bytes, int]] = {
    "empty": (b"", 2),
    "blank": (b"  \n \n", 2),
    "cut off": (b'{"format": "full-complement/plan", "categories": [{"na', 2),
    "binary": (bytes(range(256)) * 10, 2),
    "utf-16": ("{}".encode("utf-16"), 2),
    "latin-1": ('{"title": "Gelände"}'.encode("latin-1"), 2),
    "too large": (b" " * 9_000_000, 2),
    "deep": (b"[" * 50_000, 2),
    "another format": (b'{"format": "something/else"}', 2),
    "newer": (b'{"format": "full-complement/plan", "version": 2}', 2),
    "a list": (b"[1, 2, 3]", 2),
    "a number": (b"17", 2),
    "trailing": (b"{} {}", 2),
    "unknown key": (b'{"categorys": []}', 1),
    "wrong type": (b'{"categories": 5}', 1),
    "nan": (b'{"categories": [{"name": "A", "pay": NaN, "hours": 1}]}', 1),
    "infinite": (b'{"categories": [{"name": "A", "pay": 1, "hours": Infinity}]}', 1),
    "huge": (b'{"categories": [{"name": "A", "pay": 1e999999, "hours": 1}]}', 1),
    "long number": (b'{"categories": [{"name": "A", "pay": ' + b"9" * 100_000 + b', "hours": 1}]}', 1),
    "negative": (b'{"categories": [{"name": "A", "pay": -1, "hours": 1}]}', 1),
    "missing": (b'{"categories": [{"name": "A", "hours": 1}]}', 1),
    "twice": (b'{"title": "a", "title": "b"}', 1),
    "same name": (b'{"categories": [{"name":"A","pay":1,"hours":1},{"name":"A","pay":1,"hours":1}]}', 1),
    "surrogate": (b'{"categories": [{"name": "\\ud800", "pay": 1, "hours": 1}]}', 1),
    "control": (b'{"categories": [{"name": "A\\u0007", "pay": 1, "hours": 1}]}', 1),
    "no phases": (b'{"phases": []}', 1),
    "amounts": (b'{"works": [{"name": "W", "unit": "u", "amounts": [1, 2]}]}', 1),
}


class TestBadFiles:
    @pytest.mark.parametrize("name", BAD_FILES)
    def test_a_sentence_an_exit_code_and_the_file_untouched(self, name: str, tmp_path: Path) -> None:
        content, code = BAD_FILES[name]
        path = tmp_path / f"{name}.crew.json"
        path.write_bytes(content)
        done = run("solve", path)
        assert done.returncode == code
        assert "Traceback" not in done.stdout + done.stderr
        assert (done.stdout == "") == (code == 2)
        assert len(done.stderr.splitlines()) == (1 if code == 2 else 0)
        assert path.read_bytes() == content
        assert run("check", "--json", path).returncode == code

    @pytest.mark.parametrize("name", ["none.crew.json", "folder", "a\0b", "\udcff.crew.json", "x" * 5000])
    def test_files_that_are_none(self, name: str, tmp_path: Path) -> None:
        (tmp_path / "folder").mkdir()
        done = run("solve", f"{tmp_path}/{name}")
        assert (done.returncode, done.stdout) == (2, "")
        assert len(done.stderr.splitlines()) == 1


class TestSeveralFiles:
    def test_one_document_a_line_past_bad_ones(self, tmp_path: Path, good: Path, impossible: Path) -> None:
        bad, broken = tmp_path / "bad.crew.json", tmp_path / "broken.crew.json"
        bad.write_bytes(BAD_FILES["negative"][0])
        broken.write_bytes(BAD_FILES["binary"][0])
        files = [good, bad, broken, tmp_path / "none.crew.json", impossible, good]
        done = run_alone("solve", "--json", *files)
        assert done.returncode == 2
        assert done.stderr == ""
        documents = [json.loads(line) for line in done.stdout.splitlines()]
        assert [document["plan"] for document in documents] == [str(path) for path in files]
        assert documents[0].keys() == {"plan"} | SOLVE_KEYS
        assert documents[1].keys() == {"plan", "problems"}
        assert [document.keys() for document in documents[2:4]] == [{"plan", "error"}] * 2
        assert documents[4]["state"] == "impossible"
        assert documents[5]["exact"] == documents[0]["exact"]

    def test_the_worst_file_gives_the_exit_code(self, good: Path, impossible: Path) -> None:
        assert run("solve", good, good).returncode == 0
        assert run("solve", good, impossible, good).returncode == 1

    def test_text_goes_on_as_well(self, tmp_path: Path, good: Path) -> None:
        done = run("check", tmp_path / "none.crew.json", good)
        assert done.returncode == 2
        assert "No problems found." in done.stdout
        assert len(done.stderr.splitlines()) == 1

    def test_names_that_are_no_text_are_shown_anyway(self, tmp_path: Path, good: Path) -> None:
        strange = os.fsdecode(os.fsencode(tmp_path) + b"/\xff.crew.json")
        try:
            Path(strange).write_bytes(good.read_bytes())
        except OSError:
            pytest.skip("this system has no such file names")
        done = run("check", strange, good)
        assert (done.returncode, done.stderr) == (0, "")


class TestUsage:
    @pytest.mark.parametrize(
        "arguments",
        [(), ("sing",), ("solve",), ("solve", "--loud", "x"), ("near", "x", "--most", "many"), ("check",)],
        ids=str,
    )
    def test_wrong_usage_is_one_line_and_exit_2(self, arguments: tuple[str, ...]) -> None:
        done = run(*arguments)
        assert (done.returncode, done.stdout) == (2, "")
        assert len(done.stderr.splitlines()) == 1

    def test_help_is_no_error(self) -> None:
        done = run("--help")
        assert (done.returncode, done.stderr) == (0, "")
        assert "check" in done.stdout

    @pytest.mark.skipif(sys.platform == "win32", reason="pipes there do not break this way")
    def test_a_reader_who_has_seen_enough_is_no_error(self, good: Path) -> None:
        process = subprocess.Popen(
            [sys.executable, "-m", "solver", "solve", "--json", *[str(good)] * 30],
            cwd=ROOT,
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
        )
        assert process.stdout is not None
        assert process.stderr is not None
        process.stdout.read(1)
        process.stdout.close()
        errors = process.stderr.read()
        process.stderr.close()
        assert (process.wait(timeout=60), errors) == (0, b"")
