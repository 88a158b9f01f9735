"""Colours, palette, type sizes: the one look of the window, in light, dark and high contrast.

Signals: none. `apply` sets the application's style, palette, font and a small style sheet; painted widgets ask
`colours()` and `type_font()` each time they paint, so they follow a change without being told.
"""

from __future__ import annotations

from typing import Literal

from msgspec import Struct
from PySide6.QtCore import QObject, Qt, Slot
from PySide6.QtGui import QColor, QFont, QFontDatabase, QPalette
from PySide6.QtWidgets import QApplication

from kitplanner.plan.shipped import resource

Scheme = Literal["system", "light", "dark", "contrast"]
TypeSize = Literal["small", "text", "title"]

FAMILY = "DejaVu Sans"
BASE_POINT_SIZE = 10.0
TYPE_FACTORS: dict[TypeSize, float] = {"small": 0.88, "text": 1.0, "title": 1.25}
_FOLLOWER = "kitplanner_scheme_follower"
_SCHEME = "kitplanner_scheme"
_SCALE = "kitplanner_text_scale"

# Fills for device categories: chosen by measurement, smallest CIEDE2000 22.9 under simulated
# colour-vision deficiency, 8.0 in grey; never used without outline, hatch and a two-letter code.
CATEGORY_FILLS = ("#7d225a", "#596a01", "#9063fd", "#35b581", "#edaedb", "#ddee07")


class Colours(Struct, frozen=True):
    """Named colours of one scheme; text on `paper`, `panel` and `field` keeps at least 4.5:1."""

    ink: str
    muted: str
    paper: str
    panel: str
    field: str
    stripe: str
    rule: str
    edge: str
    flow: str
    flow_alt: str
    flow_text: str
    loss: str
    gap: str
    accent: str
    accent_text: str
    warning: str
    good: str
    outline: str
    line: str
    second: str
    strip: str
    strip_text: str
    strip_muted: str

    def color(self, name: str) -> QColor:
        """Return one of the colours as a QColor."""
        return QColor(getattr(self, name))


LIGHT = Colours(
    ink="#1d2733",
    muted="#5b6875",
    paper="#fbfaf7",
    panel="#f1efe9",
    field="#ffffff",
    stripe="#f6f4ee",
    rule="#d9d5ca",
    edge="#8d8a80",
    flow="#e0a526",
    flow_alt="#ecc263",
    flow_text="#1d2733",
    loss="#b9b2a3",
    gap="#a8321f",
    accent="#1f5f74",
    accent_text="#ffffff",
    warning="#a8321f",
    good="#2b6b3f",
    outline="#1d2733",
    line="#a8740a",
    second="#1f5f74",
    strip="#1d2733",
    strip_text="#fbfaf7",
    strip_muted="#b9c2cc",
)

DARK = Colours(
    ink="#ece9e1",
    muted="#a7b0ba",
    paper="#161c23",
    panel="#1e262f",
    field="#12171d",
    stripe="#1a2129",
    rule="#36414d",
    edge="#74808c",
    flow="#e0a526",
    flow_alt="#c48c17",
    flow_text="#161c23",
    loss="#7d7a72",
    gap="#ff8f78",
    accent="#6fb7cd",
    accent_text="#101820",
    warning="#ff8f78",
    good="#7ccf96",
    outline="#ece9e1",
    line="#e0a526",
    second="#6fb7cd",
    strip="#0c1116",
    strip_text="#ece9e1",
    strip_muted="#a7b0ba",
)

CONTRAST = Colours(
    ink="#000000",
    muted="#222222",
    paper="#ffffff",
    panel="#ffffff",
    field="#ffffff",
    stripe="#ececec",
    rule="#6b6b6b",
    edge="#000000",
    flow="#ffbf1f",
    flow_alt="#ffdc80",
    flow_text="#000000",
    loss="#8c8c8c",
    gap="#900000",
    accent="#00337f",
    accent_text="#ffffff",
    warning="#900000",
    good="#004d1a",
    outline="#000000",
    line="#7a4d00",
    second="#00337f",
    strip="#000000",
    strip_text="#ffffff",
    strip_muted="#ffffff",
)


