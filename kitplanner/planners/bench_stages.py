"""The bench's table: gear, machine and the station's own stages, then the test load's charger and cell."""

from __future__ import annotations

import math
from types import MappingProxyType

import numpy as np

from kitplanner.domain.battery import charge_ceiling_rate_per_h
from kitplanner.domain.chain import OperatingPoint
from kitplanner.plan.records import TestLoad
from kitplanner.planners.results import BenchStage, FloatArray

# The three steps every chain has, in the words of the table.
_OWN_STEPS = MappingProxyType({0: "gear", 1: "friction and iron", 2: "copper and brush"})


def charges_cell(load: TestLoad) -> bool:
    """Tell whether the test load's cell may be charged at its temperature.

    Examples
    --------
    >>> [charges_cell(TestLoad(cell_degc=degc)) for degc in (20.0, -3.0, 60.0)]
    [True, False, False]
    """
    return float(charge_ceiling_rate_per_h(load.cell_degc)) > 0.0


def stored_w(point: OperatingPoint, load: TestLoad) -> FloatArray:
    """Return the watts that stay in the cell [W]; 0 where the current is too small or the cell too cold or hot.

    P = eta_charger eta_cell P_plug

    Parameters
    ----------
    point : OperatingPoint
        A solved chain
    load : TestLoad
        Charger and cell

    Returns
    -------
    array
        Watts into the cell, NaN where the point failed [W]
    """
    watts = point.plug_w * (load.charger_eta * load.cell_eta)
    takes = point.charges if charges_cell(load) else np.zeros_like(point.charges)
    return np.asarray(np.where(point.failed, np.nan, np.where(takes, watts, 0.0)), dtype=float)


def bench_stages(point: OperatingPoint, load: TestLoad) -> tuple[BenchStage, ...]:
    """Return the rows of the table for one point; where nothing is stored, what reaches the plug is the charger's loss.

    Parameters
    ----------
    point : OperatingPoint
        A solved chain with arrays of shape ()
    load : TestLoad
        Charger and cell

    Returns
    -------
    tuple of BenchStage
        Gear, friction and iron, copper and brush, the station's stages, charger, cell
    """
    rows = [
        BenchStage(
            name=_OWN_STEPS.get(place, name),
            in_w=known(point.stage_in_w[place]),
            out_w=known(point.stage_out_w[place]),
            in_v=known(point.stage_in_v[place]),
            in_a=known(point.stage_in_a[place]),
            out_v=known(point.stage_out_v[place]),
            out_a=known(point.stage_out_a[place]),
            loss_w=None if bool(point.failed) else known(point.stage_loss_w[place]),
        )
        for place, name in enumerate(point.stage_names)
    ]
    plug_w, cell_w = float(point.plug_w), float(stored_w(point, load))
    charged_w = plug_w * load.charger_eta if cell_w > 0.0 else cell_w
    rows.append(
        BenchStage(
            name="device charger",
            in_w=known(plug_w),
            out_w=known(charged_w),
            in_v=known(point.plug_v),
            in_a=known(point.plug_a),
            out_v=None,
            out_a=None,
            loss_w=known(plug_w - charged_w),
        )
    )
    rows.append(
        BenchStage(
            name="cell",
            in_w=known(charged_w),
            out_w=known(cell_w),
            in_v=None,
            in_a=None,
            out_v=None,
            out_a=None,
            loss_w=known(charged_w - cell_w),
        )
    )
    return tuple(rows)


def known(value: float | FloatArray) -> float | None:
    """Return a number, None for NaN."""
    number = float(value)
    return number if math.isfinite(number) else None
