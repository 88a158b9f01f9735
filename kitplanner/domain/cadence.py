"""At which cadence to turn, and which volts to hold on a panel meter.

The searches look at a whole row of cadences at once and then again, finer, around the best one; so they
need no slope and stand the kinks where a regulator enters dropout or another limit takes over.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from kitplanner.domain.chain_model import Chain, human_cost, regulating_stage
from kitplanner.domain.chain_solver import ANY_SINK, Question, charging_point, operating_point
from kitplanner.domain.converter import SwitchingConverter
from kitplanner.domain.hand_load import LEG_BEST_RPM, cadence_factor
from kitplanner.domain.machine import short_circuit_a
from kitplanner.domain.operating_point import BINDINGS, STATES, OperatingPoint
from kitplanner.domain.regulator import LinearRegulator
from kitplanner.domain.roots import BoolArray, FloatArray
from kitplanner.domain.units import rad_s_from_rpm
from kitplanner.domain.usb_sink import UsbSink

_COARSE = 25
_FINE = 9
_LEVELS = 4
# Halvings of the watts a chain can carry: to 0.006 %.
_HALVINGS = 14
# Delivered powers this near to each other are one; the lighter turning wins.
_TIE = 1e-9
# A state that is no fault where the device itself holds the voltage down to where it can just charge.
_FOLLOWS_CRANK = ("dropout",)

# Merit and human watts of rows of cadences: shape (..., k) in, two arrays of that shape out.
Merit = Callable[[FloatArray], tuple[FloatArray, FloatArray]]


@dataclass(frozen=True)
class PacedWatts:
    """Watts that people give at their best cadence, and what they lose away from it, see `cadence_factor`."""

    watts: Question
    best_rpm: Question = LEG_BEST_RPM
    loss: Question = 0.0


def best_cadence(
    chain: Chain,
    band_rpm: tuple[float, float],
    sink: UsbSink,
    *,
    human_w: Question | PacedWatts = math.inf,
    torque_max_nm: Question = math.inf,
    plug_w: Question = math.inf,
) -> OperatingPoint:
    """The cadence of the comfort band that brings most watts to the plug; among equals the lightest.

    Parameters
    ----------
    chain : Chain
        The chain.
    band_rpm : tuple of float
        Lowest and highest comfortable cadence [rpm].
    sink : UsbSink
        The device.
    human_w : float, array or PacedWatts
        What each person gives at the crank, alike at every cadence or best at one [W].
    torque_max_nm : float or array
        Greatest torque at the crank [N.m].
    plug_w : float or array
        What the device still accepts at its plug [W].

    Returns
    -------
    OperatingPoint
        The points at the cadences found, in the broadcast shape of persons and charge. Where nothing
        charges, the point that comes nearest to it, with its states.

    References
    ----------
    Row search derived here; the cadence is found to 1/6000 of the band.

    Examples
    --------
    >>> from kitplanner.domain.chain import Cable, Diode, DcMachine, GearBox
    >>> machine = DcMachine(0.045, 1.5, 0.0, 0.0035, 5e-6)
    >>> chain = Chain(machine, GearBox(40.0, 0.80, 0.08), (Diode(), SwitchingConverter(), Cable(0.2884)))
    >>> best = best_cadence(chain, (40.0, 80.0), UsbSink(limit_a=1.0), human_w=np.array([6.0, 20.0]))
    >>> [round(float(amps), 2) for amps in best.plug_a]
    [0.61, 1.0]
    """
    paced = human_w if isinstance(human_w, PacedWatts) else PacedWatts(human_w)
    given = (paced.watts, paced.best_rpm, paced.loss, torque_max_nm, plug_w)
    limits = [np.asarray(limit, np.float64) for limit in given]
    shape = np.broadcast_shapes(*(limit.shape for limit in limits))

    def point(rpm: FloatArray) -> OperatingPoint:
        extra = rpm.ndim - len(shape)
        watts, best_rpm, loss, torque, accepted = (
            np.broadcast_to(limit, shape).reshape(shape + (1,) * extra) for limit in limits
        )
        at_pace_w = watts * cadence_factor(rpm, best_rpm, loss) if loss.any() else watts
        return _backed_off(chain, sink, (rpm, at_pace_w, torque, accepted))

    def merit(rpm: FloatArray) -> tuple[FloatArray, FloatArray]:
        found = point(rpm)
        usable = found.charges & ~(found.flags["overtemp"] | found.flags["overvolt"])
        watts = np.where(found.failed, 0.0, found.plug_w)
        # Below zero, in order: failed, not usable but with some current at the plug.
        return (
            np.where(usable, watts, np.where(found.failed, -2.0, watts / (1.0 + np.abs(watts)) - 1.0)),
            np.where(found.failed, np.inf, found.human_w),
        )

    return point(_best_rpm(merit, band_rpm, shape))


def _backed_off(chain: Chain, sink: UsbSink, question: tuple[FloatArray, ...]) -> OperatingPoint:
    """Where the device would draw its source down, it takes less until the source holds, and so does the person.

    More watts at the crank than the chain can carry are not given: the greatest that it carries are found by
    halving. `question` holds cadence, human watts, torque and plug watts.
    """

    def ask(rpm: FloatArray, human_w: FloatArray, torque_nm: FloatArray, plug_w: FloatArray) -> OperatingPoint:
        return charging_point(chain, rpm, sink, human_w=human_w, torque_max_nm=torque_nm, plug_w=plug_w)

    found = ask(*question)
    heavy = _drawn_down(found)
    if not heavy.any():
        return found
    rpm, human_w, torque_nm, plug_w = np.broadcast_arrays(*question)
    at = (rpm[heavy], torque_nm[heavy], plug_w[heavy])
    p0, p1, _, _ = human_cost(chain, at[0])
    shaft_rad_s = np.asarray(rad_s_from_rpm(at[0]), np.float64) * chain.gear.ratio
    low, high = p0, np.minimum(human_w[heavy], p0 + p1 * np.asarray(short_circuit_a(chain.machine, shaft_rad_s)))
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        too_much = _drawn_down(ask(at[0], middle, *at[1:]))
        low, high = np.where(too_much, low, middle), np.where(too_much, middle, high)
    eases = heavy.copy()
    eases[heavy] = ~ask(at[0], low, *at[1:]).failed
    eased_w = np.array(human_w)
    eased_w[heavy] = low
    eased = ask(rpm, np.where(eases, eased_w, human_w), torque_nm, plug_w)
    return replace(eased, binding=np.where(eases, BINDINGS.index("nothing"), eased.binding))


def _drawn_down(point: OperatingPoint) -> BoolArray:
    return point.flags["collapse"] | point.flags["vin_low"]


def best_fraction_cadence(
    chain: Chain,
    band_rpm: tuple[float, float],
    sink: UsbSink,
    *,
    amps: float | None = None,
    human_w: float = math.inf,
) -> OperatingPoint:
    """The cadence of the comfort band with the greatest share of the human watts at the plug and no failure state.

    Where every cadence has a state, those in which only a linear regulator follows the crank while the device
    holds its input voltage come next, then those that charge at all, then the rest.

    Parameters
    ----------
    chain : Chain
        The chain.
    band_rpm : tuple of float
        Lowest and highest comfortable cadence [rpm].
    sink : UsbSink
        The device.
    amps : float or None
        Fixed current at the plug; None lets the device hold its input voltage [A].
    human_w : float
        What the person gives at the crank, for a device that holds its voltage [W].

    Returns
    -------
    OperatingPoint
        The point at the cadence found, arrays of shape ().

    References
    ----------
    Row search derived here. The losses of charger and cell are fixed shares, so the same cadence is best for them.

    Examples
    --------
    >>> from kitplanner.domain.chain import Cable, Diode, DcMachine, GearBox
    >>> machine = DcMachine(0.045, 1.5, 0.0, 0.0035, 5e-6)
    >>> chain = Chain(machine, GearBox(40.0, 0.80, 0.08), (Diode(), SwitchingConverter(), Cable(0.2884)))
    >>> best = best_fraction_cadence(chain, (40.0, 80.0), UsbSink(), amps=1.0)
    >>> round(float(best.crank_to_plug_fraction), 2), best.states_at()
    (0.51, ())
    """

    def point(rpm: FloatArray) -> OperatingPoint:
        if amps is None:
            return charging_point(chain, rpm, sink, human_w=human_w)
        return operating_point(chain, rpm, amps, sink)

    def merit(rpm: FloatArray) -> tuple[FloatArray, FloatArray]:
        found = point(rpm)
        spoilt = np.logical_or.reduce([found.flags[state] for state in STATES if state not in _FOLLOWS_CRANK])
        rank = np.where(found.has_state, 0.0, 1.0) + np.where(spoilt, 0.0, 1.0) + np.where(found.charges, 1.0, 0.0)
        share = np.where(found.failed, -1.0, found.crank_to_plug_fraction)
        return 2.0 * rank + share, np.where(found.failed, np.inf, found.human_w)

    return point(_best_rpm(merit, band_rpm, ()))


def _best_rpm(merit: Merit, band_rpm: tuple[float, float], shape: tuple[int, ...]) -> FloatArray:
    """Cadence of greatest merit for every point of a shape, by ever finer rows."""
    low = np.full(shape, float(band_rpm[0]))
    high = np.full(shape, float(band_rpm[1]))
    best = low
    for level in range(_LEVELS + 1):
        row = np.linspace(0.0, 1.0, _COARSE if level == 0 else _FINE)
        rpm = low[..., None] + (high - low)[..., None] * row
        merits, human_w = merit(rpm)
        top = merits.max(axis=-1, keepdims=True)
        ties = merits >= top - _TIE * np.abs(top)
        at = np.argmin(np.where(ties, human_w, np.inf), axis=-1)[..., None]
        best = np.take_along_axis(rpm, at, -1)[..., 0]
        low = np.take_along_axis(rpm, np.maximum(at - 1, 0), -1)[..., 0]
        high = np.take_along_axis(rpm, np.minimum(at + 1, row.size - 1), -1)[..., 0]
    return best


def regulating_rpm(chain: Chain, amps: float, top_rpm: float, sink: UsbSink = ANY_SINK) -> float:
    """Lowest cadence at which every regulating stage holds its output at a plug current; NaN if none up to the top.

    Parameters
    ----------
    chain : Chain
        The chain.
    amps : float
        Current at the plug [A].
    top_rpm : float
        Highest cadence looked at [rpm].
    sink : UsbSink
        Held voltage of the device, for the states only.

    Returns
    -------
    float
        Cadence [rpm].

    Examples
    --------
    >>> from kitplanner.domain.chain import Cable, Diode, DcMachine, GearBox
    >>> machine = DcMachine(0.0215, 4.0, 0.0, 0.0010, 1.9e-6)
    >>> chain = Chain(machine, GearBox(30.0, 0.75, 0.02), (Diode(2), LinearRegulator(), Cable(0.3329)))
    >>> round(regulating_rpm(chain, 0.3, 300.0), 1)
    128.7
    """
    low, high = 0.0, top_rpm
    for _ in range(8):
        row = np.linspace(low, high, 65)
        point = operating_point(chain, row, amps, sink)
        holds = np.flatnonzero(~(point.failed | point.flags["dropout"]))
        if not holds.size:
            return math.nan
        first = int(holds[0])
        low, high = float(row[max(first - 1, 0)]), float(row[first])
    return high


def meter_band(
    chain: Chain, amps: float, band_rpm: tuple[float, float], *, air_degc: float | None = None
) -> tuple[float, float]:
    """Volts to hold on a panel meter before the first regulating stage, at a plug current.

    The lower end is the least voltage that holds the stage's output; the upper end the least of: the junction
    at 125 degC, the part's rating, the volts at the highest comfortable cadence.

    Parameters
    ----------
    chain : Chain
        The chain.
    amps : float
        Current at the plug [A].
    band_rpm : tuple of float
        Lowest and highest comfortable cadence [rpm].
    air_degc : float or None
        Air temperature instead of the stage's own [degC].

    Returns
    -------
    low_v, high_v : float
        Ends of the band; NaN where there is none [V].

    References
    ----------
    LM317 data sheet: dropout, junction limit and rating.

    Examples
    --------
    >>> from kitplanner.domain.chain import Cable, Diode, DcMachine, GearBox
    >>> machine = DcMachine(0.0215, 4.0, 0.0, 0.0010, 1.9e-6)
    >>> chain = Chain(machine, GearBox(30.0, 0.75, 0.02), (Diode(2), LinearRegulator(), Cable(0.3329)))
    >>> [round(volts, 2) for volts in meter_band(chain, 0.3, (80.0, 150.0))]
    [6.73, 8.16]
    """
    index = regulating_stage(chain)
    if index is None:
        return math.nan, math.nan
    stage = chain.stages[index]
    top_v = float(operating_point(chain, band_rpm[1], amps).regulator_in_v)
    if isinstance(stage, SwitchingConverter):
        return stage.least_in_v, min(stage.rating_v, top_v) if math.isfinite(top_v) else math.nan
    assert isinstance(stage, LinearRegulator)
    in_a = _regulated_in_a(chain, amps, band_rpm[1], index)
    limits = [top_v, stage.rating_v, _hottest_v(stage, in_a, air_degc)]
    return float(stage.least_in_v(in_a)), min(limits) if np.isfinite(limits).all() else math.nan


def _hottest_v(stage: LinearRegulator, in_a: float, air_degc: float | None) -> float:
    shift_k = 0.0 if air_degc is None else stage.air_degc - air_degc
    return float(stage.hottest_in_v(in_a)) + shift_k / (stage.theta_c_per_w * in_a)


def _regulated_in_a(chain: Chain, amps: float, top_rpm: float, index: int) -> float:
    """Current into a linear regulator in regulation: it does not depend on its input, so any fast cadence tells it."""
    rpm: npt.NDArray[np.float64] = top_rpm * 2.0 ** np.arange(0.0, 8.0)
    point = operating_point(chain, rpm, amps)
    holds = np.flatnonzero(~(point.failed | point.flags["dropout"]))
    return float(point.stage_in_a[index + 3][holds[0]]) if holds.size else math.nan
