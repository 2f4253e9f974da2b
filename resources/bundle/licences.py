"""The licence texts that go with the bundle: those in `resources/licences`, and those of every part."""

from __future__ import annotations

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
