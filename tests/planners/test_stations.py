"""Records become the domain's chain without losing a value."""

from __future__ import annotations

import msgspec
import pytest

from kitplanner.domain.cable import TYPE_C_LOOP_OHM
from kitplanner.domain.chain import Comfort, LinearRegulator, SwitchingConverter, operating_point
from kitplanner.plan.records import (
    CableStage,
    ConverterStage,
    Device,
    DiodeStage,
    Gear,
    LinearStage,
    LossStage,
    Machine,
    Station,
    SynchronousStage,
    TestLoad,
)
from kitplanner.planners.stations import (
    COMFORT_BY_KIND,
    StationError,
    cable_ohm,
    chain_of,
    comfort_of,
    sink_of_device,
    sink_of_test_load,
    stage_of,
)

MACHINE = Machine(ke_v_s=0.0215, ra_ohm=4.0, tc_nm=0.0010, b_nm_s=1.9e-6)
STATION = Station(
    id="A",
    name="small crank",
    kind="pocket_crank",
    described_by="parts",
    machine=MACHINE,
    gear=Gear(ratio=30.0, eta=0.75, drag_nm=0.02),
    stages=(
        DiodeStage(id="s1", name="bridge", series=2),
        LinearStage(id="s2", name="regulator"),
        CableStage(id="s3", name="cable", awg=28, length_m=0.5),
    ),
)


def test_chain_of_a_described_station_gives_its_human_watts() -> None:
    """The same set of parts as in `tests/domain/test_chain.py`, there derived by hand from the laws."""
    point = operating_point(chain_of(STATION), 135.0, 0.3)
    assert float(point.human_w) == pytest.approx(5.079, rel=1e-3)
    assert point.stage_names == ("gear", "friction", "copper", "bridge", "regulator", "cable")


def test_every_field_of_a_stage_reaches_the_law() -> None:
    linear = LinearStage(
        id="x", name="lin", r1_ohm=110.0, r2_ohm=330.0, reference_v=1.2, adjust_a=4e-5, dropout_v=1.1, dropout_ohm=0.2,
        theta_c_per_w=20.0, air_degc=30.0, rating_v=35.0, resistor_tolerance_fraction=0.05,
    )  # fmt: skip
    assert stage_of(linear) == LinearRegulator(110.0, 330.0, 1.2, 4e-5, 1.1, 0.2, 20.0, 30.0, 35.0, 0.05, "lin")
    converter = ConverterStage(
        id="x", name="conv", output_v=9.0, a0_w=0.1, a1_w_per_v=0.01, b0_v=0.2, b1_v_per_v=0.02, c_ohm=0.3,
        headroom_v=0.7, lockout_v=7.5, rating_v=28.0,
    )  # fmt: skip
    assert stage_of(converter) == SwitchingConverter(9.0, 0.1, 0.01, 0.2, 0.02, 0.3, 0.7, 7.5, 28.0, "conv")
    for record in (DiodeStage(id="x", name="d"), SynchronousStage(id="x", name="s", quiescent_a=0.001)):
        law = stage_of(record)
        assert {key: getattr(law, key) for key in record.__struct_fields__ if key not in ("id", "notes")} == {
            key: getattr(record, key) for key in record.__struct_fields__ if key not in ("id", "notes")
        }


def test_stages_keep_their_order_and_may_repeat() -> None:
    cables = tuple(CableStage(id=f"c{i}", name=f"cable {i}", loop_ohm=0.01 * (i + 1)) for i in range(27))
    loss = LossStage(id="l", name="fuse", eta=0.98)
    station = msgspec.structs.replace(STATION, stages=(*STATION.stages, loss, *cables))
    chain = chain_of(station)
    assert chain.stage_names[3:] == ("bridge", "regulator", "cable", "fuse", *(f"cable {i}" for i in range(27)))
    point = operating_point(chain, 140.0, 0.05)
    assert float(sum(point.stage_loss_w) + point.plug_w) == pytest.approx(float(point.human_w), abs=1e-9)
    assert float(point.plug_v) == pytest.approx(
        5.018 - 0.05 / 0.98 * 0.33290 - 0.05 * sum(0.01 * (i + 1) for i in range(27)), abs=1e-4
    )


def test_cable_from_area_wire_size_or_resistance() -> None:
    assert cable_ohm(CableStage(id="c", name="c", loop_ohm=0.5, awg=30)) == 0.5
    assert cable_ohm(CableStage(id="c", name="c", area_mm2=0.5, length_m=2.0, contacts=0)) == pytest.approx(
        0.1379, rel=1e-3
    )
    assert cable_ohm(CableStage(id="c", name="c", awg=20, length_m=1.0)) == pytest.approx(0.18662, rel=1e-4)
    assert cable_ohm(CableStage(id="c", name="c")) == TYPE_C_LOOP_OHM


def test_own_comfort_values_win_over_those_of_the_kind() -> None:
    own = msgspec.structs.replace(STATION, comfort_low_rpm=60.0, torque_max_nm=0.5)
    assert comfort_of(own) == Comfort(60.0, 150.0, 0.5)
    assert chain_of(own).comfort == comfort_of(own)


@pytest.mark.parametrize("kind", list(COMFORT_BY_KIND))
def test_every_kind_has_a_comfort_band(kind: str) -> None:
    comfort = comfort_of(msgspec.convert({"id": "s", "name": "s", "kind": kind}, Station))
    assert 0.0 < comfort.low_rpm < comfort.high_rpm
    assert comfort.torque_max_nm > 0.0


def test_a_station_without_parts_is_refused_in_one_sentence() -> None:
    with pytest.raises(StationError, match=r'^Station "stand" \(P\) has no machine; describe it by parts first\.$'):
        chain_of(Station(id="P", name="stand"))
    with pytest.raises(StationError, match="has no gear"):
        chain_of(Station(id="P", name="stand", machine=MACHINE))


def test_an_impossible_machine_is_refused_with_its_station() -> None:
    broken = msgspec.structs.replace(STATION, machine=Machine(ke_v_s=0.0, ra_ohm=4.0))
    with pytest.raises(StationError, match=r"small crank.*above zero"):
        chain_of(broken)


def test_sinks_carry_limit_hold_and_least_current() -> None:
    load = sink_of_test_load(TestLoad(limit_a=2.0, hold_v=4.5, least_a=0.2))
    assert (load.limit_a, load.hold_v, load.least_a) == (2.0, 4.5, 0.2)
    device = sink_of_device(Device(id="d", name="d", input_hold_v=4.6, input_least_a=0.3))
    assert (device.limit_a, device.hold_v, device.least_a) == (float("inf"), 4.6, 0.3)
