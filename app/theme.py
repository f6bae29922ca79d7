"""Colours of the bench by day and by night, and icons coloured from them.

The only place that names a colour.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum
from functools import cache
from importlib.resources import files
from typing import TYPE_CHECKING

from PySide6.QtCore import QByteArray, QRectF, Qt
from PySide6.QtGui import QColor, QGuiApplication, QIcon, QPainter, QPalette, QPixmap
from PySide6.QtSvg import QSvgRenderer

if TYPE_CHECKING:
    from PySide6.QtWidgets import QApplication, QWidget


class Appearance(Enum):
    """Which bench the user asked for."""

    SYSTEM = "as the desktop"
    LIGHT = "light"
    DARK = "dark"


@dataclass(frozen=True, eq=False)  # there are two; told apart by what they are, at no cost
class Theme:
    """One set of colours, by what they are for."""

    name: str
    window: str  # the bench itself
    panel: str
    card: str
    field: str
    line: str
    text: str
    muted: str
    accent: str  # copper, dark or bright enough to be read
    on_accent: str
    focus: str
    good: str
    bad: str
    warn: str
    unknown: str
    mat: str
    mat_fine: str
    mat_five: str
    mat_ten: str
    mat_ink: str  # words and dimensions on the mat
    mat_halo: str
    handle: str
    handle_edge: str
    ruler: str
    ruler_ink: str
    copper: str
    copper_light: str
    copper_dark: str
    plate: str  # the ground plate under its spacer
    solder: str
    shade: str  # what things on the mat cast on it
    ghost: str
    current_least: str  # solved current, in one hue
    current_middle: str
    current_most: str
    tick: str
    tick_edge: str
    plot: str
    plot_grid: str
    curve: str
    curve_second: str
    target: str


LIGHT = Theme(
    name="light",
    window="#dfe3dd",
    panel="#e9ece7",
    card="#f8f9f6",
    field="#ffffff",
    line="#c3cac2",
    text="#1d2523",
    muted="#55605c",
    accent="#8a4b14",
    on_accent="#ffffff",
    focus="#13695f",
    good="#1c6e45",
    bad="#ad2a1f",
    warn="#7d5200",
    unknown="#53578a",
    mat="#4f6d66",
    mat_fine="#587770",
    mat_five="#64837b",
    mat_ten="#7a978f",
    mat_ink="#f4f6ee",
    mat_halo="#35504a",
    handle="#fdfdf8",
    handle_edge="#243c37",
    ruler="#efece2",
    ruler_ink="#3b3d36",
    copper="#cb8450",
    copper_light="#e8b184",
    copper_dark="#96572a",
    plate="#a96c43",
    solder="#d9dcdc",
    shade="#1c2f2a",
    ghost="#fff3c4",
    current_least="#fbf0e3",
    current_middle="#d48a55",
    current_most="#5c2106",
    tick="#241a14",
    tick_edge="#fffaf2",
    plot="#fdfdfb",
    plot_grid="#dfe3dd",
    curve="#0b6480",
    curve_second="#a8481a",
    target="#55605c",
)

DARK = Theme(
    name="dark",
    window="#141817",
    panel="#1b201e",
    card="#242a28",
    field="#1a1f1d",
    line="#3d4643",
    text="#e7ebe6",
    muted="#a5b0aa",
    accent="#e8a66a",
    on_accent="#231204",
    focus="#6fd0c2",
    good="#74cf9c",
    bad="#f0968b",
    warn="#e6bd62",
    unknown="#b3b7ea",
    mat="#22342f",
    mat_fine="#283b36",
    mat_five="#30463f",
    mat_ten="#40584f",
    mat_ink="#dfe7df",
    mat_halo="#14211d",
    handle="#e9efe8",
    handle_edge="#0f1a17",
    ruler="#2c322f",
    ruler_ink="#c5cdc5",
    copper="#b8733f",
    copper_light="#dba06d",
    copper_dark="#7c4620",
    plate="#8a5531",
    solder="#b9bfbf",
    shade="#070d0b",
    ghost="#ffe9a6",
    current_least="#251811",
    current_middle="#a8612f",
    current_most="#ffe3c4",
    tick="#fff8ee",
    tick_edge="#150d08",
    plot="#1a1f1d",
    plot_grid="#303836",
    curve="#63c3e0",
    curve_second="#f0a070",
    target="#a5b0aa",
)

# How a spacer looks from above: its colour, and how much of the plate it hides (0 to 255).
_SPACER_LOOKS = {
    "air": ("#ffffff", 18),
    "foam": ("#e6edf1", 228),
    "polystyrene": ("#f4f6f5", 238),
    "card": ("#d9c29a", 240),
    "corrugated-card": ("#c9aa78", 240),
    "acrylic": ("#cfe4ea", 110),
    "FR-4": ("#b9c07a", 190),
    "PTFE": ("#f1efe8", 225),
    "low-loss": ("#dcd3b4", 225),
    "glass": ("#bfe0d8", 90),
    "plywood": ("#d3b183", 240),
}
_OTHER_LOOK = ("#d5d3e4", 215)


def spacer_colour(material: str, theme: Theme) -> QColor:
    """Translucent colour of a spacer material as it lies on the plate."""
    name, alpha = _SPACER_LOOKS.get(material, _OTHER_LOOK)
    bright = QColor(name)
    if theme is DARK:
        bright = _between(bright, QColor(theme.mat), 0.62)
    bright.setAlpha(alpha)
    return bright


def current_stops(theme: Theme) -> list[tuple[float, QColor]]:
    """Colours of solved current, from least to most."""
    shades = (theme.current_least, theme.current_middle, theme.current_most)
    return [(i / 2.0, QColor(name)) for i, name in enumerate(shades)]


def _between(one: QColor, other: QColor, part: float) -> QColor:
    """Colour that lies so far from one on the way to the other."""

    def mixed(a: float, b: float) -> float:
        return a + (b - a) * part

    return QColor.fromRgbF(
        mixed(one.redF(), other.redF()),
        mixed(one.greenF(), other.greenF()),
        mixed(one.blueF(), other.blueF()),
    )


def colour(name: str, alpha: int = 255) -> QColor:
    """Colour of a theme entry, made translucent where asked (0 to 255)."""
    result = QColor(name)
    result.setAlpha(alpha)
    return result


def theme_of(widget: QWidget) -> Theme:
    """Theme that a widget's palette belongs to."""
    return DARK if widget.palette().window().color().lightness() < 128 else LIGHT


