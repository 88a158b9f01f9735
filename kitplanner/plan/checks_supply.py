"""Checks of stations and stores: data missing for the chosen description, service, hours, chemistry."""

from __future__ import annotations

from collections.abc import Iterator

from kitplanner.domain.regulator import divider_output_v
from kitplanner.domain.usb_sink import USB_HIGH_V
from kitplanner.plan.checks_fields import shown
from kitplanner.plan.fields import field
from kitplanner.plan.problem import Place, Problem, error, note, warning
from kitplanner.plan.records import CableStage, LinearStage, Plan, Station, Store


def check_supply(plan: Plan) -> tuple[Problem, ...]:
    """Return problems of stations and stores."""
    stations = (problem for station in plan.stations for problem in _check_station(station))
    stores = (problem for store in plan.stores for problem in _check_store(plan, store))
    return (*stations, *stores)


def _check_station(station: Station) -> Iterator[Problem]:
    place = ("stations", station.id)
    yield from _check_description(place, station)
    yield from _check_stages(place, station)
    low, high = station.comfort_low_rpm, station.comfort_high_rpm
    if low is not None and high is not None and low > high:
        yield error(
            (*place, "comfort_high_rpm"),
            f"the fastest comfortable turning of {high:g} a minute is below the slowest of {low:g}",
            "swap the two",
        )
    if not station.guarded:
        yield warning(
            (*place, "guarded"), "without a guard this station gets no slots", "enclose chain, sprocket and wheel first"
        )
    if not station.in_service:
        yield note((*place, "in_service"), "this station is out of service and gets no slots", "mend it or remove it")
    if any(window.end < window.start for window in station.hours):
        yield note((*place, "hours"), "the hours run through midnight", "swap start and end if this is not meant")
    if station.off_min is not None and station.on_min is None:
        yield note(
            (*place, "on_min"),
            "a cooling time is given without a longest run and does nothing",
            "enter the longest run",
        )


def _check_description(place: Place, station: Station) -> Iterator[Problem]:
    needed = {"measured": ("output_w",), "label": ("label_w",), "parts": ("machine", "gear")}[station.described_by]
    words = {
        "output_w": (
            "the measured output is missing",
            "measure it at the socket, or describe the station by its label or parts",
        ),
        "label_w": ("the label's watts are missing", "enter them, or describe the station by measurement or parts"),
        "machine": ("the machine is missing", "add it, or describe the station by measurement or label"),
        "gear": (
            "the gear is missing",
            "add it (ratio 1 without a gear), or describe the station by measurement or label",
        ),
    }
    for key in needed:
        if getattr(station, key) is None:
            yield error((*place, key), *words[key])


def _check_stages(place: Place, station: Station) -> Iterator[Problem]:
    for stage in station.stages:
        here = (*place, "stages", stage.id)
        if isinstance(stage, CableStage) and stage.loop_ohm is None and stage.awg is None and stage.area_mm2 is None:
            words = "the cable's resistance is not known and that of a good cable is taken, 0.25 ohm"
            yield note((*here, "loop_ohm"), words, "enter it, or the wire size and length")
        if isinstance(stage, LinearStage):
            output_v = divider_output_v(stage.r1_ohm, stage.r2_ohm, stage.reference_v, stage.adjust_a)
            if "usb" in station.connector.lower() and output_v > USB_HIGH_V:
                yield warning(
                    (*here, "r2_ohm"),
                    f"this divider gives {output_v:.2f} V and a USB socket must not have more than {USB_HIGH_V} V",
                    "choose a smaller resistor to ground",
                )
    kinds = [type(stage).__name__ for stage in station.stages]
    if station.described_by == "parts" and kinds and not {"DiodeStage", "SynchronousStage"} & set(kinds):
        yield warning(
            (*place, "stages"),
            "nothing blocks current from flowing back into the machine, so a battery would turn the crank",
            "add a blocking diode",
        )


def _check_store(plan: Plan, store: Store) -> Iterator[Problem]:
    place = ("stores", store.id)
    if store.start_fraction < store.floor_fraction:
        start, floor = (shown(field("store", key), getattr(store, key)) for key in ("start_fraction", "floor_fraction"))
        yield warning(
            (*place, "start_fraction"),
            f"it starts at {start}, below its floor of {floor}, and gives nothing at first",
            "charge it before the start or lower the floor",
        )
    if store.chemistry == "alkaline" and any(not one.feeds or store.id in one.feeds for one in plan.stations):
        yield warning(
            (*place, "chemistry"),
            "alkaline cells must not be charged, but a station feeds this store",
            "name the stores each station feeds, without this one",
        )
