"""Frozen answers to "what matters most": each uncertain input at the ends of its range, and what the answer then is.

Low and high are the 10 % and 90 % points of the input's spread, one input at a time, all others at their central
values. Values stand in the record's own unit, fractions from 0 to 1.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Literal

from msgspec import Struct, structs

from kitplanner.domain.spread import P10_P50_P90
from kitplanner.planners.results import EffortRow

# 90th percentile of the standard normal curve: low and high lie this many standard deviations from the middle.
P90_Z = 1.2815516
LOW_FRACTION, HIGH_FRACTION = P10_P50_P90[0], P10_P50_P90[2]

InputName = Literal[
    "person",
    "people_shared",
    "attendance",
    "station",
    "station_losses",
    "store_in",
    "store_out",
    "store_round_trip",
    "store_start",
    "store_health",
    "other_source",
    "device_use",
    "device_start",
    "device_capacity",
    "device_rate",
    "device_losses",
    "margin",
    "temperature",
]
Question = Literal["coverage", "minutes"]


class Variation(Struct, frozen=True, kw_only=True):
    """An input with its central value and the ends of its range; `record` and `key` name the field it stands in.

    `is_choice`: somebody decides the value, it is not uncertain; it moves the answer but has no part in its spread.
    """

    name: InputName
    record: str
    kind: str
    key: str
    central: float
    low: float
    high: float
    unit: str
    mark: str
    source: str
    is_choice: bool = False


class SensitivityRow(Struct, frozen=True, kw_only=True):
    """One input: what the answer is at its low and high value, and its share of the answer's variance.

    An answer is None where there is none: nothing is needed any more (coverage), or no charge can be made (minutes);
    `swing` is then infinite. `swing` is the distance of the two answers, in the answer's own unit.
    """

    variation: Variation
    answer_low: float | None
    answer_high: float | None
    swing: float
    variance_fraction: float


class Sensitivity(Struct, frozen=True, kw_only=True):
    """What matters most for one answer, the input that moves it most first.

    `answer` is the central one: coverage as a fraction, or minutes of turning of `row`. `people` counts the rows of
    single persons that `joined_people` makes into one.
    """

    question: Question
    answer: float | None
    rows: tuple[SensitivityRow, ...]
    row: EffortRow | None = None


Answered = tuple[Variation, float | None, float | None]


def ranked(answered: Iterable[Answered]) -> tuple[SensitivityRow, ...]:
    """Return rows with swing and share of variance, the greatest swing first; inputs that move nothing are left out.

    share_i = swing_i^2 / sum of swing^2, over inputs that are uncertain; where some take the answer away altogether,
    these alone share it alike.

    Parameters
    ----------
    answered : iterable of (Variation, answer at low, answer at high)
        One per input

    Returns
    -------
    tuple of SensitivityRow
        Sorted rows; the shares of uncertain inputs sum to 1

    References
    ----------
    Root sum of squares of independent inputs: JCGM 100:2008 (GUM), 5.1; both ends instead of derivatives: 5.1.3 note 2.
    """
    rows = [
        SensitivityRow(
            variation=variation, answer_low=low, answer_high=high, swing=swing_of(low, high), variance_fraction=0.0
        )
        for variation, low, high in answered
    ]
    moving = [row for row in rows if row.swing > 0.0]
    weights = _weights(moving)
    whole = sum(weights)
    shared = [
        structs.replace(row, variance_fraction=weight / whole if whole > 0.0 else 0.0)
        for row, weight in zip(moving, weights, strict=True)
    ]
    return tuple(sorted(shared, key=_order))


def swing_of(low: float | None, high: float | None) -> float:
    """Return the distance of two answers; infinite where only one of them exists.

    Examples
    --------
    >>> swing_of(1.5, 1.0), swing_of(None, 2.0), swing_of(None, None)
    (0.5, inf, 0.0)
    """
    if low is None or high is None:
        return 0.0 if low is high else math.inf
    return abs(high - low)


def _weights(rows: list[SensitivityRow]) -> list[float]:
    uncertain = [0.0 if row.variation.is_choice else row.swing for row in rows]
    if math.inf in uncertain:
        return [1.0 if swing == math.inf else 0.0 for swing in uncertain]
    largest = max(uncertain, default=0.0)
    # By the largest, so that squares of tiny answers do not vanish.
    return [(swing / largest) ** 2 if largest > 0.0 else 0.0 for swing in uncertain]


def _order(row: SensitivityRow) -> tuple[float, str, str, str]:
    """Return the sorting key: swing, then names, so that the order of the records decides nothing."""
    return (-row.swing, row.variation.name, row.variation.record, row.variation.key)
