"""From records to the domain: the chain of a station described by its parts, and the sinks at its plug."""

from __future__ import annotations

import math
from types import MappingProxyType

from kitplanner.domain.cable import TYPE_C_LOOP_OHM, Cable, awg_area_mm2, conductor_ohm_per_m, loop_ohm
from kitplanner.domain.chain import (
    Chain,
    Comfort,
    DcMachine,
    Diode,
    FixedLoss,
    GearBox,
    LinearRegulator,
    Stage,
    SwitchingConverter,
    SynchronousRectifier,
    UsbSink,
)
from kitplanner.plan.records import (
    CableStage,
    ConverterStage,
    Device,
    DiodeStage,
    LinearStage,
    LossStage,
    Station,
    StationKind,
    SynchronousStage,
    TestLoad,
)
from kitplanner.plan.records import Stage as StageRecord
from kitplanner.planners.station_error import StationError

# Comfortable cadence and greatest torque by kind of drive: judgement, not measured; a station's own values win.
COMFORT_BY_KIND: MappingProxyType[StationKind, Comfort] = MappingProxyType(
    {
        "crank": Comfort(40.0, 80.0, 4.0),
        "pocket_crank": Comfort(80.0, 150.0, 0.70),
        "pedal": Comfort(45.0, 80.0, 16.0),
        "treadle": Comfort(45.0, 80.0, 16.0),
        "rocker": Comfort(40.0, 80.0, 16.0),
    }
)


def comfort_of(station: Station) -> Comfort:
    """Comfort band and torque limit of a station: its own values, else those of its kind.

    Parameters
    ----------
    station : Station
        The station.

    Returns
    -------
    Comfort
        Band [rpm] and torque [N.m].

    Examples
    --------
    >>> comfort_of(Station(id="S1", name="stand", kind="pedal", comfort_high_rpm=70.0))
    Comfort(low_rpm=45.0, high_rpm=70.0, torque_max_nm=16.0)
    """
    usual = COMFORT_BY_KIND[station.kind]
    low, high, torque = station.comfort_low_rpm, station.comfort_high_rpm, station.torque_max_nm
    return Comfort(
        usual.low_rpm if low is None else low,
        usual.high_rpm if high is None else high,
        usual.torque_max_nm if torque is None else torque,
    )


def cable_ohm(cable: CableStage) -> float:
    """Loop resistance of a cable: as given, else from its cross-section or wire size, else of a good Type-C cable.

    Parameters
    ----------
    cable : CableStage
        The cable.

    Returns
    -------
    float
        Loop resistance [ohm].

    References
    ----------
    ASTM B258, IEC 60028 and the Type-C assembly limits, see `kitplanner.domain.cable`.

    Examples
    --------
    >>> round(cable_ohm(CableStage(id="k", name="cable", awg=24, length_m=1.0)), 4)
    0.2884
    """
    if cable.loop_ohm is not None:
        return cable.loop_ohm
    if cable.area_mm2 is not None:
        area = cable.area_mm2
    elif cable.awg is not None:
        area = awg_area_mm2(cable.awg)
    else:
        return TYPE_C_LOOP_OHM
    return loop_ohm(conductor_ohm_per_m(area, cable.copper_degc), cable.length_m, cable.contacts, cable.contact_ohm)


def stage_of(record: StageRecord) -> Stage:
    """Law of one stage record.

    Parameters
    ----------
    record : Stage record
        Diode, synchronous rectifier, linear regulator, converter, cable or loss.

    Returns
    -------
    Stage
        Its counterpart in the domain, with the same name.

    Examples
    --------
    >>> stage_of(LossStage(id="x", name="fuse", eta=0.99))
    FixedLoss(eta=0.99, name='fuse')
    """
    match record:
        case DiodeStage():
            return Diode(record.series, record.saturation_a, record.ideality, record.series_ohm, record.name)
        case SynchronousStage():
            return SynchronousRectifier(record.series, record.on_ohm, record.quiescent_a, record.name)
        case LinearStage():
            return _linear(record)
        case ConverterStage():
            return _converter(record)
        case CableStage():
            return Cable(cable_ohm(record), record.name)
        case LossStage():
            return FixedLoss(record.eta, record.name)