def chosen_theme(appearance: Appearance) -> Theme:
    """Theme for what the user asked for; the desktop decides where they left it open."""
    if appearance is Appearance.SYSTEM:
        scheme = QGuiApplication.styleHints().colorScheme()
        return DARK if scheme is Qt.ColorScheme.Dark else LIGHT
    return DARK if appearance is Appearance.DARK else LIGHT


def apply(app: QApplication, theme: Theme) -> None:
    """Dress the whole application."""
    app.setStyle("Fusion")
    app.setPalette(_palette(theme))
    app.setStyleSheet(_style_sheet(theme))


@cache
def icon(name: str, tint: str) -> QIcon:
    """Icon of the assets, coloured, sharp at every scale; faint where it is of no use."""
    whole = pixmap(name, tint, 64)
    faint = QPixmap(whole.size())
    faint.fill(Qt.GlobalColor.transparent)
    painter = QPainter(faint)
    painter.setOpacity(0.3)
    painter.drawPixmap(0, 0, whole)
    painter.end()
    result = QIcon(whole)
    result.addPixmap(faint, QIcon.Mode.Disabled)
    return result


@cache
def pixmap(name: str, tint: str, size: int) -> QPixmap:
    """Picture of an icon, `size` pixels wide."""
    text = files("assets").joinpath("icons", f"{name}.svg").read_text("utf-8")
    renderer = QSvgRenderer(QByteArray(text.replace("currentColor", tint).encode()))
    picture = QPixmap(size, size)
    picture.fill(Qt.GlobalColor.transparent)
    painter = QPainter(picture)
    renderer.render(painter, QRectF(0, 0, size, size))
    painter.end()
    return picture


def _palette(theme: Theme) -> QPalette:
    role = QPalette.ColorRole
    palette = QPalette()
    for key, name in {
        role.Window: theme.panel,
        role.WindowText: theme.text,
        role.Base: theme.field,
        role.AlternateBase: theme.panel,
        role.Text: theme.text,
        role.PlaceholderText: theme.muted,
        role.Button: theme.card,
        role.ButtonText: theme.text,
        role.BrightText: theme.bad,
        role.Highlight: theme.focus,
        role.HighlightedText: theme.field,
        role.Link: theme.focus,
        role.ToolTipBase: theme.card,
        role.ToolTipText: theme.text,
        role.Mid: theme.line,
        role.Midlight: theme.line,
        role.Light: theme.card,
        role.Dark: theme.muted,
        role.Shadow: theme.shade,
        role.Accent: theme.focus,
    }.items():
        palette.setColor(key, QColor(name))
    off = QPalette.ColorGroup.Disabled
    for key in (role.WindowText, role.Text, role.ButtonText):
        palette.setColor(off, key, colour(theme.muted, 150))
    return palette


