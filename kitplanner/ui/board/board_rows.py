"""What stands in each row, worked out once for a layout: shaded hours, pictures of turns, watching and charging.

Coordinates are those of the unscrolled board, so scrolling and a drag only draw what is kept here.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QPixmap

from kitplanner.ui.board.block_pictures import BESIDE_PX, BlockKey, BlockPictures, beside_px, letters_px
from kitplanner.ui.board.board_data import BoardData, Row, ShownBout, ShownCharge, shut_parts
from kitplanner.ui.board.board_layout import BoardLayout
from kitplanner.ui.theme import colours, type_font

_FAR_PX = 400.0


@dataclass(frozen=True)
class RowItem:
    """One picture in a row; `bout_id` is empty for charging."""

    at: QPointF
    picture: QPixmap
    box: QRectF
    bout_id: str = ""
    is_watch: bool = False


@dataclass(frozen=True)
class RowContent:
    """One row, ready to be drawn."""

    shut: tuple[QRectF, ...]
    items: tuple[RowItem, ...]
    broken: tuple[QRectF, ...]


class BoardRows:
    """Contents of rows, made when they are first drawn."""

    def __init__(self) -> None:
        self._pictures = BlockPictures()
        self._made_for: tuple[object, ...] = ()
        self._look: tuple[object, ...] = ()
        self._rows: dict[int, RowContent] = {}
        self._shut: dict[tuple[str, str, int, int], tuple[tuple[int, int], ...]] = {}
        self._shut_of: object = None
        self._letters: dict[str, tuple[float, float]] = {}
        self._ratio = 1.0

    def prepare(self, data: BoardData, layout: BoardLayout, ratio: float) -> None:
        """Forget what no longer holds."""
        look = (colours(), type_font("small").pointSizeF(), ratio)
        if look != self._look:
            self._look = look
            self._pictures.clear()
            self._letters.clear()
            self._rows.clear()
        still = (layout.days, layout.low_min, layout.high_min, layout.sizes, layout.px_per_min)
        if not self._made_for or self._made_for[0] is not data or self._made_for[1:] != (layout.rows, still):
            self._made_for = (data, layout.rows, still)
            self._rows.clear()
        if self._shut_of is not data.plan:
            self._shut, self._shut_of = {}, data.plan
        self._ratio = ratio

    def row(self, place: int, data: BoardData, layout: BoardLayout) -> RowContent:
        """Return a row."""
        content = self._rows.get(place)
        if content is None:
            still = replace(layout, across_px=0.0, down_px=0.0)
            content = self._rows[place] = self._make(place, data, still)
        return content

    def _make(self, place: int, data: BoardData, layout: BoardLayout) -> RowContent:
        row = layout.rows[place]
        if row.kind == "heading":
            return RowContent((), (), ())
        if row.kind == "device":
            charges = [one for one in data.charges if one.device == row.key and one.day in layout.days]
            inside = [c for c in charges if c.end_min > layout.low_min and c.start_min < layout.high_min]
            items = tuple(self._charge_item(place, one, layout) for one in inside)
            broken = [bool(data.charge_breaks.get((one.day, one.start_min))) for one in inside]
            return RowContent((), items, tuple(i.box for i, bad in zip(items, broken, strict=True) if bad))
        turns = [bout for bout in _turns(data, row) if bout.day in layout.days]
        watched = [bout for bout in _watched(data, row) if bout.day in layout.days]
        starts = sorted(layout.x_of(bout.day, bout.start_min) for bout in (*turns, *watched))
        items = tuple(self._watch_item(place, bout, layout) for bout in watched)
        items += tuple(self._turn_item(place, bout, (data, layout), starts) for bout in turns)
        broken_boxes = tuple(item.box for item in items if not item.is_watch and data.breaks.get(item.bout_id))
        return RowContent(self._shut_boxes(place, data, layout), items, broken_boxes)

    def _shut_boxes(self, place: int, data: BoardData, layout: BoardLayout) -> tuple[QRectF, ...]:
        row, top = layout.rows[place], layout.row_top(place)
        boxes = []
        for day in layout.days:
            key = (row.kind, row.key, row.unit, day)
            if key not in self._shut:
                self._shut[key] = shut_parts(data, row, day)
            for start, end in self._shut[key]:
                left, right = layout.x_of(day, start), layout.x_of(day, end)
                if right > left:
                    boxes.append(QRectF(left, top, right - left, layout.sizes.row_px))
        return tuple(boxes)

    def _widths(self, text: str) -> tuple[float, float]:
        """Return what letters need inside a block and beside it."""
        if text not in self._letters:
            self._letters[text] = (letters_px(text), beside_px(text))
        return self._letters[text]

    def _turn_item(
        self, place: int, bout: ShownBout, scene: tuple[BoardData, BoardLayout], starts: list[float]
    ) -> RowItem:
        data, layout = scene
        box = layout.block_rect(place, bout.day, bout.start_min, bout.end_min)
        look = data.looks.get(bout.station)
        is_person = layout.rows[place].kind == "person"
        text = (look.code if look else "?") if is_person else data.person_names.get(bout.person, bout.person)
        inside, outside = self._widths(text)
        fits = inside <= box.width()
        own = layout.x_of(bout.day, bout.start_min)
        room = next((x for x in starts if x > own + 0.01), box.right() + _FAR_PX) - box.right()
        key = BlockKey(
            fill=look.fill if look else 0,
            hatch=look.hatch if look else 0,
            text=text if fits else "",
            width=int(box.width()),
            height=int(box.height()),
            locked=bout.locked,
            beside="" if fits or outside + BESIDE_PX > room else text,
        )
        return RowItem(box.topLeft(), self._pictures.of(key, self._ratio), box, bout.id)

    def _watch_item(self, place: int, bout: ShownBout, layout: BoardLayout) -> RowItem:
        box = layout.block_rect(place, bout.day, bout.start_min, bout.end_min)
        key = BlockKey(0, 0, "", int(box.width()), int(box.height()), kind="watch")
        return RowItem(box.topLeft(), self._pictures.of(key, self._ratio), box, bout.id, is_watch=True)

    def _charge_item(self, place: int, charge: ShownCharge, layout: BoardLayout) -> RowItem:
        box = layout.block_rect(place, charge.day, charge.start_min, charge.end_min)
        wh = f"{charge.energy_wh:.0f} Wh"
        texts = (f"{charge.count} · {wh}", wh, str(charge.count), "")
        text = next(one for one in texts if self._widths(one)[1] + 6 <= box.width() or not one)
        key = BlockKey(0, 0, text, int(box.width()), int(box.height()), kind="charge")
        return RowItem(box.topLeft(), self._pictures.of(key, self._ratio), box)


def _turns(data: BoardData, row: Row) -> Iterable[ShownBout]:
    if row.kind == "person":
        return data.by_person.get(row.key, ())
    return data.by_unit.get((row.key, row.unit), ())


def _watched(data: BoardData, row: Row) -> Iterable[ShownBout]:
    return data.by_watcher.get(row.key, ()) if row.kind == "person" else ()
