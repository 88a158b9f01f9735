"""Fields of stations."""

from __future__ import annotations

from kitplanner.plan.fields_spec import (
    OWN_VALUE,
    QT_TRANSLATE_NOOP,
    FieldSpec,
    above_zero,
    choice,
    efficiency,
    flag,
    name,
    number,
    percent,
    text,
    whole,
    windows,
)

_STATION = QT_TRANSLATE_NOOP("Fields", "Station")
_TIME = QT_TRANSLATE_NOOP("Fields", "Time")
_SAFETY = QT_TRANSLATE_NOOP("Fields", "Safety")
_OUTPUT = QT_TRANSLATE_NOOP("Fields", "Output")
_TURNING = QT_TRANSLATE_NOOP("Fields", "Turning")
_MEMORY = "typical value, from memory"

STATION_PLACE = (
    name(QT_TRANSLATE_NOOP("Fields", "What the station is called on papers.")),
    choice(
        "kind",
        QT_TRANSLATE_NOOP("Fields", "Kind"),
        (
            ("crank", QT_TRANSLATE_NOOP("Fields", "two-hand crank")),
            ("pocket_crank", QT_TRANSLATE_NOOP("Fields", "one-hand pocket crank")),
            ("pedal", QT_TRANSLATE_NOOP("Fields", "pedal stand")),
            ("treadle", QT_TRANSLATE_NOOP("Fields", "two-foot treadle")),
            ("rocker", QT_TRANSLATE_NOOP("Fields", "one-foot rocker")),
        ),
        QT_TRANSLATE_NOOP("Fields", "Tells which limbs work and how well they can."),
        mark="own",
        heading=_STATION,
        column=True,
    ),
    whole(
        "count",
        QT_TRANSLATE_NOOP("Fields", "Number"),
        "",
        (1, 100),
        QT_TRANSLATE_NOOP("Fields", "How many of these stations stand side by side."),
        mark="own",
        heading=_STATION,
        column=True,
    ),
    text(
        "place", QT_TRANSLATE_NOOP("Fields", "Place"), QT_TRANSLATE_NOOP("Fields", "Where it stands."), heading=_STATION
    ),
    text(
        "connector",
        QT_TRANSLATE_NOOP("Fields", "Output socket"),
        QT_TRANSLATE_NOOP("Fields", "A device with another connector cannot be charged here; empty fits everything."),
        heading=_STATION,
    ),
    FieldSpec(
        key="feeds",
        label=QT_TRANSLATE_NOOP("Fields", "Feeds stores"),
        kind="refs",
        refs_to="stores",
        default=QT_TRANSLATE_NOOP("Fields", "all"),
        help=QT_TRANSLATE_NOOP("Fields", "Stores this station charges; empty means all of them."),
        mark="own",
        heading=_STATION,
    ),
)

STATION_TIME = (
    windows(
        "hours",
        QT_TRANSLATE_NOOP("Fields", "Hours"),
        QT_TRANSLATE_NOOP("Fields", "When the station may be used; empty means any time outside quiet hours."),
        default=QT_TRANSLATE_NOOP("Fields", "any time outside quiet hours"),
        mark="own",
        heading=_TIME,
        column=True,
    ),
    whole(
        "slot_min",
        QT_TRANSLATE_NOOP("Fields", "Slot"),
        "min",
        (1, 240),
        QT_TRANSLATE_NOOP("Fields", "Length of one place in the rota."),
        mark="guidance",
        source="15 to 30 min rotation of lifeguard watches",
        heading=_TIME,
    ),
    whole(
        "changeover_min",
        QT_TRANSLATE_NOOP("Fields", "Changeover"),
        "min",
        (0, 60),
        QT_TRANSLATE_NOOP("Fields", "Time lost between two people."),
        mark="own",
        heading=_TIME,
    ),
    whole(
        "daily_min",
        QT_TRANSLATE_NOOP("Fields", "Minutes a day"),
        "min",
        (0, 1440),
        QT_TRANSLATE_NOOP("Fields", "Most minutes of use a day and unit; empty means what the hours and slots give."),
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "from hours and slots"),
        mark="own",
        heading=_TIME,
        column=True,
    ),
    whole(
        "on_min",
        QT_TRANSLATE_NOOP("Fields", "Longest run"),
        "min",
        (1, 1440),
        QT_TRANSLATE_NOOP("Fields", "Minutes the maker lets it run before it must cool."),
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "no limit"),
        mark="own",
        heading=_TIME,
    ),
    whole(
        "off_min",
        QT_TRANSLATE_NOOP("Fields", "Cooling time"),
        "min",
        (0, 1440),
        QT_TRANSLATE_NOOP("Fields", "Minutes it must stand after its longest run."),
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "none"),
        mark="own",
        heading=_TIME,
    ),
)

