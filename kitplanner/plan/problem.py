"""What a check reports: place, severity, text and remedy."""

from __future__ import annotations

from typing import Literal

from msgspec import Struct

from kitplanner.plan.places import place_of_path

Severity = Literal["error", "warning", "note"]
Place = tuple[str, ...]


class Problem(Struct, frozen=True, kw_only=True):
    """One finding about a plan; errors stop the calculation, warnings and notes do not.

    `place` is the path of the key or record as `plan/edits.py` takes it; `text` says what is wrong and why
    it matters, `remedy` what to do.
    """

    place: Place
    severity: Severity
    text: str
    remedy: str

    @property
    def sentence(self) -> str:
        """Place, reason and remedy in one sentence for people.

        Examples
        --------
        >>> Problem(place=("days",), severity="error", text="0 is too few", remedy="enter at least 1").sentence
        'key days: 0 is too few; enter at least 1.'
        """
        return f"{place_of_path(self.place)}: {self.text}; {self.remedy}."


def error(place: Place, text: str, remedy: str) -> Problem:
    """Make a problem that stops the calculation."""
    return Problem(place=place, severity="error", text=text, remedy=remedy)


def warning(place: Place, text: str, remedy: str) -> Problem:
    """Make a problem the answers depend on but can live with."""
    return Problem(place=place, severity="warning", text=text, remedy=remedy)


def note(place: Place, text: str, remedy: str) -> Problem:
    """Make a remark about what the program does with the plan as it is."""
    return Problem(place=place, severity="note", text=text, remedy=remedy)
