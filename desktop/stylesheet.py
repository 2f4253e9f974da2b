"""The few rules of style that a palette cannot say: thin rules for boxes, visible focus, text roles."""

from __future__ import annotations

from typing import TYPE_CHECKING

import resources

if TYPE_CHECKING:
    from desktop.theme import Theme

_TONES = ("ink", "faint", "exact", "fractional", "short", "room")

_RULES = """
QToolTip {{ color: {ink}; background: {cell}; border: 1px solid {rule}; padding: {half}px; }}
QTableView, QTreeView, QListView, QScrollArea {{ border: 0; }}
QTableView, QTreeView {{
  background: {cell}; gridline-color: {rule};
  selection-background-color: {selected}; selection-color: {ink};
}}
QTableView::item:focus {{ border: 2px solid {focus}; }}
QHeaderView {{ background: {paper}; border: 0; }}
QHeaderView::section {{
  background: {paper}; color: {faint}; border: 0; border-bottom: 1px solid {rule}; padding: {half}px {one}px;
}}
QHeaderView::section:horizontal {{ padding: {half}px 3px; }}
QTableView#quiet {{ background: {paper}; }}
QTableView#quiet QHeaderView::section:horizontal {{ padding-left: {one}px; }}
QTableView#quiet::item {{ border-bottom: 1px solid {rule}; padding: 0 3px; }}
QTableView#quiet::item:focus {{ border: 2px solid {focus}; }}
QTableCornerButton::section {{ background: {paper}; border: 0; border-bottom: 1px solid {rule}; }}
QListView#rail {{ background: {paper}; border-right: 1px solid {rule}; padding-top: {one}px; outline: 0; }}
QListView#rail::item {{ padding: {one}px {two}px; border-left: 3px solid transparent; }}
QListView#rail::item:selected {{ background: {selected}; color: {ink}; border-left: 3px solid {ink}; }}
QListView#rail::item:focus {{ border-left: 3px solid {focus}; }}
QPushButton, QToolButton {{
  color: {ink}; background: {cell}; border: 1px solid {rule}; border-radius: 2px;
  padding: {half}px {button}px;
}}
QPushButton:hover, QToolButton:hover {{ background: {selected}; }}
QPushButton:focus, QToolButton:focus {{ border: 2px solid {focus}; padding: {half_less}px {button_less}px; }}
QPushButton:disabled, QToolButton:disabled {{ color: {faint}; background: {paper}; }}
QPushButton:checked, QToolButton:checked {{ background: {selected}; border-color: {ink}; }}
QLineEdit, QPlainTextEdit {{
  background: {cell}; color: {ink}; border: 1px solid {rule}; border-radius: 2px; padding: 2px {half}px;
}}
QLineEdit:focus, QPlainTextEdit:focus {{ border: 2px solid {focus}; }}
QAbstractSpinBox QLineEdit, QAbstractSpinBox QLineEdit:focus, QComboBox QLineEdit {{
  border: 0; background: transparent; }}
QCheckBox::indicator, QListView::indicator, QTableView::indicator {{
  width: {box}px; height: {box}px; border: 1px solid {faint}; border-radius: 2px; background: {cell};
}}
QCheckBox::indicator:focus {{ border: 2px solid {focus}; }}
QCheckBox::indicator:disabled {{ border-color: {rule}; background: {paper}; }}
QCheckBox::indicator:checked, QListView::indicator:checked, QTableView::indicator:checked {{
  image: url("{tick}");
}}
QFrame[frameShape="4"], QFrame[frameShape="5"] {{ color: {rule}; }}
QMenuBar {{ background: {paper}; color: {ink}; }}
QMenuBar::item:selected, QMenu::item:selected {{ background: {selected}; color: {ink}; }}
QMenu {{ background: {cell}; color: {ink}; border: 1px solid {rule}; }}
QMenu::item:disabled {{ color: {faint}; }}
QMenu::separator {{ background: {rule}; height: 1px; margin: {half}px 0; }}
*[weight="bold"] {{ font-weight: bold; }}
QStatusBar {{ color: {faint}; }}
QScrollBar {{ background: {paper}; border: 0; margin: 0; }}
QScrollBar:vertical {{ width: {bar}px; }}
QScrollBar:horizontal {{ height: {bar}px; }}
QScrollBar::handle {{ background: {grip}; border-radius: 2px; margin: {edge}px; }}
QScrollBar::handle:vertical {{ min-height: {three}px; }}
QScrollBar::handle:horizontal {{ min-width: {three}px; }}
QScrollBar::handle:hover, QScrollBar::handle:pressed {{ background: {faint}; }}
QScrollBar::add-line, QScrollBar::sub-line {{ width: 0; height: 0; }}
QScrollBar::add-page, QScrollBar::sub-page {{ background: {paper}; }}
"""


def stylesheet(theme: Theme) -> str:
    """The application's style sheet in the colours and sizes of `theme`."""
    sizes = {"half": theme.px(0.5), "one": theme.px(1), "two": theme.px(2), "button": theme.px(1.5)}
    sizes |= {"half_less": sizes["half"] - 1, "button_less": sizes["button"] - 1}
    roles = ("ink", "faint", "paper", "cell", "rule", "grip", "selected", "focus")
    colours = {role: getattr(theme, role).name() for role in roles}
    sizes |= {"box": theme.px(1.5), "bar": theme.px(1.25), "three": theme.px(3), "edge": theme.px(0.25)}
    tick = resources.tick_path(theme.dark).as_posix()
    return _RULES.format(**colours, **sizes, tick=tick) + _tones(theme) + _sizes(theme)


def _tones(theme: Theme) -> str:
    return "".join(f'*[tone="{t}"] {{ color: {getattr(theme, t).name()}; }}\n' for t in _TONES)


def _sizes(theme: Theme) -> str:
    sizes = theme.all_points().items()
    return "".join(f'*[textSize="{size}"] {{ font-size: {points:.2f}pt; }}\n' for size, points in sizes)
