"""Words of the energy line: stage titles, values and the sentence of each stage, with their levels."""

from __future__ import annotations

from msgspec import Struct
from PySide6.QtCore import QCoreApplication

from kitplanner.planners.results import BenchPoint, EnergyFlow, FlowBand

LEVELS = ("M", "S", "B", "O", "D")
translate = QCoreApplication.translate
SECTIONS = ("people", "stations", "stores", "stores", "devices")


def figure(value: float) -> str:
    """Return an energy or power with as many digits as it deserves."""
    if abs(value) >= 9.95:
        return f"{value:.0f}"
    return f"{value:.1f}".removesuffix(".0")


def watts(value: float) -> str:
    """Return a power of a station's chain, to the hundredth of a watt below ten."""
    return f"{value:.1f}" if abs(value) >= 9.995 else f"{value:.2f}"


class StageText(Struct, frozen=True):
    """Words of one stage: `titles` from the fullest to the shortest, likewise `values`."""

    level: str
    section: str
    titles: tuple[str, ...]
    values: tuple[str, ...]
    sentence: str


def total(bands: tuple[FlowBand, ...]) -> float:
    """Return the Wh a day of all bands."""
    return sum(band.wh_per_day for band in bands)


def _values(wh: float) -> tuple[str, ...]:
    text = figure(wh)
    return (
        translate("EnergyLine", "{wh} Wh a day").format(wh=text),
        translate("EnergyLine", "{wh} Wh").format(wh=text),
        text,
    )


def _parts(bands: tuple[FlowBand, ...]) -> str:
    return ", ".join(f"{band.label} {figure(band.wh_per_day)} Wh" for band in bands)


def day_stages(flow: EnergyFlow, *, has_stores: bool = True) -> tuple[StageText, ...]:
    """Return the stages of an average day in words: five, or four without stores."""
    people, stations, devices = total(flow.people_m), total(flow.stations_s), total(flow.devices_d)
    have = flow.o_wh + flow.start_o_wh
    titles = (
        (translate("EnergyLine", "People"),),
        (translate("EnergyLine", "Stations"),),
        (translate("EnergyLine", "Into stores"), translate("EnergyLine", "Stores")),
        (_outlet_title(has_stores), translate("EnergyLine", "Outlets")),
        (translate("EnergyLine", "Devices"),),
    )
    shown = (people, stations, flow.b_wh, have, devices)
    sentences = (
        translate("EnergyLine", "People put {wh} Wh a day into cranks and pedals (M).").format(wh=figure(people))
        + _list(translate("EnergyLine", " By kind of station: {parts}."), flow.people_m),
        translate("EnergyLine", "Stations give {wh} Wh a day at their sockets (S).").format(wh=figure(stations))
        + _list(translate("EnergyLine", " {parts}."), flow.stations_s)
        + _list(translate("EnergyLine", " Other sources add {parts}."), flow.sources_s),
        translate("EnergyLine", "{wh} Wh a day arrive in the stores (B).").format(wh=figure(flow.b_wh)),
        _outlet_sentence(flow, has_stores=has_stores),
        translate("EnergyLine", "Devices need {wh} Wh a day (D).").format(wh=figure(devices))
        + _list(" {parts}.", flow.devices_d),
    )
    stages = tuple(
        StageText(level, section, title, _values(wh), sentence + _loss_sentence(flow, level))
        for level, section, title, wh, sentence in zip(LEVELS, SECTIONS, titles, shown, sentences, strict=True)
    )
    return stages if has_stores else tuple(stage for stage in stages if stage.level != "B")


def _outlet_title(has_stores: bool) -> str:
    return translate("EnergyLine", "Out of stores") if has_stores else translate("EnergyLine", "At the outlets")


def _list(pattern: str, bands: tuple[FlowBand, ...]) -> str:
    return pattern.format(parts=_parts(bands)) if bands else ""


def _outlet_sentence(flow: EnergyFlow, *, has_stores: bool) -> str:
    with_stores = translate("EnergyLine", "{wh} Wh a day come out of the stores and stations (O).")
    without = translate("EnergyLine", "{wh} Wh a day reach the outlets straight from the stations (O).")
    text = (with_stores if has_stores else without).format(wh=figure(flow.o_wh))
    if flow.start_o_wh > 0:
        text += translate("EnergyLine", " Energy stored at the start adds {wh} Wh a day.").format(
            wh=figure(flow.start_o_wh)
        )
    if flow.missing_o_wh > 0:
        text += translate("EnergyLine", " {wh} Wh a day are missing.").format(wh=figure(flow.missing_o_wh))
    if flow.margin_o_wh + flow.spare_o_wh > 0:
        text += translate("EnergyLine", " Kept back: {parts}.").format(
            parts=reserve_texts(flow.margin_o_wh, flow.spare_o_wh)[0]
        )
    return text


