"""The look: colours with one meaning each, three text sizes, an 8 px grid.

`exact`, `fractional`, `short` and `room` mean the same thing on every page and on paper; everything else is
ink on paper. `*_soft` are fills under ink, `grip` is what is dragged. Widgets ask `current()`; painters are
handed a theme, so that the same painter draws on screen and in print.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import StrEnum
from typing import Any, TypeVar

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QFont, QGuiApplication, QPalette
from PySide6.QtWidgets import QApplication, QWidget

from desktop.stylesheet import stylesheet

W = TypeVar("W", bound=QWidget)

FAMILY = "DejaVu Sans"
GRID = 8
_PROPERTY = "fullComplementTheme"
_FRAME = 140  # per cent by which Fusion darkens the window for its frames


class Size(StrEnum):
    """The three text sizes."""

    SMALL = "small"
    BODY = "body"
    LARGE = "large"


_POINTS = {Size.SMALL: 8.5, Size.BODY: 10.0, Size.LARGE: 20.0}


@dataclass(frozen=True)
class Theme:
    """Colours by meaning, and the zoom of the whole interface (1.0 = as designed)."""

    name: str
    dark: bool
    paper: QColor
    cell: QColor
    ink: QColor
    faint: QColor
    rule: QColor
    grip: QColor
    exact: QColor
    exact_soft: QColor
    fractional: QColor
    fractional_soft: QColor
    short: QColor
    short_soft: QColor
    room: QColor
    room_soft: QColor
    focus: QColor
    selected: QColor
    refused: QColor
    zoom: float = 1.0

    def font(self, size: Size = Size.BODY, bold: bool = False) -> QFont:
        """The font of one of the three sizes."""
        font = QFont(FAMILY)
        font.setPointSizeF(self.points(size))
        font.setBold(bold)
        return font

    def picture_font(self, size: Size = Size.BODY, bold: bool = False) -> QFont:
        """As `font`, in pixels of a 96 dpi painter: pictures keep their proportions on any device."""
        font = self.font(size, bold)
        font.setPixelSize(max(1, round(self.points(size) * 96 / 72)))
        return font

    def points(self, size: Size) -> float:
        """Point size of `size` at this zoom."""
        return _POINTS[size] * self.zoom

    def all_points(self) -> dict[Size, float]:
        """Point size of each text size at this zoom."""
        return {size: self.points(size) for size in Size}

    def px(self, steps: float) -> int:
        """`steps` of the 8 px grid, in device-independent pixels at this zoom."""
        return round(steps * GRID * self.zoom)

    def text_pairs(self) -> tuple[tuple[str, QColor, QColor], ...]:
        """Every pair (name, text colour, background) that the window or the page puts together."""
        inks = ("ink", "faint", "exact", "fractional", "short", "room")
        on_ground = [(n, ground) for n in inks for ground in ("paper", "cell")]
        on_soft = [("ink", soft) for soft in ("exact_soft", "fractional_soft", "short_soft", "room_soft")]
        more = [("ink", "selected"), ("ink", "refused"), ("short", "refused"), ("faint", "selected")]
        more += [("exact", "selected"), ("short", "selected"), ("paper", "exact")]
        pairs = on_ground + on_soft + more
        return tuple((f"{a} on {b}", getattr(self, a), getattr(self, b)) for a, b in pairs)


def _theme(name: str, dark: bool, **colours: str) -> Theme:
    made: dict[str, Any] = {role: QColor(value) for role, value in colours.items()}
    return Theme(name=name, dark=dark, **made)


def light() -> Theme:
    """Ink on warm paper."""
    return _theme(
        "light",
        False,
        paper="#FAF9F6",
        cell="#FFFFFF",
        ink="#1D2225",
        faint="#596064",
        rule="#D6D3CB",
        grip="#878A89",
        exact="#0A5C58",
        exact_soft="#CFE4E1",
        fractional="#855700",
        fractional_soft="#F1E0B9",
        short="#A02C1C",
        short_soft="#F4D5CD",
        room="#46566E",
        room_soft="#D8DEE7",
        focus="#1D2225",
        selected="#E7E3D9",
        refused="#FBE9E4",
    )


def dark() -> Theme:
    """The reverse of `light`."""
    return _theme(
        "dark",
        True,
        paper="#16181A",
        cell="#1D2022",
        ink="#EAE7E0",
        faint="#A6A9A7",
        rule="#3B3F42",
        grip="#6E7376",
        exact="#5FC6BB",
        exact_soft="#17413E",
        fractional="#E2AE55",
        fractional_soft="#4A3915",
        short="#F58E7B",
        short_soft="#5A261D",
        room="#A3B5D0",
        room_soft="#2C3646",
        focus="#EAE7E0",
        selected="#33373A",
        refused="#3A1F1A",
    )


def print_theme(greyscale: bool = False) -> Theme:
    """Colours on white paper; in greyscale, tones that stay apart on any printer."""
    if not greyscale:
        return replace(light(), name="print", paper=QColor("#FFFFFF"), rule=QColor("#C9C6BE"))
    return _theme(
        "print greyscale",
        False,
        paper="#FFFFFF",
        cell="#FFFFFF",
        ink="#000000",
        faint="#505050",
        rule="#BDBDBD",
        grip="#8A8A8A",
        exact="#1A1A1A",
        exact_soft="#D6D6D6",
        fractional="#5E5E5E",
        fractional_soft="#EBEBEB",
        short="#000000",
        short_soft="#F2F2F2",
        room="#4A4A4A",
        room_soft="#E0E0E0",
        focus="#000000",
        selected="#E6E6E6",
        refused="#F5F5F5",
    )


def of_system() -> Theme:
    """Dark where the platform says so; light where it says light or nothing (offscreen, plain X11)."""
    scheme = QGuiApplication.styleHints().colorScheme()
    return dark() if scheme == Qt.ColorScheme.Dark else light()


def contrast(a: QColor, b: QColor) -> float:
    """Contrast ratio of two opaque colours, 1..21 (WCAG 2.1, "contrast ratio")."""
    lighter, darker = sorted((_luminance(a), _luminance(b)), reverse=True)
    return (lighter + 0.05) / (darker + 0.05)


def _luminance(colour: QColor) -> float:
    """Relative luminance (WCAG 2.1, "relative luminance")."""

    def linear(c: float) -> float:
        return c / 12.92 if c <= 0.04045 else float(((c + 0.055) / 1.055) ** 2.4)

    r, g, b = (linear(c) for c in (colour.redF(), colour.greenF(), colour.blueF()))
    return 0.2126 * r + 0.7152 * g + 0.0722 * b


def palette(theme: Theme) -> QPalette:
    """The QPalette of `theme`."""
    role = QPalette.ColorRole
    made = QPalette()
    pairs = {
        role.Window: theme.paper,
        role.WindowText: theme.ink,
        role.Base: theme.cell,
        role.AlternateBase: theme.paper,
        role.Text: theme.ink,
        role.PlaceholderText: theme.faint,
        role.Button: theme.paper,
        role.ButtonText: theme.ink,
        role.BrightText: theme.short,
        role.ToolTipBase: theme.cell,
        role.ToolTipText: theme.ink,
        role.Highlight: theme.selected,
        role.HighlightedText: theme.ink,
        role.Accent: theme.ink,
        role.Link: theme.room,
        role.LinkVisited: theme.room,
        role.Mid: theme.rule,
        role.Midlight: theme.selected,
        role.Light: theme.cell,
        role.Dark: theme.rule,
        role.Shadow: theme.rule,
    }
    for which, colour in pairs.items():
        made.setColor(which, colour)
    for which in (role.WindowText, role.Text, role.ButtonText, role.HighlightedText):
        made.setColor(QPalette.ColorGroup.Disabled, which, theme.faint)
    return made


def _focus_palette(theme: Theme) -> QPalette:
    """For kinds of widgets that Fusion frames in the colour of selected text while they have the focus."""
    made = palette(theme)
    made.setColor(QPalette.ColorRole.Highlight, theme.focus)
    made.setColor(QPalette.ColorRole.HighlightedText, theme.paper)
    return made


def _framed_palette(theme: Theme) -> QPalette:
    """As `_focus_palette`; without the focus Fusion frames these in a darker shade of the window.

    Nobody would see that on dark paper.
    """
    made = _focus_palette(theme)
    if theme.dark:
        made.setColor(QPalette.ColorRole.Window, theme.rule.lighter(_FRAME))
    return made


def apply(app: QApplication, theme: Theme) -> None:
    """Give the whole application `theme`; `current()` answers it from now on."""
    app.setProperty(_PROPERTY, theme)
    if app.style().objectName() != "fusion":
        app.setStyle("Fusion")
    app.setPalette(palette(theme))
    app.setPalette(_focus_palette(theme), "QComboBox")  # type: ignore[arg-type] # the stub says bytes, Qt takes text
    app.setPalette(_framed_palette(theme), "QAbstractSpinBox")  # type: ignore[arg-type] # as above
    app.setFont(theme.font())
    app.setStyleSheet(stylesheet(theme))


def current() -> Theme:
    """The theme last applied to the application; light before that."""
    app = QApplication.instance()
    found = app.property(_PROPERTY) if app is not None else None
    return found if isinstance(found, Theme) else light()


def dress(widget: W, size: Size | None = None, tone: str | None = None) -> W:
    """Mark `widget` with a text size and a tone (a colour name of Theme) that follow theme and zoom."""
    if size is not None:
        widget.setProperty("textSize", str(size))
    if tone is not None:
        widget.setProperty("tone", tone)
    style = widget.style()
    style.unpolish(widget)
    style.polish(widget)
    return widget
