"""Hand edits of an adopted rota: move, lengthen, hand over, swap, watch, lock, add, remove and post turns.

Each returns an edit of the whole plan, so that one change is one step to undo. Nothing here judges: a turn may be put
where a rule forbids it, and the judge (`planners/rota/check.py`) says so at its place. A rota that hangs on the wall
stays what it is: the first change to it opens the next edition as a draft.
"""

from __future__ import annotations

from collections.abc import Callable

from msgspec import structs

from kitplanner.domain.units import clock, minutes_of_day
from kitplanner.plan.edits import Edit, EditError, get_value, new_id
from kitplanner.plan.records import Bout, ChargeSpell, Plan, Rota

DAY_MIN = 1440
_PLACE = ("rota", "bouts")


def bout_of(plan: Plan, bout_id: str) -> Bout:
    """Return a turn of the plan's rota.

    Raises
    ------
    EditError
        The plan has no rota, or the rota no such turn.
    """
    for bout in _rota(plan).bouts:
        if bout.id == bout_id:
            return bout
    raise EditError((*_PLACE, bout_id), "there is no such turn", "choose one of the rota")


def move_bout(bout_id: str, day: int, start_min: int) -> Edit:
    """Return the edit that moves a turn to another time; it keeps its length.

    Parameters
    ----------
    bout_id : str
        The turn.
    day : int
        Day of the plan, from 1.
    start_min : int
        New start [min] of that day.

    Examples
    --------
    >>> rota = Rota(id="r", bouts=(Bout(id="b", day=1, start="09:00", end="09:20", station="s", person="p"),))
    >>> moved = move_bout("b", 1, 600)(Plan(rota=rota)).rota
    >>> [(bout.start, bout.end) for bout in moved.bouts]
    [('10:00', '10:20')]
    """

    def change(plan: Plan, bout: Bout) -> Bout:
        length = int(minutes_of_day(bout.end) - minutes_of_day(bout.start))
        return _timed(plan, bout, day, start_min, start_min + length)

    return _changed(bout_id, change)


def resize_bout(bout_id: str, start_min: int, end_min: int) -> Edit:
    """Return the edit that gives a turn another start or end [min of its day]."""
    return _changed(bout_id, lambda plan, bout: _timed(plan, bout, bout.day, start_min, end_min))


def hand_over(bout_id: str, person_id: str) -> Edit:
    """Return the edit that gives a turn to another person; somebody who watched it no longer watches themselves."""

    def change(plan: Plan, bout: Bout) -> Bout:
        get_value(plan, ("people", person_id))
        watcher = None if bout.watcher == person_id else bout.watcher
        return structs.replace(bout, person=person_id, watcher=watcher)

    return _changed(bout_id, change)


def set_watcher(bout_id: str, person_id: str | None) -> Edit:
    """Return the edit that says who watches a turn, None for nobody."""

    def change(plan: Plan, bout: Bout) -> Bout:
        if person_id is not None:
            get_value(plan, ("people", person_id))
        return structs.replace(bout, watcher=person_id)

    return _changed(bout_id, change)


def place_bout(bout_id: str, station_id: str, unit: int) -> Edit:
    """Return the edit that puts a turn at another station or unit (from 1)."""

    def change(plan: Plan, bout: Bout) -> Bout:
        _require_unit(plan, station_id, unit)
        return structs.replace(bout, station=station_id, unit=unit)

    return _changed(bout_id, change)


def swap_people(first_id: str, second_id: str) -> Edit:
    """Return the edit that lets two people change their turns; times, places and watchers stay.

    Somebody who would then watch themselves watches no more.

    Raises
    ------
    EditError
        Both turns are the same or belong to the same person.
    """

    def edit(plan: Plan) -> Plan:
        first, second = bout_of(plan, first_id), bout_of(plan, second_id)
        if first.person == second.person:
            raise EditError((*_PLACE, first_id), "both turns are of the same person", "choose turns of two people")
        plan = hand_over(first_id, second.person)(plan)
        return hand_over(second_id, first.person)(plan)

    return edit


def lock_bout(bout_id: str, locked: bool) -> Edit:
    """Return the edit that locks a turn in its place or frees it; the wall shows no locks, so a posted rota stays."""

    def edit(plan: Plan) -> Plan:
        bout = bout_of(plan, bout_id)
        if bout.locked == locked:
            return plan
        return _with_bouts(plan, bout_id, structs.replace(bout, locked=locked), posted_stays=True)

    return edit


def remove_bout(bout_id: str) -> Edit:
    """Return the edit that takes a turn out of the rota."""

    def edit(plan: Plan) -> Plan:
        bout_of(plan, bout_id)
        return _with_bouts(plan, bout_id, None)

    return edit


