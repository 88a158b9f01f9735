"""Fields of people."""

from __future__ import annotations

from kitplanner.plan.fields_spec import (
    OWN_VALUE,
    QT_TRANSLATE_NOOP,
    FieldSpec,
    choice,
    flag,
    name,
    number,
    percent,
    text,
    whole,
    windows,
)

_WHO = QT_TRANSLATE_NOOP("Fields", "Who")
_POWER = QT_TRANSLATE_NOOP("Fields", "How many watts")
_LIMITS = QT_TRANSLATE_NOOP("Fields", "Limits")
_WHEN = QT_TRANSLATE_NOOP("Fields", "When and where")

_AGE_RULE = "ILO C138 and EU 94/33/EC as a yardstick for minors; adults: own proposal, to be reviewed by local experts"


def _watts(key: str, label: str, high: float, note: str, by: str) -> FieldSpec:
    return number(
        key,
        label,
        "W",
        (0, high),
        note,
        decimals=0,
        optional=True,
        mark="measured",
        heading=_POWER,
        shown_when=("watts_by", (by,)),
    )


def _share(key: str, label: str, note: str) -> FieldSpec:
    return percent(
        key,
        label,
        3,
        note,
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "from age and effort level"),
        mark="own",
        heading=_POWER,
        shown_when=("watts_by", ("share",)),
    )


def _limit(key: str, label: str, symbol: str, low: int, default: str, note: str) -> FieldSpec:
    return whole(
        key,
        label,
        "min",
        (low, 720),
        note,
        symbol=symbol,
        optional=True,
        default=default,
        mark="guidance",
        source=_AGE_RULE,
        heading=_LIMITS,
        column=key != "rest_min",
    )


PERSON_WHO = (
    name(QT_TRANSLATE_NOOP("Fields", "A display name or a number; no more is needed.")),
    FieldSpec(
        key="group",
        label=QT_TRANSLATE_NOOP("Fields", "Group"),
        kind="ref",
        refs_to="groups",
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "none"),
        help=QT_TRANSLATE_NOOP("Fields", "Group whose meals, school or duties this person shares."),
        mark="own",
        heading=_WHO,
    ),
    whole(
        "age",
        QT_TRANSLATE_NOOP("Fields", "Age"),
        QT_TRANSLATE_NOOP("Fields", "years"),
        (0, 120),
        QT_TRANSLATE_NOOP("Fields", "Sets the hard limits of minutes and hours and, with the effort level, the watts."),
        optional=True,
        default=40,
        mark="own",
        heading=_WHO,
        column=True,
    ),
    text(
        "role",
        QT_TRANSLATE_NOOP("Fields", "Role"),
        QT_TRANSLATE_NOOP("Fields", "Another task that counts as taking part, such as keeping the log."),
        heading=_WHO,
    ),
)

PERSON_POWER = (
    choice(
        "watts_by",
        QT_TRANSLATE_NOOP("Fields", "Watts given by"),
        (
            ("level", QT_TRANSLATE_NOOP("Fields", "age and effort level")),
            ("share", QT_TRANSLATE_NOOP("Fields", "share of the reference adult")),
            ("own", QT_TRANSLATE_NOOP("Fields", "own sustained watts")),
            ("self_test", QT_TRANSLATE_NOOP("Fields", "15-minute self-test")),
        ),
        QT_TRANSLATE_NOOP("Fields", "How it is known what this person gives; a measured value is the best."),
        heading=_POWER,
    ),
    choice(
        "level",
        QT_TRANSLATE_NOOP("Fields", "Effort level"),
        (
            ("light", QT_TRANSLATE_NOOP("Fields", "light")),
            ("usual", QT_TRANSLATE_NOOP("Fields", "usual")),
            ("strong", QT_TRANSLATE_NOOP("Fields", "strong")),
        ),
        QT_TRANSLATE_NOOP("Fields", "Chosen by the person; light also halves the minutes a day."),
        source="oxygen uptake from the FRIEND registry, work cost from the ACSM equations; class factors are judgement",
        spread_fraction=0.40,
        heading=_POWER,
        column=True,
    ),
    _share(
        "share_legs_fraction",
        QT_TRANSLATE_NOOP("Fields", "Share with the legs"),
        QT_TRANSLATE_NOOP("Fields", "Output at a pedal station as a share of what the reference adult gives."),
    ),
    _share(
        "share_arms_fraction",
        QT_TRANSLATE_NOOP("Fields", "Share with the arms"),
        QT_TRANSLATE_NOOP("Fields", "Output at a crank as a share of what the reference adult gives."),
    ),
    _watts(
        "own_legs_w",
        QT_TRANSLATE_NOOP("Fields", "Own watts, legs"),
        400,
        QT_TRANSLATE_NOOP("Fields", "Mechanical watts at the pedal, held for the whole turn day after day."),
        "own",
    ),
    _watts(
        "own_arms_w",
        QT_TRANSLATE_NOOP("Fields", "Own watts, arms"),
        200,
        QT_TRANSLATE_NOOP("Fields", "Mechanical watts at the crank, held for the whole turn day after day."),
        "own",
    ),
    _watts(
        "test_legs_w",
        QT_TRANSLATE_NOOP("Fields", "Self-test watts, legs"),
        400,
        QT_TRANSLATE_NOOP(
            "Fields", "Mean watts over 15 minutes at a pace at which talking is easy; adults under 65 only."
        ),
        "self_test",
    ),
    _watts(
        "test_arms_w",
        QT_TRANSLATE_NOOP("Fields", "Self-test watts, arms"),
        200,
        QT_TRANSLATE_NOOP(
            "Fields", "Mean watts over 15 minutes at a pace at which talking is easy; adults under 65 only."
        ),
        "self_test",
    ),
    number(
        "mass_kg",
        QT_TRANSLATE_NOOP("Fields", "Body mass"),
        "kg",
        (20, 250),
        QT_TRANSLATE_NOOP("Fields", "Only if the person wants to give it; not needed."),
        optional=True,
        default=75.0,
        source="reference adult of this program",
        heading=_POWER,
        shown_when=("watts_by", ("level", "self_test")),
    ),
)

