"""Stepwise upgrade of older plan files, on the raw mapping before records are built.

Each step takes a file of one version to the next one, so a file of any age walks the same tested road.
Version 1 is the first; later versions that only add keys with defaults need no step.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import Any

from kitplanner.plan.records import VERSION

RawPlan = dict[str, Any]
Step = Callable[[RawPlan], RawPlan]

# Version of the file -> function that returns the same plan in the next version.
STEPS: Mapping[int, Step] = MappingProxyType({})


def migrate(raw: RawPlan, steps: Mapping[int, Step] = STEPS, newest: int = VERSION) -> RawPlan:
    """Return the raw plan lifted to the newest version, step by step; the argument is left unchanged.

    A version without a step of its own differs from the next one only by optional keys.

    Parameters
    ----------
    raw : the mapping read from the file; its `version` is an integer from 1 to `newest`.
    steps : the upgrade functions by the version they start from.
    newest : the version to reach.

    Returns
    -------
    The raw plan with `version` equal to `newest`.

    Examples
    --------
    >>> migrate({"version": 1, "name": "x"}, {1: lambda raw: {**raw, "title": raw["name"]}}, 2)["title"]
    'x'
    """
    lifted = dict(raw)
    for version in range(int(raw["version"]), newest):
        step = steps.get(version)
        lifted = dict(step(lifted)) if step is not None else lifted
        lifted["version"] = version + 1
    return lifted
