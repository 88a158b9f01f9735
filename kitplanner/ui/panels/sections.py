"""The sections of a plan as the window offers them: order, titles, record kinds, places of cautions."""

from __future__ import annotations

from msgspec import Struct

from kitplanner.plan.fields import QT_TRANSLATE_NOOP


class Section(Struct, frozen=True):
    """One entry of the section switch.

    `key` is the plan's collection ("" for the plan's own fields), `kind` the key in FIELDS, `hint` one
    sentence for an empty section.
    """

    key: str
    kind: str
    title: str
    hint: str = ""


PLAN_SECTION = "plan"

SECTIONS: tuple[Section, ...] = (
    Section(PLAN_SECTION, "plan", QT_TRANSLATE_NOOP("Sections", "Plan and conditions")),
    Section(
        "people",
        "person",
        QT_TRANSLATE_NOOP("Sections", "People"),
        QT_TRANSLATE_NOOP("Sections", "Nobody is counted yet. Add those who want to take part."),
    ),
    Section(
        "stations",
        "station",
        QT_TRANSLATE_NOOP("Sections", "Stations"),
        QT_TRANSLATE_NOOP("Sections", "No station yet. Add a crank or a pedal stand."),
    ),
    Section(
        "stores",
        "store",
        QT_TRANSLATE_NOOP("Sections", "Stores"),
        QT_TRANSLATE_NOOP("Sections", "No store yet: devices are then charged straight from the stations."),
    ),
    Section(
        "devices",
        "device",
        QT_TRANSLATE_NOOP("Sections", "Devices"),
        QT_TRANSLATE_NOOP("Sections", "No device yet. Add phones, radios and lamps that must be kept alive."),
    ),
    Section(
        "charging_points",
        "charging_point",
        QT_TRANSLATE_NOOP("Sections", "Charging points"),
        QT_TRANSLATE_NOOP("Sections", "No attended charging point: charging is allowed any time outside quiet hours."),
    ),
    Section(
        "other_sources",
        "other_source",
        QT_TRANSLATE_NOOP("Sections", "Other sources"),
        QT_TRANSLATE_NOOP("Sections", "No other source: all energy comes from people."),
    ),
    Section(
        "blocks",
        "block",
        QT_TRANSLATE_NOOP("Sections", "Blocked times"),
        QT_TRANSLATE_NOOP("Sections", "No blocked times: quiet hours, meals, school and prayer go here."),
    ),
    Section(
        "groups",
        "group",
        QT_TRANSLATE_NOOP("Sections", "Groups"),
        QT_TRANSLATE_NOOP("Sections", "No groups. Blocked times can name them."),
    ),
    Section(
        "medical_needs",
        "medical_need",
        QT_TRANSLATE_NOOP("Sections", "Medical list, apart"),
        QT_TRANSLATE_NOOP(
            "Sections", "Nothing listed. Powered medical equipment stands here, outside the balance, without names."
        ),
    ),
)


def section_of(key: str) -> Section:
    """Return the section with a key."""
    return next(section for section in SECTIONS if section.key == key)
