"""Questions about a chain, each answered by one bracketed root in the generator's current.

The current starts at nothing and is walked outwards. On the way every limit that the question names is
watched: plug amps, the device's held input voltage, the charge it still accepts, the person's watts, the
torque. The first to be reached binds; inside that step a bracketed root finds it. The walk ends where the
plug current starts to fall: behind that peak lies the second, unstable solution of a constant-power load.
If nothing binds before the peak the load is more than the chain can give at that cadence: collapse.
"""

from __future__ import annotations

import dataclasses
import math
from dataclasses import dataclass
from typing import TypeVar

import numpy as np
import numpy.typing as npt

from kitplanner.domain.chain_model import Chain, human_cost, march, source_v
from kitplanner.domain.machine import short_circuit_a
from kitplanner.domain.operating_point import BINDINGS, OperatingPoint, Solution, describe, entry_suspects
from kitplanner.domain.roots import BoolArray, FloatArray, IntArray, bracketed_roots, peaks
from kitplanner.domain.units import rad_s_from_rpm
from kitplanner.domain.usb_sink import ENTRY_TEST_A, ENTRY_TEST_V, UsbSink

Question = npt.ArrayLike
_STEPS = 10
# Currents of the walk as shares of the short-circuit current.
_PACE = (np.arange(_STEPS + 1) / _STEPS) ** 2
# Share of the short-circuit current in front of which most limits are met; the peak lies near a half.
_NEAR = 0.25
# Points per batch, so that its arrays stay in the processor's second-level cache.
_BATCH = 8192
_BEHIND_PEAK = 1e-7
_ROUNDING = 1e-9
_CURRENT, _HOLD, _ACCEPTANCE, _HUMAN, _TORQUE, _NOTHING = range(len(BINDINGS))
ANY_SINK = UsbSink()
_Scalar = TypeVar("_Scalar", bound=np.generic)


@dataclass(frozen=True)
class _Limits:
    """What bounds the current at each point, arrays (n,); None where the question has no such limit.

    `cap_a` is the generator current at which watts or torque of the person run out.
    """

    net_v: FloatArray
    top_a: FloatArray
    hold_v: FloatArray
    plug_a: FloatArray | None
    plug_w: FloatArray | None
    cap_a: FloatArray | None

    def take(self, points: IntArray | None) -> _Limits:
        """The same limits for some of the points."""
        if points is None:
            return self
        return _Limits(
            self.net_v[points],
            self.top_a[points],
            self.hold_v[points],
            None if self.plug_a is None else self.plug_a[points],
            None if self.plug_w is None else self.plug_w[points],
            None if self.cap_a is None else self.cap_a[points],
        )

    def terms(self, plug_v: FloatArray, plug_a: FloatArray, current_a: FloatArray) -> dict[int, FloatArray]:
        """By how much each limit is exceeded, each in its own unit; negative while there is room."""
        terms = {_HOLD: self.hold_v - plug_v}
        if self.plug_a is not None:
            terms[_CURRENT] = plug_a - self.plug_a
        if self.plug_w is not None:
            terms[_ACCEPTANCE] = plug_v * plug_a - self.plug_w
        if self.cap_a is not None:
            terms[_HUMAN] = current_a - self.cap_a
        return terms


@dataclass(frozen=True)
class _Walk:
    """Outcome of the walk per point: a bracket of the first limit, or the bracket of the peak."""

    low: FloatArray
    high: FloatArray
    f_low: FloatArray
    f_high: FloatArray
    at_once: BoolArray
    fallen: BoolArray


def operating_point(chain: Chain, rpm: Question, amps: Question, sink: UsbSink = ANY_SINK) -> OperatingPoint:
    """Backwards: the effort that a fixed plug current takes at a cadence.

    Parameters
    ----------
    chain : Chain
        The chain.
    rpm : float or array
        Cadence of the crank [rpm].
    amps : float or array
        Current at the device's plug [A].
    sink : UsbSink
        Held voltage and least current that the states are tested against.

    Returns
    -------
    OperatingPoint
        All numbers and states, in the broadcast shape of the arguments.

    References
    ----------
    Stage laws in the modules of the stages.

    Examples
    --------
    >>> from kitplanner.domain.chain import Cable, Diode, DcMachine, GearBox, SwitchingConverter
    >>> machine = DcMachine(0.045, 1.5, 0.0, 0.0035, 5e-6)
    >>> chain = Chain(machine, GearBox(40.0, 0.80, 0.08), (Diode(), SwitchingConverter(), Cable(0.28842)))
    >>> round(float(operating_point(chain, 60.0, 1.0).human_w), 3)
    9.487
    """
    nothing = np.float64(math.inf)
    return _answer(
        chain, (rpm, amps, nothing, nothing, nothing), dataclasses.replace(sink, limit_a=math.inf), held=False
    )