def add_bout(bout: Bout) -> Edit:
    """Return the edit that adds a turn; a plan without a rota gets one.

    Raises
    ------
    EditError
        The turn's id is taken, or its day, times, people or station are not in the plan.
    """

    def edit(plan: Plan) -> Plan:
        if plan.rota is None:
            plan = structs.replace(plan, rota=Rota(id="rota", slot_min=plan.grid_min or 5, valid_until_day=plan.days))
        if any(other.id == bout.id for other in _rota(plan).bouts):
            raise EditError((*_PLACE, bout.id), "the id is already taken", "use a new id")
        return _with_bouts(plan, bout.id, _checked(plan, bout))

    return edit


def replace_bout(bout: Bout) -> Edit:
    """Return the edit that gives a turn of the same id all of another one's values."""
    return _changed(bout.id, lambda plan, _old: _checked(plan, bout))


def new_bout_id(plan: Plan) -> str:
    """Return an id no turn of the rota has."""
    return "b1" if plan.rota is None else new_id(plan, _PLACE)


def post_rota(valid_until_day: int) -> Edit:
    """Return the edit that posts the rota: the draft as it is, or a posted one once more under the next edition.

    Parameters
    ----------
    valid_until_day : int
        Last day of the plan for which it holds.
    """

    def edit(plan: Plan) -> Plan:
        rota = _rota(plan)
        if not 1 <= valid_until_day <= plan.days:
            raise EditError(
                ("rota", "valid_until_day"),
                f"day {valid_until_day} is not one of the plan's {plan.days} days",
                "choose one of them",
            )
        edition = rota.edition + 1 if rota.state == "posted" else rota.edition
        posted = structs.replace(rota, state="posted", edition=edition, valid_until_day=valid_until_day)
        return structs.replace(plan, rota=posted)

    return edit


def put_charging(spells: tuple[ChargeSpell, ...]) -> Edit:
    """Return the edit that puts another charging table beside the turns."""

    def edit(plan: Plan) -> Plan:
        rota = _rota(plan)
        if rota.charging == spells:
            return plan
        return structs.replace(plan, rota=structs.replace(_opened(rota), charging=spells))

    return edit


def _rota(plan: Plan) -> Rota:
    if plan.rota is None:
        raise EditError(("rota",), "the plan has no rota yet", "plan one and adopt it")
    return plan.rota


def _changed(bout_id: str, change: Callable[[Plan, Bout], Bout]) -> Edit:
    def edit(plan: Plan) -> Plan:
        before = bout_of(plan, bout_id)
        after = change(plan, before)
        return plan if after == before else _with_bouts(plan, bout_id, after)

    return edit


def _with_bouts(plan: Plan, bout_id: str, bout: Bout | None, *, posted_stays: bool = False) -> Plan:
    """Return the plan with one turn replaced, added or, with None, left out, by day and time."""
    rota = _rota(plan)
    others = [other for other in rota.bouts if other.id != bout_id]
    bouts = sorted([*others, bout] if bout is not None else others, key=_when)
    kept = rota if posted_stays else _opened(rota)
    return structs.replace(plan, rota=structs.replace(kept, bouts=tuple(bouts)))


def _when(bout: Bout) -> tuple[int, str, str, int, str]:
    return (bout.day, bout.start, bout.station, bout.unit, bout.id)


def _opened(rota: Rota) -> Rota:
    """Return a posted rota as the draft of its next edition; a draft as it is."""
    return structs.replace(rota, state="draft", edition=rota.edition + 1) if rota.state == "posted" else rota


def _timed(plan: Plan, bout: Bout, day: int, start_min: int, end_min: int) -> Bout:
    path = (*_PLACE, bout.id)
    if not 1 <= day <= plan.days:
        raise EditError(path, f"day {day} is not one of the plan's {plan.days} days", "stay within them")
    if not 0 <= start_min < end_min <= DAY_MIN:
        raise EditError(path, "a turn starts before it ends, between 00:00 and 24:00", "choose other times")
    return structs.replace(bout, day=day, start=clock(start_min), end=clock(end_min))


def _checked(plan: Plan, bout: Bout) -> Bout:
    """Return a turn if everything it names is in the plan."""
    get_value(plan, ("people", bout.person))
    if bout.watcher is not None:
        get_value(plan, ("people", bout.watcher))
    _require_unit(plan, bout.station, bout.unit)
    start, end = int(minutes_of_day(bout.start)), int(minutes_of_day(bout.end))
    return _timed(plan, bout, bout.day, start, end)


def _require_unit(plan: Plan, station_id: str, unit: int) -> None:
    station = get_value(plan, ("stations", station_id))
    if not 1 <= unit <= station.count:
        raise EditError(
            ("stations", station_id, "count"), f"there is no unit {unit} of {station.count}", "choose another unit"
        )
