"""Numbers, units and names in words: the one place where fractions become percent and minutes become hours."""

from __future__ import annotations

import math
import unicodedata
from typing import Literal

Level = Literal["M", "S", "B", "O", "D"]

NO_VALUE = "–"
_BIDI_CONTROLS = frozenset("\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")


def level_words(level: Level) -> str:
    """Return where an energy or power is counted, with its letter."""
    match level:
        case "M":
            return "at the crank or pedal (M)"
        case "S":
            return "at the station (S)"
        case "B":
            return "in store (B)"
        case "O":
            return "at the outlet (O)"
        case "D":
            return "at the device (D)"


def number(value: float | None, decimals: int | None = None) -> str:
    """Return a number as text: about three significant figures unless the decimals are given."""
    if value is None or not math.isfinite(value):
        return NO_VALUE
    if decimals is None:
        size = abs(value)
        decimals = 0 if size >= 99.95 or size == 0 else 1 if size >= 0.95 else 2
    text = f"{value:.{decimals}f}"
    # A rounded small loss must not read as minus nothing.
    return text.removeprefix("-") if float(text) == 0 else text


def energy(wh: float | None, level: Level | None = None) -> str:
    """Return an energy with its unit and, if given, its level in words."""
    text = f"{number(wh)} Wh"
    return f"{text} {level_words(level)}" if level else text


def power(w: float | None, level: Level | None = None) -> str:
    """Return a power with its unit and, if given, its level in words."""
    text = f"{number(w)} W"
    return f"{text} {level_words(level)}" if level else text


def percent(fraction: float | None, decimals: int = 0) -> str:
    """Return a fraction as percent; one short of a whole never reads as 100 %."""
    if fraction is None or not math.isfinite(fraction):
        return NO_VALUE
    shown = number(fraction * 100.0, decimals)
    if fraction < 1.0 and float(shown) == 100.0:
        return f"just under {shown} %"
    return f"{shown} %"


def minutes(time_min: float | None) -> str:
    """Return minutes as hours and minutes, with tenths only below ten minutes."""
    if time_min is None or not math.isfinite(time_min):
        return NO_VALUE
    if 0.0 < time_min < 9.95:
        return f"{number(time_min, 1)} min"
    whole = round(time_min)
    if whole < 60:
        return f"{whole} min"
    hours, rest = divmod(whole, 60)
    return f"{hours} h {rest:02d} min" if rest else f"{hours} h"


def hours(time_min: float | None) -> str:
    """Return minutes as hours with one decimal, for a day's total."""
    return NO_VALUE if time_min is None else f"{number(time_min / 60.0, 1)} h"


def between(low: str, high: str) -> str:
    """Return a range in words."""
    return f"between {low} and {high}"


def counted(count: int, one: str, many: str) -> str:
    """Return a count with the right form of its noun."""
    return f"{count} {one if count == 1 else many}"


def listed(words: list[str]) -> str:
    """Return words as a list in a sentence."""
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"


def plain(text: str) -> str:
    """Return a name on one line without signs that could steer a terminal or turn the writing direction."""
    kept = [
        " " if char in "\t\r\n\u2028\u2029" else char
        for char in text
        if char in "\t\r\n" or (unicodedata.category(char) not in ("Cc", "Cs") and char not in _BIDI_CONTROLS)
    ]
    return " ".join("".join(kept).split())


def sentence(text: str) -> str:
    """Return text with a capital at its start and one full stop at its end."""
    text = text.strip()
    return text[:1].upper() + text[1:].rstrip(".") + "." if text else ""
