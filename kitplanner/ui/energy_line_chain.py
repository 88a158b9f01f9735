"""Geometry of one station's own chain in watts, drawn in the energy line while that station is chosen."""

from __future__ import annotations

from PySide6.QtCore import QRectF

from kitplanner.planners.results import BenchPoint
from kitplanner.ui.energy_line_picture import MARGIN, Frame, Hook, Picture, Ribbon, Spot, Word, heading, place
from kitplanner.ui.energy_line_text import StageText, chain_stages, chain_title
from kitplanner.ui.energy_line_text import watts as watts_text


def chain_picture(point: BenchPoint, name: str, frame: Frame) -> Picture:
    """Lay out a station's chain from the hand to the battery."""
    picture = Picture()
    lead = frame.small + 6
    room = frame.width - 2 * MARGIN
    title = frame.fit((chain_title(point, name), name), room, bold=True)
    picture.words.append(Word(QRectF(MARGIN, 6, room, frame.small), title, bold=True))
    if point.human_w is None or point.human_w <= 0:
        picture.stages.append(Spot("M", QRectF(0, 0, frame.width, frame.height), chain_title(point, name), "stations"))
        return picture
    texts = chain_stages(point, name)
    watts = [*((stage.in_w or 0.0) for stage in point.stages), point.stored_w or 0.0]
    shifted = Frame(frame.width, frame.height - lead, frame.line, frame.small, frame.measure)
    pitch = room / len(watts)
    scale = shifted.body / point.human_w
    for index, text in enumerate(texts):
        _column(picture, shifted, (index, pitch, scale), watts, text)
    return _moved_down(picture, lead)


def _column(
    picture: Picture, frame: Frame, where: tuple[int, float, float], watts: list[float], text: StageText
) -> None:
    """Add one step: its heading, the band that goes on and the loss that peels off after it."""
    index, pitch, scale = where
    x, top = MARGIN + index * pitch, frame.body_top
    heading(picture, frame, text, x, pitch - 8)
    picture.stages.append(Spot(f"c{index}", QRectF(x - 4, 3, pitch - 2, frame.height - 6), text.sentence, "stations"))
    height = watts[index] * scale
    picture.marks.append((x, top - 3, top + height + 3))
    after = watts[index + 1] if index + 1 < len(watts) else watts[index]
    end = top + after * scale
    bends = (x + 0.1 * pitch, x + 0.1 * pitch + 20)
    picture.ribbons.append(Ribbon(f"c{index}", (x, x + pitch), bends, (top, top + height), (top, end), "flow"))
    lost = watts[index] - after
    if lost * scale < 0.3:
        return
    picture.hooks.append(Hook(f"c{index}", x + 0.08 * pitch, end, top + height, joins=False))
    reach = x + 0.08 * pitch + 20 + min(height - (end - top), 0.5 * pitch) + 8
    left = x + pitch - reach
    texts = (f"−{watts_text(lost)} W", f"−{watts_text(lost)}")
    place(picture, frame, texts, (Word(QRectF(reach, top + height + 3, left, frame.small), "", colour="muted"),))


def _moved_down(picture: Picture, lead: float) -> Picture:
    """Return the picture moved below its title line; the title itself, the first word, stays."""
    moved = Picture()
    for ribbon in picture.ribbons:
        start, end = (ribbon.start[0] + lead, ribbon.start[1] + lead), (ribbon.end[0] + lead, ribbon.end[1] + lead)
        moved.ribbons.append(Ribbon(ribbon.key, ribbon.x, ribbon.bends, start, end, ribbon.fill, ribbon.hatch))
    for hook in picture.hooks:
        moved.hooks.append(Hook(hook.key, hook.x, hook.top + lead, hook.bottom + lead, hook.joins))
    moved.words = [picture.words[0]]
    for word in picture.words[1:]:
        box = word.box.translated(0, lead)
        moved.words.append(Word(box, word.text, word.size, word.bold, word.colour, word.align))
    moved.chips = [type(chip)(chip.box.translated(0, lead), chip.code, chip.fill, chip.hatch) for chip in picture.chips]
    moved.marks = [(x, top + lead, bottom + lead) for x, top, bottom in picture.marks]
    moved.stages = [Spot(s.key, s.box.translated(0, lead), s.sentence, s.section) for s in picture.stages]
    return moved
