"""Hours, absence and pay that were worked out: the category with them, and with the note that tells how."""

from __future__ import annotations

from dataclasses import replace

from desktop import hours_words as say
from solver.hours import ReckonedHours, ReckonedPay, with_reckoned
from solver.plan import Category

_PAY = "Pay: "


def with_reckoning(category: Category, hours: ReckonedHours, pay: ReckonedPay | None) -> Category:
    """`category` with what was worked out. Where the pay was not, what was told of it before stays."""
    made = with_reckoned(category, hours, pay)
    told = _pay_note(category.hours_note)
    return made if pay is not None or not told else replace(made, hours_note=f"{made.hours_note} {told}")


def by_hand(category: Category, changed: Category, what: str) -> Category:
    """`changed` with a note that says so where a value that was worked out is typed over."""
    said = say.CHANGED_BY_HAND.format(what=what)
    if changed == category or not category.hours_note or said in category.hours_note:
        return changed
    return replace(changed, hours_note=f"{category.hours_note} {said}")


def hours_note(category: Category) -> str:
    """How hours and absence came about."""
    return category.hours_note if not category.hours_note.startswith(_PAY) else ""


def pay_note(category: Category) -> str:
    """How the pay came about; empty where it was typed."""
    return category.hours_note if _PAY in category.hours_note else ""


def _pay_note(note: str) -> str:
    at = note.find(_PAY)
    return note[at:] if at >= 0 else ""
