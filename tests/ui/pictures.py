"""Compares what is on the screen with a picture kept beside the tests, with room for small differences.

New pictures after a meant change: KITPLANNER_NEW_PICTURES=1 python -m pytest tests/ui/test_pictures.py ; look at them
before they are committed.
"""

from __future__ import annotations

import os
from pathlib import Path

import numpy as np
from PySide6.QtCore import Qt
from PySide6.QtGui import QImage
from PySide6.QtWidgets import QWidget

REFERENCES = Path(__file__).with_name("references")
RENEW = "KITPLANNER_NEW_PICTURES"
# Kept at half size: small files, and what still differs can be seen.
SHRINK = 2
PIXEL_LIMIT, MOST_PIXELS_FRACTION, MOST_MEAN = 24, 0.01, 2.0


def taken(widget: QWidget) -> QImage:
    """What a widget shows now, at half size."""
    image = widget.grab().toImage().convertToFormat(QImage.Format.Format_RGB888)
    size = image.size() / SHRINK
    mode = Qt.TransformationMode.SmoothTransformation
    return image.scaled(size, Qt.AspectRatioMode.IgnoreAspectRatio, mode).convertToFormat(QImage.Format.Format_RGB888)


def values(image: QImage) -> np.ndarray:
    """The picture as rows of red, green and blue."""
    rows = np.frombuffer(image.constBits(), np.uint8).reshape(image.height(), image.bytesPerLine())
    return rows[:, : image.width() * 3].reshape(image.height(), image.width(), 3).astype(np.int16)


def difference(one: QImage, other: QImage) -> str:
    """Say how two pictures differ; nothing when they differ no more than fonts and rounding may."""
    if one.size() != other.size():
        return f"{one.width()}x{one.height()} instead of {other.width()}x{other.height()}"
    gap = np.abs(values(one) - values(other))
    share, mean = float((gap.max(axis=2) > PIXEL_LIMIT).mean()), float(gap.mean())
    if share <= MOST_PIXELS_FRACTION and mean <= MOST_MEAN:
        return ""
    return f"{share:.1%} of the pixels differ by more than {PIXEL_LIMIT}, all by {mean:.2f} on average"


def compared(widget: QWidget, name: str, failed: Path) -> str:
    """Compare a widget with its picture; what differs is written into a folder for looking at."""
    image, path = taken(widget), REFERENCES / f"{name}.png"
    if os.environ.get(RENEW):
        path.parent.mkdir(exist_ok=True)
        assert image.save(str(path)), path
        return ""
    if not path.is_file():
        return f"{name}: no picture is kept yet; make it with {RENEW}=1"
    words = difference(image, QImage(str(path)).convertToFormat(QImage.Format.Format_RGB888))
    if words:
        image.save(str(failed / f"{name}.png"))
        return f"{name}: {words}; now: {failed / name}.png, kept: {path}"
    return ""
