"""The licence texts that go with the bundle: those in `resources/licences`, and those of every part."""

from __future__ import annotations

import shutil
import subprocess
import sys
import sysconfig
from collections.abc import Iterable
from importlib import metadata
from pathlib import Path

OURS = Path(__file__).resolve().parents[1] / "licences"
NAMES = ("licen", "copying", "notice")
# installed without a text of their own: LGPL 3, which stands in resources/licences
WITHOUT_TEXT = ("PySide6-Essentials", "shiboken6", "full-complement")


def write_licences(parts: Iterable[str], folder: Path) -> list[Path]:
    """Write one file per text into `folder`; returns them. Raises LookupError for a part without one."""
    folder.mkdir(parents=True, exist_ok=True)
    texts = {path.stem: path.read_text("utf-8") for path in OURS.glob("*.txt")}
    texts["python"] = _python().read_text("utf-8")
    for part in parts:
        texts |= _texts_of(part, known=set(texts.values()))
    for name, text in texts.items():
        (folder / f"{name}.txt").write_text(text, "utf-8")
    return sorted(folder / f"{name}.txt" for name in texts)


def system_licences(libraries: Iterable[str], folder: Path) -> list[Path]:
    """The same for shipped libraries of the system, from Debian's copyright files; elsewhere none."""
    if shutil.which("dpkg") is None:
        return []
    return [_copied(package, folder) for package in sorted({_package(library) for library in libraries})]


def _package(library: str) -> str:
    """Raises LookupError for a library that no package of the system brought."""
    places = (library, str(Path(library).resolve()), library.removeprefix("/usr"))
    for place in places:
        told = subprocess.run(["dpkg", "-S", place], capture_output=True, encoding="utf-8", check=False)
        if told.returncode == 0:
            return told.stdout.split(":")[0]
    raise LookupError(f"{library} belongs to no package of the system")


def _copied(package: str, folder: Path) -> Path:
    text = folder / f"system-{package}.txt"
    shutil.copyfile(Path("/usr/share/doc") / package / "copyright", text)
    return text


def _texts_of(part: str, known: set[str]) -> dict[str, str]:
    """By name; a text that is known already (builds of one library carry the same) is left out."""
    files = [Path(str(file.locate())) for file in metadata.files(part) or [] if _is_licence(file.name)]
    if not files and part not in WITHOUT_TEXT:
        raise LookupError(f"{part} is installed without a licence text")
    texts: dict[str, str] = {}
    for file in files:
        text = file.read_text("utf-8", errors="replace")
        if text not in known and text not in texts.values():
            texts[f"{part}-{file.parent.name}" if texts else part] = text
    return texts


def _is_licence(name: str) -> bool:
    return any(word in name.lower() for word in NAMES) and not name.endswith((".py", ".pyc", ".html"))


def _python() -> Path:
    places = (Path(sysconfig.get_path("stdlib")), Path(sys.base_prefix))
    found = [
        place / name for place in places for name in ("LICENSE.txt", "LICENSE") if (place / name).is_file()
    ]
    if not found:
        raise LookupError("Python is installed without its licence text")
    return found[0]
