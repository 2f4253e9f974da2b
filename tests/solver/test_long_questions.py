"""`cost`, `room` and `near` as commands and as questions to the worker; what they refuse."""

from __future__ import annotations

import io
import json
import subprocess
import sys
from decimal import Decimal
from pathlib import Path

import pytest

from solver import report_cost, report_near, report_room
from solver.answer import NearBest, Room, State, WholePeopleDetail, from_json, to_json
from solver.exactcrew import exact_crew
from solver.found import Found
from solver.plan import Budget, Category, Phase, Plan, Presence, Sense, Work
from solver.planfile import plan_to_document, save_plan
from solver.questions import QUESTIONS, BadOption
from solver.room import room
from solver.service import RECORD, serve
from solver.solve import Case
from solver.unanswered import NoExactCrew, Unsettled
from solver.wholecost import whole_cost

ROOT = Path(__file__).parents[2]

LEAD = Category("Lead hand", Decimal(500), Decimal(40), join_cost=Decimal(50))
HAND = Category("Hand", Decimal(300), Decimal(40), output={"Digging": Decimal(1)})
KEYS = Presence("Keys", {"Lead hand": Decimal(1)}, Sense.AT_LEAST, Decimal(2))
PLAN = Plan(categories=(LEAD, HAND), works=(Work("Digging", "m", (Decimal(90),)),), rules=(KEYS,))
IMPOSSIBLE = Plan(
    categories=(LEAD, HAND), works=PLAN.works, rules=(KEYS, Budget("Money", Decimal(1500)))
)  # fmt: skip

KEYS_OF = {
    "cost": {"by_category": {"category", "if_fractional", "if_half_lot"}, "ladder": {"name", "cost"}},
    "room": {
        "lines": {
            "line", "phase", "unit", "tighten", "loosen", "saving", "next_crew",
            "dual_price", "dual_from", "dual_to",
        },
        "pay": {"category", "from", "to"},
    },
    "near": {"crews": {"crew", "cost", "over", "joiners", "leavers", "people", "tightest"}},
}  # fmt: skip


def run(*arguments: str) -> subprocess.CompletedProcess[str]:
    command = [sys.executable, "-m", "solver", *arguments]
    return subprocess.run(command, cwd=ROOT, capture_output=True, encoding="utf-8", check=False)


@pytest.fixture(scope="module")
def files(tmp_path_factory: pytest.TempPathFactory) -> dict[str, str]:
    folder = tmp_path_factory.mktemp("plans")
    for name, plan in (("good", PLAN), ("impossible", IMPOSSIBLE)):
        save_plan(plan, folder / f"{name}.crew.json")
    return {name: str(folder / f"{name}.crew.json") for name in ("good", "impossible")}


@pytest.mark.parametrize("verb", KEYS_OF)
def test_machines_get_the_keys_of_the_contract(verb: str, files: dict[str, str]) -> None:
    done = run(verb, files["good"], "--json")
    assert done.returncode == 0, done.stderr
    document = json.loads(done.stdout)
    for key, keys in KEYS_OF[verb].items():
        assert document[key]
        assert all(keys <= entry.keys() for entry in document[key])


def test_near_takes_its_limits_and_refuses_others(files: dict[str, str]) -> None:
    done = run("near", files["good"], "--within", "60", "--most", "2", "--json")
    document = json.loads(done.stdout)
    assert (len(document["crews"]), document["complete"]) == (2, False)
    assert document["crews"][0]["crew"] == {"Lead hand": [2.0], "Hand": [3.0]}
    for wrong in (("--within", "-1"), ("--within", "nan"), ("--most", "0"), ("--most", "x")):
        refused = run("near", files["good"], *wrong)
        assert refused.returncode == 2
        assert len(refused.stderr.splitlines()) == 1


def test_without_a_workable_crew_the_conflict_is_told_in_full(files: dict[str, str]) -> None:
    done = run("room", files["impossible"])
    assert done.returncode == 1
    assert done.stdout.splitlines()[:2] == ["No workable crew exists.", "These cannot hold together:"]
    assert "Raise Money by EUR 500 to EUR 2,000." in done.stdout
    machine = run("near", files["impossible"], "--json")
    assert machine.returncode == 1
    document = json.loads(machine.stdout)
    assert document["state"] == "impossible"
    assert {one["line"] for one in document["conflict"]["lines"]} == {"Digging", "Keys", "Money"}


