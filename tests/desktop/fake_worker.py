"""A solver process for tests: speaks the protocol and misbehaves on request.

The notes of a plan's first category (`hours_note`) say what to do: "" answer, "hang", "crash", "flood",
"rubbish", "noise", "slow", "problems", "refused", "failed". With a file as its argument a "once" before the
word makes only the first process that sees it do so. The cost of the exact crew is the sum of the amounts.
"long" finds one crew that is 100 too dear, stops there if a tolerance is given, finds one that is 40 too dear
and then nothing for a minute; with that crew to start from it proves the cheapest at once.
"""

import json
import os
import sys
import time


def reply(number, part, value):
    sys.stdout.write("\x1e" + json.dumps({"id": number, "part": part, "value": value}) + "\n")
    sys.stdout.flush()


def answer(plan):
    cost = sum(sum(work["amounts"]) for work in plan["works"])
    crew = {c["name"]: [c["on_books"] for _ in plan["phases"]] for c in plan["categories"]}
    exact = {"crew": crew, "cost": cost, "joiners": 0, "leavers": 0, "overtime": {}, "bought_in": {}}
    return {
        "state": "proved",
        "proof": "own search",
        "floor": cost - 1,
        "fractional": crew,
        "exact": exact,
        "bound": cost,
        "whole_people_cost": {"absolute": 1, "percent": 1},
        "crews": [],
        "conflict": None,
        "seconds": 0.01,
    }


def first_time():
    try:
        os.close(os.open(sys.argv[1], os.O_CREAT | os.O_EXCL))
    except FileExistsError:
        return False
    return True


def told(plan):
    note = plan["categories"][0].get("hours_note", "") if plan["categories"] else ""
    if note.startswith("once "):
        return note.removeprefix("once ") if first_time() else ""
    return note


def rubbish(number):
    sys.stdout.write("\x1enot json\n\x1e[1,2]\n\x1e" + '{"id": "x"}' + "\n")
    reply(number, "answer", {"state": "proved"})


def misbehave(word, number, plan):
    """True if `word` said all there is to say."""
    if word == "crash":
        os.abort()
    if word == "hang":
        time.sleep(60)
    if word == "flood":
        while True:
            sys.stdout.write("x" * 1_000_000)
    if word == "rubbish":
        rubbish(number)
        return True
    if word == "noise":
        sys.stdout.write("Welcome to the native solver\n\x00\xff")
        reply(number - 1, "answer", {"late": True})
    if word == "slow":
        reply(number, "fractional", {"floor": 12.5, "crew": {"A": [1.5]}})
        time.sleep(0.4)
        reply(number, "better", {**answer(plan), "state": "best found", "proof": None})
        time.sleep(0.4)
    if word in ("problems", "refused", "failed"):
        said = [{"place": "works[0]", "says": "is odd"}] if word == "problems" else f"{word}: no"
        reply(number, word, said)
        return True
    return False


def solve_long(number, plan, options):
    whole = answer(plan)
    cost, crew = whole["bound"], whole["exact"]["crew"]

    def found(over, under):
        exact = {**whole["exact"], "cost": cost + over}
        return {**whole, "state": "best found", "proof": None, "exact": exact, "bound": cost - under}

    reply(number, "fractional", {"floor": cost - 90, "crew": crew})
    if options["start"] == crew:
        reply(number, "better", found(40, 80))
        reply(number, "answer", {**whole, "seconds": options["seconds"]})
        return
    reply(number, "better", found(100, 60))
    if options["tolerance"]:
        reply(number, "answer", found(100, 60))
        return
    reply(number, "better", found(40, 50))
    time.sleep(60)


def serve(request):
    number, plan = request["id"], request["plan"]
    word = told(plan)  # asked once: "once" is over then
    if request["ask"] == "solve" and word == "long":
        solve_long(number, plan, request["options"])
        return
    if misbehave(word, number, plan):
        return
    if request["ask"] == "solve":
        reply(number, "answer", answer(plan))
        return
    if request["ask"] == "tightest":
        reply(number, "answer", {"line": plan["works"][0]["name"] if plan["works"] else ""})
        return
    reply(number, "progress", {"says": "half way", "done": 0.5})
    if request["options"].get("wait"):
        time.sleep(request["options"]["wait"])
    reply(number, "answer", {"asked": request["ask"], "options": request["options"]})


if __name__ == "__main__":
    for line in sys.stdin:
        serve(json.loads(line))
