"""Watts each person gets out of each station: measured, by label, or solved from its parts.

A station described by its parts is solved with a store's charger on its socket, at the cadence in the comfort
band that delivers most. Levels: M at the crank, S at the station's socket.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from kitplanner.plan.records import Person, Plan, Station
from kitplanner.planners.people import allowed_stations, person_limits, person_output
from kitplanner.planners.results import FloatArray

# The one to whom station output refers: 40 years, usual effort, no limit stated.
REFERENCE_ADULT = Person(id="", name="Adult average", age=40)


def output_table(plan: Plan) -> tuple[FloatArray, FloatArray]:
    """Return the watts of each person at each station; 0 where somebody may not or does not turn.

    Parameters
    ----------
    plan : Plan
        The plan

    Returns
    -------
    two arrays, shape (people, stations)
        Power at S and the power at M it takes [W]
    """
    output_w = np.zeros((len(plan.people), len(plan.stations)))
    human_w = np.zeros_like(output_w)
    rows_at: dict[str, list[int]] = {station.id: [] for station in plan.stations}
    for row, person in enumerate(plan.people):
        if person_limits(plan, person).cap_min > 0:
            for station in allowed_stations(plan, person):
                rows_at[station.id].append(row)
    for column, station in enumerate(plan.stations):
        rows = rows_at[station.id]
        if rows and station.guarded:
            found = station_outputs(plan, station, [plan.people[row] for row in rows])
            output_w[rows, column], human_w[rows, column] = found
    return output_w, human_w


def station_outputs(plan: Plan, station: Station, people: Sequence[Person]) -> tuple[FloatArray, FloatArray]:
    """Return the watts of several people at one station.

    Parameters
    ----------
    plan : Plan
        The plan
    station : Station
        The station
    people : sequence of Person
        Who turns

    Returns
    -------
    two arrays, shape (people,)
        Power at S and at M [W]
    """
    outputs = [person_output(plan, person, station) for person in people]
    if station.described_by == "parts":
        # The chain loads late: no other station needs it, and the window's first picture waits for the balance.
        from kitplanner.planners.parts_output import solved_outputs

        return solved_outputs(station, outputs)
    socket_w = np.array([output.station_output_w or 0.0 for output in outputs])
    return socket_w, np.array([output.person_power_w for output in outputs])


def reference_output_w(plan: Plan, station: Station) -> float:
    """Return what the reference adult gets out of a station [W], at S."""
    return float(station_outputs(plan, station, [REFERENCE_ADULT])[0][0])
