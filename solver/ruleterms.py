"""Rules as coefficients per head, and as short sentences."""

from __future__ import annotations

from fractions import Fraction

from solver.matrix import RowSense
from solver.plan import Presence, Ratio, Rule, Sense, Share

SENSES = {Sense.AT_LEAST: RowSense.AT_LEAST, Sense.AT_MOST: RowSense.AT_MOST, Sense.EXACTLY: RowSense.EQUAL}


def rule_terms(rule: Presence | Ratio | Share) -> tuple[dict[str, Fraction], RowSense, Fraction]:
    """A rule as coefficients per head, sense and right-hand side."""
    if isinstance(rule, Presence):
        weights = {name: Fraction(weight) for name, weight in rule.weights.items()}
        return weights, SENSES[rule.sense], Fraction(rule.bound)
    terms: dict[str, Fraction] = {}
    for name in rule.of:
        terms[name] = terms.get(name, Fraction(0)) + 1
    if isinstance(rule, Ratio):
        others, factor, sense = rule.per, Fraction(rule.at_most), RowSense.AT_MOST
    else:
        others, factor, sense = rule.within, Fraction(rule.fraction), SENSES[rule.sense]
    for name in others:
        terms[name] = terms.get(name, Fraction(0)) - factor
    return terms, sense, Fraction(0)


def rule_says(rule: Rule) -> str:
    """A rule as a short sentence without its full stop."""
    if isinstance(rule, Presence):
        parts = [name if w == 1 else f"{w.normalize():f} x {name}" for name, w in rule.weights.items()]
        return f"{rule.name}: {' + '.join(parts)} {rule.sense} {rule.bound.normalize():f}"
    if isinstance(rule, Ratio):
        per = " + ".join(rule.per)
        return f"{rule.name}: at most {rule.at_most.normalize():f} {' + '.join(rule.of)} per {per}"
    if isinstance(rule, Share):
        share = (rule.fraction * 100).normalize()
        within = " + ".join(rule.within)
        return f"{rule.name}: {' + '.join(rule.of)} {rule.sense} {share:f} % of {within}"
    return f"{rule.name}: the whole cost at most {rule.at_most:,}"
