"""How far one line of an impossible plan must move, alone, before a crew is workable; and its words."""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import ROUND_CEILING, ROUND_FLOOR, Decimal
from fractions import Fraction

from solver.answer import Conflicting, LineKind
from solver.grain import whole_grain
from solver.inquiry import Inquiry
from solver.lines import Line
from solver.loosened import Negotiable
from solver.phrases import priced
from solver.plan import Budget, Plan, Presence, Ratio, Sense, Share
from solver.program import Program
from solver.repair import NOT_ENOUGH, PERCENT, bound_of, typed_bound
from solver.report import figure
from solver.rulenumber import RuleNumber
from solver.search import Search

CENT = Decimal("0.01")
RULE_STEP = Decimal("0.0001")
AMOUNT_DIGITS = 6  # below the first digit of an amount


@dataclass(frozen=True)
class _Move:
    """`by` in `unit`; None where no move of this line is enough. `repair` as a sentence."""

    by: Decimal | None
    unit: str
    repair: str


class Moves:
    """Moves of one plan's lines."""

    def __init__(self, plan: Plan, inquiry: Inquiry) -> None:
        self._plan = plan
        self._inquiry = inquiry
        self._negotiable = Negotiable(plan)

    def conflicting(self, member: Line) -> Conflicting:
        """The line with its move, as a member of a conflict."""
        line = self._own(member)
        move = self._move(line)
        return Conflicting(
            line.name, line.kind, line.phase, move.unit,
            None if move.by is None else float(move.by), f"{line.says}{self._where(line)}", move.repair,
        )  # fmt: skip

    def _own(self, member: Line) -> Line:
        """The same line in the program that is negotiated about."""
        key = (member.name, member.kind, member.phase)
        return next(x for x in self._negotiable.base.lines if (x.name, x.kind, x.phase) == key)

    def _where(self, line: Line) -> str:
        return f" in {line.phase}" if line.phase is not None and len(self._plan.phases) > 1 else ""

    def _move(self, line: Line) -> _Move:
        found = self._found(line)
        if found.by is None and not self._inquiry.left:
            return replace(found, repair="Not worked out in the time given.")
        return found

    def _found(self, line: Line) -> _Move:
        if line.kind is LineKind.WORK:
            return self._work(line)
        if line.kind is LineKind.SUPERVISION:
            return self._supervision(line)
        if line.kind is LineKind.BOUND:
            return self._bound(line)
        rule = next(rule for rule in self._plan.rules if rule.name == line.name)
        if isinstance(rule, Budget):
            return self._budget(rule)
        if isinstance(rule, Presence):
            return self._presence(rule, line)
        if isinstance(rule, Share) and rule.sense is Sense.EXACTLY:
            return self._exact_share(line)
        return self._number(rule)

    def _least(self, line: Line, everywhere: bool) -> tuple[Fraction | None, tuple[int, ...]]:
        """The least giving way of the line, or of all lines behind the same number; and the crew."""
        lines = [x for x in self._negotiable.base.lines if x.name == line.name and x.kind is line.kind]
        found = self._negotiable.loosened(lines if everywhere else [line]).least(self._inquiry)
        return (None, ()) if found is None else (found.by, found.lots)

    # ---- one kind each -----------------------------------------------------------------------

    def _work(self, line: Line) -> _Move:
        by, _ = self._least(line, everywhere=False)
        work = next(work for work in self._plan.works if work.name == line.name)
        t = next(i for i, phase in enumerate(self._plan.phases) if phase.name == line.phase)
        amount = work.amounts[t]
        if by is None:
            return _Move(None, line.unit, NOT_ENOUGH)
        step = Decimal(1).scaleb(amount.adjusted() - AMOUNT_DIGITS) if amount else Decimal(1)
        left = max(_stepped(Fraction(amount) - by, step, ROUND_FLOOR), Decimal(0))
        words = f"{line.name}{self._where(line)} by {figure(amount - left)} {line.unit}".strip()
        return _Move(amount - left, line.unit, f"Lower {words} to {figure(left)}.")

    def _supervision(self, line: Line) -> _Move:
        by, _ = self._least(line, everywhere=False)
        if by is None:
            return _Move(None, line.unit, NOT_ENOUGH)
        length = next(Fraction(p.periods) for p in self._plan.phases if p.name == line.phase)
        hours = _stepped(by, CENT, ROUND_CEILING)
        each = _stepped(by / length, CENT, ROUND_CEILING)
        group = line.name.removeprefix("Supervision by ")
        words = f"{figure(each)} hours of supervision a {self._plan.period} from others than {group}"
        return _Move(hours, line.unit, f"Find {words}{self._where(line)}.")

    def _bound(self, line: Line) -> _Move:
        by, _ = self._least(line, everywhere=True)
        if by is None:
            return _Move(None, line.unit, NOT_ENOUGH)
        name, key = bound_of(line.name)
        category = self._plan.category(name)
        typed, lot = typed_bound(category, key), Fraction(category.lot)
        held = Fraction(typed) / lot  # bounds bind once rounded inwards to the lot
        inwards = held.__floor__() if key == "at_most" else held.__ceil__()
        new = _exact(inwards * lot + (by if key == "at_most" else -by))
        told = {"at_most": "Allow {} more {}: at most {}.", "at_least": "Ask for {} fewer {}: at least {}.",
                "least_if_any": "Ask for {} fewer {}: none or at least {}."}[key]  # fmt: skip
        move = abs(new - typed)
        return _Move(move, line.unit, told.format(figure(move), name, figure(new)))

    def _budget(self, rule: Budget) -> _Move:
        others = tuple(r for r in self._plan.rules if r is not rule)
        program = Program(replace(self._plan, rules=others))
        outcome = self._inquiry.cheapest(Search(program, grain=whole_grain(program)))
        if outcome.best is None:
            return _Move(None, self._plan.currency, NOT_ENOUGH)
        cost = Fraction(outcome.best.objective)
        if not program.costs_hours:
            cost = program.ledger.paper_cost(outcome.best.lots)
        new = _stepped(cost, CENT, ROUND_CEILING)
        move = new - rule.at_most
        by, to = (priced(figure(amount), self._plan.currency) for amount in (move, new))
        return _Move(move, self._plan.currency, f"Raise {rule.name} by {by} to {to}.")

    def _presence(self, rule: Presence, line: Line) -> _Move:
        by, lots = self._least(line, everywhere=True)
        if by is None:
            return _Move(None, line.unit, NOT_ENOUGH)
        move = _exact(by)
        if rule.sense is Sense.EXACTLY:
            return self._exact_presence(rule, line, lots)
        new = rule.bound - move if rule.sense is Sense.AT_LEAST else rule.bound + move
        verb = "Lower" if rule.sense is Sense.AT_LEAST else "Raise"
        return _Move(move, line.unit, f"{verb} {rule.name} by {figure(move)} to {figure(new)}.")

    def _exact_presence(self, rule: Presence, line: Line, lots: tuple[int, ...]) -> _Move:
        """An `exactly` moves to what the crew has: its move is below 0 where that is less."""
        head = self._negotiable.head(line)
        assert head is not None
        new = _exact(Fraction(sum(a * lots[i] for i, a in head.terms), head.divisor))
        words = f"{rule.name} from {figure(rule.bound)} to {figure(new)}"
        return _Move(new - rule.bound, line.unit, f"Change {words}.")

    def _exact_share(self, line: Line) -> _Move:
        by, _ = self._least(line, everywhere=True)
        if by is None:
            return _Move(None, line.unit, NOT_ENOUGH)
        return _Move(_exact(by), line.unit, f"Let {line.name} be missed by {figure(_exact(by))} people.")

    def _number(self, rule: Ratio | Share) -> _Move:
        number = RuleNumber(self._plan, rule).nearest(self._inquiry)
        if isinstance(rule, Ratio):
            unit = f"{' + '.join(rule.of)} per {' + '.join(rule.per)}"
            if number is None:
                return _Move(None, unit, NOT_ENOUGH)
            new = _stepped(number, RULE_STEP, ROUND_CEILING)
            move = new - rule.at_most
            return _Move(move, unit, f"Raise {rule.name} by {figure(move)} to {figure(new)} {unit}.")
        if number is None:
            return _Move(None, PERCENT, NOT_ENOUGH)
        rising = rule.sense is Sense.AT_MOST
        new = _stepped(number, RULE_STEP, ROUND_CEILING if rising else ROUND_FLOOR)
        move = 100 * abs(new - rule.fraction)
        verb = "Raise" if rising else "Lower"
        words = f"{rule.name} by {figure(move)} {PERCENT} to {figure(100 * new)} %"
        return _Move(move, PERCENT, f"{verb} {words}.")


def _stepped(value: Fraction, step: Decimal, rounding: str) -> Decimal:
    """`value` as a multiple of `step`, rounded; a billionth of a step is what floating point added."""
    steps = value / Fraction(step)
    nearest = round(steps)
    if abs(steps - nearest) > Fraction(1, 10**9):
        nearest = steps.__ceil__() if rounding == ROUND_CEILING else steps.__floor__()
    return (nearest * step).normalize() + 0


def _exact(value: Fraction) -> Decimal:
    """A sum of plan numbers, whose decimals are finite, as a decimal."""
    return Decimal(value.numerator) / Decimal(value.denominator)
