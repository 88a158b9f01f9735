"""The independent judge of a rota: every hard rule, read again from the plan with code of its own.

The judge and its parts (`check_*.py`) import plan and domain only: it shares no grid, no limits and no windows with
the solver, so a slip there shows here. It works in minutes, not in slots, and also judges bouts moved by hand.

Rules by name: unknown, day, midnight; bout, rest, cap, ramp_up, heat, hours, minors, blocked, quiet, day_off, absent,
age, allowed; service, guard, station_hours, units, outage, overlap, daily; watcher, two_places; charging_times,
attended, outlets, tickets, twice, full, acceptance, energy.
"""

from __future__ import annotations

from kitplanner.plan.records import Plan, Rota
from kitplanner.planners.rota.check_charging import check_charging
from kitplanner.planners.rota.check_energy import check_energy
from kitplanner.planners.rota.check_finding import Violation, read_charging, read_turns
from kitplanner.planners.rota.check_people import check_one_place, check_people, check_watchers
from kitplanner.planners.rota.check_stations import check_stations

__all__ = ["Violation", "judge"]


def judge(plan: Plan, rota: Rota) -> tuple[Violation, ...]:
    """Return every hard rule that a rota breaks, by day and time.

    Parameters
    ----------
    plan : Plan
        A plan without errors.
    rota : Rota
        Bouts and charging table.

    Returns
    -------
    tuple of Violation
        Empty for a legal rota.

    Examples
    --------
    >>> from kitplanner.plan.records import Bout, Person, Station
    >>> plan = Plan(people=(Person(id="p", name="Oruun"),), stations=(Station(id="s", name="Crank", output_w=6.0),))
    >>> long = Bout(id="b", day=1, start="09:00", end="09:30", station="s", person="p")
    >>> [found.text for found in judge(plan, Rota(id="r", bouts=(long,)))]
    ['Oruun turns 30 min in one go on day 1 from 09:00 to 09:30; at most 20 min, 10 min too long.']
    """
    turns, unread_turns = read_turns(plan, rota)
    rows, unread_rows = read_charging(plan, rota)
    found = [
        *unread_turns,
        *unread_rows,
        *check_people(plan, turns),
        *check_watchers(plan, turns),
        *check_one_place(turns),
        *check_stations(plan, turns),
        *check_charging(plan, rows),
        *check_energy(plan, turns, rows),
    ]
    # Each broken rule is told once, in the order in which the days run.
    once = dict.fromkeys(found)
    return tuple(sorted(once, key=lambda each: (each.day, -1 if each.start_min is None else each.start_min)))
