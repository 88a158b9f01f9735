"""Traces of the energy line: bands, losses, what is missing, margin and spare."""

from __future__ import annotations

from collections.abc import Sequence

from kitplanner.plan.records import Plan
from kitplanner.planners.pipeline import Results
from kitplanner.planners.results import EnergyFlow, FlowBand, FlowLoss, Trace, TraceStep
from kitplanner.planners.trace_balance import CONSERVATION, answer_of
from kitplanner.planners.trace_fields import TraceError, computed, field_step, field_steps, figure


def _flow(results: Results) -> EnergyFlow:
    if results.flow is None:
        raise TraceError("There is no energy line: the plan has problems that stop the calculation.")
    return results.flow


def _band(bands: Sequence[FlowBand], ids: Sequence[str]) -> FlowBand:
    found = next((band for band in bands if ids and band.key == ids[0]), None)
    if found is None:
        raise TraceError(f'There is no band "{ids[0] if ids else ""}" in the energy line.')
    return found


def flow_people(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the energy of people at one kind of station comes from (ids: the band's key)."""
    band = _band(_flow(results).people_m, ids)
    rows = {row.station: row for row in answer_of(results).stations}
    names = {station.id: station.name for station in plan.stations}
    return Trace(
        formula="energy at M = sum over the stations of this kind of minutes / 60 * watts at the crank or pedal",
        words="What people put in on an average day.",
        source=CONSERVATION,
        value=f"{figure(band.wh_per_day)} Wh a day at M",
        steps=tuple(
            computed(f"people at {names[one]}, at M", rows[one].human_wh_per_day, "Wh a day", record=one)
            for one in band.ids
        ),
    )


def flow_station(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the output of one kind of station comes from (ids: the band's key)."""
    band = _band(_flow(results).stations_s, ids)
    rows = {row.station: row for row in answer_of(results).stations}
    names = {station.id: station.name for station in plan.stations}
    return Trace(
        formula="energy at S = sum over the stations of this kind of what they make",
        words="What leaves the output sockets on an average day.",
        source=CONSERVATION,
        value=f"{figure(band.wh_per_day)} Wh a day at S",
        steps=tuple(
            computed(f"made at {names[one]}, at S", rows[one].made_wh_per_day, "Wh a day", record=one)
            for one in band.ids
        ),
    )


def flow_source(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where another source's energy comes from (ids: the source)."""
    band = _band(_flow(results).sources_s, ids)
    source = next(one for one in plan.other_sources if one.id == band.key)
    return Trace(
        formula="energy a day as entered",
        words="It reaches the stores' input without anybody turning.",
        source="The plan's own statement",
        value=f"{figure(band.wh_per_day)} Wh a day at S",
        steps=field_steps("other_source", source, ("wh_per_day", "windows")),
    )


def flow_b(plan: Plan, results: Results, _ids: Sequence[str]) -> Trace:
    """Return where the energy into the stores comes from."""
    flow = _flow(results)
    return Trace(
        formula="energy at B = sum over stations and sources of energy at S * efficiency into their stores",
        words="What is made on an average day, after the loss of charging the stores.",
        source=CONSERVATION,
        value=f"{figure(flow.b_wh)} Wh a day at B",
        steps=(*_made(flow), *(field_step("store", store, "eta_in") for store in plan.stores)),
    )


def flow_o(plan: Plan, results: Results, _ids: Sequence[str]) -> Trace:
    """Return where the energy at the outlet comes from."""
    flow = _flow(results)
    return Trace(
        formula="energy at O = sum over stations and sources of energy at S * station to outlet",
        words="What is made on an average day, after both losses of the stores; start charges come on top.",
        source=CONSERVATION,
        value=f"{figure(flow.o_wh)} Wh a day at O",
        steps=(
            *_made(flow),
            *(step for store in plan.stores for step in field_steps("store", store, ("eta_in", "eta_out"))),
        ),
    )


def _made(flow: EnergyFlow) -> tuple[TraceStep, ...]:
    return tuple(
        computed(f"{band.label}, at S", band.wh_per_day, "Wh a day") for band in (*flow.stations_s, *flow.sources_s)
    )


def flow_start(plan: Plan, results: Results, _ids: Sequence[str]) -> Trace:
    """Return where the start charges' part of a day comes from."""
    flow, answer = _flow(results), answer_of(results)
    return Trace(
        formula="start charges a day = (usable in stores + start credits of devices) / days",
        words="What stands in stores and devices at the beginning, spread over the days.",
        source=CONSERVATION,
        value=f"{figure(flow.start_o_wh)} Wh a day at O",
        steps=(
            computed("usable in the stores, at O", sum(row.usable_wh for row in answer.stores), "Wh"),
            computed("start credits of the devices, at O", sum(row.credit_wh for row in answer.devices), "Wh"),
            field_step("plan", plan, "days"),
        ),
    )


def flow_device(plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where the use of one band of devices comes from (ids: the band's key)."""
    band = _band(_flow(results).devices_d, ids)
    with_margin = plan.days * (1.0 + plan.margin_fraction)
    used = {row.device: row.use_wh / with_margin for row in answer_of(results).devices}
    return Trace(
        formula="use at D = sum over its device lines of count * use of one",
        words="What these devices use themselves in a day, without margin.",
        source=CONSERVATION,
        value=f"{figure(band.wh_per_day)} Wh a day at D",
        steps=tuple(
            computed(
                f"use of {device.name}, at D",
                used[device.id] * (device.eta if device.battery_wh else 1.0),
                "Wh a day",
                record=device.id,
            )
            for device in plan.devices
            if device.id in band.ids
        ),
    )


def flow_loss(_plan: Plan, results: Results, ids: Sequence[str]) -> Trace:
    """Return where a loss comes from (ids: level from, level to)."""
    flow = _flow(results)
    loss: FlowLoss | None = next((one for one in flow.losses if (one.level_from, one.level_to) == tuple(ids)), None)
    if loss is None:
        raise TraceError("There is no such loss in the energy line.")
    after = _level_wh(flow, loss.level_to)
    # Counted on the devices' side at O (with start charges) and with the other sources at S.
    before = after + loss.wh_per_day
    return Trace(
        formula=f"loss = energy at {loss.level_from} - energy at {loss.level_to}",
        words=f"{loss.label}: what does not arrive.",
        source=CONSERVATION,
        value=f"{figure(loss.wh_per_day)} Wh a day",
        steps=(
            computed(f"energy at {loss.level_from}", before, "Wh a day"),
            computed(f"energy at {loss.level_to}", after, "Wh a day"),
        ),
    )


def _level_wh(flow: EnergyFlow, level: str) -> float:
    match level:
        case "S":
            return sum(band.wh_per_day for band in flow.stations_s)
        case "B":
            return flow.b_wh
        case "O":
            return flow.o_wh
        case _:
            return sum(band.wh_per_day for band in flow.devices_d)


def flow_missing(plan: Plan, results: Results, _ids: Sequence[str]) -> Trace:
    """Return where the gap comes from."""
    answer = answer_of(results)
    return Trace(
        formula="missing a day = max(0, need - have) / days",
        words="What is missing at the outlet, margin included; drawn as a gap.",
        source=CONSERVATION,
        value=f"{figure(_flow(results).missing_o_wh)} Wh a day at O",
        steps=(
            computed("need, at O", answer.need_wh, "Wh"),
            computed("have, at O", answer.have_wh, "Wh"),
            field_step("plan", plan, "days"),
        ),
    )


def flow_margin(plan: Plan, results: Results, _ids: Sequence[str]) -> Trace:
    """Return where the margin's band comes from."""
    answer, flow = answer_of(results), _flow(results)
    use = answer.days[0].use_wh
    return Trace(
        formula="margin a day = use a day at O * margin",
        words="Extra use planned on top.",
        source=CONSERVATION,
        value=f"{figure(flow.margin_o_wh)} Wh a day at O",
        steps=(computed("use of a day, at O", use, "Wh"), field_step("plan", plan, "margin_fraction")),
    )


def flow_spare(plan: Plan, results: Results, _ids: Sequence[str]) -> Trace:
    """Return where what is left over comes from."""
    answer = answer_of(results)
    return Trace(
        formula="spare a day = max(0, have - need) / days",
        words="What is left beyond use and margin.",
        source=CONSERVATION,
        value=f"{figure(_flow(results).spare_o_wh)} Wh a day at O",
        steps=(
            computed("have, at O", answer.have_wh, "Wh"),
            computed("need, at O", answer.need_wh, "Wh"),
            field_step("plan", plan, "days"),
        ),
    )