def _linear(record: LinearStage) -> LinearRegulator:
    return LinearRegulator(
        r1_ohm=record.r1_ohm,
        r2_ohm=record.r2_ohm,
        reference_v=record.reference_v,
        adjust_a=record.adjust_a,
        dropout_v=record.dropout_v,
        dropout_ohm=record.dropout_ohm,
        theta_c_per_w=record.theta_c_per_w,
        air_degc=record.air_degc,
        rating_v=record.rating_v,
        tolerance_fraction=record.resistor_tolerance_fraction,
        name=record.name,
    )


def _converter(record: ConverterStage) -> SwitchingConverter:
    return SwitchingConverter(
        output_v=record.output_v,
        a0_w=record.a0_w,
        a1_w_per_v=record.a1_w_per_v,
        b0_v=record.b0_v,
        b1_v_per_v=record.b1_v_per_v,
        c_ohm=record.c_ohm,
        headroom_needed_v=record.headroom_v,
        lockout_v=record.lockout_v,
        rating_v=record.rating_v,
        name=record.name,
    )


def chain_of(station: Station) -> Chain:
    """Chain of a station described by its parts, stages in the order listed.

    Parameters
    ----------
    station : Station
        A station with machine and gear.

    Returns
    -------
    Chain
        Its counterpart in the domain, with the comfort of its drive.

    Raises
    ------
    StationError
        When the station has no machine or no gear, or one that cannot work.

    Examples
    --------
    >>> from kitplanner.plan.records import Gear, Machine
    >>> station = Station(id="S1", name="crank", machine=Machine(ke_v_s=0.045, ra_ohm=1.5), gear=Gear(ratio=40.0))
    >>> chain_of(station).stage_names
    ('gear', 'friction', 'copper')
    """
    if station.machine is None or station.gear is None:
        missing = "machine" if station.machine is None else "gear"
        raise StationError(f'Station "{station.name}" ({station.id}) has no {missing}; describe it by parts first.')
    machine, gear = station.machine, station.gear
    try:
        return Chain(
            DcMachine(machine.ke_v_s, machine.ra_ohm, machine.vb_v, machine.tc_nm, machine.b_nm_s),
            GearBox(gear.ratio, gear.eta, gear.drag_nm),
            tuple(stage_of(record) for record in station.stages),
            comfort_of(station),
        )
    except ValueError as error:
        raise StationError(f'Station "{station.name}" ({station.id}) cannot be computed. {error}') from error


def sink_of_test_load(load: TestLoad) -> UsbSink:
    """Sink that the bench hangs on a station.

    Parameters
    ----------
    load : TestLoad
        Charger and cell of the bench.

    Returns
    -------
    UsbSink
        Greatest current, held voltage, least current.

    Examples
    --------
    >>> sink_of_test_load(TestLoad())
    UsbSink(limit_a=1.0, hold_v=4.4, least_a=0.1)
    """
    return UsbSink(load.limit_a, load.hold_v, load.least_a)


def sink_of_device(device: Device) -> UsbSink:
    """Sink that a device is at the end of the cable; without an input limit only its acceptance bounds it.

    Parameters
    ----------
    device : Device
        The device.

    Returns
    -------
    UsbSink
        Greatest current, held voltage, least current.

    Examples
    --------
    >>> sink_of_device(Device(id="D1", name="phone", input_limit_a=1.5))
    UsbSink(limit_a=1.5, hold_v=4.4, least_a=0.1)
    """
    limit_a = math.inf if device.input_limit_a is None else device.input_limit_a
    return UsbSink(limit_a, device.input_hold_v, device.input_least_a)
