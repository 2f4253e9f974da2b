"""The page on what whole people cost: the ladder of crews above the floor, and where the cost comes from."""

from __future__ import annotations

from PySide6.QtWidgets import QWidget

from desktop import figures
from desktop import question_words as say
from desktop.answers import Answers
from desktop.document import Document
from desktop.pages.page_parts import heading, label
from desktop.pages.question_page import QuestionPage
from desktop.pictures.named_bars import BarsPicture, NamedBar, NamedBars, Tone
from solver.answer import CategorySaving, Rung, WholePeopleDetail
from solver.plan import Plan

_FEW_CENTS = 0.005


def ladder_bars(detail: WholePeopleDetail, currency: str) -> NamedBars:
    """Each crew by what it costs above the floor; a crew that is not workable names what it breaks."""
    bars = tuple(_rung(rung, detail) for rung in detail.ladder)
    return NamedBars(
        bars, (say.CREW, say.in_unit(say.COST, currency), say.in_unit(say.ABOVE_FLOOR, currency))
    )


def _rung(rung: Rung, detail: WholePeopleDetail) -> NamedBar:
    if rung.cost is None:
        broken = say.breaks(list(rung.broken)) if rung.broken else say.NO_CREW
        return NamedBar(rung.name, say.NOT_WORKABLE, None, Tone.PLAIN, broken)
    above = rung.cost - detail.floor
    tone = {"floor": Tone.FRACTIONAL, "exact": Tone.EXACT}.get(rung.name, Tone.PLAIN)
    note = f"+{figures.money(above)}" if above > _FEW_CENTS else ""
    return NamedBar(rung.name, figures.money(rung.cost), max(above, 0.0), tone, note, rung.name == "exact")


def saving_bars(plan: Plan, savings: tuple[CategorySaving, ...]) -> NamedBars:
    """Two bars per category: if it alone could be fractional, and if its lot were halved; none for none."""
    bars: list[NamedBar] = []
    for saving in savings:
        first, second = saving.if_fractional, saving.if_half_lot
        if max(first, second) < _FEW_CENTS:
            bars.append(NamedBar(saving.category, figures.NIL, None, Tone.PLAIN, say.NO_SAVING))
            continue
        half = say.IF_HALF_POST if plan.category(saving.category).lot == 1 else say.IF_HALF_LOT
        bars.append(
            NamedBar(saving.category, figures.money(first), first, Tone.FRACTIONAL, say.IF_FRACTIONAL)
        )
        bars.append(NamedBar("", figures.money(second), second, Tone.ROOM, half))
    return NamedBars(tuple(bars), (say.CATEGORY, say.in_unit(say.SAVING, plan.currency), ""))


class CostPage(QuestionPage):
    """What it costs that people are whole, and where that comes from."""

    question = "cost"

    def __init__(self, document: Document, answers: Answers, parent: QWidget | None = None) -> None:
        super().__init__(document, answers, parent)
        self.sentence = label()
        self.ladder = BarsPicture(say.LADDER)
        self.best = label()
        self.savings = BarsPicture(say.SAVINGS)
        self.method = label(say.COST_METHOD, tone="faint")
        ladder, savings = heading(say.LADDER), heading(say.SAVINGS)
        self._parts: tuple[QWidget, ...] = (
            *(self.sentence, ladder, self.ladder),
            *(savings, self.best, self.savings, self.method),
        )
        for widget in self._parts:
            self.body.addWidget(widget)
        self.body.addStretch(1)

    def show_detail(self, detail: WholePeopleDetail | None) -> None:
        """Fill pictures and sentences."""
        plan = self.answers.plan
        there = detail is not None and plan is not None
        for widget in self._parts:
            widget.setVisible(there)
        if detail is None or plan is None:
            return
        absolute = figures.money(detail.absolute, plan.currency)
        self.sentence.setText(
            say.whole_people_cost(absolute, figures.percent(detail.percent))
            if detail.absolute > _FEW_CENTS
            else say.WHOLE_PEOPLE_FREE
        )
        self.ladder.show_bars(ladder_bars(detail, plan.currency))
        self.savings.show_bars(saving_bars(plan, detail.by_category))
        self.best.setText(self._best(detail, plan.currency))

    def _best(self, detail: WholePeopleDetail, currency: str) -> str:
        best = max(detail.by_category, key=lambda s: s.if_fractional, default=None)
        if best is None or best.if_fractional < _FEW_CENTS:
            return say.NO_ONE_SAVES
        return say.shared(best.category, figures.money(best.if_fractional, currency))
