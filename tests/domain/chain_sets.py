"""Three invented sets of parts that tests and benchmarks share: a small crank, a larger crank, a pedal stand."""

from __future__ import annotations

from kitplanner.domain.cable import awg_area_mm2, conductor_ohm_per_m, loop_ohm
from kitplanner.domain.chain import (
    Cable,
    Chain,
    Comfort,
    DcMachine,
    Diode,
    GearBox,
    LinearRegulator,
    SwitchingConverter,
)


def _cable(awg: int, length_m: float) -> Cable:
    return Cable(loop_ohm(conductor_ohm_per_m(awg_area_mm2(awg)), length_m))


SMALL = DcMachine(0.0215, 4.0, 0.0, 0.0010, 1.9e-6)
SMALL_GEAR = GearBox(30.0, 0.75, 0.02)
LARGE = DcMachine(0.045, 1.5, 0.0, 0.0035, 5e-6)
PEDAL = DcMachine(0.072, 0.35, 0.6, 0.05, 5e-5)
PEDAL_GEAR = GearBox(42.0, 0.85, 0.30)
POWER_DIODE = Diode(1, 1e-5, 1.05, 0.02)
PEDAL_5V = SwitchingConverter(5.15, 0.05, 0.003, 0.10, 0.008, 0.03, 0.5, 7.0)
PEDAL_12V = SwitchingConverter(13.8, 0.05, 0.003, 0.10, 0.008, 0.03, 1.0, 10.0)

A = Chain(SMALL, SMALL_GEAR, (Diode(2), LinearRegulator(), _cable(28, 0.5)), Comfort(80.0, 150.0, 0.70))
A_BUCK = Chain(SMALL, SMALL_GEAR, (Diode(), SwitchingConverter(), _cable(28, 0.5)), Comfort(80.0, 150.0, 0.70))
B = Chain(LARGE, GearBox(40.0, 0.80, 0.08), (Diode(), SwitchingConverter(), _cable(24, 1.0)), Comfort(40.0, 80.0, 4.0))
C_5V = Chain(PEDAL, PEDAL_GEAR, (POWER_DIODE, PEDAL_5V, _cable(20, 1.0)), Comfort(45.0, 80.0, 16.0))
C_12V = Chain(PEDAL, PEDAL_GEAR, (POWER_DIODE, PEDAL_12V, Cable(0.06)), Comfort(45.0, 80.0, 16.0))
