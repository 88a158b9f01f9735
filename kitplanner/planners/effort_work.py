"""Human work of one charge at a station by parts, where a nearly full device asks for less and less."""

from __future__ import annotations

import numpy as np

from kitplanner.domain.battery import Acceptance, crossover_soc, minutes_to_charge, taper_rate_per_h
from kitplanner.domain.units import MINUTES_PER_HOUR
from kitplanner.planners.effort_minutes import Fill
from kitplanner.planners.effort_source import Source

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)


def human_wh(fill: Fill, source: Source) -> float:
    """Return the work at the crank or pedal for one direct charge of a row.

    W = P (s_x - s_0)/C + integral of P(w(t)) dt, w the plug watts the falling acceptance still takes

    Parameters
    ----------
    fill : Fill
        The charge
    source : Source
        A source with its work curve

    Returns
    -------
    float
        Work at M [Wh]
    """
    battery_wh, eta = fill.device.battery_wh or 0.0, fill.device.eta
    acceptance = Acceptance(fill.rate_per_h, fill.device.taper_end_per_h, fill.device.taper_tau_h)
    source_rate = eta * min(source.output_w, fill.input_w) / battery_wh
    rate = min(source_rate, fill.rate_per_h)
    span = fill.span
    s_x = float(np.clip(crossover_soc(rate, acceptance), span.soc_from, span.soc_to))
    steady_h = (s_x - span.soc_from) / rate
    taper_h = float(minutes_to_charge(s_x, span.soc_to, rate, acceptance)) / MINUTES_PER_HOUR
    steady_wh = _human_w(source, rate * battery_wh / eta) * steady_h
    # The rate falls exponentially in time, so even nodes in time meet it best.
    hours = 0.5 * taper_h * (_NODES + 1.0)
    falling = float(taper_rate_per_h(s_x, acceptance)) * np.exp(-hours / fill.device.taper_tau_h)
    plug_w = falling * battery_wh / eta
    human_w = np.array([_human_w(source, float(watts)) for watts in plug_w])
    return fill.span.charges * (steady_wh + 0.5 * taper_h * float(_WEIGHTS @ human_w))


def _human_w(source: Source, plug_w: float) -> float:
    """Return the human watts for plug watts, those of the solved point at full output."""
    assert source.work is not None
    if plug_w >= source.output_w * (1.0 - 1e-9):
        return source.human_w
    return min(float(source.work.human_at(np.array(plug_w))), source.human_w)
