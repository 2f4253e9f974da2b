"""Example plans, the font, icons and licence texts: where they are, nothing more."""

from __future__ import annotations

from pathlib import Path

_HERE = Path(__file__).resolve().parent


def example_paths() -> tuple[Path, ...]:
    """The example plans in the order of their file names; the first opens at the first start."""
    return tuple(sorted((_HERE / "examples").glob("*.crew.json")))


def font_path(bold: bool = False) -> Path:
    """The bundled font, made for screens, whose digits are all equally wide."""
    return _HERE / "fonts" / ("DejaVuSans-Bold.ttf" if bold else "DejaVuSans.ttf")


def icon_path(suffix: str = "png") -> Path:
    """The program's icon as "png" (256 x 256) or "svg"."""
    return _HERE / "icons" / f"full-complement.{suffix}"


def tick_path(dark: bool = False) -> Path:
    """The tick of a box, in the ink of the light or the dark palette."""
    return _HERE / "icons" / f"tick-{'dark' if dark else 'light'}.png"


def licence_texts() -> dict[str, str]:
    """The licence of the program and of everything shipped with it, by name."""
    paths = sorted((_HERE / "licences").glob("*.txt"))
    return {path.stem: path.read_text(encoding="utf-8") for path in paths}
