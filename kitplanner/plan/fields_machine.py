"""Fields of the machine, its gear and the test load of the bench."""

from __future__ import annotations

from kitplanner.plan.fields_spec import (
    PRACTICE,
    QT_TRANSLATE_NOOP,
    above_zero,
    efficiency,
    number,
)

_MEMORY = "typical value, from memory"

MACHINE = (
    above_zero(
        "ke_v_s",
        QT_TRANSLATE_NOOP("Fields", "Voltage constant"),
        "V s",
        10,
        QT_TRANSLATE_NOOP(
            "Fields", "Volts without load per radian a second of the generator; also newton metres per ampere."
        ),
        symbol="Ke",
        decimals=4,
        mark="measured",
    ),
    above_zero(
        "ra_ohm",
        QT_TRANSLATE_NOOP("Fields", "Winding resistance"),
        "Ω",
        1000,
        QT_TRANSLATE_NOOP("Fields", "Resistance between the generator's terminals, the leads of the meter taken off."),
        symbol="Ra",
        decimals=2,
        mark="measured",
    ),
    number(
        "vb_v",
        QT_TRANSLATE_NOOP("Fields", "Brush drop"),
        "V",
        (0, 10),
        QT_TRANSLATE_NOOP("Fields", "Volts lost at the brushes; 0 where it is part of the winding resistance."),
        symbol="Vb",
        decimals=2,
        source=_MEMORY,
    ),
    number(
        "tc_nm",
        QT_TRANSLATE_NOOP("Fields", "Friction torque"),
        "N m",
        (0, 10),
        QT_TRANSLATE_NOOP("Fields", "Constant friction and iron torque at the generator's shaft."),
        symbol="Tc",
        decimals=4,
        source=_MEMORY,
    ),
    number(
        "b_nm_s",
        QT_TRANSLATE_NOOP("Fields", "Drag growing with speed"),
        "N m s",
        (0, 1),
        QT_TRANSLATE_NOOP("Fields", "Torque per radian a second that grows with the generator's speed."),
        symbol="B",
        decimals=7,
        source=_MEMORY,
    ),
)

GEAR = (
    above_zero(
        "ratio",
        QT_TRANSLATE_NOOP("Fields", "Gear ratio"),
        "",
        1000,
        QT_TRANSLATE_NOOP("Fields", "Turns of the generator for one turn of the handle or pedal."),
        symbol="N",
        decimals=1,
        mark="measured",
    ),
    efficiency(
        "eta",
        QT_TRANSLATE_NOOP("Fields", "Gear efficiency"),
        QT_TRANSLATE_NOOP("Fields", "Share of the work that comes through the gear."),
        symbol="η",
        source=_MEMORY,
    ),
    number(
        "drag_nm",
        QT_TRANSLATE_NOOP("Fields", "Idle torque at the handle"),
        "N m",
        (0, 20),
        QT_TRANSLATE_NOOP("Fields", "Torque needed to turn the gear with nothing connected."),
        symbol="Td",
        decimals=3,
        source=_MEMORY,
    ),
)

TEST_LOAD = (
    efficiency(
        "charger_eta",
        QT_TRANSLATE_NOOP("Fields", "Charger efficiency"),
        QT_TRANSLATE_NOOP("Fields", "Share that comes through the charging circuit of the test load."),
        symbol="η",
        source="charger data sheets: 0.90 to 0.92 switching, near 0.77 linear",
    ),
    efficiency(
        "cell_eta",
        QT_TRANSLATE_NOOP("Fields", "Cell efficiency"),
        QT_TRANSLATE_NOOP("Fields", "Share of the charging energy that the cell gives back."),
        symbol="η",
        source="cell model with the parameters of Chen et al. 2020 at low rates; lead-acid near 0.80",
    ),
    above_zero(
        "hold_v",
        QT_TRANSLATE_NOOP("Fields", "Input hold voltage"),
        "V",
        60,
        QT_TRANSLATE_NOOP("Fields", "The test load takes less current rather than let its input sink below this."),
        decimals=2,
        source="USB 2.0: 4.40 V is the least at a low-power port",
    ),
    above_zero(
        "limit_a",
        QT_TRANSLATE_NOOP("Fields", "Greatest current"),
        "A",
        50,
        QT_TRANSLATE_NOOP("Fields", "The test load never takes more than this."),
        decimals=2,
        source=_MEMORY,
    ),
    number(
        "least_a",
        QT_TRANSLATE_NOOP("Fields", "Least useful current"),
        "A",
        (0, 5),
        QT_TRANSLATE_NOOP(
            "Fields", "Below this it counts as not charging; about 0.3 A is worth the effort for a phone."
        ),
        decimals=2,
        source=f"USB 2.0 unit load 0.10 A; 0.3 A for a phone: {PRACTICE}",
    ),
    number(
        "cell_degc",
        QT_TRANSLATE_NOOP("Fields", "Cell temperature"),
        "°C",
        (-30, 70),
        QT_TRANSLATE_NOOP("Fields", "Cold cells take less; below 0 °C they must not be charged."),
        mark="own",
    ),
)
