"""Fields of stores, other sources, charging points, medical needs, and the records without fields yet."""

from __future__ import annotations

from kitplanner.plan.fields_spec import (
    OWN_VALUE,
    PRACTICE,
    QT_TRANSLATE_NOOP,
    FieldSpec,
    above_zero,
    choice,
    efficiency,
    name,
    number,
    percent,
    text,
    whole,
    windows,
)

_STORE = QT_TRANSLATE_NOOP("Fields", "Store")
_CHARGE_STATE = QT_TRANSLATE_NOOP("Fields", "State of charge")
_LOSSES = QT_TRANSLATE_NOOP("Fields", "Losses")

STORE = (
    name(QT_TRANSLATE_NOOP("Fields", "What the store is called on papers.")),
    whole(
        "count",
        QT_TRANSLATE_NOOP("Fields", "Number"),
        "",
        (1, 1000),
        QT_TRANSLATE_NOOP("Fields", "How many alike; all other values are for one of them."),
        mark="own",
        heading=_STORE,
        column=True,
    ),
    choice(
        "chemistry",
        QT_TRANSLATE_NOOP("Fields", "Chemistry"),
        (
            ("li_ion", QT_TRANSLATE_NOOP("Fields", "lithium-ion")),
            ("lfp", QT_TRANSLATE_NOOP("Fields", "lithium-iron-phosphate")),
            ("nimh", QT_TRANSLATE_NOOP("Fields", "nickel-metal-hydride")),
            ("lead_acid", QT_TRANSLATE_NOOP("Fields", "lead-acid")),
            ("supercapacitor", QT_TRANSLATE_NOOP("Fields", "supercapacitor")),
            ("alkaline", QT_TRANSLATE_NOOP("Fields", "alkaline (not rechargeable)")),
        ),
        QT_TRANSLATE_NOOP("Fields", "Tells how it charges, ages and stands cold."),
        mark="own",
        heading=_STORE,
    ),
    above_zero(
        "nominal_wh",
        QT_TRANSLATE_NOOP("Fields", "Energy on the label"),
        "Wh",
        1e6,
        QT_TRANSLATE_NOOP("Fields", "Wh of the cells as printed; 10 000 mAh at 3.7 V is 37 Wh."),
        symbol="E",
        decimals=1,
        mark="own",
        heading=_STORE,
        column=True,
    ),
    whole(
        "outlets",
        QT_TRANSLATE_NOOP("Fields", "Outlets"),
        "",
        (0, 100),
        QT_TRANSLATE_NOOP("Fields", "Devices that can charge from one of them at the same time."),
        mark="own",
        heading=_STORE,
    ),
    above_zero(
        "charge_limit_w",
        QT_TRANSLATE_NOOP("Fields", "Greatest charging power"),
        "W",
        1e5,
        QT_TRANSLATE_NOOP("Fields", "Watts it takes at its input at most."),
        decimals=0,
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "no limit of its own"),
        mark="own",
        heading=_STORE,
    ),
    text(
        "connector",
        QT_TRANSLATE_NOOP("Fields", "Connector"),
        QT_TRANSLATE_NOOP("Fields", "Plug or socket; empty fits everything."),
        heading=_STORE,
    ),
    text(
        "place", QT_TRANSLATE_NOOP("Fields", "Place"), QT_TRANSLATE_NOOP("Fields", "Where it stands."), heading=_STORE
    ),
    percent(
        "health_fraction",
        QT_TRANSLATE_NOOP("Fields", "Health"),
        1.1,
        QT_TRANSLATE_NOOP("Fields", "Measured capacity as a share of the label; 90 % for a bank some years old."),
        low_open=True,
        mark="own",
        heading=_CHARGE_STATE,
        column=True,
    ),
    percent(
        "start_fraction",
        QT_TRANSLATE_NOOP("Fields", "Charge at the start"),
        1,
        QT_TRANSLATE_NOOP("Fields", "State of charge at 00:00 of day 1."),
        symbol="SoC",
        mark="own",
        heading=_CHARGE_STATE,
        column=True,
    ),
    percent(
        "floor_fraction",
        QT_TRANSLATE_NOOP("Fields", "Floor"),
        1,
        QT_TRANSLATE_NOOP("Fields", "The plan does not go below this state of charge."),
        high_open=True,
        source=OWN_VALUE,
        heading=_CHARGE_STATE,
    ),
    efficiency(
        "eta_in",
        QT_TRANSLATE_NOOP("Fields", "Charging efficiency"),
        QT_TRANSLATE_NOOP("Fields", "Share of the energy at its input that is stored."),
        symbol="η",
        source="charger and cell of power banks: 0.85 to 0.91 times 0.97",
        heading=_LOSSES,
    ),
    efficiency(
        "eta_out",
        QT_TRANSLATE_NOOP("Fields", "Discharging efficiency"),
        QT_TRANSLATE_NOOP("Fields", "Share of the stored energy that reaches the outlet."),
        symbol="η",
        source="step-up converters of power banks: 0.80 to 0.93",
        heading=_LOSSES,
    ),
    number(
        "self_discharge_fraction_per_month",
        QT_TRANSLATE_NOOP("Fields", "Self-discharge"),
        QT_TRANSLATE_NOOP("Fields", "%/month"),
        (0, 1),
        QT_TRANSLATE_NOOP("Fields", "Share lost in a month of standing; the electronics of a pack count."),
        display_scale=100.0,
        decimals=1,
        source=PRACTICE,
        heading=_LOSSES,
    ),
)

