"""Geometry of the energy line: where bands, losses, joins and words go, to scale and without overlap.

Everything here is arithmetic on a size and a font measure; nothing is painted, so tests can look at it.
"""

from __future__ import annotations

from PySide6.QtCore import QRectF

from kitplanner.planners.results import EnergyFlow, FlowBand
from kitplanner.ui.energy_line_picture import (
    CENTRE,
    MARGIN,
    RIGHT,
    Chip,
    Frame,
    Hook,
    Picture,
    Ribbon,
    Spot,
    Word,
    heading,
    place,
)
from kitplanner.ui.energy_line_text import (
    LEVELS,
    StageText,
    day_stages,
    figure,
    missing_text,
    reserve_texts,
    rest_text,
    start_name,
    total,
)


def lost_between(flow: EnergyFlow, level: str) -> float:
    """Return the Wh a day that peel off after a level."""
    return sum(loss.wh_per_day for loss in flow.losses if loss.level_from == level)


class DayLayout:
    """Lays out the average day: people, stations, stores (if there are any), outlets, devices."""

    def __init__(self, flow: EnergyFlow, frame: Frame, *, has_stores: bool = True) -> None:
        self.flow, self.frame = flow, frame
        self.picture = Picture()
        self.texts = day_stages(flow, has_stores=has_stores)
        rows = [self._row_text(band) for band in flow.devices_d]
        widest = max((frame.measure(text, "small", False) for text in rows), default=0.0)
        self.label_room = min(widest + 2.6 * frame.small + 8.0, 0.25 * frame.width)
        self.fan = max(30.0, 0.035 * frame.width)
        self.pitch = (frame.width - 2 * MARGIN - self.label_room - self.fan) / (len(self.texts) - 1)
        # Without stores the columns of stores and outlets fall together.
        steps = (0, 1, 2, 3, 4) if has_stores else (0, 1, 2, 2, 3)
        self.columns = [MARGIN + self.pitch * step for step in steps]
        self.has_stores = has_stores
        self.outlet = flow.o_wh + flow.start_o_wh + flow.missing_o_wh
        station = total(flow.stations_s) + total(flow.sources_s)
        self.most = max(total(flow.people_m), station, flow.b_wh, self.outlet, total(flow.devices_d), 1e-9)
        self.scale = frame.body / self.most

    @staticmethod
    def _row_text(band: FlowBand) -> str:
        return f"{band.label} {figure(band.wh_per_day)} Wh"

    def build(self) -> Picture:
        """Return the finished picture."""
        for text in self.texts:
            index = LEVELS.index(text.level)
            last = index == 4
            room = (self.fan + self.label_room if last else self.pitch) - 10
            heading(self.picture, self.frame, text, self.columns[index], room)
            self._stage_spot(index, text, room)
        self._people_to_stations()
        self._stations_to_stores()
        self._stores_to_outlets()
        self._outlets_to_devices()
        self._fan()
        return self.picture

    def _stage_spot(self, index: int, text: StageText, room: float) -> None:
        x, frame = self.columns[index], self.frame
        box = QRectF(x - 6, 3, room + 10, frame.height - 6)
        self.picture.stages.append(Spot(text.level, box, text.sentence, text.section))
        thick = (total(self.flow.people_m), total(self.flow.stations_s), self.flow.b_wh, self.outlet)
        height = (thick[index] if index < 4 else total(self.flow.devices_d)) * self.scale
        self.picture.marks.append((x, frame.body_top - 3, frame.body_top + height + 3))

    def _y(self, wh: float) -> float:
        return self.frame.body_top + wh * self.scale

    def _loss(self, index: int, above: float, lost: float, room: float, at: float = 0.12) -> None:
        """Peel a loss off below `above` Wh, with its figure beside or below the hook."""
        if lost * self.scale < 0.3:
            return
        x = self.columns[index] + at * self.pitch
        top, bottom = self._y(above), self._y(above + lost)
        self.picture.hooks.append(Hook(LEVELS[index], x, top, bottom, joins=False))
        reach = x + 20 + min(bottom - top, 0.5 * self.pitch) + 8
        left = self.columns[index] + room - reach
        box = QRectF(reach, bottom + 3, left, self.frame.small)
        texts = (f"−{figure(lost)} Wh", f"−{figure(lost)}")
        place(self.picture, self.frame, texts, (Word(box, "", colour="muted"),))

    def _people_to_stations(self) -> None:
        x0, x1 = self.columns[0], self.columns[1]
        people, stations = total(self.flow.people_m), total(self.flow.stations_s)
        bends = (x0 + 0.12 * self.pitch + 6, x0 + 0.12 * self.pitch + 34 + 0.35 * self.pitch)
        shares = {band.key: band.wh_per_day for band in self.flow.stations_s}
        start = end = 0.0
        for number, band in enumerate(self.flow.people_m):
            after = shares.get(band.key, 0.0)
            self._band(number, band, (x0, x1), bends, (start, band.wh_per_day), (end, after))
            start, end = start + band.wh_per_day, end + after
        self._loss(0, stations, max(0.0, people - stations), self.pitch)

    def _band(
        self,
        number: int,
        band: FlowBand,
        x: tuple[float, float],
        bends: tuple[float, float],
        start: tuple[float, float],
        end: tuple[float, float],
    ) -> None:
        fill = "flow" if number % 2 == 0 else "flow_alt"
        y0, y1 = self._y(start[0]), self._y(end[0])
        ribbon = Ribbon(band.key, x, bends, (y0, y0 + start[1] * self.scale), (y1, y1 + end[1] * self.scale), fill)
        self.picture.ribbons.append(ribbon)

    def _stations_to_stores(self) -> None:
        x0, x1, flow = self.columns[1], self.columns[2], self.flow
        whole = total(flow.stations_s) + total(flow.sources_s)
        keep = flow.b_wh / whole if whole > 0 else 0.0
        bends = (x0 + 0.12 * self.pitch + 6, x0 + 0.12 * self.pitch + 34 + 0.2 * self.pitch)
        start = end = 0.0
        for number, band in enumerate((*flow.stations_s, *flow.sources_s)):
            self._band(number, band, (x0, x1), bends, (start, band.wh_per_day), (end, band.wh_per_day * keep))
            self._station_word(band, x0, start)
            start, end = start + band.wh_per_day, end + band.wh_per_day * keep
        if flow.sources_s:
            base = total(flow.stations_s)
            self._join(1, base, total(flow.sources_s), tuple(band.label for band in flow.sources_s[:1]))
        self._loss(1, flow.b_wh, max(0.0, whole - flow.b_wh), 0.66 * self.pitch)

    def _station_word(self, band: FlowBand, x: float, start: float) -> None:
        height = band.wh_per_day * self.scale
        is_station = any(band is other for other in self.flow.stations_s)
        box = QRectF(x, self._y(start), self.pitch, max(height, 3.0))
        sentence = f"{band.label}: {figure(band.wh_per_day)} Wh (S)"
        ids = band.ids if is_station else ()
        self.picture.spots.append(Spot(band.key, box, sentence, "stations" if is_station else "stores", ids))
        if height < self.frame.small:
            return
        room = self.pitch - 12
        text = self.frame.fit((f"{band.label} {figure(band.wh_per_day)} Wh", band.label, band.code), room)
        word = QRectF(x + 7, self._y(start) + 1, room, min(height - 1, self.frame.small * 1.15))
        self.picture.words.append(Word(word, text, colour="flow_text"))

    def _join(self, index: int, above: float, wh: float, names: tuple[str, ...]) -> None:
        """Bring energy in from below into the stack at a column, with its figure."""
        x, top, bottom = self.columns[index] - 2, self._y(above), self._y(above + wh)
        self.picture.hooks.append(Hook(f"join{index}", x, top, bottom, joins=True))
        reach = x - 8 - (bottom - top) - 4
        texts = (*(f"+{figure(wh)} Wh {name}" for name in names), f"+{figure(wh)} Wh", f"+{figure(wh)}")
        before = self.columns[index] - self.pitch
        room = max(0.0, reach - before - 0.3 * self.pitch)
        beside = Word(QRectF(reach - room, bottom + 4, room, self.frame.small), "", align=RIGHT)
        # Below the flow, ending where the next column's own pieces begin.
        low = max(bottom + 22, self._y(self.outlet) - self.frame.small if self.flow.missing_o_wh > 0 else 0.0)
        wide = x - 6 - before - 0.3 * self.pitch
        under = Word(QRectF(x - 6 - wide, low, wide, self.frame.small), "", align=RIGHT)
        place(self.picture, self.frame, texts, (beside, under))

    def _stores_to_outlets(self) -> None:
        x0, x1, flow = self.columns[2], self.columns[3], self.flow
        bends = (x0 + 0.12 * self.pitch + 6, x0 + 0.12 * self.pitch + 34 + 0.15 * self.pitch)
        if self.has_stores:
            trunk = FlowBand(key="B", label="", code="", ids=(), wh_per_day=flow.b_wh)
            self._band(0, trunk, (x0, x1), bends, (0.0, flow.b_wh), (0.0, flow.o_wh))
            self._loss(2, flow.o_wh, max(0.0, flow.b_wh - flow.o_wh), 0.6 * self.pitch)
        if flow.start_o_wh > 0:
            self._join(3, flow.o_wh, flow.start_o_wh, (start_name(),))

    def _outlets_to_devices(self) -> None:
        x0, x1, flow = self.columns[3], self.columns[4], self.flow
        reserve = flow.margin_o_wh + flow.spare_o_wh
        have, used, need = flow.o_wh + flow.start_o_wh, max(0.0, self.outlet - reserve), total(flow.devices_d)
        fed = min(have, used)
        keep = need / used if used > 0 else 0.0
        at = 0.5 if self.outlet - need > 0.02 * self.most and (reserve > 0 or flow.missing_o_wh > 0) else 0.12
        bends = (x0 + at * self.pitch + 6, x0 + at * self.pitch + 34 + 0.2 * self.pitch)
        trunk = FlowBand(key="O", label="", code="", ids=(), wh_per_day=fed)
        self._band(0, trunk, (x0, x1), bends, (0.0, fed), (0.0, fed * keep))
        if used > fed:
            self._piece("gap", (x0, x1), bends, (fed, used), (fed * keep, used * keep))
        if reserve > 0:
            stop = (x0, x0 + 0.36 * self.pitch)
            kept = max(0.0, have - used)
            self._piece("reserve", stop, stop, (used, used + kept), (used, used + kept))
            self._piece("gap", stop, stop, (used + kept, self.outlet), (used + kept, self.outlet))
            self._reserve_word(stop[0])
        if flow.missing_o_wh > 0:
            self._gap_word(x0, have)
        self._loss(3, need, max(0.0, min(lost_between(flow, "O"), used - need)), self.pitch, at)

    def _piece(
        self,
        fill: str,
        x: tuple[float, float],
        bends: tuple[float, float],
        start: tuple[float, float],
        end: tuple[float, float],
    ) -> None:
        """Add a piece that is not plain flow: a gap or a reserve."""
        if (start[1] - start[0]) * self.scale < 0.3:
            return
        y0, y1 = (self._y(start[0]), self._y(start[1])), (self._y(end[0]), self._y(end[1]))
        self.picture.ribbons.append(Ribbon(fill, x, bends, y0, y1, fill))

    def _reserve_word(self, x: float) -> None:
        room = 0.5 * self.pitch
        box = QRectF(x + 2, self._y(self.outlet) + 4, room, self.frame.small)
        texts = reserve_texts(self.flow.margin_o_wh, self.flow.spare_o_wh)
        place(self.picture, self.frame, texts, (Word(box, "", colour="muted"),))

    def _gap_word(self, x: float, have: float) -> None:
        text = missing_text(self.flow.missing_o_wh)
        height = self.flow.missing_o_wh * self.scale
        short = f"{figure(self.flow.missing_o_wh)} Wh"
        fitted = self.frame.fit((text, short), 0.6 * self.pitch, bold=True) or short
        if height >= self.frame.small + 2:
            room = self.frame.measure(fitted, "small", True) + 8
            box = QRectF(x + 6, self._y(have) + (height - self.frame.small) / 2, room, self.frame.small)
            self.picture.words.append(Word(box, fitted, bold=True, colour="gap", align=CENTRE))

    def _fan(self) -> None:
        """Spread the device categories to their labels, the smallest merged where rows run out."""
        frame, x0 = self.frame, self.columns[4]
        x1 = x0 + self.fan
        row = frame.small * 1.18
        room = frame.height - frame.body_top - 4
        bands = list(self.flow.devices_d)
        shown = bands if len(bands) * row <= room else bands[: max(1, int(room / row) - 1)]
        rest = bands[len(shown) :]
        need = [max(row, band.wh_per_day * self.scale + 2) for band in shown]
        spare = room - sum(need) - (row if rest else 0.0)
        if spare < 0:
            need = [row] * len(shown)
        y, start = frame.body_top, 0.0
        for number, band in enumerate(shown):
            centre = y + need[number] / 2
            thick = band.wh_per_day * self.scale
            half = min(thick, need[number]) / 2
            ends = (centre - half, centre + half)
            starts = (self._y(start), self._y(start) + thick)
            fill = f"category{number % 6}"
            self.picture.ribbons.append(Ribbon(band.key, (x0, x1), (x0, x1), starts, ends, fill, fill))
            self._device_row(band, number, x1, centre - row / 2, row)
            y, start = y + need[number], start + band.wh_per_day
        if rest:
            self._rest_row(rest, x1, y)

    def _device_row(self, band: FlowBand, number: int, x: float, y: float, row: float) -> None:
        frame = self.frame
        chip = QRectF(x + 2, y + 1, frame.small * 1.75, row - 2)
        fill = f"category{number % 6}"
        self.picture.chips.append(Chip(chip, band.code, fill, fill))
        room = frame.width - MARGIN / 2 - chip.right() - 6
        text = frame.fit((self._row_text(band), band.label, f"{figure(band.wh_per_day)} Wh"), room)
        self.picture.words.append(Word(QRectF(chip.right() + 6, y, room, row), text))
        box = QRectF(x - self.fan, y, frame.width - x + self.fan, row)
        self.picture.spots.append(Spot(band.key, box, f"{self._row_text(band)} (D)", "devices"))

    def _rest_row(self, rest: list[FlowBand], x: float, y: float) -> None:
        text = rest_text(len(rest), total(tuple(rest)))
        room = self.frame.width - x - MARGIN / 2
        fitted = self.frame.fit((text, f"+{len(rest)}"), room)
        box = QRectF(x + 2, y, room, self.frame.small * 1.18)
        self.picture.words.append(Word(box, fitted, colour="muted"))
        sentence = ", ".join(f"{self._row_text(band)} (D)" for band in rest)
        self.picture.spots.append(Spot("rest", box, sentence, "devices"))


def day_picture(flow: EnergyFlow, frame: Frame, *, has_stores: bool = True) -> Picture:
    """Lay out the average day."""
    return DayLayout(flow, frame, has_stores=has_stores).build()
