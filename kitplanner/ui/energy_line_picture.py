"""What the energy line is made of before it is painted: bands, hooks, words, chips, places that answer.

A word that does not fit gives way: first to a shorter form, then to nothing (the tool tip keeps it).
"""

from __future__ import annotations

from collections.abc import Callable

from msgspec import Struct
from PySide6.QtCore import QRectF, Qt

from kitplanner.ui.energy_line_text import StageText

Measure = Callable[[str, str, bool], float]
MARGIN = 18.0
LEFT, RIGHT, CENTRE = Qt.AlignmentFlag.AlignLeft, Qt.AlignmentFlag.AlignRight, Qt.AlignmentFlag.AlignHCenter


class Ribbon(Struct, frozen=True):
    """A band between two places; `fill` names a colour of the scheme or a category number."""

    key: str
    x: tuple[float, float]
    bends: tuple[float, float]
    start: tuple[float, float]
    end: tuple[float, float]
    fill: str
    hatch: str = "none"


class Hook(Struct, frozen=True):
    """A strip that leaves the flow downward (a loss) or comes into it from below (a join)."""

    key: str
    x: float
    top: float
    bottom: float
    joins: bool


class Word(Struct, frozen=True):
    """A text in its box; `size` is a type size of the theme."""

    box: QRectF
    text: str
    size: str = "small"
    bold: bool = False
    colour: str = "ink"
    align: Qt.AlignmentFlag = LEFT


class Chip(Struct, frozen=True):
    """A two-letter code in a small box with its category's fill and hatch, or a level letter."""

    box: QRectF
    code: str
    fill: str
    hatch: str = "none"


class Spot(Struct, frozen=True):
    """A place that answers to pointer and keys: what it says and what choosing it means."""

    key: str
    box: QRectF
    sentence: str
    section: str
    station_ids: tuple[str, ...] = ()


class Picture(Struct):
    """Everything to paint, in order, and everything that answers."""

    ribbons: list[Ribbon] = []
    hooks: list[Hook] = []
    words: list[Word] = []
    chips: list[Chip] = []
    marks: list[tuple[float, float, float]] = []
    stages: list[Spot] = []
    spots: list[Spot] = []


class Frame(Struct, frozen=True):
    """Sizes that follow from the widget and the type: columns, rows, room for words."""

    width: float
    height: float
    line: float
    small: float
    measure: Measure

    @property
    def head(self) -> float:
        """Height of the two heading lines."""
        return 8.0 + self.line + self.small + 4.0

    @property
    def body_top(self) -> float:
        """Where the flow begins."""
        return self.head + 4.0

    @property
    def body(self) -> float:
        """Height of the thickest place of the flow."""
        return max(24.0, self.height - self.body_top - 1.2 * self.small - 22.0)

    def fit(self, texts: tuple[str, ...], room: float, size: str = "small", *, bold: bool = False) -> str:
        """Return the first text that fits into the room, or nothing."""
        return next((text for text in texts if self.measure(text, size, bold) <= room), "")


def heading(picture: Picture, frame: Frame, stage: StageText, x: float, room: float) -> None:
    """Add the title of a stage and below it the level letter and the value."""
    top, badge = 8.0, frame.small * 1.3
    title = frame.fit(stage.titles, room, "text", bold=True)
    picture.words.append(Word(QRectF(x, top, room, frame.line), title, "text", bold=True))
    at, below = x, top + frame.line + 1
    if stage.level:
        picture.chips.append(Chip(QRectF(x, below, badge, frame.small), stage.level, "ink"))
        at += badge + 5
    left = max(0.0, x + room - at)
    picture.words.append(Word(QRectF(at, below, left, frame.small), frame.fit(stage.values, left), colour="muted"))


def ink_box(word: Word, frame: Frame) -> QRectF:
    """Return the box that the letters of a word really take."""
    wide = frame.measure(word.text, word.size, word.bold)
    left = word.box.left()
    if word.align == RIGHT:
        left = word.box.right() - wide
    elif word.align == CENTRE:
        left = word.box.center().x() - wide / 2
    return QRectF(left, word.box.top(), wide, word.box.height())


def place(picture: Picture, frame: Frame, texts: tuple[str, ...], boxes: tuple[Word, ...]) -> None:
    """Add the fullest text that fits one of the boxes without touching another word; else nothing."""
    taken = [ink_box(word, frame) for word in picture.words if word.text]
    for text in texts:
        for model in boxes:
            word = Word(model.box, text, model.size, model.bold, model.colour, model.align)
            ink = ink_box(word, frame)
            free = not any(ink.adjusted(-3, 0, 3, 0).intersects(other) for other in taken)
            if free and frame.measure(text, word.size, word.bold) <= word.box.width() and ink.right() < frame.width:
                picture.words.append(word)
                return