PERSON_LIMITS = (
    _limit(
        "bout_min",
        QT_TRANSLATE_NOOP("Fields", "Longest turn"),
        "",
        1,
        QT_TRANSLATE_NOOP("Fields", "by age: 20 for adults, 15 from 60 and under 16, 10 from 65, 5 at 12"),
        QT_TRANSLATE_NOOP("Fields", "Minutes without a break; an own value can only lower the age limit."),
    ),
    _limit(
        "rest_min",
        QT_TRANSLATE_NOOP("Fields", "Rest after a turn"),
        "",
        0,
        QT_TRANSLATE_NOOP("Fields", "by age: 40 for adults, 45 from 60 and under 16, 60 from 65 and at 12"),
        QT_TRANSLATE_NOOP("Fields", "Minutes of rest; the longest of this, the age limit and the rest rule holds."),
    ),
    _limit(
        "cap_min",
        QT_TRANSLATE_NOOP("Fields", "Most a day"),
        "",
        0,
        QT_TRANSLATE_NOOP(
            "Fields", "by age: 60 for adults, 40 from 50 and at 16, 30 from 60 and at 13, 20 from 65, 10 at 12"
        ),
        QT_TRANSLATE_NOOP(
            "Fields", "Minutes a day, also 0, without any reason; an own value can only lower the age limit."
        ),
    ),
)

PERSON_WHEN = (
    windows(
        "hours",
        QT_TRANSLATE_NOOP("Fields", "Hours"),
        QT_TRANSLATE_NOOP(
            "Fields", "When this person may turn; empty means any time outside quiet hours and other blocks."
        ),
        default=QT_TRANSLATE_NOOP("Fields", "any time"),
        mark="own",
        heading=_WHEN,
    ),
    FieldSpec(
        key="stations",
        label=QT_TRANSLATE_NOOP("Fields", "Stations"),
        kind="refs",
        refs_to="stations",
        default=QT_TRANSLATE_NOOP("Fields", "all"),
        help=QT_TRANSLATE_NOOP("Fields", "Where this person may turn; empty means every station."),
        mark="own",
        heading=_WHEN,
        column=True,
    ),
    flag(
        "may_watch",
        QT_TRANSLATE_NOOP("Fields", "May watch"),
        QT_TRANSLATE_NOOP("Fields", "May stand by as the watcher of a turn, also with 0 minutes of turning."),
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "yes for adults"),
        source=OWN_VALUE,
        heading=_WHEN,
    ),
    windows(
        "watch_hours",
        QT_TRANSLATE_NOOP("Fields", "Watching hours"),
        QT_TRANSLATE_NOOP("Fields", "When this person may watch; empty means the same hours as for turning."),
        default=QT_TRANSLATE_NOOP("Fields", "as for turning"),
        mark="own",
        heading=_WHEN,
    ),
    FieldSpec(
        key="days_off",
        label=QT_TRANSLATE_NOOP("Fields", "Days off"),
        kind="days",
        help=QT_TRANSLATE_NOOP("Fields", "Days of the plan on which this person neither turns nor watches."),
        default=QT_TRANSLATE_NOOP("Fields", "none"),
        mark="own",
        heading=_WHEN,
    ),
)

PERSON = PERSON_WHO + PERSON_POWER + PERSON_LIMITS + PERSON_WHEN
