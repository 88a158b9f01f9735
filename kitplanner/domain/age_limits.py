"""Bout, rest, day's cap and hours by age: cautious defaults that a person may lower and never raise.

Under 12 and from 80 years nobody is counted. They follow no law: national rules, a camp's own rules and a
clinician's word come first. As a yardstick for young people stand ILO convention C138 (light work from 13,
hazardous work from 18) and EU directive 94/33/EC (no night work), both far above these minutes.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

WHOLE_DAY_HOURS = (0.0, 24.0)


@dataclass(frozen=True, slots=True)
class AgeLimits:
    """What a person of some age is asked for at most.

    Attributes
    ----------
    bout_min : int
        Longest bout [min].
    rest_min : int
        Least rest after a bout [min].
    cap_min : int
        Turning time of a day, 0 where not counted [min].
    may_pedal, may_crank : bool
        Where the person may turn.
    hours : tuple of float
        First and last hour of the day [h].
    supervised : bool
        True for minors: only with an adult watching.
    """

    bout_min: int
    rest_min: int
    cap_min: int
    may_pedal: bool
    may_crank: bool
    hours: tuple[float, float] = WHOLE_DAY_HOURS
    supervised: bool = False


_NOT_COUNTED = AgeLimits(0, 0, 0, may_pedal=False, may_crank=False)
_YOUNG_HOURS, _YOUTH_HOURS = (8.0, 19.0), (7.0, 21.0)
# First age of each row.
_ROWS = (
    (0, replace(_NOT_COUNTED, hours=_YOUNG_HOURS, supervised=True)),
    (12, AgeLimits(5, 60, 10, may_pedal=False, may_crank=True, hours=_YOUNG_HOURS, supervised=True)),
    (13, AgeLimits(15, 45, 30, may_pedal=True, may_crank=True, hours=_YOUNG_HOURS, supervised=True)),
    (16, AgeLimits(20, 40, 40, may_pedal=True, may_crank=True, hours=_YOUTH_HOURS, supervised=True)),
    (18, AgeLimits(20, 40, 60, may_pedal=True, may_crank=True)),
    (50, AgeLimits(20, 40, 40, may_pedal=True, may_crank=True)),
    (60, AgeLimits(15, 45, 30, may_pedal=True, may_crank=True)),
    (65, AgeLimits(10, 60, 20, may_pedal=True, may_crank=True)),
    (80, _NOT_COUNTED),
)


def limits_for_age(age: float, *, light: bool = False) -> AgeLimits:
    """Limits of an age; light effort halves the bout and the day's cap (whole minutes, rounded down).

    Parameters
    ----------
    age : float
        Age [years].
    light : bool
        True for someone who chose light effort.

    Returns
    -------
    AgeLimits
        Bout, rest, cap, places and hours.

    References
    ----------
    Judgement. Checked against: lifeguards change duty every 15-30 min; rest pauses of at least 15 % of working time;
    NIOSH 50 % of capacity for at most 1 h (Waters et al. 1993); ILO C138 and EU 94/33/EC for minors.

    Examples
    --------
    >>> limits_for_age(40).cap_min, limits_for_age(40, light=True).cap_min, limits_for_age(12).may_pedal
    (60, 30, False)
    """
    row = _NOT_COUNTED
    for first_age, candidate in _ROWS:
        if age >= first_age:
            row = candidate
    if not light:
        return row
    return replace(row, bout_min=row.bout_min // 2, cap_min=row.cap_min // 2)
