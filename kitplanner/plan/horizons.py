"""How long a plan must last: presets with the guidance they follow.

The figures were read in reports about the guidance, not in the guidance itself, and are worded so; look at your
own authority's page before you print one as a fact.
"""

from __future__ import annotations

from typing import Literal

from msgspec import Struct

from kitplanner.plan.fields_spec import QT_TRANSLATE_NOOP

Evidence = Literal["reported", "from memory"]


class Guidance(Struct, frozen=True):
    """What one body asks for, since when, and how well it is known here."""

    body: str
    figure: str
    year: int | None
    evidence: Evidence


class Horizon(Struct, frozen=True, kw_only=True):
    """A preset of days with its label and the guidance behind it."""

    days: int
    label: str
    guidance: tuple[Guidance, ...]

    @property
    def sentences(self) -> tuple[str, ...]:
        """One line for each body."""
        return tuple(guidance_sentence(one) for one in self.guidance)


def guidance_sentence(guidance: Guidance) -> str:
    """Say who asks for what, and how that is known.

    Examples
    --------
    >>> guidance_sentence(Guidance("Norwegian DSB", "one week", None, "reported"))
    'Norwegian DSB: one week (reported, year not given)'
    """
    year = "year not given" if guidance.year is None else str(guidance.year)
    return f"{guidance.body}: {guidance.figure} ({guidance.evidence}, {year})"


HORIZONS: tuple[Horizon, ...] = (
    Horizon(
        days=3,
        label=QT_TRANSLATE_NOOP("Horizons", "3 days (72 hours)"),
        guidance=(
            Guidance("European Union, Preparedness Union strategy", "at least 72 hours", 2025, "reported"),
            Guidance("German BBK", "at least 3 days", 2025, "reported"),
            Guidance("American Red Cross", "3 days to take along in an evacuation", None, "reported"),
            Guidance("FEMA, USA", "several days", None, "reported"),
        ),
    ),
    Horizon(
        days=7,
        label=QT_TRANSLATE_NOOP("Horizons", "1 week"),
        guidance=(
            Guidance("Norwegian DSB", "one week", None, "reported"),
            Guidance("Swiss federal office for national supply", "food for about a week", None, "reported"),
            Guidance("Swedish MSB", "one week", 2024, "from memory"),
        ),
    ),
    Horizon(
        days=10,
        label=QT_TRANSLATE_NOOP("Horizons", "10 days"),
        guidance=(Guidance("German BBK", "10 days named as the better stock", 2025, "reported"),),
    ),
    Horizon(
        days=14,
        label=QT_TRANSLATE_NOOP("Horizons", "2 weeks"),
        guidance=(
            Guidance("American Red Cross", "2 weeks at home", None, "reported"),
            Guidance("A Swiss regional civil-protection body", "14 days", None, "reported"),
        ),
    ),
)