def charging_point(
    chain: Chain,
    rpm: Question,
    sink: UsbSink,
    *,
    human_w: Question = math.inf,
    torque_max_nm: Question = math.inf,
    plug_w: Question = math.inf,
) -> OperatingPoint:
    """Forwards: the charge current that a person's watts give to a device that holds its input voltage.

    Parameters
    ----------
    chain : Chain
        The chain.
    rpm : float or array
        Cadence of the crank [rpm].
    sink : UsbSink
        The device: greatest current, held voltage, least current.
    human_w : float or array
        What the person gives at the crank [W].
    torque_max_nm : float or array
        Greatest torque at the crank [N.m].
    plug_w : float or array
        What the device still accepts at its plug [W].

    Returns
    -------
    OperatingPoint
        All numbers and states, in the broadcast shape of the arguments; `binding` names what limits.

    References
    ----------
    Stage laws in the modules of the stages; sinks that hold their input voltage: data sheets of charger parts.

    Examples
    --------
    >>> from kitplanner.domain.chain import Cable, Diode, DcMachine, GearBox, LinearRegulator
    >>> machine = DcMachine(0.0215, 4.0, 0.0, 0.0010, 1.9e-6)
    >>> chain = Chain(machine, GearBox(30.0, 0.75, 0.02), (Diode(2), LinearRegulator(), Cable(0.3329)))
    >>> point = charging_point(chain, 120.0, UsbSink(limit_a=1.0))
    >>> round(float(point.plug_a), 4), point.binding_at()
    (0.2867, 'hold')
    """
    return _answer(chain, (rpm, sink.limit_a, human_w, torque_max_nm, plug_w), sink, held=True)


def _answer(chain: Chain, question: tuple[Question, ...], sink: UsbSink, *, held: bool) -> OperatingPoint:
    """Broadcast the question, solve it batch by batch, describe the points and give them their shape back."""
    hold = sink.hold_v if held else 0.0
    arrays = [np.asarray(value, np.float64) for value in (*question, hold, sink.hold_v, sink.least_a)]
    shape = np.broadcast_shapes(*(array.shape for array in arrays))
    flat = [np.broadcast_to(array, shape).ravel() for array in arrays]
    bounded = [bool(np.isfinite(array).any()) for array in arrays]
    count = flat[0].size
    parts = [
        _solve(chain, [values[start : start + _BATCH] for values in flat], bounded, held=held)
        for start in range(0, max(count, 1), _BATCH)
    ]
    joined = Solution(
        rpm=np.broadcast_to(arrays[0], shape),
        current_a=_joined([part.current_a for part in parts], shape),
        binding=_joined([part.binding for part in parts], shape),
        collapsed=_joined([part.collapsed for part in parts], shape),
        no_output=_joined([part.no_output for part in parts], shape),
        fails_entry=_joined([part.fails_entry for part in parts], shape),
    )
    return describe(chain, joined, UsbSink(sink.limit_a, arrays[6], arrays[7]))


def _joined(parts: list[npt.NDArray[_Scalar]], shape: tuple[int, ...]) -> npt.NDArray[_Scalar]:
    return np.concatenate(parts).reshape(shape)


