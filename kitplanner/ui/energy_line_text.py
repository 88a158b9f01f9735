"""Words of the energy line: stage titles, values and the sentence of each stage, with their levels."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import QCoreApplication

from kitplanner.planners.results import BenchPoint, EnergyFlow, FlowBand

LEVELS = ("M", "S", "B", "O", "D")
SECTIONS = ("people", "stations", "stores", "stores", "devices")


def figure(value: float) -> str:
    """Return an energy or power with as many digits as it deserves."""
    if abs(value) >= 9.95 or abs(value) < 0.05:
        return f"{value:.0f}"
    return f"{value:.1f}"


def _tr(text: str) -> str:
    return QCoreApplication.translate("EnergyLine", text)


@dataclass(frozen=True)
class StageText:
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
        QCoreApplication.translate("EnergyLine", "{wh} Wh a day").format(wh=text),
        QCoreApplication.translate("EnergyLine", "{wh} Wh").format(wh=text),
        text,
    )


def _parts(bands: tuple[FlowBand, ...]) -> str:
    return ", ".join(f"{band.label} {figure(band.wh_per_day)} Wh" for band in bands)


def day_stages(flow: EnergyFlow) -> tuple[StageText, ...]:
    """Return the five stages of an average day in words."""
    people, stations, devices = total(flow.people_m), total(flow.stations_s), total(flow.devices_d)
    have = flow.o_wh + flow.start_o_wh
    titles = (
        (_tr("People"),),
        (_tr("Stations"),),
        (_tr("Into stores"), _tr("Stores")),
        (_tr("Out of stores"), _tr("Outlets")),
        (_tr("Devices"),),
    )
    shown = (people, stations, flow.b_wh, have, devices)
    sentences = (
        _tr("People put {wh} Wh a day into cranks and pedals (M).").format(wh=figure(people))
        + _list(_tr(" By kind of station: {parts}."), flow.people_m),
        _tr("Stations give {wh} Wh a day at their sockets (S).").format(wh=figure(stations))
        + _list(_tr(" {parts}."), flow.stations_s)
        + _list(_tr(" Other sources add {parts}."), flow.sources_s),
        _tr("{wh} Wh a day arrive in the stores (B).").format(wh=figure(flow.b_wh)),
        _outlet_sentence(flow),
        _tr("Devices need {wh} Wh a day (D).").format(wh=figure(devices)) + _list(" {parts}.", flow.devices_d),
    )
    return tuple(
        StageText(level, section, title, _values(wh), sentence + _loss_sentence(flow, level))
        for level, section, title, wh, sentence in zip(LEVELS, SECTIONS, titles, shown, sentences, strict=True)
    )


def _list(pattern: str, bands: tuple[FlowBand, ...]) -> str:
    return pattern.format(parts=_parts(bands)) if bands else ""


def _outlet_sentence(flow: EnergyFlow) -> str:
    text = _tr("{wh} Wh a day come out of the stores and stations (O).").format(wh=figure(flow.o_wh))
    if flow.start_o_wh > 0:
        text += _tr(" Energy stored at the start adds {wh} Wh a day.").format(wh=figure(flow.start_o_wh))
    if flow.missing_o_wh > 0:
        text += _tr(" {wh} Wh a day are missing.").format(wh=figure(flow.missing_o_wh))
    return text


def _loss_sentence(flow: EnergyFlow, level: str) -> str:
    lost = [loss for loss in flow.losses if loss.level_from == level and loss.wh_per_day > 0]
    if not lost:
        return ""
    parts = ", ".join(f"{loss.label} {figure(loss.wh_per_day)} Wh" for loss in lost)
    return _tr(" Lost on the way to {level}: {parts}.").format(level=lost[0].level_to, parts=parts)


def chain_stages(point: BenchPoint, name: str) -> tuple[StageText, ...]:
    """Return a station's own chain in words, from the hand to the battery."""
    watts = point.human_w or 0.0
    stages = [
        StageText(
            "M",
            "stations",
            (_tr("Turning"),),
            (f"{figure(watts)} W",),
            _tr("{name}: {w} W at the crank (M).").format(name=name, w=figure(watts)),
        )
    ]
    plug = plug_index(point)
    for index, stage in enumerate(point.stages):
        out = stage.out_w or 0.0
        level = "S" if index == plug else ""
        where = _tr(" at the output socket (S)") if level else ""
        sentence = _tr("{stage}: {w} W go on{where}, {loss} W are lost.").format(
            stage=stage.name, w=figure(out), where=where, loss=figure(stage.loss_w or 0.0)
        )
        stages.append(StageText(level, "stations", (stage.name,), (f"{figure(out)} W",), sentence))
    return tuple(stages)


def plug_index(point: BenchPoint) -> int | None:
    """Return which stage ends at the output socket, found by its watts."""
    if point.human_w is None or point.crank_to_usb_fraction is None:
        return None
    plug_w = point.human_w * point.crank_to_usb_fraction
    gaps = [abs((stage.out_w or 0.0) - plug_w) for stage in point.stages]
    best = min(range(len(gaps)), key=gaps.__getitem__, default=None)
    return best if best is not None and gaps[best] <= 1e-6 * max(1.0, plug_w) else None
