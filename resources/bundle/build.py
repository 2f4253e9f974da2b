"""Build the self-contained folder and try it: `python resources/bundle/build.py [--archive]`.

Needs the extra `bundle` of this project installed. Leaves `dist/full-complement/`; with --archive also
`dist/full-complement.tar.xz`. Prints sizes and how long a start takes. On Linux the result is tried with
nothing but itself within reach; elsewhere the build is prepared and untested.
"""

from __future__ import annotations

import argparse
import subprocess
import sys
import tarfile
from pathlib import Path

HERE = Path(__file__).resolve().parent
ROOT = HERE.parents[1]
DIST = ROOT / "dist"
FOLDER = DIST / "full-complement"


def main() -> int:
    """Build, try, tell; returns the exit code."""
    asked = argparse.ArgumentParser(description="Build the self-contained folder.")
    asked.add_argument("--archive", action="store_true", help="pack it as well")
    archive = asked.parse_args().archive
    build()
    print(f"{FOLDER.relative_to(ROOT)}: {megabytes(FOLDER):.0f} MB")
    if sys.platform == "linux":
        from smoke import try_folder

        try_folder(FOLDER, ROOT / "resources" / "examples" / "hillside.crew.json")
    if archive:
        print(f"{pack().relative_to(ROOT)}: {megabytes(DIST / 'full-complement.tar.xz'):.0f} MB")
    return 0


def build() -> None:
    """Run PyInstaller on the recipe."""
    recipe = HERE / "full-complement.spec"
    options = [
        "--noconfirm",
        "--log-level",
        "ERROR",
        "--distpath",
        str(DIST),
        "--workpath",
        str(ROOT / "build"),
    ]
    subprocess.run([sys.executable, "-m", "PyInstaller", *options, str(recipe)], check=True, cwd=ROOT)


def megabytes(place: Path) -> float:
    """The size of a file, or of all files in a folder, links counted once."""
    files = (
        [place] if place.is_file() else [p for p in place.rglob("*") if p.is_file() and not p.is_symlink()]
    )
    return sum(p.stat().st_size for p in files) / 1e6


def pack() -> Path:
    """The folder as one file to carry."""
    archive = DIST / "full-complement.tar.xz"
    with tarfile.open(archive, "w:xz") as out:
        out.add(FOLDER, FOLDER.name)
    return archive


if __name__ == "__main__":
    sys.exit(main())
