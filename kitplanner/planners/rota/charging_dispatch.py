"""The dispatch of charging, slot by slot: who is on charge, how much they get, and what stays unserved.

In each slot: energy made comes in, the neediest attended lines are given what the classes above them can spare, use is
taken from the device's own battery or, without one, from the stores.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from kitplanner.planners.rota.charging_ahead import Ahead
from kitplanner.planners.rota.charging_gifts import Gifts
from kitplanner.planners.rota.charging_inputs import ChargingInputs, FloatArray, IntArray
from kitplanner.planners.rota.charging_stores import Stores
from kitplanner.planners.rota.grid import BoolArray

# Why use stays unserved.
EMPTY, NOT_ATTENDED, OUTLETS, ACCEPTANCE, CONNECTOR = range(5)
# A charge begins when a fifth of the battery is missing, or when the coming day needs it; it ends when full.
BEGIN_MISSING_FRACTION, END_MISSING_FRACTION, LOOK_MIN = 0.2, 0.005, 1440
# Where energy would run over, a charge begins sooner, yet not for a trifle at every slot.
OVERFLOW_MISSING_FRACTION = 0.05
# Needs are told apart in steps of two hours, so that lines do not change places at every slot.
NEED_STEP_MIN = 120
_NOTHING_WH = 1e-9


_ASK_EVERY_SLOTS = 16


class ChargingStoppedError(RuntimeError):
    """Nobody waits for the charging table any more."""


@dataclass(frozen=True, slots=True)
class Reading:
    """What the stores really held at the start of a slot: cells' energy above the floor [Wh at B], None: not read."""

    slot: int
    level_wh: tuple[float | None, ...]


@dataclass(frozen=True, slots=True)
class Dispatch:
    """What happened in every slot; arrays of shape (devices, slots), levels with one more.

    Attributes
    ----------
    given_wh : ndarray
        Energy given to each line [Wh at O].
    units : ndarray of int
        Units of each line on charge or fed.
    unmet_wh : ndarray
        Use that stayed unserved [Wh at O].
    why : ndarray of int
        Reason for it.
    device_wh, store_wh : ndarray, shapes (devices, slots + 1) and (stores, slots + 1)
        Levels above the floor [Wh at D and O].
    wasted_wh : float
        Energy that found no room [Wh at S].
    """

    given_wh: FloatArray
    units: IntArray
    unmet_wh: FloatArray
    why: IntArray
    device_wh: FloatArray
    store_wh: FloatArray
    wasted_wh: float


def dispatch(
    inputs: ChargingInputs,
    *,
    is_shared: bool,
    reading: Reading | None = None,
    cancelled: Callable[[], bool] = lambda: False,
) -> Dispatch:
    """Return the dispatch of a plan's charging.

    Parameters
    ----------
    inputs : ChargingInputs
        The plan and its bouts as arrays.
    is_shared : bool
        True where all lines are cut alike, set anew each day; else better classes are served first.
    reading : Reading, optional
        Levels of stores read at a moment; they hold from there on.
    cancelled : callable
        Asked every few slots whether anybody waits still.

    Returns
    -------
    Dispatch
        Every slot.

    Raises
    ------
    ChargingStoppedError
        Nobody waits any more.
    """
    run = _Run(inputs, is_shared=is_shared)
    for slot in range(inputs.slots):
        if slot % _ASK_EVERY_SLOTS == 0 and cancelled():
            raise ChargingStoppedError
        if reading is not None and slot == reading.slot:
            run.read(reading)
        run.one_slot(slot)
    return run.done()


