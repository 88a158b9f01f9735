"""The chain from crank to plug: one place to import its parts and its questions from.

`Chain` holds machine, gear and stages; `operating_point` asks backwards (load to human watts),
`charging_point` forwards (human watts to charge current), `best_cadence` where in the comfort band to
turn, `meter_band` which volts to hold on a panel meter.
"""

from __future__ import annotations

from kitplanner.domain.cable import Cable
from kitplanner.domain.cadence import PacedWatts, best_cadence, best_fraction_cadence, meter_band, regulating_rpm
from kitplanner.domain.chain_model import Chain, Comfort
from kitplanner.domain.chain_solver import charging_point, operating_point
from kitplanner.domain.converter import SwitchingConverter
from kitplanner.domain.gear import GearBox
from kitplanner.domain.machine import DcMachine
from kitplanner.domain.operating_point import BINDINGS, FAILED_STATES, STATES, OperatingPoint
from kitplanner.domain.rectifier import Diode, SynchronousRectifier
from kitplanner.domain.regulator import LinearRegulator
from kitplanner.domain.stage import FixedLoss, Stage
from kitplanner.domain.usb_sink import UsbSink

__all__ = [
    "BINDINGS",
    "FAILED_STATES",
    "STATES",
    "Cable",
    "Chain",
    "Comfort",
    "DcMachine",
    "Diode",
    "FixedLoss",
    "GearBox",
    "LinearRegulator",
    "OperatingPoint",
    "PacedWatts",
    "Stage",
    "SwitchingConverter",
    "SynchronousRectifier",
    "UsbSink",
    "best_cadence",
    "best_fraction_cadence",
    "charging_point",
    "meter_band",
    "operating_point",
    "regulating_rpm",
]
