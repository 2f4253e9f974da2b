"""What is handed over besides the packages: documents, desktop entry, ingredients of the bundle."""

from __future__ import annotations

import configparser
import importlib.util
import re
import subprocess
import sys
import tomllib
import xml.etree.ElementTree as ElementTree
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
DESKTOP = ROOT / "resources" / "desktop"
README = (ROOT / "README.md").read_text("utf-8")


def script(name: str):
    place = importlib.util.spec_from_file_location(name, ROOT / "resources" / "bundle" / f"{name}.py")
    made = importlib.util.module_from_spec(place)
    place.loader.exec_module(made)
    return made


def test_the_check_command_runs_what_the_readme_says() -> None:
    command = next(line.strip() for line in README.splitlines() if line.endswith("-m pytest"))
    assert command in (ROOT / ".ci" / "run").read_text("utf-8").splitlines()


@pytest.mark.parametrize("document", ["README.md", "DEVELOPERS.md"])
def test_what_the_documents_point_to_is_there(document: str) -> None:
    text = (ROOT / document).read_text("utf-8")
    links = re.findall(r"\]\(([^)#]+)\)", text)
    named = re.findall(r"`((?:solver|desktop|resources|tests)/[\w/.-]+)`", text)
    modules = [f"{name.replace('.', '/')}.py" for name in re.findall(r"python -m (tests\.\w+)", text)]
    missing = [name for name in (*links, *named, *modules) if not (ROOT / name).exists()]
    assert missing == []


def test_the_readme_names_every_verb() -> None:
    from solver.commands import VERBS

    assert [verb.name for verb in VERBS if f"python -m solver {verb.name} " not in README] == []


def test_the_type_of_plan_files_is_declared_once_and_used() -> None:
    kind = ElementTree.parse(DESKTOP / "full-complement.xml").getroot()[0]
    entry = configparser.ConfigParser(interpolation=None)
    entry.optionxform = str
    entry.read(DESKTOP / "full-complement.desktop", "utf-8")
    assert entry["Desktop Entry"]["MimeType"] == kind.get("type") + ";"
    assert entry["Desktop Entry"]["Exec"].endswith("%f")
    globs = [part.get("pattern") for part in kind if part.tag.endswith("glob")]
    assert globs == ["*.crew.json"]


@pytest.mark.skipif(sys.platform != "linux", reason="desktop entries are Linux's")
def test_the_desktop_entry_is_installed_and_removed(tmp_path: Path) -> None:
    def install(*arguments: str) -> list[str]:
        command = ["sh", str(DESKTOP / "install.sh"), *arguments]
        environment = {"HOME": str(tmp_path), "PATH": "/usr/bin:/bin"}
        subprocess.run(command, env=environment, check=True, capture_output=True, stdin=subprocess.DEVNULL)
        return sorted(p.name for p in tmp_path.rglob("full-complement.*"))

    entry = tmp_path / ".local/share/applications/full-complement.desktop"
    assert len(install("full-complement")) == 4
    assert 'Exec="full-complement" %f' in entry.read_text("utf-8").splitlines()
    assert install("--remove") == []


@pytest.mark.skipif(sys.platform != "linux", reason="the bundle is built and tried on Linux only")
def test_the_native_solvers_of_the_bundle_are_where_they_are_looked_for() -> None:
    native = script("native")
    files = native.cbc_files() + native.highs_files()
    assert {Path(file).name for file, _ in native.cbc_files()} == set(native.CBC_LINUX)
    assert [file for file, _ in files if not Path(file).is_file()] == []
    assert len(native.highs_files()) == 1


def test_every_part_of_the_program_has_a_licence_text(tmp_path: Path) -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["project"]
    parts = [re.split(r"[><=\[; ]", part)[0] for part in project["dependencies"]]
    written = {path.stem for path in script("licences").write_licences(parts, tmp_path)}
    without = {"PySide6-Essentials"}  # LGPL 3, whose text is ours to bring
    assert set(parts) - without <= written
    assert {"lgpl-3.0", "gpl-3.0", "python", "full-complement"} <= written