def _style_sheet(theme: Theme) -> str:
    """What the palette cannot say: round corners, quiet frames, the one loud button."""
    return _SHEET.format(**{name: getattr(theme, name) for name in Theme.__dataclass_fields__})


_SHEET = """
QToolTip {{ background: {card}; color: {text}; border: 1px solid {line}; padding: 3px; }}
#bench {{ background: {window}; }}
#header {{ background: {panel}; border-bottom: 1px solid {line}; }}
QMenuBar {{ background: transparent; }}
QMenuBar::item {{ padding: 4px 8px; border-radius: 4px; background: transparent; }}
QMenuBar::item:selected {{ background: {line}; }}
#card {{ background: {card}; border: 1px solid {line}; border-radius: 7px; }}
#panel {{ background: {card}; border: 1px solid {line}; border-radius: 7px; }}
#title {{ font-weight: 600; }}
#muted {{ color: {muted}; }}
#group {{ color: {muted}; font-weight: 600; }}
#refusal {{ color: {bad}; }}
QLineEdit, QComboBox {{
    background: {field}; color: {text}; border: 1px solid {line}; border-radius: 4px;
    padding: 2px 5px; selection-background-color: {focus}; selection-color: {field};
}}
QComboBox::drop-down {{ border: none; }}
QComboBox::down-arrow {{ image: none; }}
QComboBox QLineEdit {{ border: none; padding: 0; }}
QComboBox QAbstractItemView {{ background: {field}; border: 1px solid {line}; outline: none; }}
QLineEdit:focus, QComboBox:focus {{ border: 1px solid {focus}; }}
QLineEdit[refused="true"] {{ border: 1px solid {bad}; }}
QToolButton {{ border: 1px solid transparent; border-radius: 4px; padding: 2px; }}
QToolButton:hover {{ background: {panel}; border-color: {line}; }}
QToolButton:focus {{ border-color: {focus}; }}
QToolButton:checked {{ background: {panel}; }}
#shown QToolButton {{ background: {field}; border-color: {line}; }}
#shown QToolButton:focus {{ border-color: {focus}; }}
QPushButton {{
    background: {field}; border: 1px solid {line}; border-radius: 5px; padding: 3px 10px;
}}
QPushButton:hover {{ background: {panel}; }}
QPushButton:focus {{ border-color: {focus}; }}
QPushButton:disabled {{ color: {muted}; }}
QPushButton#primary {{
    background: {accent}; color: {on_accent}; border: 1px solid {accent}; font-weight: 600;
    padding: 4px 14px;
}}
QPushButton#primary:focus {{ border: 2px solid {text}; padding: 3px 13px; }}
QScrollArea, #clear, #shown {{ background: transparent; border: none; }}
QSlider::groove:vertical {{ background: {line}; width: 4px; border-radius: 2px; }}
QSlider::add-page:vertical {{ background: {focus}; width: 4px; border-radius: 2px; }}
QSlider::handle:vertical {{
    background: {card}; border: 2px solid {focus}; height: 12px; margin: 0 -6px; border-radius: 8px;
}}
QSlider::handle:vertical:focus {{ background: {focus}; }}
QScrollBar:vertical {{ background: transparent; width: 9px; margin: 0; }}
QScrollBar::handle:vertical {{ background: {line}; border-radius: 4px; min-height: 24px; }}
QScrollBar::handle:vertical:hover {{ background: {muted}; }}
QScrollBar::add-line:vertical, QScrollBar::sub-line:vertical {{ height: 0; }}
QScrollBar::add-page:vertical, QScrollBar::sub-page:vertical {{ background: transparent; }}
QSplitter::handle {{ background: transparent; }}
QStatusBar {{ background: {panel}; color: {muted}; }}
QStatusBar QLabel {{ padding: 0 10px; }}
QStatusBar::item {{ border: none; }}
"""
