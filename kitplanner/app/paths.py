"""The shipped files as the composition root sees them; the search itself stands where every layer may use it."""

from __future__ import annotations

from kitplanner.plan.shipped import MissingFileError, demo, resource

__all__ = ["MissingFileError", "demo", "resource"]
