"""The parts of which the forms of rules are made."""

from __future__ import annotations

from collections.abc import Mapping
from decimal import Decimal
from types import MappingProxyType

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import (
    QComboBox,
    QHeaderView,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QSizePolicy,
    QTableWidget,
    QTableWidgetItem,
)

from desktop import messages, theme
from desktop.rules.words import SENSES
from desktop.tables import numbers
from desktop.tables.column import percent_of, share_of
from desktop.tables.numbers import Refused
from solver.plan import ONE, Sense

MOST_VISIBLE = 7  # lines of a list before it scrolls
_TICKED, _EMPTY = Qt.CheckState.Checked, Qt.CheckState.Unchecked


class NumberField(QLineEdit):
    """A number typed as in the grids; `per_cent` shows a share as per cent."""

    changed = Signal()

    def __init__(self, name: str, number: Decimal, unit: str = "", *, per_cent: bool = False) -> None:
        super().__init__()
        self._per_cent = per_cent
        self.setAccessibleName(f"{name} {unit}".strip())
        self.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.setText(numbers.plain(percent_of(number) if per_cent else number))
        self.setMaximumWidth(theme.current().px(16))
        self.textEdited.connect(self.changed)

    def number(self) -> Decimal:
        """What was typed. Raises Refused."""
        typed = numbers.parse(self.text().strip().removesuffix("%") if self._per_cent else self.text())
        return share_of(typed) if self._per_cent else typed


class SenseBox(QComboBox):
    """At least, at most or exactly."""

    changed = Signal()

    def __init__(self, sense: Sense) -> None:
        super().__init__()
        self.setAccessibleName(messages.SENSE)
        for each, word in SENSES.items():
            self.addItem(word, each)
        self.setCurrentIndex(list(SENSES).index(sense))
        self.currentIndexChanged.connect(self.changed)

    def sense(self) -> Sense:
        """What is chosen."""
        return Sense(self.currentData())


class TickList(QListWidget):
    """Names to tick with the space bar."""

    changed = Signal()

    def __init__(self, name: str, names: tuple[str, ...], ticked: tuple[str, ...]) -> None:
        super().__init__()
        self.setAccessibleName(name)
        for each in names:
            item = QListWidgetItem(each, self)
            item.setFlags(item.flags() | Qt.ItemFlag.ItemIsUserCheckable)
            item.setCheckState(_TICKED if each in ticked else _EMPTY)
        if names:
            self.setCurrentRow(0)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)
        self.setFixedHeight(_lines(len(names)) * self.sizeHintForRow(0) + 2 * self.frameWidth())
        self.itemChanged.connect(lambda _item: self.changed.emit())

    def names(self) -> tuple[str, ...]:
        """The names that are ticked."""
        items = (self.item(row) for row in range(self.count()))
        return tuple(item.text() for item in items if item.checkState() == _TICKED)


class PhaseList(TickList):
    """The phases a rule holds in; all ticked means every phase, also one that is added later."""

    def __init__(self, phases: tuple[str, ...], chosen: tuple[str, ...] | None) -> None:
        super().__init__(messages.RULE_PHASES, phases, phases if chosen is None else chosen)
        self._all = phases

    def phases(self) -> tuple[str, ...] | None:
        """The phases of the rule, None for every one."""
        return None if self.names() == self._all else self.names()


class WeightTable(QTableWidget):
    """Names to tick, each with what one person counts."""

    changed = Signal()

    def __init__(self, names: tuple[str, ...], weights: Mapping[str, Decimal]) -> None:
        super().__init__(len(names), 2)
        self.setAccessibleName(messages.COUNTED)
        self.setHorizontalHeaderLabels([messages.COUNTED, messages.COUNTS_AS])
        self.verticalHeader().hide()
        self.horizontalHeader().setSectionResizeMode(0, QHeaderView.ResizeMode.Stretch)
        for row, name in enumerate(names):
            self._fill(row, name, weights)
        step = theme.current().px(3)
        self.verticalHeader().setDefaultSectionSize(step)
        self.setFixedHeight(self.horizontalHeader().sizeHint().height() + _lines(len(names)) * step)
        self.cellChanged.connect(lambda _row, _column: self.changed.emit())

    def _fill(self, row: int, name: str, weights: Mapping[str, Decimal]) -> None:
        item = QTableWidgetItem(name)
        item.setFlags(
            Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemIsUserCheckable
        )
        item.setCheckState(_TICKED if name in weights else _EMPTY)
        weight = QTableWidgetItem(numbers.plain(weights.get(name, ONE)))
        weight.setTextAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.setItem(row, 0, item)
        self.setItem(row, 1, weight)

    def weights(self) -> Mapping[str, Decimal]:
        """What one person of each ticked category counts. Raises Refused."""
        made: dict[str, Decimal] = {}
        for row in range(self.rowCount()):
            name, weight = self.item(row, 0), self.item(row, 1)
            if name is not None and weight is not None and name.checkState() == _TICKED:
                made[name.text()] = _weight(name.text(), weight.text())
        return MappingProxyType(made)


def _weight(name: str, text: str) -> Decimal:
    try:
        return numbers.parse(text)
    except Refused as refused:
        raise Refused(f"{name}: {refused.reason}") from None


def _lines(names: int) -> int:
    """How many lines of a list are seen at once."""
    return min(max(names, 2), MOST_VISIBLE)
