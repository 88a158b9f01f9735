"""Fields of the plan itself, its conditions, blocks and groups."""

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

_PLAN = QT_TRANSLATE_NOOP("Fields", "Plan")
_SIZE = QT_TRANSLATE_NOOP("Fields", "Length and margin")
_ROTA = QT_TRANSLATE_NOOP("Fields", "Rota")
_AIR = QT_TRANSLATE_NOOP("Fields", "Air")
_RULES = QT_TRANSLATE_NOOP("Fields", "Rules")

PLAN = (
    text(
        "title",
        QT_TRANSLATE_NOOP("Fields", "Title"),
        QT_TRANSLATE_NOOP("Fields", "Stands on every paper."),
        heading=_PLAN,
    ),
    text(
        "place",
        QT_TRANSLATE_NOOP("Fields", "Place"),
        QT_TRANSLATE_NOOP("Fields", "Where the plan is for."),
        heading=_PLAN,
    ),
    FieldSpec(
        key="start",
        label=QT_TRANSLATE_NOOP("Fields", "First day"),
        kind="date",
        help=QT_TRANSLATE_NOOP("Fields", "The date of day 1; start charges hold at its 00:00."),
        mark="own",
        heading=_SIZE,
    ),
    whole(
        "days",
        QT_TRANSLATE_NOOP("Fields", "Days"),
        QT_TRANSLATE_NOOP("Fields", "days"),
        (1, 366),
        QT_TRANSLATE_NOOP("Fields", "How many days the plan must last; 3 days is the least that guidance asks for."),
        symbol="N",
        mark="guidance",
        source="72-hour guidance of civil protection services",
        heading=_SIZE,
    ),
    percent(
        "margin_fraction",
        QT_TRANSLATE_NOOP("Fields", "Margin on use"),
        2,
        QT_TRANSLATE_NOOP("Fields", "Extra use planned on top, for what nobody thought of."),
        decimals=0,
        mark="guidance",
        source="design margin of stationary-battery sizing, 10 to 15 % (IEEE 485; figure from memory)",
        heading=_SIZE,
    ),
    whole(
        "seed",
        QT_TRANSLATE_NOOP("Fields", "Seed of the simulated futures"),
        "",
        (0, 2_147_483_647),
        QT_TRANSLATE_NOOP("Fields", "Any whole number; the same seed gives the same simulated futures."),
        heading=_SIZE,
    ),
    choice(
        "cut",
        QT_TRANSLATE_NOOP("Fields", "If it does not fit"),
        (
            ("strict", QT_TRANSLATE_NOOP("Fields", "serve priority 1 first, then 2 and so on")),
            ("shared", QT_TRANSLATE_NOOP("Fields", "give every priority the same part")),
        ),
        QT_TRANSLATE_NOOP("Fields", "Who goes short when there is too little: the last priorities, or all alike."),
        mark="own",
        heading=_ROTA,
    ),
    whole(
        "grid_min",
        QT_TRANSLATE_NOOP("Fields", "Rota grid"),
        QT_TRANSLATE_NOOP("Fields", "min"),
        (5, 60),
        QT_TRANSLATE_NOOP("Fields", "Bouts start and end on whole steps of this length."),
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "greatest step that all bouts and station hours fit"),
        source=OWN_VALUE,
        heading=_ROTA,
    ),
)

CONDITIONS = (
    number(
        "air_degc",
        QT_TRANSLATE_NOOP("Fields", "Air temperature"),
        "°C",
        (-40, 60),
        QT_TRANSLATE_NOOP("Fields", "Temperature where people turn, unless a day's own temperature is given."),
        symbol="T",
        mark="own",
        heading=_AIR,
    ),
    flag(
        "heat_limits",
        QT_TRANSLATE_NOOP("Fields", "Heat limits"),
        QT_TRANSLATE_NOOP("Fields", "Shorten turns when it is hot."),
        mark="guidance",
        source="NIOSH 2016, Criteria for a recommended standard: occupational exposure to heat",
        heading=_AIR,
    ),
    flag(
        "ramp_up",
        QT_TRANSLATE_NOOP("Fields", "Ramp-up on the first days"),
        QT_TRANSLATE_NOOP("Fields", "Let the minutes grow by a fifth a day from the first hot day on."),
        mark="guidance",
        source="NIOSH 2016, 20 % rule for new workers in heat",
        heading=_AIR,
    ),
    windows(
        "dark",
        QT_TRANSLATE_NOOP("Fields", "Dark hours"),
        QT_TRANSLATE_NOOP("Fields", "When lamps are needed."),
        mark="own",
        heading=_RULES,
    ),
    windows(
        "minors_hours",
        QT_TRANSLATE_NOOP("Fields", "Hours of people under 18"),
        QT_TRANSLATE_NOOP(
            "Fields", "Young people turn only in these hours; the stricter of this and the age rule holds."
        ),
        default=QT_TRANSLATE_NOOP("Fields", "12 to 15: 08:00-19:00; 16 and 17: 07:00-21:00"),
        mark="guidance",
        source="EU directive 94/33/EC and ILO C138 as a yardstick; the hours are this program's own",
        heading=_RULES,
    ),
)

