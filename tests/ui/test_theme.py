"""Contrast by WCAG 2.2 (4.5:1 for text, 3:1 for lines and controls), and what `apply` sets."""

from __future__ import annotations

import itertools

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QPalette

from kitplanner.ui import theme
from kitplanner.ui.heat_colours import cividis

SCHEMES = {"light": theme.LIGHT, "dark": theme.DARK, "contrast": theme.CONTRAST}
TEXT = ("ink", "muted", "accent", "warning", "good", "gap")
PAPERS = ("paper", "panel", "field", "stripe")


@pytest.fixture
def plain_look(qapp):
    yield qapp
    theme.apply(qapp, "light", 1.0)
    qapp.setStyleSheet("")


def ratio(scheme, one, other):
    return theme.contrast_ratio(scheme.color(one), scheme.color(other))


def test_contrast_of_black_on_white_is_21():
    # WCAG 2.2, definition of contrast ratio: 21:1 is the greatest there is.
    assert theme.contrast_ratio(QColor("#000"), QColor("#fff")) == pytest.approx(21.0)
    # WebAIM and the WCAG techniques name #767676 as the lightest grey that passes 4.5:1 on white.
    assert theme.contrast_ratio(QColor("#767676"), QColor("#fff")) == pytest.approx(4.54, abs=0.01)


@pytest.mark.parametrize("name", SCHEMES)
def test_text_reads_on_every_background(name):
    for one, other in itertools.product(TEXT, PAPERS):
        assert ratio(SCHEMES[name], one, other) >= 4.5, (one, other)


@pytest.mark.parametrize("name", SCHEMES)
@pytest.mark.parametrize(
    "pair",
    [
        ("accent_text", "accent"),
        ("strip_text", "strip"),
        ("strip_muted", "strip"),
        ("flow_text", "flow"),
        ("flow_text", "flow_alt"),
    ],
)
def test_text_on_fills(name, pair):
    assert ratio(SCHEMES[name], *pair) >= 4.5


@pytest.mark.parametrize("name", SCHEMES)
@pytest.mark.parametrize("line", ["line", "second", "edge", "outline"])
def test_lines_stand_out(name, line):
    assert ratio(SCHEMES[name], line, "field") >= 3.0
    assert ratio(SCHEMES[name], line, "panel") >= 3.0 or line == "edge"


def test_text_on_every_heat_colour_and_category_reads():
    fills = [cividis(step / 50) for step in range(51)] + [QColor(fill) for fill in theme.CATEGORY_FILLS]
    for fill in fills:
        assert theme.contrast_ratio(theme.text_on(fill), fill) >= 4.5, fill.name()


def test_heat_colours_grow_lighter_in_every_step():
    lights = [theme.luminance(cividis(step / 100)) for step in range(101)]
    assert all(after > before for before, after in itertools.pairwise(lights))


@pytest.mark.parametrize(("name", "scheme"), list(SCHEMES.items()))
def test_apply_sets_palette_and_colours(plain_look, name, scheme):
    theme.apply(plain_look, name, 1.0)
    assert theme.colours() is scheme
    assert plain_look.palette().color(QPalette.ColorRole.Base) == scheme.color("field")


def test_text_scale_reaches_every_type_size(plain_look):
    theme.apply(plain_look, "light", 1.0)
    before = [theme.type_font(size).pointSizeF() for size in ("small", "text", "title")]
    theme.apply(plain_look, "light", 2.0)
    after = [theme.type_font(size).pointSizeF() for size in ("small", "text", "title")]
    assert after == pytest.approx([2 * size for size in before])
    assert plain_look.font().pointSizeF() == pytest.approx(after[1])
    assert len(set(before)) == 3


def test_system_choice_follows_the_desktop(plain_look, monkeypatch):
    theme.apply(plain_look, "system", 1.0)
    assert theme.colours() is theme.LIGHT
    monkeypatch.setattr(theme, "resolve", lambda _app, _scheme: theme.DARK)
    plain_look.styleHints().colorSchemeChanged.emit(Qt.ColorScheme.Dark)
    assert theme.colours() is theme.DARK


def test_a_fixed_choice_ignores_the_desktop(plain_look, monkeypatch):
    theme.apply(plain_look, "light", 1.0)
    monkeypatch.setattr(theme, "resolve", lambda _app, _scheme: theme.DARK)
    plain_look.styleHints().colorSchemeChanged.emit(Qt.ColorScheme.Dark)
    assert theme.colours() is theme.LIGHT


def test_applying_again_keeps_one_follower(plain_look):
    for _ in range(3):
        theme.apply(plain_look, "system", 1.0)
    assert len(plain_look.findChildren(theme.SchemeFollower)) == 1
