"""How good a rota is: the aims in their order, as numbers to compare from the first on."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from kitplanner.planners.rota.draft import Draft
from kitplanner.planners.rota.problem import RotaProblem

FloatArray = npt.NDArray[np.float64]

# Energies are compared to the milliwatt-hour; less is rounding.
MWH_PER_WH = 1000.0
_LEAST_STEP_FRACTION = 0.005


@dataclass(frozen=True, slots=True, order=True)
class Value:
    """The aims in order; smaller is better from the first difference on.

    Attributes
    ----------
    unmet_mwh : tuple of int
        Use missed up to each class [mWh at O].
    margin_mwh : int
        Margin missed beyond that [mWh at O].
    excess_steps : int
        Energy made beyond use plus margin, in steps of `excess_step_wh`.
    greatest_load : float
        Greatest share of one's own minutes [-].
    spread : float
        Standard deviation of those shares over all who may turn [-].
    unpopular : int
        Most unpopular slots of one person.
    bouts : int
        Number of bouts.
    changed : int
        Bouts that differ from the posted rota.
    """

    unmet_mwh: tuple[int, ...]
    margin_mwh: int
    excess_steps: int
    greatest_load: float
    spread: float
    unpopular: int
    bouts: int
    changed: int = 0


def excess_step_wh(problem: RotaProblem) -> float:
    """Return the step in which energy beyond the need is compared, at O.

    The greater of half a per cent of the need and one slot of the strongest person: finer steps would send all work
    to whoever fits the last watt-hour, and leave nothing to share fairly.
    """
    slot = max(
        (
            problem.slot_wh(person, station)
            for person in range(len(problem.people))
            for station in range(len(problem.stations))
        ),
        default=0.0,
    )
    need = float(max(0.0, (problem.need.with_margin - problem.need.supply)[-1]))
    return max(slot, _LEAST_STEP_FRACTION * need, 1e-3)


def missed_wh(problem: RotaProblem, made: FloatArray) -> tuple[FloatArray, float]:
    """Return use missed up to each class and margin missed beyond, for the energy of each slot, at O [Wh]."""
    come_in = problem.need.supply + np.concatenate(([0.0], np.cumsum(made)))
    unmet = np.maximum(0.0, (problem.need.plain - come_in).max(axis=1))
    whole = max(0.0, float((problem.need.with_margin - come_in).max()))
    return unmet, max(0.0, whole - float(unmet[-1]))


def value_of(draft: Draft, step_wh: float, changed: int = 0) -> Value:
    """Return the value of a draft."""
    problem = draft.problem
    unmet, margin = missed_wh(problem, draft.made)
    relative = draft.relative_load()
    able = problem.allowance > 0
    excess = excess_wh(draft, float(unmet[-1]) + margin)
    return Value(
        unmet_mwh=tuple(round(each * MWH_PER_WH) for each in unmet),
        margin_mwh=round(margin * MWH_PER_WH),
        excess_steps=int(np.ceil(max(0.0, excess) / step_wh - 1e-6)),
        greatest_load=round(float(relative.max(initial=0.0)), 9),
        spread=round(float(relative[able].std()) if able.any() else 0.0, 9),
        unpopular=int(draft.unpopular.max(initial=0)),
        bouts=len(draft.bouts),
        changed=changed,
    )


def excess_wh(draft: Draft, missed: float) -> float:
    """Return the energy made beyond use plus margin at the end, at O [Wh]."""
    need = float((draft.problem.need.with_margin - draft.problem.need.supply)[-1]) - missed
    return draft.total_wh() - max(0.0, need)