STATION_SAFETY = (
    flag(
        "guarded",
        QT_TRANSLATE_NOOP("Fields", "Guarded"),
        QT_TRANSLATE_NOOP(
            "Fields", "Chain, sprocket and wheel are completely enclosed; without a guard there are no slots."
        ),
        mark="own",
        heading=_SAFETY,
    ),
    flag(
        "needs_watcher",
        QT_TRANSLATE_NOOP("Fields", "Needs a watcher"),
        QT_TRANSLATE_NOOP("Fields", "A second person stands by during every turn."),
        mark="own",
        heading=_SAFETY,
    ),
    flag(
        "in_service",
        QT_TRANSLATE_NOOP("Fields", "In service"),
        QT_TRANSLATE_NOOP("Fields", "Out of service means no slots until it is mended."),
        mark="own",
        heading=_SAFETY,
    ),
)

_BY = "described_by"

STATION_OUTPUT = (
    choice(
        _BY,
        QT_TRANSLATE_NOOP("Fields", "Described by"),
        (
            ("measured", QT_TRANSLATE_NOOP("Fields", "measured output")),
            ("label", QT_TRANSLATE_NOOP("Fields", "label and efficiency")),
            ("parts", QT_TRANSLATE_NOOP("Fields", "its parts")),
        ),
        QT_TRANSLATE_NOOP("Fields", "A measurement with a meter at the socket is the best."),
        mark="own",
        heading=_OUTPUT,
    ),
    above_zero(
        "output_w",
        QT_TRANSLATE_NOOP("Fields", "Measured output"),
        "W",
        2000,
        QT_TRANSLATE_NOOP("Fields", "Watts at the output socket when the reference adult turns."),
        symbol="S",
        decimals=1,
        optional=True,
        mark="measured",
        spread_fraction=0.20,
        heading=_OUTPUT,
        column=True,
        shown_when=(_BY, ("measured",)),
    ),
    above_zero(
        "label_w",
        QT_TRANSLATE_NOOP("Fields", "Label watts"),
        "W",
        2000,
        QT_TRANSLATE_NOOP("Fields", "Watts at the output socket as printed by the maker; people may give less."),
        symbol="S",
        decimals=1,
        optional=True,
        mark="guess",
        spread_fraction=0.40,
        heading=_OUTPUT,
        shown_when=(_BY, ("label",)),
    ),
    efficiency(
        "eta_fraction",
        QT_TRANSLATE_NOOP("Fields", "Efficiency, hand or foot to socket"),
        QT_TRANSLATE_NOOP("Fields", "Share of the mechanical work that leaves the output socket."),
        symbol="η",
        source="chain model of this program: pedal stands 0.37 to 0.50, geared crank with converter near 0.50",
        spread_fraction=0.15,
        heading=_OUTPUT,
        shown_when=(_BY, ("measured", "label")),
    ),
    percent(
        "drag_fraction",
        QT_TRANSLATE_NOOP("Fields", "Own drag of the station"),
        0.9,
        QT_TRANSLATE_NOOP("Fields", "Part of the reference adult's watts that only keeps the station turning."),
        symbol="P0",
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "10 % for cranks, 25 % for pedal stands"),
        source=OWN_VALUE,
        heading=_OUTPUT,
        shown_when=(_BY, ("measured", "label")),
    ),
)

STATION_TURNING = (
    number(
        "comfort_low_rpm",
        QT_TRANSLATE_NOOP("Fields", "Slowest comfortable turning"),
        QT_TRANSLATE_NOOP("Fields", "turns/min"),
        (1, 300),
        QT_TRANSLATE_NOOP("Fields", "Lower end of the turning speed people keep up."),
        symbol="n",
        optional=True,
        default=QT_TRANSLATE_NOOP(
            "Fields", "40 for cranks and rockers, 80 for pocket cranks, 45 for pedals and treadles"
        ),
        source=_MEMORY,
        heading=_TURNING,
    ),
    number(
        "comfort_high_rpm",
        QT_TRANSLATE_NOOP("Fields", "Fastest comfortable turning"),
        QT_TRANSLATE_NOOP("Fields", "turns/min"),
        (1, 300),
        QT_TRANSLATE_NOOP("Fields", "Upper end of the turning speed people keep up."),
        symbol="n",
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "80, for pocket cranks 150"),
        source=_MEMORY,
        heading=_TURNING,
    ),
    above_zero(
        "torque_max_nm",
        QT_TRANSLATE_NOOP("Fields", "Greatest torque"),
        "N m",
        100,
        QT_TRANSLATE_NOOP("Fields", "Above this the handle or pedal is too heavy to keep turning."),
        symbol="T",
        decimals=2,
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "4 for cranks, 0.7 for pocket cranks, 16 for feet"),
        source=_MEMORY,
        heading=_TURNING,
        shown_when=(_BY, ("parts",)),
    ),
    above_zero(
        "crank_radius_m",
        QT_TRANSLATE_NOOP("Fields", "Crank radius"),
        "m",
        0.5,
        QT_TRANSLATE_NOOP("Fields", "From the axle to the handle; sets the watts at which the hand force stays small."),
        symbol="r",
        decimals=3,
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "0.15, for pocket cranks 0.06"),
        source="handle force at most 30 N in the mean: judgement after the hand-activity limits of ACGIH",
        heading=_TURNING,
        shown_when=("kind", ("crank", "pocket_crank")),
    ),
)

STATION = STATION_PLACE + STATION_OUTPUT + STATION_TURNING + STATION_TIME + STATION_SAFETY
