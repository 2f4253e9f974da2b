"""Long fuzzing of the plan reader and the table import; run by hand, not by the suite.

    python tests/fuzz_files.py --seconds 300            random damage of good files
    python tests/fuzz_files.py --engine atheris plan    guided by coverage, if atheris is installed

Every execution must end with a plan, a list of problems or one sentence, within 5 s. Anything else is a
finding: the input is kept in build/fuzz and the run goes on. Ends with counts, the slowest execution and
the highest memory; exit 1 if there was a finding.
"""

from __future__ import annotations

import argparse
import hashlib
import random
import sys
import tempfile
import time
import traceback
from collections import Counter
from collections.abc import Callable
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
sys.path.insert(0, str(ROOT))

if "atheris" in sys.argv:  # it can only follow code that it sees being imported
    import atheris

    with atheris.instrument_imports(include=["solver"]):
        from tests.solver import hostile
else:
    from tests.solver import hostile

MOST_SECONDS = 5.0
FINDINGS = ROOT / "build" / "fuzz"

Target = Callable[[bytes], str]


def table_file(raw: bytes) -> str:
    return hostile.survive_table(raw, "crew.csv")


def workbook(raw: bytes) -> str:
    return hostile.survive_table(raw, "crew.xlsx")


def pasted(raw: bytes) -> str:
    return hostile.survive_pasted(raw.decode("utf-8", "replace"))


TARGETS: dict[str, Target] = {
    "plan": hostile.survive_plan,
    "table": table_file,
    "pasted": pasted,
    "workbook": workbook,
}
DAMAGES = {"plan": hostile.damaged_plan, "workbook": hostile.damaged_workbook}


class Run:
    """Counts of one run."""

    def __init__(self) -> None:
        self.ends: Counter[str] = Counter()
        self.findings = 0
        self.slowest = (0.0, "")

    def execute(self, name: str, raw: bytes) -> None:
        """One execution; a finding is kept as a file with its traceback beside it."""
        started = time.monotonic()
        try:
            end = TARGETS[name](raw)
        except Exception:
            end = "FINDING"
            self._keep(name, raw, traceback.format_exc())
        seconds = time.monotonic() - started
        if seconds > MOST_SECONDS:
            end = "FINDING"
            self._keep(name, raw, f"took {seconds:.1f} s")
        self.ends[f"{name}: {end}"] += 1
        self.slowest = max(self.slowest, (seconds, name))

    def _keep(self, name: str, raw: bytes, why: str) -> None:
        self.findings += 1
        FINDINGS.mkdir(parents=True, exist_ok=True)
        stem = f"{name}-{hashlib.sha256(raw).hexdigest()[:12]}"
        (FINDINGS / stem).write_bytes(raw)
        (FINDINGS / f"{stem}.txt").write_text(why, encoding="utf-8")

    def report(self) -> None:
        for end, count in sorted(self.ends.items()):
            print(f"{count:>10,}  {end}")
        print(f"{self.ends.total():>10,}  executions, {self.findings} findings")
        print(f"slowest {self.slowest[0]:.2f} s ({self.slowest[1]}), highest memory {_peak_megabytes()} MB")


def _peak_megabytes() -> int | str:
    try:
        import resource
    except ImportError:  # not on Windows
        return "unknown"
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    return peak // (1024 * 1024 if sys.platform == "darwin" else 1024)


def random_run(seconds: float, seed: int, names: list[str]) -> Run:
    """Damage good files at random until the time is over; a damaged file may be damaged further."""
    rng, run = random.Random(seed), Run()
    pool = _good_files()
    ends = time.monotonic() + seconds
    while time.monotonic() < ends:
        name = rng.choice(names)
        at = rng.randrange(len(pool[name]))
        damage = DAMAGES.get(name, hostile.damaged)
        try:
            raw = damage(pool[name][at], rng)
        except Exception:  # a workbook damaged beyond unzipping cannot be damaged inside
            continue
        run.execute(name, raw)
        if rng.random() < 0.02 and len(raw) < 200_000:
            pool[name][4 + at % 20 :] = [raw]  # a little drift away from the good ones
    return run


def _good_files() -> dict[str, list[bytes]]:
    table = hostile.GOOD_TABLE.splitlines(keepends=True)
    tables = ["".join(lines).encode() for lines in (table[:3], table[3:], table)]
    with tempfile.TemporaryDirectory() as folder:
        books = list(hostile.good_workbooks(Path(folder)))
    plans = list(hostile.good_plans())
    return {"plan": plans, "table": tables, "pasted": list(tables), "workbook": books}


def atheris_run(name: str, seconds: float) -> None:
    """Coverage-guided fuzzing of one target. Never returns: the fuzzer ends the process."""
    corpus = FINDINGS / "corpus" / name
    corpus.mkdir(parents=True, exist_ok=True)
    for index, raw in enumerate(_good_files()[name]):
        (corpus / str(index)).write_bytes(raw)
    options = [f"-max_total_time={int(seconds)}", f"-timeout={int(MOST_SECONDS)}", "-rss_limit_mb=500"]
    atheris.Setup([sys.argv[0], *options, str(corpus)], lambda raw: TARGETS[name](raw))
    atheris.Fuzz()


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("targets", nargs="*", choices=[*TARGETS, []], help="all if none is named")
    parser.add_argument("--seconds", type=float, default=60)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--engine", choices=["random", "atheris"], default="random")
    asked = parser.parse_args()
    names = asked.targets or list(TARGETS)
    if asked.engine == "atheris":
        atheris_run(names[0], asked.seconds)
    run = random_run(asked.seconds, asked.seed, names)
    run.report()
    return 1 if run.findings else 0


if __name__ == "__main__":
    sys.exit(main())
