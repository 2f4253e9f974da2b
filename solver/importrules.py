"""A rule from the cells of a table's row."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from decimal import Decimal
from typing import Any

from solver.plan import Budget, Presence, Ratio, Rule, Sense, Share
from solver.review import quoted

_SIGNS = {">=": "at least", "≥": "at least", "<=": "at most", "≤": "at most", "=": "exactly"}
_KINDS = ("presence", "ratio", "share", "budget")


def rule_of(name: str, values: Mapping[str, Any]) -> tuple[Rule | None, list[str]]:
    """The rule called `name` that the cells describe, or None and the reasons why there is none."""
    kind = values["kind"].casefold()
    if kind not in _BUILDERS:
        return None, [f"Kind {quoted(values['kind'])} is not known; allowed are {', '.join(_KINDS)}"]
    reasons: list[str] = []
    rule = _BUILDERS[kind](name, values, reasons)
    return (None if reasons else rule), reasons


def _presence(name: str, values: Mapping[str, Any], reasons: list[str]) -> Rule:
    weights = _people(values, reasons)
    _nothing_in(values, ("among",), "presence", reasons)
    return Presence(name, weights, _sense(values, reasons), values["number"], _phases(values))


def _ratio(name: str, values: Mapping[str, Any], reasons: list[str]) -> Rule:
    of, per = _unweighted(values, reasons), _among(values, reasons)
    if "sense" in values and _sense(values, reasons) is not Sense.AT_MOST:
        reasons.append("Sense of a ratio is at most")
    return Ratio(name, of, per, values["number"], _phases(values))


def _share(name: str, values: Mapping[str, Any], reasons: list[str]) -> Rule:
    of, within = _unweighted(values, reasons), _among(values, reasons)
    return Share(name, of, within, _sense(values, reasons), values["number"], _phases(values))


def _budget(name: str, values: Mapping[str, Any], reasons: list[str]) -> Rule:
    _nothing_in(values, ("people", "among", "phases"), "budget", reasons)
    if "sense" in values and _sense(values, reasons) is not Sense.AT_MOST:
        reasons.append("Sense of a budget is at most")
    return Budget(name, values["number"])


_BUILDERS: Mapping[str, Callable[[str, Mapping[str, Any], list[str]], Rule]] = {
    "presence": _presence,
    "ratio": _ratio,
    "share": _share,
    "budget": _budget,
}


def _people(values: Mapping[str, Any], reasons: list[str]) -> dict[str, Decimal]:
    if not values.get("people"):
        reasons.append("People is missing")
    return dict(values.get("people", {}))


def _unweighted(values: Mapping[str, Any], reasons: list[str]) -> tuple[str, ...]:
    weights = _people(values, reasons)
    if any(weight != 1 for weight in weights.values()):
        reasons.append("People have weights, which only a presence rule has")
    return tuple(weights)


def _among(values: Mapping[str, Any], reasons: list[str]) -> tuple[str, ...]:
    if not values.get("among"):
        reasons.append("Per or within is missing")
    return tuple(values.get("among", ()))


def _nothing_in(values: Mapping[str, Any], keys: tuple[str, ...], kind: str, reasons: list[str]) -> None:
    titles = {"people": "People", "among": "Per or within", "phases": "Phases"}
    reasons += [
        f"{titles[key]} is filled, which a {kind} rule has no use for" for key in keys if values.get(key)
    ]


def _sense(values: Mapping[str, Any], reasons: list[str]) -> Sense:
    said = values.get("sense", "")
    plain = _SIGNS.get(said, said.casefold())
    if plain in [s.value for s in Sense]:
        return Sense(plain)
    shown = f"{quoted(said)} is not known" if said else "is missing"
    reasons.append(f"Sense {shown}; allowed are at least, at most and exactly")
    return Sense.AT_LEAST


def _phases(values: Mapping[str, Any]) -> tuple[str, ...] | None:
    return values.get("phases") or None
