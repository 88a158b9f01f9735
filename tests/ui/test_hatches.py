"""Hatches stay inside their shape and differ from each other without colour."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import QRectF
from PySide6.QtGui import QColor, QImage, QPainter, QPainterPath

from kitplanner.ui.hatches import CATEGORY_HATCHES, draw_hatch


def drawn(hatch: str) -> np.ndarray:
    """The hatch inside the box 10..50 of a white picture, as grey values."""
    image = QImage(60, 60, QImage.Format.Format_Grayscale8)
    image.fill(QColor("white"))
    path = QPainterPath()
    path.addRect(QRectF(10, 10, 40, 40))
    painter = QPainter(image)
    draw_hatch(painter, path, hatch, QColor("black"), 7.0)
    painter.end()
    return np.array(image.constBits()).reshape(60, image.bytesPerLine())[:, :60].copy()


@pytest.mark.parametrize("hatch", ["rising", "falling", "level", "upright", "crossed", "dots"])
def test_hatch_marks_its_shape_only(qapp, hatch):
    grey = drawn(hatch)
    inside = grey[10:50, 10:50]
    assert (inside < 200).mean() > 0.02
    outside = grey.copy()
    outside[9:51, 9:51] = 255
    assert (outside == 255).all()


def test_no_hatch_draws_nothing(qapp):
    assert (drawn("none") == 255).all()


def test_categories_differ_without_colour(qapp):
    pictures = [drawn(hatch) for hatch in CATEGORY_HATCHES]
    for number, one in enumerate(pictures):
        for other in pictures[number + 1 :]:
            assert (np.abs(one.astype(int) - other.astype(int)) > 80).mean() > 0.01
