"""What a chart shows, without saying how it is drawn; at most 300 points a curve.

Colours are names of the theme, so the same data is drawn again when the scheme changes.
"""

from __future__ import annotations

import math
from typing import Literal

import numpy as np
import numpy.typing as npt
from msgspec import Struct

FloatArray = npt.NDArray[np.float64]
Dash = Literal["solid", "dashed", "dotted"]
MOST_POINTS = 300


class Axis(Struct, frozen=True):
    """One axis: its words with the unit, its range and its few ticks (value, text)."""

    label: str
    low: float
    high: float
    ticks: tuple[tuple[float, str], ...]


class Line(Struct, frozen=True):
    """A curve with its name written at its end; `dash` tells it apart without colour."""

    x: FloatArray
    y: FloatArray
    name: str = ""
    colour: str = "line"
    dash: Dash = "solid"
    dots: bool = False


class Band(Struct, frozen=True):
    """The range between two curves."""

    x: FloatArray
    low: FloatArray
    high: FloatArray
    colour: str = "line"


class Bars(Struct, frozen=True):
    """Bars over x; `hollow` bars are outlined only, which tells them apart without colour."""

    x: FloatArray
    height: FloatArray
    width: float
    name: str = ""
    colour: str = "flow"
    hollow: bool = False
    texts: tuple[str, ...] = ()


class Shade(Struct, frozen=True):
    """A shaded stretch of the x axis with its words at the top; `hatched` says that something fails there."""

    low: float
    high: float
    text: str = ""
    colour: str = "stripe"
    hatched: bool = False


class Mark(Struct, frozen=True):
    """A line across the chart with its words: `at` on the x axis, or on the y axis if `level`.

    Words stand at the top, or at the foot of the chart if `foot`.
    """

    at: float
    text: str = ""
    colour: str = "muted"
    level: bool = False
    foot: bool = False


class ChartData(Struct, frozen=True):
    """One chart."""

    x: Axis
    y: Axis
    lines: tuple[Line, ...] = ()
    bands: tuple[Band, ...] = ()
    bars: tuple[Bars, ...] = ()
    shades: tuple[Shade, ...] = ()
    marks: tuple[Mark, ...] = ()


def thinned(values: FloatArray, most: int = MOST_POINTS) -> FloatArray:
    """Return at most `most` of the values, first and last included."""
    if len(values) <= most:
        return values
    kept: FloatArray = values[np.linspace(0, len(values) - 1, most).round().astype(int)]
    return kept


def nice_step(span: float, parts: int) -> float:
    """Return the step of 1, 2 or 5 times a power of ten that cuts a span into about `parts`."""
    if span <= 0 or not math.isfinite(span):
        return 1.0
    rough = span / max(1, parts)
    power = 10.0 ** math.floor(math.log10(rough))
    return next(step * power for step in (1.0, 2.0, 5.0, 10.0) if step * power >= rough * 0.999)


def axis_over(values: FloatArray, label: str, *, parts: int = 4, from_zero: bool = True) -> Axis:
    """Return an axis that holds all finite values on round ends, with few ticks."""
    good = values[np.isfinite(values)]
    low = float(good.min()) if len(good) else 0.0
    high = float(good.max()) if len(good) else 1.0
    if from_zero:
        low, high = min(0.0, low), max(0.0, high)
    if high - low < 1e-9:
        high = low + 1.0
    step = nice_step(high - low, parts)
    first, last = math.floor(low / step + 1e-9), math.ceil(high / step - 1e-9)
    decimals = max(0, -math.floor(math.log10(step) + 1e-9))
    ticks = tuple((n * step, f"{n * step:.{decimals}f}") for n in range(first, last + 1))
    return Axis(label, first * step, last * step, ticks)


def minutes_axis(most_min: float, label: str) -> Axis:
    """Return an axis of turning time from 0, in minutes up to two hours and in hours beyond."""
    most_min = max(1.0, most_min)
    if most_min <= 120:
        step = next((s for s in (1, 2, 5, 10, 15, 20, 30) if most_min / s <= 7), 30)
        ticks = tuple((float(m), f"{m} min" if m else "0") for m in range(0, math.ceil(most_min) + 1, step))
        return Axis(label, 0.0, most_min, ticks)
    hours = most_min / 60
    step_h = nice_step(hours, 6)
    count = math.floor(hours / step_h + 1e-9)
    decimals = max(0, -math.floor(math.log10(step_h) + 1e-9))
    return Axis(
        label,
        0.0,
        most_min,
        tuple((n * step_h * 60, f"{n * step_h:.{decimals}f} h" if n else "0") for n in range(count + 1)),
    )


def clock_axis(label: str) -> Axis:
    """Return the hours of a day."""
    ticks = tuple((float(hour), f"{hour:02d}:00") for hour in (0, 6, 12, 18, 24))
    return Axis(label, 0.0, 24.0, ticks)
