"""Step-up gear between handle or pedal and machine."""

from __future__ import annotations

import math
from dataclasses import dataclass

from kitplanner.domain.units import Values


@dataclass(frozen=True)
class GearBox:
    """Step-up gear: ratio [-] of machine speed to crank speed, efficiency [-], drag at the crank [N.m].

    Raises
    ------
    ValueError
        When ratio or efficiency is not above zero, the efficiency is above one or the drag negative.
    """

    ratio: float
    eta: float = 1.0
    drag_nm: float = 0.0

    def __post_init__(self) -> None:
        """Refuse constants for which the equations have no meaning."""
        if not (self.ratio > 0 and 0 < self.eta <= 1 and self.drag_nm >= 0):
            raise ValueError(
                "A gear needs a ratio above zero, an efficiency above zero up to one and no negative drag."
            )


def crank_torque_nm(gear: GearBox, torque_nm: Values) -> Values:
    """Torque at the crank for a torque at the machine: T_crank = N T / eta_g + Td.

    Parameters
    ----------
    gear : GearBox
        Gear between crank and machine.
    torque_nm : float or array
        Torque at the machine's shaft [N.m].

    Returns
    -------
    float or array
        Torque at the crank [N.m].

    Examples
    --------
    >>> round(crank_torque_nm(GearBox(40.0, 0.80, 0.08), 0.0297), 3)
    1.565
    """
    return gear.ratio * torque_nm / gear.eta + gear.drag_nm


def gear_train_eta(stages_eta: tuple[float, ...]) -> float:
    """Efficiency of gear stages in a row: the product of theirs.

    Parameters
    ----------
    stages_eta : tuple of float
        Efficiency of each stage [-].

    Returns
    -------
    float
        Efficiency of the train [-].

    Examples
    --------
    >>> round(gear_train_eta((0.92, 0.92, 0.92)), 4)
    0.7787
    """
    return math.prod(stages_eta)