def _loss_sentence(flow: EnergyFlow, level: str) -> str:
    lost = [loss for loss in flow.losses if loss.level_from == level and loss.wh_per_day > 0]
    if not lost:
        return ""
    parts = ", ".join(f"{loss.label} {figure(loss.wh_per_day)} Wh" for loss in lost)
    return translate("EnergyLine", " Lost on the way to {level}: {parts}.").format(level=lost[0].level_to, parts=parts)


def chain_stages(point: BenchPoint, name: str) -> tuple[StageText, ...]:
    """Return a station's own chain in words, from the hand to the battery; each step names the watts it gets."""
    plug = plug_index(point)
    stages = []
    for index, stage in enumerate(point.stages):
        level = "M" if index == 0 else "S" if plug is not None and index == plug + 1 else ""
        where = (
            translate("EnergyLine", " at the crank (M)")
            if level == "M"
            else translate("EnergyLine", " at the output socket (S)")
            if level
            else ""
        )
        got = watts(stage.in_w or 0.0)
        sentence = translate("EnergyLine", "{name}, {stage}: {w} W arrive{where}, {loss} W are lost.").format(
            name=name, stage=stage.name, w=got, where=where, loss=watts(stage.loss_w or 0.0)
        )
        stages.append(StageText(level, "stations", (stage.name,), (f"{got} W", got), sentence))
    stored = watts(point.stored_w or 0.0)
    sentence = translate("EnergyLine", "{name}: {w} W are stored.").format(name=name, w=stored)
    stages.append(StageText("", "stations", (translate("EnergyLine", "Stored"),), (f"{stored} W", stored), sentence))
    return tuple(stages)


def plug_index(point: BenchPoint) -> int | None:
    """Return which stage ends at the output socket, found by its watts."""
    if point.human_w is None or point.crank_to_usb_fraction is None:
        return None
    plug_w = point.human_w * point.crank_to_usb_fraction
    gaps = [abs((stage.out_w or 0.0) - plug_w) for stage in point.stages]
    best = min(range(len(gaps)), key=gaps.__getitem__, default=None)
    return best if best is not None and gaps[best] <= 1e-6 * max(1.0, plug_w) else None


def start_name() -> str:
    """Return the name of energy that was stored at the start."""
    return translate("EnergyLine", "stored at the start")


def missing_text(wh: float) -> str:
    """Return the words of the gap."""
    return translate("EnergyLine", "{wh} Wh missing").format(wh=figure(wh))


def reserve_texts(margin_wh: float, spare_wh: float) -> tuple[str, ...]:
    """Return the words of what is kept back, from the fullest to the shortest."""
    margin = translate("EnergyLine", "margin {wh} Wh").format(wh=figure(margin_wh))
    spare = translate("EnergyLine", "spare {wh} Wh").format(wh=figure(spare_wh))
    if spare_wh < 0.05:
        return (margin, figure(margin_wh))
    if margin_wh < 0.05:
        return (spare, figure(spare_wh))
    both = translate("EnergyLine", "kept back {wh} Wh").format(wh=figure(margin_wh + spare_wh))
    return (f"{margin}, {spare}", both, f"+{figure(margin_wh + spare_wh)} Wh", figure(margin_wh + spare_wh))


def rest_text(count: int, wh: float) -> str:
    """Return the words for device categories that had no room."""
    return translate("EnergyLine", "and {n} more, {wh} Wh").format(n=count, wh=figure(wh))


def empty_text() -> str:
    """Return what the line says before there is anything to draw."""
    return translate(
        "EnergyLine", "Add people, stations and devices, and this line shows where each day's energy goes."
    )


def chain_title(point: BenchPoint, name: str) -> str:
    """Return the heading over a station's own chain."""
    if point.human_w is None or point.rpm is None:
        return translate("EnergyLine", "{name}: no output at this point. Esc returns to the day.").format(name=name)
    return translate("EnergyLine", "{name} at {rpm} turns a minute, in watts. Esc returns to the day.").format(
        name=name, rpm=f"{point.rpm:.0f}"
    )
