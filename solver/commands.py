"""The command line: which verbs there are, how answers are printed, what the exit code says.

Exit 0: answered; 1: the plan has problems or no workable crew exists; 2: usage, or a file that cannot
be read (one line).
"""

from __future__ import annotations

import argparse
import json
import os
import sys
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import IO, Any, NoReturn

from solver import report, report_attendance, report_cost, report_near, report_room, report_steps
from solver.answer import Answer, State, to_json
from solver.engine import EngineFailure, quiet_native_output
from solver.plan import Plan
from solver.planfile import CannotSave, PlanProblems, UnreadableFile, read_plan
from solver.questions import QUESTIONS, BadOption
from solver.review import Problem
from solver.unanswered import Unanswered

OK, NO, UNUSABLE = 0, 1, 2


@dataclass(frozen=True)
class Verb:
    """A verb of the command line: its own options and how its answer reads as text."""

    name: str
    help: str
    arguments: Callable[[argparse.ArgumentParser], None]
    text: Callable[[Plan, Any], str]


def _solve_arguments(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("--seconds", type=float, default=None, help="time limit of the exact solve")
    parser.add_argument("--tolerance", type=float, default=0.0, help="gap in %% that is good enough")


def _long_arguments(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("--seconds", type=float, default=None, help="time limit of all solves together")


def _near_arguments(parser: argparse.ArgumentParser) -> None:
    _long_arguments(parser)
    parser.add_argument(
        "--within", type=float, default=2.0, metavar="PCT", help="per cent above the best cost (default 2)"
    )
    parser.add_argument("--most", type=int, default=20, metavar="N", help="how many crews (default 20)")


def _steps_arguments(parser: argparse.ArgumentParser) -> None:
    _long_arguments(parser)
    parser.add_argument("--work", default="all", metavar="NAME", help="one work, or all (the default)")
    unit = "in units of the work over all phases, per cent of today for all"
    parser.add_argument(
        "--from", type=float, metavar="A", help=f"smallest workload, {unit} (default: half of today)"
    )
    parser.add_argument("--to", type=float, metavar="B", help="largest workload (default: twice today)")


def _attend_arguments(parser: argparse.ArgumentParser) -> None:
    _long_arguments(parser)
    parser.add_argument(
        "--chance",
        type=float,
        default=0.95,
        metavar="P",
        help="wanted chance that a day is covered: a share (0.95, the default) or per cent (95)",
    )


VERBS: tuple[Verb, ...] = (
    Verb(
        "solve", "the exact crew, its proof, and what every rounding breaks", _solve_arguments, report.solve
    ),
    Verb("cost", "what whole people cost, and each category's part", _long_arguments, report_cost.cost),
    Verb("room", "how far lines can tighten, and which loosening pays", _long_arguments, report_room.room),
    Verb("near", "every whole crew that costs little more", _near_arguments, report_near.near),
    Verb("steps", "cheapest crews over the workload", _steps_arguments, report_steps.steps),
    Verb(
        "attend",
        "how often enough people are there, and a safer crew",
        _attend_arguments,
        report_attendance.attend,
    ),
)


class _Parser(argparse.ArgumentParser):
    """Says what is wrong in one line."""

    def error(self, message: str) -> NoReturn:
        print(f"solver: {message}", file=sys.stderr)
        raise SystemExit(UNUSABLE)


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(prog="python -m solver", description="Whole crews for a workload, proved cheapest.")
    verbs = parser.add_subparsers(dest="verb", required=True, metavar="VERB")
    check = verbs.add_parser("check", help="list every problem of a plan file")
    _plan_arguments(check)
    for verb in VERBS:
        one = verbs.add_parser(verb.name, help=verb.help)
        _plan_arguments(one)
        verb.arguments(one)
    _export_arguments(verbs.add_parser("export", help="write .xlsx, .csv, .lp or .mps"))
    verbs.add_parser("worker", help="serve requests of the window on standard input")
    verbs.add_parser("engine", help="run CBC or HiGHS for a worker")
    return parser


def _plan_arguments(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("plans", nargs="+", metavar="PLAN", help="plan files (.crew.json)")
    parser.add_argument("--json", action="store_true", help="one JSON document a line")


def _export_arguments(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("plans", nargs=1, metavar="PLAN", help="plan file (.crew.json)")
    parser.add_argument("out", metavar="OUT", help="file to write; its suffix says what")
    parser.set_defaults(json=False)


def main(arguments: Sequence[str]) -> int:
    """Run one command line; returns the exit code."""
    try:
        asked = _parser().parse_args(arguments)
    except SystemExit as leaving:
        return int(leaving.code or 0)
    if asked.verb == "engine":
        from solver.enginehost import main as host

        return host()
    if asked.verb == "worker":
        from solver.service import main as serve

        return serve()
    try:
        # names of files may hold bytes that are no characters
        with os.fdopen(quiet_native_output(), "w", encoding="utf-8", errors="backslashreplace") as out:
            return max(_one(asked, path, out) for path in asked.plans)
    except BrokenPipeError:  # the reader has seen enough
        return OK
    except KeyboardInterrupt:
        print("solver: stopped", file=sys.stderr)
        return UNUSABLE


def _one(asked: argparse.Namespace, path: str, out: IO[str]) -> int:
    """Answer about one file; a bad one is told and does not stop the others."""
    try:
        plan = read_plan(path)
        if asked.verb == "check":
            return _print(asked, path, out, {"problems": []}, "No problems found.", OK)
        if asked.verb == "export":
            return _export(asked, plan, path, out)
        return _ask(asked, plan, path, out)
    except PlanProblems as found:
        return _problems(asked, path, out, found.problems)
    except Unanswered as why:
        return _print(asked, path, out, why.document, str(why), NO)
    except (UnreadableFile, CannotSave, BadOption) as refusal:
        return _refused(asked, path, out, str(refusal))
    except EngineFailure as failure:
        return _refused(asked, path, out, f"The solver gave up: {failure}.")


def _ask(asked: argparse.Namespace, plan: Plan, path: str, out: IO[str]) -> int:
    settings = vars(asked).keys() - {"verb", "plans", "json"}
    options = {name: getattr(asked, name) for name in settings}
    answer = QUESTIONS[asked.verb].ask(plan, options, lambda part, value: None)
    verb = next(v for v in VERBS if v.name == asked.verb)
    impossible = isinstance(answer, Answer) and answer.state is State.IMPOSSIBLE
    return _print(asked, path, out, to_json(answer), verb.text(plan, answer), NO if impossible else OK)


def _export(asked: argparse.Namespace, plan: Plan, path: str, out: IO[str]) -> int:
    from solver.export import UnknownFormat  # the workbook writer is loaded only where it is used
    from solver.exportcommand import export

    try:
        return _print(asked, path, out, {}, export(plan, path, asked.out), OK)
    except UnknownFormat as refusal:
        return _refused(asked, path, out, str(refusal))


def _problems(asked: argparse.Namespace, path: str, out: IO[str], problems: Sequence[Problem]) -> int:
    listed = [{"place": p.place, "says": p.says} for p in problems]
    text = "\n".join(f"{p.place}: {p.says}" for p in problems)
    return _print(asked, path, out, {"problems": listed}, text, NO)


def _refused(asked: argparse.Namespace, path: str, out: IO[str], sentence: str) -> int:
    if asked.json and len(asked.plans) > 1:
        _print(asked, path, out, {"error": sentence}, sentence, UNUSABLE)
    else:
        print(sentence, file=sys.stderr)
    return UNUSABLE


def _print(
    asked: argparse.Namespace, path: str, out: IO[str], document: dict[str, Any], text: str, code: int
) -> int:
    several = len(asked.plans) > 1
    if asked.json:
        named = {"plan": path, **document} if several else document
        print(json.dumps(named, ensure_ascii=False, allow_nan=False), file=out)
    else:
        print(f"{path}\n{text}\n" if several else text, file=out)
    return code