def colours() -> Colours:
    """Return the colours of the scheme in force."""
    app = QApplication.instance()
    name = app.property(_SCHEME) if app is not None else None
    return {"dark": DARK, "contrast": CONTRAST}.get(str(name), LIGHT)


def text_scale() -> float:
    """Return the text-size setting, 1.0 to 2.0."""
    app = QApplication.instance()
    value = app.property(_SCALE) if app is not None else None
    return float(value) if value else 1.0


def type_font(size: TypeSize = "text", *, bold: bool = False) -> QFont:
    """Return one of the three type sizes at the text-size setting."""
    font = QFont(FAMILY)
    font.setPointSizeF(BASE_POINT_SIZE * TYPE_FACTORS[size] * text_scale())
    font.setBold(bold)
    return font


def luminance(colour: QColor) -> float:
    """Relative luminance of a colour by WCAG 2.2 (sRGB), 0 black to 1 white."""

    def linear(channel: float) -> float:
        return channel / 12.92 if channel <= 0.04045 else ((channel + 0.055) / 1.055) ** 2.4

    return 0.2126 * linear(colour.redF()) + 0.7152 * linear(colour.greenF()) + 0.0722 * linear(colour.blueF())


def contrast_ratio(one: QColor, other: QColor) -> float:
    """Contrast of two colours by WCAG 2.2, 1 to 21."""
    high, low = sorted((luminance(one), luminance(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)


def text_on(fill: QColor) -> QColor:
    """Return black or white, whichever contrasts more with the fill."""
    dark, light = QColor("#000000"), QColor("#ffffff")
    return dark if contrast_ratio(dark, fill) >= contrast_ratio(light, fill) else light


def palette_of(scheme: Colours) -> QPalette:
    """Build the Qt palette of a scheme."""
    role = QPalette.ColorRole
    palette = QPalette()
    plain = {
        role.Window: scheme.panel,
        role.WindowText: scheme.ink,
        role.Base: scheme.field,
        role.AlternateBase: scheme.stripe,
        role.Text: scheme.ink,
        role.Button: scheme.panel,
        role.ButtonText: scheme.ink,
        role.BrightText: scheme.warning,
        role.Highlight: scheme.accent,
        role.HighlightedText: scheme.accent_text,
        role.Accent: scheme.accent,
        role.ToolTipBase: scheme.strip,
        role.ToolTipText: scheme.strip_text,
        role.PlaceholderText: scheme.muted,
        role.Link: scheme.accent,
        role.LinkVisited: scheme.accent,
        role.Light: scheme.field,
        role.Midlight: scheme.stripe,
        role.Mid: scheme.rule,
        role.Dark: scheme.edge,
        role.Shadow: scheme.outline,
    }
    for which, value in plain.items():
        palette.setColor(which, QColor(value))
    for which in (role.WindowText, role.Text, role.ButtonText):
        palette.setColor(QPalette.ColorGroup.Disabled, which, QColor(scheme.muted))
    palette.setColor(QPalette.ColorGroup.Disabled, role.Highlight, QColor(scheme.rule))
    palette.setColor(QPalette.ColorGroup.Disabled, role.HighlightedText, QColor(scheme.ink))
    return palette


def style_sheet(scheme: Colours, scale: float) -> str:
    """Return the few rules that the palette cannot say."""
    pad, box = round(4 * scale), round(15 * scale)
    tick = resource("icons/check-light.svg" if scheme is DARK else "icons/check-dark.svg").as_posix()
    return f"""
QToolTip {{ background: {scheme.strip}; color: {scheme.strip_text}; border: 1px solid {scheme.edge};
    padding: {pad}px; }}
QHeaderView::section {{ background: {scheme.panel}; color: {scheme.muted}; border: none;
    border-bottom: 1px solid {scheme.rule}; padding: {pad}px {pad + 3}px; }}
QTableView {{ gridline-color: {scheme.rule}; border: 1px solid {scheme.rule}; }}
QTabWidget::pane {{ border: none; border-top: 1px solid {scheme.rule}; }}
QTabBar::tab {{ background: transparent; color: {scheme.muted}; padding: {pad + 3}px {pad + 8}px; border: none;
    border-bottom: 3px solid transparent; }}
QTabBar::tab:selected {{ color: {scheme.ink}; border-bottom: 3px solid {scheme.flow}; }}
QTabBar::tab:hover {{ color: {scheme.ink}; }}
QTabBar::tab:focus {{ border-bottom: 3px solid {scheme.accent}; }}
QCheckBox::indicator, QAbstractItemView::indicator {{ width: {box}px; height: {box}px; border: 1px solid {scheme.edge};
    border-radius: 3px; background: {scheme.field}; }}
QCheckBox::indicator:checked, QAbstractItemView::indicator:checked {{ image: url("{tick}"); }}
QCheckBox::indicator:focus {{ border: 2px solid {scheme.accent}; }}
QLineEdit {{ background: {scheme.field}; border: 1px solid {scheme.edge}; border-radius: 3px; padding: 0px 2px; }}
QLineEdit:focus {{ border: 2px solid {scheme.accent}; padding: 0px 1px; }}
QLineEdit:disabled {{ background: {scheme.panel}; }}
QAbstractSpinBox QLineEdit, QAbstractSpinBox QLineEdit:focus, QComboBox QLineEdit {{ border: none; padding: 0px;
    background: transparent; }}
QSplitter::handle {{ background: {scheme.rule}; }}
"""


def resolve(app: QApplication, scheme: Scheme) -> Colours:
    """Return the colours that a scheme choice means now; "system" asks the desktop."""
    if scheme == "system":
        dark = app.styleHints().colorScheme() == Qt.ColorScheme.Dark
        return DARK if dark else LIGHT
    return {"light": LIGHT, "dark": DARK, "contrast": CONTRAST}[scheme]


class SchemeFollower(QObject):
    """Applies the theme again when the desktop turns light or dark while the choice is "system"."""

    def __init__(self, app: QApplication) -> None:
        super().__init__(app)
        self.setObjectName(_FOLLOWER)
        self.scheme: Scheme = "system"
        app.styleHints().colorSchemeChanged.connect(self._on_color_scheme_changed)

    @Slot(Qt.ColorScheme)
    def _on_color_scheme_changed(self, _scheme: Qt.ColorScheme) -> None:
        app = QApplication.instance()
        if self.scheme == "system" and isinstance(app, QApplication):
            _set(app, resolve(app, "system"), text_scale())


def load_fonts() -> None:
    """Make the shipped type family known to Qt, once."""
    if FAMILY in QFontDatabase.families():
        return
    for name in ("DejaVuSans.ttf", "DejaVuSans-Bold.ttf"):
        QFontDatabase.addApplicationFont(str(resource(f"fonts/{name}")))


def apply(app: QApplication, scheme: Scheme = "system", text_scale: float = 1.0) -> None:
    """Set style, palette, font and style sheet; `text_scale` runs from 1.0 to 2.0."""
    load_fonts()
    follower = app.findChild(SchemeFollower, _FOLLOWER) or SchemeFollower(app)
    follower.scheme = scheme
    if app.style().objectName().lower() != "fusion" and not app.styleSheet():
        app.setStyle("Fusion")
    _set(app, resolve(app, scheme), min(2.0, max(0.8, text_scale)))


def _set(app: QApplication, scheme: Colours, scale: float) -> None:
    name = "dark" if scheme is DARK else "contrast" if scheme is CONTRAST else "light"
    app.setProperty(_SCHEME, name)
    app.setProperty(_SCALE, scale)
    app.setFont(type_font())
    app.setPalette(palette_of(scheme))
    app.setStyleSheet(style_sheet(scheme, scale))
    for widget in app.allWidgets():
        widget.update()