OTHER_SOURCE = (
    name(QT_TRANSLATE_NOOP("Fields", "What else charges the stores, such as a solar panel.")),
    number(
        "wh_per_day",
        QT_TRANSLATE_NOOP("Fields", "Energy a day"),
        "Wh/day",
        (0, 1e6),
        QT_TRANSLATE_NOOP("Fields", "Wh a day at the input of the stores."),
        symbol="E",
        decimals=0,
        mark="own",
        column=True,
    ),
    windows(
        "windows",
        QT_TRANSLATE_NOOP("Fields", "Times"),
        QT_TRANSLATE_NOOP("Fields", "When it gives energy; empty means evenly over the day."),
        default=QT_TRANSLATE_NOOP("Fields", "evenly over the day"),
        mark="own",
        column=True,
    ),
)

CHARGING_POINT = (
    name(QT_TRANSLATE_NOOP("Fields", "What the place is called on papers.")),
    windows(
        "hours",
        QT_TRANSLATE_NOOP("Fields", "Attended hours"),
        QT_TRANSLATE_NOOP("Fields", "Devices charge only while somebody who is awake looks on."),
        mark="own",
        column=True,
    ),
    whole(
        "outlets",
        QT_TRANSLATE_NOOP("Fields", "Outlets"),
        "",
        (1, 1000),
        QT_TRANSLATE_NOOP("Fields", "Devices that can charge here at the same time."),
        mark="own",
        column=True,
    ),
    FieldSpec(
        key="attendant",
        label=QT_TRANSLATE_NOOP("Fields", "Attendant"),
        kind="ref",
        refs_to="people",
        optional=True,
        default=QT_TRANSLATE_NOOP("Fields", "not named"),
        help=QT_TRANSLATE_NOOP("Fields", "Who looks after the place."),
        mark="own",
        column=True,
    ),
    text("place", QT_TRANSLATE_NOOP("Fields", "Place"), QT_TRANSLATE_NOOP("Fields", "Where it is."), column=True),
)

MEDICAL_NEED = (
    name(QT_TRANSLATE_NOOP("Fields", "The equipment only; no person and no diagnosis.")),
    number(
        "power_w",
        QT_TRANSLATE_NOOP("Fields", "Power"),
        "W",
        (0, 1e4),
        QT_TRANSLATE_NOOP("Fields", "Watts of the equipment; it stays outside the balance."),
        symbol="P",
        mark="own",
        column=True,
    ),
    number(
        "hours_per_day",
        QT_TRANSLATE_NOOP("Fields", "Hours a day"),
        "h/day",
        (0, 24),
        QT_TRANSLATE_NOOP("Fields", "Hours it runs in a day; it stays outside the balance."),
        symbol="t",
        decimals=1,
        mark="own",
        column=True,
    ),
    whole(
        "count",
        QT_TRANSLATE_NOOP("Fields", "Number"),
        "",
        (1, 1000),
        QT_TRANSLATE_NOOP("Fields", "How many of these; papers print only the count."),
        mark="own",
        column=True,
    ),
)

PACK_ITEM = (name(QT_TRANSLATE_NOOP("Fields", "What could be packed.")),)
LOG_ENTRY = (name(QT_TRANSLATE_NOOP("Fields", "What this line of the log is about.")),)
ROTA = (name(QT_TRANSLATE_NOOP("Fields", "What the adopted rota is called.")),)