# ---- worker ----------------------------------------------------------------------------------------


def replies(plan: Plan, ask: str, **options: object) -> list[tuple[str, object]]:
    request = {"id": 7, "ask": ask, "plan": plan_to_document(plan), "options": options}
    out = io.StringIO()
    serve([json.dumps(request, default=float)], out)
    records = [json.loads(text) for text in out.getvalue().split(RECORD)[1:]]
    assert {record["id"] for record in records} == {7}
    return [(record["part"], record["value"]) for record in records]


@pytest.mark.parametrize(("ask", "kind"), [("cost", WholePeopleDetail), ("room", Room), ("near", NearBest)])
def test_the_worker_tells_progress_and_answers(ask: str, kind: type) -> None:
    parts = replies(PLAN, ask)
    assert {part for part, _ in parts[:-1]} <= {"progress"}
    part, value = parts[-1]
    assert part == "answer"
    answer = from_json(value, kind)
    assert to_json(answer) == value
    assert answer == QUESTIONS[ask].ask(PLAN, {}, lambda part, value: None)


def test_the_worker_refuses_with_a_sentence() -> None:
    part, says = replies(IMPOSSIBLE, "cost")[-1]
    assert part == "refused"
    assert str(says).startswith("No workable crew exists.")
    part, says = replies(PLAN, "near", within=-3)[-1]
    assert (part, says) == ("refused", "-3 is no usable per cent of the best cost; allowed is 0 to 1000.")


@pytest.mark.parametrize("options", [{"within": True}, {"within": "2"}, {"most": 1.5}, {"most": 10**9}])
def test_odd_options_are_refused(options: dict[str, object]) -> None:
    with pytest.raises(BadOption):
        QUESTIONS["near"].ask(PLAN, options, lambda part, value: None)


# ---- plans without a proved crew, and time that runs out -------------------------------------------------


def test_without_proof_nothing_is_built_on_the_best_found() -> None:
    case = Case(PLAN)
    proved = case.proved
    case.proved = type(proved)(State.BEST_FOUND, None, proved.best, 0.0)
    with pytest.raises(NoExactCrew, match="not proved in the time given"):
        exact_crew(case)


def test_savings_that_are_not_settled_are_not_told(monkeypatch: pytest.MonkeyPatch) -> None:
    from solver import wholecost

    case = Case(PLAN)
    best = case.proved.best
    assert isinstance(best, Found)
    with pytest.raises(Unsettled, match="not settled"):
        wholecost._Savings(case, best, wholecost.Inquiry(0.0)).all()


# ---- text --------------------------------------------------------------------------------------------


def test_texts_read_well() -> None:
    assert report_cost.cost(PLAN, whole_cost(PLAN)).splitlines() == [
        "Whole people cost 225 EUR (11.25 % of the exact cost).",
        "",
        "             Cost, EUR",
        "floor            1,775",
        "exact            2,000",
        "best corner      2,000",
        "patched          2,000",
        "up               2,000",
        "",
        "Saving, EUR, if it alone  could be fractional  came in half its lot",
        "Lead hand                                   -                     -",
        "Hand                                      225                   150",
    ]
    near = report_near.near(PLAN, QUESTIONS["near"].ask(PLAN, {"within": 16}, lambda part, value: None))
    assert near.splitlines()[:6] == [
        "Cost, EUR  over  joiners  leavers  people  tightest line                 crew",
        "2,000         -        5        -       5           Keys  2 Lead hand, 3 Hand",
        "2,300       300        6        -       6           Keys  2 Lead hand, 4 Hand",
        "",
        "These are all the crews within the limit.",
        "",
    ]
    text = report_room.room(PLAN, room(PLAN))
    assert "Keys: 1 instead of 2 would let you do with 1 Lead hand, 3 Hand and save EUR 550." in text
    assert "price for fractional people" in text


def test_phases_are_named_where_there_are_several() -> None:
    phases = (Phase("Peak", Decimal(2)), Phase("End", Decimal(1)))
    plan = Plan(phases=phases, categories=(LEAD, HAND), rules=(KEYS,),
                works=(Work("Digging", "m", (Decimal(180), Decimal(90))),))  # fmt: skip
    says = [line.says for line in room(plan).lines]
    assert "20 m less of Digging in Peak would let you do with 1 fewer Hand in Peak and save EUR 600." in says
    text = report_room.room(plan, room(plan))
    assert "Digging in Peak, m" in text
