"""The plan as one named matrix program, from which every question is asked.

    n_jt   head count in lots, integer            u_jt  1 if any of j is there in t
    p_jt, q_jt  joiners, leavers                  o_j   1 if j is ever there
    e_jkt  hours of j on work k                   s_jgt hours of j supervising group g
    v_jt   overtime hours of j                    b_kt  units of k bought in

minimise  sum_t L_t sum_j pay_j n_jt + sum_jt (join_j p_jt + leave_j q_jt) + sum_j open_j o_j
          + sum_jt overtime_rate_j v_jt + sum_kt price_k b_kt
hours        sum_k e_jkt + sum_g s_jgt <= L_t A_j n_jt + v_jt - settling_j p_jt
overtime     v_jt <= L_t overtime_hours_j n_jt
work         sum_j output_jk e_jkt + b_kt >= amount_kt           (row divided by the best output: hours)
supervision  sum_{j in g} s_jgt >= L_t sum_{i charge of g} supervision_hours_i n_it
joiners      p_jt >= n_jt - n_j,t-1,  leavers  q_jt >= n_j,t-1 - n_jt,  n_j0 = on_books_j
presence, ratio, share, budget, least-if-any and bounds as in the plan.

Columns p, q, u, o are there only where something depends on them.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from decimal import Decimal
from fractions import Fraction
from functools import cached_property
from math import ceil, floor, lcm

from solver.answer import LineKind
from solver.ledger import Ledger
from solver.lines import Column, HeadLine, Line
from solver.matrix import Floats, Matrix, RowSense
from solver.phrases import priced
from solver.plan import Budget, Category, Plan, Presence, Ratio, Rule, Share
from solver.ruleterms import rule_says, rule_terms

# head counts nobody limited get at least this many lots, and AMPLE times what any one line asks for
UNLIMITED_LOTS = 10**6
AMPLE = 1000
# beyond this HiGHS may forget its time limit, and there are no such crews
MOST_LOTS = 10**9


class Program:
    """The matrix program of a plan. Head count of category j in phase t is column `head(j, t)`, in lots."""

    def __init__(
        self,
        plan: Plan,
        caps: Sequence[int] | None = None,
        *,
        all_moves: bool = False,
        open_ended: bool = False,
    ) -> None:
        """Build; `caps` are tighter upper limits in lots per head count, valid for the question asked.

        `all_moves` adds joiners and leavers of every category, for questions that count them.
        `open_ended` leaves head counts that nobody limited free of their switches: in the relaxation a
        switch of a count without limit costs nothing, whatever number stands for "without limit".
        """
        self.plan = plan
        self.categories = plan.categories
        self.phases = plan.phases
        self.groups = plan.supervising_groups()
        self.matrix = Matrix()
        self.columns: list[Column] = []
        self.lines: list[Line] = []
        self.head_lines: list[HeadLine] = []
        self._index = {c.name: j for j, c in enumerate(plan.categories)}
        self.lots = [Fraction(c.lot) for c in plan.categories]
        self.attended = [Fraction(c.hours) * (1 - Fraction(c.absence)) for c in plan.categories]
        self._caps = caps
        self._all_moves = all_moves
        self._open_ended = open_ended
        self._add_heads()
        self._add_moves()
        self._add_presence_switches()
        self._add_hours_and_work()
        self._add_rules()

    # ---- shape -------------------------------------------------------------------------------

    @property
    def head_count(self) -> int:
        """Number of head counts: categories x phases; they are the first columns."""
        return len(self.categories) * len(self.phases)

    def head(self, category: int, phase: int) -> int:
        """Column of the head count, in lots."""
        return category * len(self.phases) + phase

    def periods(self, phase: int) -> Fraction:
        """Length of a phase in periods."""
        return Fraction(self.phases[phase].periods)

    # ---- building ----------------------------------------------------------------------------

    def _column(
        self, meaning: Column, cost: Fraction | float, lower: float, upper: float, integer: bool = False
    ) -> int:
        self.columns.append(meaning)
        return self.matrix.add_column(float(cost), lower, upper, integer)

    def _add_heads(self) -> None:
        for j, category in enumerate(self.categories):
            lot = self.lots[j]
            lower = ceil(Fraction(category.at_least) / lot)
            most = self._unlimited(j) if category.at_most is None else floor(Fraction(category.at_most) / lot)
            limit = min(most, max(MOST_LOTS, lower))
            for t, phase in enumerate(self.phases):
                cap = limit if self._caps is None else min(limit, self._caps[self.head(j, t)])
                self._column(
                    Column("n", category.name, None, phase.name),
                    self.periods(t) * Fraction(category.pay) * lot,
                    float(lower),
                    float(max(cap, lower)),
                    integer=True,
                )
        for j, category in enumerate(self.categories):
            self._add_bound_lines(j, category)

    def _unlimited(self, j: int) -> int:
        """A limit in lots for a head count that nobody limited, far above what any line can ask for.

        Ratios, shares and supervision pass on what is asked of one category to others: so it is the most
        that is asked of any.
        """
        return max(UNLIMITED_LOTS, ceil(AMPLE * self._most_wanted / self.lots[j]))

    @cached_property
    def _most_wanted(self) -> Fraction:
        """The most people that one bound, work or presence rule, and one ratio or share, can ask for."""
        asked = max((x for j in range(len(self.categories)) for x in self._wanted(j)), default=Fraction(0))
        parts = [Fraction(rule.at_most) for rule in self.plan.rules if isinstance(rule, Ratio)]
        parts += [Fraction(rule.fraction) for rule in self.plan.rules if isinstance(rule, Share)]
        return asked / min((part for part in parts if 0 < part < 1), default=Fraction(1))

    def _wanted(self, j: int) -> Iterator[Fraction]:
        category = self.categories[j]
        yield Fraction(category.at_least)
        for work in self.plan.works:
            each = Fraction(category.output.get(work.name, 0)) * self.attended[j]
            if each > 0:
                for t, amount in enumerate(work.amounts):
                    yield Fraction(amount) / (each * self.periods(t))
        for rule in self.plan.rules:
            if isinstance(rule, Presence) and rule.weights.get(category.name, 0) > 0:
                yield Fraction(rule.bound) / Fraction(rule.weights[category.name])

    def _add_bound_lines(self, j: int, category: Category) -> None:
        lot = self.lots[j]
        if category.at_least > 0:
            says = f"at least {category.at_least.normalize():f} {category.name}"
            bound = ceil(Fraction(category.at_least) / lot)
            self._bound_line(j, f"{category.name}: at least", says, RowSense.AT_LEAST, bound)
        if category.at_most is not None:
            says = f"at most {category.at_most.normalize():f} {category.name}"
            bound = floor(Fraction(category.at_most) / lot)
            self._bound_line(j, f"{category.name}: at most", says, RowSense.AT_MOST, bound)

    def _bound_line(self, j: int, name: str, says: str, sense: RowSense, bound: int) -> None:
        """The column's own bounds, as a line; crossed bounds need a row to be seen by the engines."""
        lot = self.lots[j]
        for t, phase in enumerate(self.phases):
            column = self.head(j, t)
            row = None
            if sense is RowSense.AT_MOST and bound < self.matrix.lower[column]:
                row = self.matrix.add_row([column], [1.0], sense, float(bound))
            line = Line(name, LineKind.BOUND, phase.name, "people", row, float(lot), says)
            self._head_line(line, [(column, lot)], sense, bound * lot)

    def _head_line(
        self,
        line: Line,
        terms: Iterable[tuple[int, Fraction]],
        sense: RowSense,
        rhs: Fraction,
        only_if_any: bool = False,
    ) -> None:
        exact = [(column, coef) for column, coef in terms if coef]
        divisor = lcm(rhs.denominator, *(coef.denominator for _, coef in exact))
        whole = tuple((column, int(coef * divisor)) for column, coef in exact)
        self.lines.append(line)
        self.head_lines.append(HeadLine(line, whole, sense, int(rhs * divisor), divisor, only_if_any))

    def _add_moves(self) -> None:
        """Joiners and leavers, where they cost money or hours; both in people."""
        self.joiners: dict[tuple[int, int], int] = {}
        self.leavers: dict[tuple[int, int], int] = {}
        for j, category in enumerate(self.categories):
            for t, phase in enumerate(self.phases):
                if self._all_moves or category.join_cost > 0 or category.settling_hours > 0:
                    meaning = Column("p", category.name, None, phase.name)
                    self.joiners[j, t] = self._move(j, t, meaning, category.join_cost, +1)
                if self._all_moves or category.leave_cost > 0:
                    meaning = Column("q", category.name, None, phase.name)
                    self.leavers[j, t] = self._move(j, t, meaning, category.leave_cost, -1)

    def _move(self, j: int, t: int, meaning: Column, cost: Decimal, sign: int) -> int:
        lot = float(self.lots[j])
        books = float(self.categories[j].on_books)
        now, before = self.head(j, t), self.head(j, t - 1) if t else None
        most = lot * (self.matrix.upper[now] if sign > 0 or before is None else self.matrix.upper[before])
        column = self._column(meaning, float(cost), 0.0, max(most, books))
        if before is None:
            self.matrix.add_row([column, now], [1.0, -sign * lot], RowSense.AT_LEAST, -sign * books)
        else:
            self.matrix.add_row([column, now, before], [1.0, -sign * lot, sign * lot], RowSense.AT_LEAST, 0.0)
        return column

    def _add_presence_switches(self) -> None:
        """u (least-if-any) and o (opening costs), each 0 or 1; `switches` maps them to head counts."""
        self.switches: dict[int, tuple[int, ...]] = {}
        for j, category in enumerate(self.categories):
            heads = [self.head(j, t) for t in range(len(self.phases))]
            if category.open_cost > 0:
                meaning = Column("o", category.name, None, None)
                column = self._column(meaning, Fraction(category.open_cost), 0.0, 1.0, integer=True)
                self.switches[column] = tuple(heads)
                for head in heads:
                    self._switched(head, column)
            least = ceil(Fraction(category.least_if_any) / self.lots[j])
            if least > 1:
                self._least_if_any(j, category, least)

    def _switched(self, head: int, switch: int) -> None:
        if self._open_ended and self.categories[head // len(self.phases)].at_most is None:
            return
        coefs = [1.0, -self.matrix.upper[head]]
        self.matrix.add_row([head, switch], coefs, RowSense.AT_MOST, 0.0)

    def _least_if_any(self, j: int, category: Category, least: int) -> None:
        says = f"none or at least {category.least_if_any.normalize():f} {category.name}"
        for t, phase in enumerate(self.phases):
            head = self.head(j, t)
            switch = self._column(Column("u", category.name, None, phase.name), 0.0, 0.0, 1.0, integer=True)
            self.switches[switch] = (head,)
            self._switched(head, switch)
            row = self.matrix.add_row([head, switch], [1.0, -float(least)], RowSense.AT_LEAST, 0.0)
            line = Line(
                f"{category.name}: least if any", LineKind.BOUND, phase.name, "people", row,
                float(self.lots[j]), says,
            )  # fmt: skip
            self._head_line(line, [(head, self.lots[j])], RowSense.AT_LEAST, least * self.lots[j], True)

    def _add_hours_and_work(self) -> None:
        self.effort: dict[tuple[int, int, int], int] = {}
        self.guidance: dict[tuple[int, int, int], int] = {}
        self.overtime: dict[tuple[int, int], int] = {}
        self.bought: dict[tuple[int, int], int] = {}
        for t in range(len(self.phases)):
            for j in range(len(self.categories)):
                self._add_hours(j, t)
            for k in range(len(self.plan.works)):
                self._add_work(k, t)
            for g in range(len(self.groups)):
                self._add_supervision(g, t)

    def most_hours(self, j: int, t: int) -> float:
        """No one of category j can spend more hours than this in phase t."""
        each = self.attended[j] + Fraction(self.categories[j].overtime_hours)
        return self.matrix.upper[self.head(j, t)] * float(self.lots[j] * self.periods(t) * each)

    def _add_hours(self, j: int, t: int) -> None:
        category, phase = self.categories[j], self.phases[t]
        most = self.most_hours(j, t)
        used: list[int] = []
        for k, work in enumerate(self.plan.works):
            if category.output.get(work.name, 0) > 0:
                column = self._column(Column("e", category.name, work.name, phase.name), 0.0, 0.0, most)
                self.effort[j, k, t] = column
                used.append(column)
        for g, group in enumerate(self.groups):
            if category.name in group:
                meaning = Column("s", category.name, group_name(group), phase.name)
                self.guidance[j, g, t] = self._column(meaning, 0.0, 0.0, most)
                used.append(self.guidance[j, g, t])
        if used or category.settling_hours > 0:  # settling in takes hours also where nothing else does
            self._add_hours_row(j, t, used)

    def _add_hours_row(self, j: int, t: int, used: list[int]) -> None:
        category, head = self.categories[j], self.head(j, t)
        columns, coefs = [*used, head], [1.0] * len(used)
        coefs.append(-float(self.periods(t) * self.attended[j] * self.lots[j]))
        if category.overtime_hours > 0:
            each = float(self.periods(t) * Fraction(category.overtime_hours) * self.lots[j])
            over = self._column(
                Column("v", category.name, None, self.phases[t].name),
                float(category.overtime_rate),
                0.0,
                each * self.matrix.upper[head],
            )
            self.overtime[j, t] = over
            columns.append(over)
            coefs.append(-1.0)
            self.matrix.add_row([over, head], [1.0, -each], RowSense.AT_MOST, 0.0)
        if category.settling_hours > 0:
            columns.append(self.joiners[j, t])
            coefs.append(float(category.settling_hours))
            self._add_settling_line(j, t)
        self.matrix.add_row(columns, coefs, RowSense.AT_MOST, 0.0)

    def _add_settling_line(self, j: int, t: int) -> None:
        """Joiners may need more hours to settle in than all of the category have: linear in head counts."""
        category, lot = self.categories[j], self.lots[j]
        settling = Fraction(category.settling_hours)
        each = self.periods(t) * (self.attended[j] + Fraction(category.overtime_hours))
        if settling <= each:
            return
        name, head = f"{category.name}: settling in", self.head(j, t)
        terms = [(head, (each - settling) * lot)]
        if t:
            terms.append((head - 1, settling * lot))
        rhs = Fraction(0) if t else -settling * Fraction(category.on_books)
        row = self.matrix.add_row(
            [c for c, _ in terms], [float(a) for _, a in terms], RowSense.AT_LEAST, float(rhs)
        )
        says = f"joiners of {category.name} settle in within the hours there are"
        line = Line(name, LineKind.BOUND, self.phases[t].name, "hours", row, 1.0, says)
        self._head_line(line, terms, RowSense.AT_LEAST, rhs)

    def best_output(self, k: int) -> Fraction:
        """The best output of any category on work k, units per hour; 1 where nobody can do it."""
        name = self.plan.works[k].name
        best = max((c.output.get(name, Decimal(0)) for c in self.categories), default=Decimal(0))
        return Fraction(best) if best > 0 else Fraction(1)

    def _add_work(self, k: int, t: int) -> None:
        work, phase = self.plan.works[k], self.phases[t]
        best = self.best_output(k)
        columns, coefs = [], []
        for j, category in enumerate(self.categories):
            if (j, k, t) in self.effort:
                columns.append(self.effort[j, k, t])
                coefs.append(float(Fraction(category.output[work.name]) / best))
        amount = Fraction(work.amounts[t])
        if work.buy_in_price is not None:
            most = amount if work.buy_in_most is None else min(amount, Fraction(work.buy_in_most))
            meaning = Column("b", None, work.name, phase.name)
            self.bought[k, t] = self._column(meaning, float(work.buy_in_price), 0.0, float(most))
            columns.append(self.bought[k, t])
            coefs.append(float(1 / best))
        row = self.matrix.add_row(columns, coefs, RowSense.AT_LEAST, float(amount / best))
        says = f"{work.amounts[t].normalize():,f} {work.unit} of {work.name}".replace("  ", " ")
        self.lines.append(Line(work.name, LineKind.WORK, phase.name, work.unit, row, float(best), says))

    def charges(self, g: int) -> list[int]:
        """Categories that draw supervision from group g."""
        members = set(self.groups[g])
        return [
            j
            for j, c in enumerate(self.categories)
            if c.supervision.hours > 0 and set(c.supervision.by) == members
        ]

    def _add_supervision(self, g: int, t: int) -> None:
        columns, coefs = [], []
        for j in range(len(self.categories)):
            if (j, g, t) in self.guidance:
                columns.append(self.guidance[j, g, t])
                coefs.append(1.0)
        for i in self.charges(g):
            hours = self.periods(t) * Fraction(self.categories[i].supervision.hours) * self.lots[i]
            columns.append(self.head(i, t))
            coefs.append(-float(hours))
        row = self.matrix.add_row(columns, coefs, RowSense.AT_LEAST, 0.0)
        name = f"Supervision by {group_name(self.groups[g])}"
        says = name[0].lower() + name[1:]
        self.lines.append(Line(name, LineKind.SUPERVISION, self.phases[t].name, "hours", row, 1.0, says))

    def _add_rules(self) -> None:
        self.budget_rows: list[int] = []
        self.budget_of: dict[Line, Fraction] = {}
        for rule in self.plan.rules:
            if isinstance(rule, Budget):
                self._add_budget(rule)
                continue
            terms, sense, bound = rule_terms(rule)
            for t, phase in enumerate(self.phases):
                if rule.phases is None or phase.name in rule.phases:
                    self._add_head_rule(rule, t, terms, sense, bound)

    def _add_head_rule(
        self, rule: Rule, t: int, terms: dict[str, Fraction], sense: RowSense, bound: Fraction
    ) -> None:
        exact = [(self.head(self._index[n], t), a * self.lots[self._index[n]]) for n, a in terms.items()]
        exact = [(column, coef) for column, coef in exact if coef]
        row = self.matrix.add_row(
            [column for column, _ in exact], [float(coef) for _, coef in exact], sense, float(bound)
        )
        kind = LineKind(rule.kind)
        line = Line(rule.name, kind, self.phases[t].name, "people", row, 1.0, rule_says(rule))
        self._head_line(line, exact, sense, bound)

    def _add_budget(self, rule: Budget) -> None:
        costly = [i for i, cost in enumerate(self.matrix.cost) if cost]
        row = self.matrix.add_row(
            costly, [self.matrix.cost[i] for i in costly], RowSense.AT_MOST, float(rule.at_most)
        )
        self.budget_rows.append(row)
        says = f"{rule.name}: at most {priced(f'{rule.at_most:,}', self.plan.currency)}"
        line = Line(rule.name, LineKind.BUDGET, None, self.plan.currency, row, 1.0, says)
        self.lines.append(line)
        self.budget_of[line] = Fraction(rule.at_most)

    # ---- what later questions ask ------------------------------------------------------------

    @cached_property
    def ledger(self) -> Ledger:
        """Exact money and moves of crews."""
        return Ledger(self.plan)

    @cached_property
    def costs_hours(self) -> bool:
        """True where overtime or bought-in work costs money: cost then depends on how a crew is run."""
        running = (*self.overtime.values(), *self.bought.values())
        return any(self.matrix.cost[column] for column in running)

    def running_cost(self, x: Floats) -> float:
        """What overtime and bought-in units cost in a solution of the matrix."""
        running = (*self.overtime.values(), *self.bought.values())
        return float(sum(self.matrix.cost[column] * x[column] for column in running))

    @cached_property
    def hours_lines(self) -> list[tuple[Line, int, LineKind, int, int]]:
        """Work and supervision lines: (line, matrix row, kind, index of work or group, phase)."""
        found: list[tuple[Line, int, LineKind, int, int]] = []
        seen: dict[tuple[LineKind, str | None], int] = {}
        phase_of = {phase.name: t for t, phase in enumerate(self.phases)}
        for line in self.lines:
            if line.kind in (LineKind.WORK, LineKind.SUPERVISION) and line.row is not None:
                index = seen.get((line.kind, line.phase), 0)
                seen[line.kind, line.phase] = index + 1
                found.append((line, line.row, line.kind, index, phase_of[str(line.phase)]))
        return found

    @cached_property
    def work_row(self) -> dict[tuple[int, int], int]:
        """Matrix row of work k in phase t."""
        return {(i, t): row for _, row, kind, i, t in self.hours_lines if kind is LineKind.WORK}

    @cached_property
    def group_row(self) -> dict[tuple[int, int], int]:
        """Matrix row of supervision group g in phase t."""
        return {(i, t): row for _, row, kind, i, t in self.hours_lines if kind is LineKind.SUPERVISION}


def group_name(group: Sequence[str]) -> str:
    """How a supervision group is called: its categories' names."""
    return " or ".join(group)