def _solve(chain: Chain, flat: list[FloatArray], bounded: list[bool], *, held: bool) -> Solution:
    """Generator currents of one batch."""
    rpm = flat[0]
    limits, torque_first = _limits_of(chain, flat, bounded)
    net_v, cap_a = limits.net_v, limits.cap_a
    current, collapsed = _first_limit(chain, limits)
    plug_v, plug_a = march(chain, net_v, current)
    terms = limits.terms(plug_v, plug_a, current)
    keys = np.array(list(terms))
    binding = keys[np.argmax(np.stack(list(terms.values())), axis=0)]
    binding = np.where((binding == _HUMAN) & torque_first, _TORQUE, binding)

    unfed = (plug_a < 0.0) & ~collapsed & (np.abs(plug_a) > 1e-12 * np.maximum(np.abs(current), 1e-3))
    dead = net_v <= 0.0
    idle = np.flatnonzero(unfed & ~dead)
    if idle.size:
        current, collapsed = current.copy(), collapsed.copy()
        current[idle], collapsed[idle] = _first_limit(chain, _idle_limits(limits.take(idle)))
        plug_v, plug_a = march(chain, net_v, current)
    if cap_a is not None:
        # The person cannot even turn the empty station at this cadence.
        dead |= (current > cap_a + _ROUNDING * np.abs(cap_a)) & ~collapsed
    # No volts are left, or the stages' standing draw alone is more than the chain carries.
    dead |= ((plug_v <= 0.0) | (plug_a < -_ROUNDING)) & ~collapsed
    if not held:
        dead |= (binding == _HOLD) & ~collapsed
    binding = np.where(collapsed | dead, _NOTHING, binding)
    fails = _fails_entry(chain, limits, plug_v, plug_a) & ~(dead | collapsed)
    return Solution(rpm, current, binding.astype(np.intp), collapsed & ~dead, dead, fails)


def _limits_of(chain: Chain, flat: list[FloatArray], bounded: list[bool]) -> tuple[_Limits, BoolArray]:
    """Limits of one batch, and where the torque runs out before the watts."""
    rpm, amps, human_w, torque_nm, plug_w, hold_v = flat[:6]
    shaft_rad_s = np.asarray(rad_s_from_rpm(rpm)) * chain.gear.ratio
    cap_a = None
    torque_first: BoolArray = np.zeros(rpm.shape, np.bool_)
    if bounded[2] or bounded[3]:
        p0, p1, t1, t0 = human_cost(chain, rpm)
        watts_cap_a = (human_w - p0) / np.maximum(p1, 1e-300)
        torque_cap_a = (torque_nm - t0) / t1
        torque_first = torque_cap_a <= watts_cap_a
        cap_a = _finite(np.minimum(watts_cap_a, torque_cap_a))
    limits = _Limits(
        source_v(chain, rpm),
        np.asarray(short_circuit_a(chain.machine, shaft_rad_s), np.float64),
        hold_v,
        _finite(amps) if bounded[1] else None,
        _finite(plug_w) if bounded[4] else None,
        cap_a,
    )
    return limits, torque_first


def _finite(values: FloatArray) -> FloatArray:
    """The same limits with infinity as a number too large to bind."""
    return np.minimum(values, 1e300)


def _idle_limits(limits: _Limits) -> _Limits:
    """Limits of a device that takes nothing: only the standing draw of the stages is fed."""
    zero = np.zeros_like(limits.net_v)
    return _Limits(limits.net_v, limits.top_a, zero, zero, None, None)


def _fails_entry(chain: Chain, limits: _Limits, plug_v: FloatArray, plug_a: FloatArray) -> BoolArray:
    """Where the device sees less than 3.8 V with 30 mA drawn and ignores the source."""
    fails: BoolArray = np.zeros(plug_v.shape, np.bool_)
    suspects = np.flatnonzero(entry_suspects(plug_v))
    if not suspects.size:
        return fails
    some = limits.take(suspects)
    zero = np.zeros_like(some.net_v)
    current, collapsed = _first_limit(chain, _Limits(some.net_v, some.top_a, zero, zero + ENTRY_TEST_A, None, None))
    test_v, _ = march(chain, some.net_v, current)
    # A smaller current than that of the test was met with too few volts already.
    fails[suspects] = (test_v < ENTRY_TEST_V) | collapsed | (plug_a[suspects] <= ENTRY_TEST_A)
    return fails