TEMPERATURE = (
    name(QT_TRANSLATE_NOOP("Fields", "What this temperature is called.")),
    whole(
        "day",
        QT_TRANSLATE_NOOP("Fields", "Day"),
        "",
        (0, 366),
        QT_TRANSLATE_NOOP("Fields", "Day of the plan, 1 is the first; 0 means every day."),
        column=True,
        mark="own",
    ),
    text(
        "start",
        QT_TRANSLATE_NOOP("Fields", "From"),
        QT_TRANSLATE_NOOP("Fields", "Clock time HH:MM at which this temperature begins."),
        column=True,
    ),
    text(
        "end",
        QT_TRANSLATE_NOOP("Fields", "To"),
        QT_TRANSLATE_NOOP("Fields", "Clock time HH:MM at which this temperature ends."),
        column=True,
    ),
    number(
        "air_degc",
        QT_TRANSLATE_NOOP("Fields", "Air temperature"),
        "°C",
        (-40, 60),
        QT_TRANSLATE_NOOP("Fields", "Temperature of the air in the shade."),
        symbol="T",
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "the plan's air temperature"),
        column=True,
        mark="own",
    ),
    number(
        "wbgt_degc",
        QT_TRANSLATE_NOOP("Fields", "Wet-bulb globe temperature"),
        "°C",
        (-20, 50),
        QT_TRANSLATE_NOOP("Fields", "Measured WBGT; where it is known the heat limits use it."),
        symbol="WBGT",
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "not known"),
        column=True,
        mark="measured",
    ),
)

BLOCK = (
    name(QT_TRANSLATE_NOOP("Fields", "What this time is called.")),
    choice(
        "kind",
        QT_TRANSLATE_NOOP("Fields", "Kind"),
        (
            ("quiet", QT_TRANSLATE_NOOP("Fields", "quiet hours")),
            ("meal", QT_TRANSLATE_NOOP("Fields", "meal")),
            ("school", QT_TRANSLATE_NOOP("Fields", "school")),
            ("prayer", QT_TRANSLATE_NOOP("Fields", "prayer")),
            ("duty", QT_TRANSLATE_NOOP("Fields", "other duty")),
        ),
        QT_TRANSLATE_NOOP(
            "Fields", "Quiet hours stop stations and unattended charging; the other kinds only free people."
        ),
        mark="own",
        column=True,
    ),
    windows(
        "windows",
        QT_TRANSLATE_NOOP("Fields", "Times"),
        QT_TRANSLATE_NOOP("Fields", "When nobody of these groups turns."),
        mark="own",
        column=True,
    ),
    FieldSpec(
        key="groups",
        label=QT_TRANSLATE_NOOP("Fields", "Groups"),
        kind="refs",
        refs_to="groups",
        default=QT_TRANSLATE_NOOP("Fields", "everybody"),
        help=QT_TRANSLATE_NOOP("Fields", "Whose time this is; empty means everybody."),
        mark="own",
        column=True,
    ),
    FieldSpec(
        key="days",
        label=QT_TRANSLATE_NOOP("Fields", "Days"),
        kind="days",
        low=1,
        high=366,
        default=QT_TRANSLATE_NOOP("Fields", "every day"),
        help=QT_TRANSLATE_NOOP("Fields", "Days of the plan, such as 1, 3, 4; empty means every day."),
        mark="own",
    ),
)

GROUP = (name(QT_TRANSLATE_NOOP("Fields", "A group that times can be given for, such as leaders.")),)
