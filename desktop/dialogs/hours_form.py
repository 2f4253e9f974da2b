"""The fields of the helper for hours and pay."""

from __future__ import annotations

from collections.abc import Mapping
from decimal import Decimal

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QCheckBox, QComboBox, QGridLayout, QLabel, QLineEdit, QWidget

from desktop import hours_words as say
from desktop.pages.page_parts import heading
from desktop.reckoning import Entries, PayEntries
from desktop.rules.form_parts import NumberField
from desktop.tables import numbers
from desktop.tables.column import share_of
from desktop.tables.numbers import Refused
from desktop.theme import current
from solver.hours import WEEKS, Away, Measure, WorkingYear, weeks_in
from solver.plan import ZERO, Category, Plan

_AWAY = (say.LEAVE, say.HOLIDAYS, say.SICKNESS, say.TRAINING, say.OTHER)
_OWN = {say.HOURS_A_WEEK, say.SALARY}  # of one category: not offered for the next
_FULL_TIME = Decimal(40)


class HoursForm(QWidget):
    """Contract, time away, pay. `changed` on every change; `texts` and `fill` remember what was typed."""

    changed = Signal()

    def __init__(self, plan: Plan, category: Category, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._plan = plan
        self._fields: dict[str, NumberField] = {}
        self._measures: dict[str, QComboBox] = {}
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(current().px(1))
        self._grid.setVerticalSpacing(current().px(0.5))
        self.pay = QCheckBox(say.PAY)
        self._add_contract(category)
        self._add_away()
        self._add_pay()
        self._grid.setRowStretch(self._grid.rowCount(), 1)
        self.pay.toggled.connect(self._on_pay)
        self._on_pay(False)

    def field(self, name: str) -> QLineEdit:
        """The field of one number."""
        return self._fields[name]

    def measure(self, name: str) -> QComboBox:
        """What an absence is counted in."""
        return self._measures[name]

    def entries(self, *, with_pay: bool = True) -> Entries:
        """What was typed. Raises Refused where a number is none."""
        year = WorkingYear(
            self._number(say.HOURS_A_WEEK),
            self._number(say.DAYS_A_WEEK),
            self._number(say.WEEKS_A_YEAR),
            tuple(self._away(name) for name in _AWAY),
        )
        length = self._number(self._period) if self._period in self._fields else None
        return Entries(year, self._number(say.FULL_TIME), length, self._pay() if with_pay else None)

    def texts(self) -> dict[str, str]:
        """Everything typed and chosen, to be filled in again."""
        typed = {name: field.text() for name, field in self._fields.items()}
        chosen = {f"{name} in": str(box.currentData()) for name, box in self._measures.items()}
        return {**typed, **chosen, say.PAY: "1" if self.pay.isChecked() else ""}

    def fill(self, texts: Mapping[str, str], *, same_category: bool) -> None:
        """Fill in what was typed before; what belongs to one category only where it is the same one."""
        for name, field in self._fields.items():
            if name in texts and (same_category or name not in _OWN):
                field.setText(texts[name])
        for name, box in self._measures.items():
            box.setCurrentIndex(max(0, box.findData(texts.get(f"{name} in", ""))))
        self.pay.setChecked(same_category and bool(texts.get(say.PAY)))

    # parts

    @property
    def _period(self) -> str:
        return say.PERIOD_WEEKS.format(period=self._plan.period)

    def _add_contract(self, category: Category) -> None:
        self._head(say.CONTRACT)
        weekly = self._plan.period.strip().lower() == "week" and category.hours > 0
        hours = self._add(say.HOURS_A_WEEK, category.hours)
        if not weekly:
            hours.clear()
        self._add(say.DAYS_A_WEEK, Decimal(5))
        self._add(say.WEEKS_A_YEAR, WEEKS, say.WEEKS_TIP)
        self._add(say.FULL_TIME, _FULL_TIME, say.FULL_TIME_TIP)
        if weeks_in(self._plan.period, WorkingYear(Decimal(1))) is None:
            self._add(self._period, ZERO).clear()

    def _add_away(self) -> None:
        self._head(say.AWAY)
        for name in _AWAY:
            self._add(name, ZERO)
            box = QComboBox()
            box.setAccessibleName(say.MEASURED_IN.format(name=name))
            for measure, words in say.MEASURES.items():
                box.addItem(words, measure.value)
            box.currentIndexChanged.connect(self.changed)
            self._measures[name] = box
            self._grid.addWidget(box, self._grid.rowCount() - 1, 2)

    def _add_pay(self) -> None:
        row = self._grid.rowCount()
        self._grid.setRowMinimumHeight(row, current().px(1))
        self._grid.addWidget(self.pay, row + 1, 0, 1, 3)
        for name in (say.SALARY, say.ON_COST_SHARE, say.ON_COSTS):
            self._add(name, ZERO)
        self._fields[say.SALARY].clear()

    def _head(self, text: str) -> None:
        row = self._grid.rowCount()
        if row > 1:
            self._grid.setRowMinimumHeight(row, current().px(1))
            row += 1
        self._grid.addWidget(heading(text), row, 0, 1, 3)

    def _add(self, name: str, number: Decimal, tip: str = "") -> NumberField:
        field = NumberField(name, number)
        field.setToolTip(tip)
        title = QLabel(name)
        title.setToolTip(tip)
        title.setBuddy(field)
        row = self._grid.rowCount()
        self._grid.addWidget(title, row, 0)
        self._grid.addWidget(field, row, 1)
        field.changed.connect(self.changed)
        self._fields[name] = field
        return field

    # reading

    def _number(self, name: str) -> Decimal:
        if not self._fields[name].text().strip():
            raise Refused(say.MISSING.format(field=name))
        try:
            return numbers.parse(self._fields[name].text().strip().removesuffix("%"))
        except Refused as refused:
            raise Refused(say.WRONG.format(field=name, reason=refused.reason)) from None

    def _away(self, name: str) -> Away:
        measure = Measure(self._measures[name].currentData())
        blank = not self._fields[name].text().strip()
        number = ZERO if blank else self._number(name)
        return Away(name, share_of(number) if measure is Measure.SHARE else number, measure)

    def _pay(self) -> PayEntries | None:
        if not self.pay.isChecked():
            return None
        share = share_of(self._number(say.ON_COST_SHARE))
        return PayEntries(self._number(say.SALARY), share, self._number(say.ON_COSTS))

    def _on_pay(self, wanted: bool) -> None:
        for name in (say.SALARY, say.ON_COST_SHARE, say.ON_COSTS):
            self._fields[name].setEnabled(wanted)
        self.changed.emit()
