"""The variants of a plan: plain plans in files of their own, side by side in one folder.

A variant of `Job.crew.json` is called `Job - night shift.crew.json`. Which plans are compared is remembered
with the plan that gave its name to the others.
"""

from __future__ import annotations

import json
from collections.abc import Iterable
from pathlib import Path

from PySide6.QtCore import QSettings

from desktop import variant_words as say
from solver.planfile import SUFFIX

APART = " - "
LONGEST = 60  # characters of a variant's name
_KEY = "variants"
_MOST_KEPT = 50  # plans whose choice is remembered
_NEVER_IN_NAMES = '<>:"/\\|?*'


class NoVariantName(Exception):
    """What was typed cannot name a variant; the message is one sentence."""


def stem(path: Path) -> str:
    """The name of a plan's file without its suffix."""
    return path.name.removesuffix(SUFFIX)


def base_of(path: Path) -> Path:
    """The plan that `path` is a variant of; itself where it is none."""
    parts = stem(path).split(APART)
    for count in range(1, len(parts)):
        base = path.with_name(APART.join(parts[:count]) + SUFFIX)
        if base.exists():
            return base
    return path


def variant_path(path: Path, name: str) -> Path:
    """The file of a variant called `name` of the plan at `path`. Raises NoVariantName."""
    plain = " ".join(name.split())
    if not plain:
        raise NoVariantName(say.NO_NAME)
    if len(plain) > LONGEST:
        raise NoVariantName(say.LONG_NAME.format(most=LONGEST))
    wrong = next((c for c in plain if c in _NEVER_IN_NAMES or not c.isprintable()), None)
    if wrong is not None:
        raise NoVariantName(say.BAD_SIGN.format(sign=wrong))
    target = path.with_name(f"{stem(base_of(path))}{APART}{plain}{SUFFIX}")
    if target.exists():
        raise NoVariantName(say.TAKEN.format(file=target.name))
    return target


def short_name(path: Path, base: Path | None) -> str:
    """What a plan is called among the variants of `base`: `night shift`."""
    if base is not None and path.parent == base.parent:
        rest = stem(path).removeprefix(stem(base) + APART)
        return rest or stem(path)
    return stem(path)


def siblings(path: Path) -> list[Path]:
    """The variants that lie beside `path`, and the plan they are variants of."""
    base = base_of(path)
    try:
        found = sorted(p for p in base.parent.iterdir() if _is_variant(p, base))
    except OSError:
        found = []
    return [base, *found] if base.exists() else found


def _is_variant(path: Path, base: Path) -> bool:
    return path.name.endswith(SUFFIX) and stem(path).startswith(stem(base) + APART)


def chosen(path: Path) -> list[Path]:
    """The plans that are compared with the one at `path`: those chosen last, else its siblings."""
    stored = _stored().get(str(base_of(path)))
    found = siblings(path) if stored is None else [Path(entry) for entry in stored]
    return [other for other in found if other != path]


def choose(path: Path, others: Iterable[Path]) -> None:
    """Remember which plans are compared with the one at `path`."""
    base = str(base_of(path))
    stored = {key: value for key, value in _stored().items() if key != base}
    stored[base] = [str(p) for p in dict.fromkeys([path, *others])]
    latest = list(stored.items())[-_MOST_KEPT:]
    QSettings().setValue(_KEY, json.dumps(dict(latest)))


def _stored() -> dict[str, list[str]]:
    try:
        found = json.loads(str(QSettings().value(_KEY, "{}")))
    except ValueError:
        return {}
    if not isinstance(found, dict):
        return {}
    return {key: [str(e) for e in value] for key, value in found.items() if isinstance(value, list)}