class _Run:
    """State of one dispatch."""

    def __init__(self, inputs: ChargingInputs, *, is_shared: bool) -> None:
        lines = inputs.lines
        shape = (len(lines.count), inputs.slots)
        self.inputs, self.lines = inputs, lines
        self.is_shared = is_shared
        self.ahead = Ahead(inputs)
        self.stores = Stores(inputs)
        self.battery = lines.has_battery
        self.reachable = lines.fits.any(axis=1) if len(inputs.start_wh) else np.ones(shape[0], dtype=bool)
        self.fits_all = lines.fits.all(axis=1)
        self.level = lines.start_wh.copy()
        self.kept = lines.floor_wh + lines.reserve_wh
        self.units_on = np.zeros(shape[0], dtype=np.int64)
        self.cause = np.where(self.battery, NOT_ATTENDED, EMPTY)
        self.cause[~self.reachable] = CONNECTOR
        self.accept = _Acceptance(inputs)
        self.given = np.zeros(shape)
        self.units = np.zeros(shape, dtype=np.int64)
        self.unmet = np.zeros(shape)
        self.why = np.zeros(shape, dtype=np.int64)
        self.device_wh = np.zeros((shape[0], shape[1] + 1))
        self.store_wh = np.zeros((len(inputs.start_wh), shape[1] + 1))

        self._note_levels(0)

    def read(self, reading: Reading) -> None:
        """Go on with what the stores really hold; cuts shared for the day are shared anew."""
        self.stores.read(reading.level_wh)
        self._note_levels(reading.slot)
        if self.is_shared:
            self.ahead.share_out(reading.slot, self.stores.outlet_wh(), self._headroom())

    def one_slot(self, slot: int) -> None:
        """Take in what arrives, give to those on charge, take what is used."""
        if self.is_shared and slot % self.inputs.per_day == 0:
            self.ahead.share_out(slot, self.stores.outlet_wh(), self._headroom())
        self.stores.fill(self.inputs.feeds, slot)
        self._serve(slot)
        self._use(slot)
        self.stores.close()
        self._note_levels(slot + 1)

    def done(self) -> Dispatch:
        """Return every slot."""
        return Dispatch(
            self.given, self.units, self.unmet, self.why, self.device_wh, self.store_wh, self.stores.wasted_wh
        )

    def _headroom(self) -> FloatArray:
        return np.asarray(np.maximum(0.0, self.level - self.kept))

    def _note_levels(self, edge: int) -> None:
        self.device_wh[:, edge] = self.level - self.lines.floor_wh
        self.store_wh[:, edge] = self.stores.outlet_each_wh()

    def _serve(self, slot: int) -> None:
        """Give energy to lines on charge and to lines without a battery that are in use."""
        open_ = self.lines.chargeable[:, slot] & self.reachable
        use = self.lines.use_wh[:, slot] * self.ahead.phi
        fed = open_ & ~self.battery & (use > 0.0)
        able = open_ & self.battery
        if not (fed.any() or able.any()):
            self.units_on[:] = 0
            return
        headroom = self._headroom()
        wanted = self.ahead.wanted(slot, headroom)
        gain = self.accept.gain_wh(self.level)
        room = np.maximum(0.0, self.lines.target_wh - self.level + use)
        on = able & self._begins(slot, room, wanted)
        deadline = self._deadline(slot, wanted)
        could_d = np.where(on, np.minimum(room, gain * self.lines.count), 0.0)
        wish = np.where(fed, use, could_d / self.lines.eta)
        gift = self._gifts(slot, wish, wanted, deadline)
        cause = np.where(could_d < room - _NOTHING_WH, ACCEPTANCE, NOT_ATTENDED)
        cause[gift < wish - _NOTHING_WH] = EMPTY
        units = self._plug_in(slot, gift * self.lines.eta * self.battery, gain, deadline)
        most = np.where(self.battery, units * gain / self.lines.eta, np.inf)
        cause[gift > most + _NOTHING_WH] = OUTLETS
        np.copyto(self.cause, cause, where=able & on)
        self._deliver(slot, np.minimum(gift, most), fed, units)

    def _begins(self, slot: int, room: FloatArray, wanted: FloatArray) -> BoolArray:
        """Return which lines go or stay on charge, if they may."""
        whole = self.lines.whole_wh
        soon = np.searchsorted(self.ahead.times_after(slot), slot + LOOK_MIN // self.inputs.slot_min)
        column = min(int(soon), wanted.shape[1] - 1)
        begins = (room >= BEGIN_MISSING_FRACTION * whole) | (wanted[:, column] > _NOTHING_WH)
        begins |= self.level < self.kept - _NOTHING_WH
        if self.stores.is_spilling():
            begins |= room >= OVERFLOW_MISSING_FRACTION * whole
        stays = (self.units_on > 0) & (room > END_MISSING_FRACTION * whole)
        return np.asarray((begins | stays) & (room > _NOTHING_WH))

    def _deadline(self, slot: int, wanted: FloatArray) -> IntArray:
        """Return how soon each line would go below its floor, in steps, the plan's end where never."""
        needs = wanted > _NOTHING_WH
        column = np.where(needs.any(axis=1), needs.argmax(axis=1), wanted.shape[1] - 1)
        wait = self.ahead.times_after(slot)[column] - slot
        return np.asarray(wait * self.inputs.slot_min // NEED_STEP_MIN)

    def _order(self, deadline: IntArray) -> IntArray:
        """Return the lines by need: soonest first, then by class, then who is on charge already."""
        low = self.level < self.kept - _NOTHING_WH
        return np.lexsort((self.units_on == 0, self.lines.rank, deadline, ~low))

    def _plug_in(self, slot: int, gift_d: FloatArray, gain: FloatArray, deadline: IntArray) -> IntArray:
        """Return how many units of each line find an outlet; units once plugged in stay so until their charge ends."""
        takes = (gift_d > _NOTHING_WH) & (gain > 0.0)
        asked = np.ceil(np.divide(gift_d, gain, out=np.zeros_like(gift_d), where=takes) - 1e-9)
        units = np.minimum(np.maximum(asked.astype(np.int64), self.units_on), self.lines.count) * takes
        order = self._order(deadline)
        before = np.cumsum(units[order]) - units[order]
        units[order] = np.clip(int(self.inputs.outlets[slot]) - before, 0, units[order])
        return units

    def _gifts(self, slot: int, wish: FloatArray, wanted: FloatArray, deadline: IntArray) -> FloatArray:
        """Return what each line is given, at O, so that no better class loses more than it must."""
        stored = self.stores.outlet_wh() + self.stores.direct_wh
        promised = self.ahead.promised(slot, self.level, self.kept)
        slack = self.ahead.slack(slot, stored, wanted, promised)
        total = float(wish.sum())
        if total <= stored and total <= float(slack.min(initial=np.inf)):
            return wish.copy()
        gifts = Gifts(stored, slack, wanted, promised, self.lines.rank)
        order = [int(line) for line in self._order(deadline) if wish[line] > 0.0]
        for line in order:
            if line in promised:
                gifts.give_promised(line, min(float(wish[line]), self.ahead.must_now(slot, promised[line], wish[line])))
        for line in sorted(order, key=lambda each: int(self.lines.rank[each])):
            gifts.give_needed(line, float(wish[line]))
        for line in order:
            gifts.give_beyond(line, float(wish[line]))
        return gifts.given

    def _deliver(self, slot: int, gift: FloatArray, fed: BoolArray, units: IntArray) -> None:
        """Draw what is given from the stores and put it into the lines."""
        together = self.fits_all | (gift <= 0.0)
        whole = float(gift[together].sum())
        given = self.stores.draw(whole) if whole > 0.0 else 0.0
        if given < whole:
            gift[together] *= given / whole
        for line in np.flatnonzero(~together):
            gift[line] = self.stores.draw(float(gift[line]), self.lines.fits[line])
        got = gift > _NOTHING_WH
        self.level += np.where(self.battery, gift * self.lines.eta, 0.0)
        self.units_on = np.where(got & self.battery, units, 0)
        self.given[:, slot] = np.where(got, gift, 0.0)
        self.units[:, slot] = np.where(got, np.where(fed, self.lines.count, self.units_on), 0)

    def _use(self, slot: int) -> None:
        """Take the slot's use from batteries; what neither battery nor store gives stays unserved."""
        use = self.lines.use_wh[:, slot]
        served = use * self.ahead.phi
        from_battery = np.minimum(served, self._headroom())
        short_d = np.where(self.battery, use - from_battery, use - self.given[:, slot])
        self.level -= np.where(self.battery, from_battery, 0.0)
        missed = np.where(short_d > _NOTHING_WH, short_d, 0.0) / self.lines.eta
        self.unmet[:, slot] = missed
        rationed = self.battery & (from_battery >= served - _NOTHING_WH)
        self.why[:, slot] = np.where(rationed & self.reachable, EMPTY, self.cause)


class _Acceptance:
    """How much one unit takes in a slot at its line's state of charge: steady, then falling, in closed form."""

    def __init__(self, inputs: ChargingInputs) -> None:
        lines = inputs.lines
        self._hours = inputs.slot_min / 60.0
        self._whole = np.where(lines.whole_wh > 0.0, lines.whole_wh, 1.0)
        self._unit = lines.whole_wh / np.maximum(lines.count, 1)
        self._rate = lines.rate_per_h
        self._end, self._tau = lines.end_per_h, lines.tau_h
        self._cross = np.minimum(1.0, 1.0 - self._tau * (self._rate - self._end))
        self._slower = np.maximum(self._rate, 1e-12)

    def gain_wh(self, level: FloatArray) -> FloatArray:
        """Return the energy one unit takes in a slot [Wh at D]."""
        soc = np.minimum(1.0, level / self._whole)
        steady_h = np.clip((self._cross - soc) / self._slower, 0.0, self._hours)
        falling = self._end + (1.0 - np.maximum(soc, self._cross)) / self._tau
        late = self._tau * falling * -np.expm1((steady_h - self._hours) / self._tau)
        return np.asarray(
            np.minimum(self._rate * steady_h + np.where(self._rate > 0.0, late, 0.0), 1.0 - soc) * self._unit
        )
