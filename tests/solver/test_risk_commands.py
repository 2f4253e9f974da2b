"""The commands `steps` and `attend`, and the question `map`, as a machine and a person meet them."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from solver.planfile import read_plan
from solver.questions import QUESTIONS, BadOption
from solver.unanswered import Unanswered

ROOT = Path(__file__).parents[2]
HILLSIDE = str(ROOT / "resources" / "examples" / "hillside.crew.json")
NO_CREW = str(ROOT / "resources" / "examples" / "no-crew.crew.json")


def told(*arguments: str) -> subprocess.CompletedProcess[str]:
    command = [sys.executable, "-m", "solver", *arguments]
    return subprocess.run(command, cwd=ROOT, capture_output=True, text=True, timeout=60, check=False)


def asked(question: str, **options: object):
    return QUESTIONS[question].ask(read_plan(HILLSIDE), options, lambda part, value: None)


def test_attend_for_machines():
    answer = told("attend", HILLSIDE, "--chance", "0.7", "--json")
    assert answer.returncode == 0, answer.stderr
    document = json.loads(answer.stdout)
    (phase,) = document["phases"]
    assert 0 < phase["covered"] < 1
    assert set(phase["by_line"]) >= {"Planting", "Fencing", "Supervision by Lead hand"}
    assert document["wanted"]["covered"] >= 0.7
    assert document["wanted"]["cost"] > 0
    assert document["wanted"]["crew"]["Lead hand"]


def test_attend_for_people():
    answer = told("attend", HILLSIDE, "--chance", "70")
    assert "the exact crew covers" in answer.stdout
    assert "With one Lead hand away" in answer.stdout
    assert "every person is present independently" in answer.stdout
    assert "Not a legal check." in answer.stdout


def test_steps_for_machines_and_people():
    answer = told("steps", HILLSIDE, "--work", "Planting", "--from", "50000", "--to", "54000", "--json")
    document = json.loads(answer.stdout)
    assert document["steps"][0]["from"] == pytest.approx(50000)
    assert document["steps"][-1]["to"] == pytest.approx(54000)
    assert {"from", "to", "crew", "cost"} <= document["steps"][0].keys()
    assert {"amount", "cost"} <= document["floor"][0].keys()
    text = told("steps", HILLSIDE, "--from", "95", "--to", "105").stdout
    assert text.startswith("All works, % of today; today 100.")
    assert "Not a legal check." in text


@pytest.mark.parametrize("verb", ["attend", "steps"])
def test_a_plan_no_crew_can_meet(verb: str):
    answer = told(verb, NO_CREW, "--json")
    document = json.loads(answer.stdout)
    if verb == "attend":
        assert answer.returncode == 1
        assert document["state"] == "impossible"
    else:
        assert document["ends"]


@pytest.mark.parametrize("chance", [0, 1, -0.5, 100, 250, float("nan"), "often", True])
def test_chances_that_are_none(chance: object):
    with pytest.raises(BadOption, match="no usable chance"):
        asked("attend", chance=chance)


def test_workloads_that_are_none():
    for options in ({"from": -1}, {"to": 0}, {"from": "few"}, {"to": float("inf")}, {"to": 1e15}):
        with pytest.raises(BadOption, match="no usable workload"):
            asked("steps", **options)
    with pytest.raises(BadOption, match="Planting, Fencing"):
        asked("steps", work="Digging")
    with pytest.raises(Unanswered, match="no range"):
        asked("steps", **{"from": 100, "to": 100})


def test_map_options():
    answer = asked("map", x="Lead hand", y="Learner")
    assert (answer.across, answer.up) == ("Lead hand", "Learner")
    for options, says in (
        ({"x": "Lead hand", "y": "Lead hand"}, "two different"),
        ({"x": "Lead hand", "y": "Nobody"}, "No category is called"),
        ({"x": "Lead hand", "y": "Learner", "phase": "Winter"}, "No phase is called"),
    ):
        with pytest.raises(BadOption, match=says):
            asked("map", **options)