def _first_limit(chain: Chain, limits: _Limits) -> tuple[FloatArray, BoolArray]:
    """Generator current at which the first limit is met; that of the peak where none is."""

    def excess(current_a: FloatArray, points: IntArray | None) -> FloatArray:
        some = limits.take(points)
        return _worst(some.terms(*march(chain, some.net_v, current_a), current_a))

    # A person's limit may be met behind the peak, where the plug's have been met twice: only the walk sees that.
    walk = _walk(chain, limits) if chain.has_converter and limits.cap_a is not None else _near_or_walk(chain, limits)
    low, high, f_low, f_high = walk.low, walk.high, walk.f_low, walk.f_high
    collapsed = walk.fallen.copy()
    fallen = np.flatnonzero(walk.fallen)
    peak = np.zeros_like(low)
    if fallen.size:
        peak[fallen] = _peak(chain, limits.take(fallen), low[fallen], high[fallen])
        f_peak = excess(peak[fallen], fallen)
        collapsed[fallen] = f_peak < 0.0
        high[fallen], f_high[fallen] = peak[fallen], f_peak
    unsettled = ~(collapsed | walk.at_once)
    current = np.where(collapsed, high, low)
    pending: IntArray | None = None if unsettled.all() else np.flatnonzero(unsettled)
    if pending is None:
        current = bracketed_roots(excess, low, high, f_low, f_high)
    elif pending.size:
        current[pending] = bracketed_roots(
            lambda x, at: excess(x, pending if at is None else pending[at]),
            low[pending],
            high[pending],
            f_low[pending],
            f_high[pending],
        )
    # A limit of the plug is met upwards only; one of the person may be met behind the peak too.
    if chain.has_converter and limits.cap_a is not None:
        behind = unsettled & ~walk.fallen & _behind_peak(chain, limits, current)
        if behind.any():
            some = np.flatnonzero(behind)
            current[some] = _peak(chain, limits.take(some), low[some], high[some])
            collapsed |= behind
    return current, collapsed


def _worst(terms: dict[int, FloatArray]) -> FloatArray:
    worst: FloatArray | None = None
    for term in terms.values():
        worst = term if worst is None else np.maximum(worst, term)
    assert worst is not None
    return worst


def _near_or_walk(chain: Chain, limits: _Limits) -> _Walk:
    """Take one long step, and walk only for the points that have met no limit by then.

    Without a person's limit behind a converter the excess rises to one peak and falls: where it is not negative
    after the step, it has changed its sign just once on the way.
    """
    zero = np.zeros_like(limits.top_a)
    near = _NEAR * limits.top_a
    f_zero = _worst(limits.terms(*march(chain, limits.net_v, zero), zero))
    f_near = _worst(limits.terms(*march(chain, limits.net_v, near), near))
    at_once: BoolArray = f_zero >= 0.0
    found = _Walk(zero, near, f_zero, f_near, at_once, np.zeros(zero.shape, np.bool_))
    rest = np.flatnonzero(~(at_once | (f_near >= 0.0)))
    if rest.size:
        far = _walk(chain, limits.take(rest))
        for field in dataclasses.fields(_Walk):
            getattr(found, field.name)[rest] = getattr(far, field.name)
    return found


def _walk(chain: Chain, limits: _Limits) -> _Walk:
    """Walk the current outwards in growing steps until every point has met a limit or passed its peak."""
    top = limits.top_a
    x = np.zeros_like(top)
    plug_v, plug_a = march(chain, limits.net_v, x)
    excesses = [_worst(limits.terms(plug_v, plug_a, x))]
    at_once: BoolArray = excesses[0] >= 0.0
    is_open = ~at_once
    fallen: BoolArray = np.zeros(top.shape, np.bool_)
    ended_at: IntArray = np.zeros(top.shape, np.intp)
    for step in range(1, _STEPS + 1):
        if not is_open.any():
            break
        last_a = plug_a
        x = top * _PACE[step]
        plug_v, plug_a = march(chain, limits.net_v, x)
        excess = _worst(limits.terms(plug_v, plug_a, x))
        excesses.append(excess)
        falls = is_open & (plug_a < last_a)
        ends = falls | (is_open & (excess >= 0.0))
        fallen |= falls
        np.copyto(ended_at, step, where=ends)
        is_open &= ~ends
    # A peak lies up to two steps back. What is still open has met neither limit nor peak: the short circuit ends it.
    began_at = np.maximum(ended_at - np.where(fallen, 2, 1), 0)
    table, points = np.stack(excesses), np.arange(top.size)
    low, high = top * _PACE[began_at], top * _PACE[ended_at]
    return _Walk(
        np.where(is_open, top, low),
        np.where(is_open, top, high),
        table[began_at, points],
        table[ended_at, points],
        at_once | is_open,
        fallen,
    )


def _peak(chain: Chain, limits: _Limits, low: FloatArray, high: FloatArray) -> FloatArray:
    return peaks(lambda x: march(chain, limits.net_v, x)[1], low, high)


def _behind_peak(chain: Chain, limits: _Limits, current_a: FloatArray) -> BoolArray:
    """Whether a little less generator current would give more plug current."""
    _, here = march(chain, limits.net_v, current_a)
    _, before = march(chain, limits.net_v, current_a * (1.0 - _BEHIND_PEAK))
    return before > here + 1e-14 * np.abs(here)
