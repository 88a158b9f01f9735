"""The glossary: short meanings of the program's words, and which word each field and each answer belongs to.

The words themselves are the help page `glossary.md`, so that page and window never say different things. A term's id
is its word in small letters.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from functools import lru_cache
from types import MappingProxyType

from msgspec import Struct

from kitplanner.plan.shipped import resource

PAGE = "help/glossary.md"
FieldKey = tuple[str, str]


class Term(Struct, frozen=True):
    """One word with its meaning."""

    id: str
    word: str
    meaning: str


# Term -> fields ("kind.key") that it explains; a field may have several terms, the first named is the nearest.
TERM_FIELDS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "horizon": ("plan.start", "plan.days"),
        "margin": ("plan.margin_fraction",),
        "seed": ("plan.seed",),
        "cut": ("plan.cut",),
        "slot": ("plan.grid_min", "station.slot_min", "rota.slot_min"),
        "derating": ("conditions.air_degc", "temperature.air_degc", "test_load.cell_degc", "cable.copper_degc"),
        "heat limits": ("conditions.heat_limits", "temperature.day", "temperature.start", "temperature.end"),
        "ramp-up": ("conditions.ramp_up",),
        "dark hours": ("conditions.dark",),
        "supervisor": ("conditions.minors_hours",),
        "wet-bulb globe temperature": ("temperature.wbgt_degc",),
        "blocked time": ("block.kind", "block.windows", "block.groups", "block.days", "person.group"),
        "quiet hours": ("block.kind", "charging_point.hours"),
        "sustained power": (
            "person.age",
            "person.watts_by",
            "person.own_legs_w",
            "person.own_arms_w",
            "person.mass_kg",
        ),
        "effort level": ("person.level",),
        "light duty": ("person.level",),
        "role": ("person.role",),
        "share": ("person.share_legs_fraction", "person.share_arms_fraction"),
        "self-test": ("person.test_legs_w", "person.test_arms_w"),
        "bout": ("person.bout_min",),
        "rest": ("person.rest_min",),
        "daily cap": ("person.cap_min",),
        "operator": ("person.hours", "person.stations", "person.days_off"),
        "watcher": ("person.may_watch", "person.watch_hours", "station.needs_watcher"),
        "station": ("station.kind", "station.count", "station.hours", "station.daily_min"),
        "connector": ("station.connector", "store.connector", "device.connector"),
        "store": ("station.feeds", "store.count"),
        "station card": ("station.described_by",),
        "measured output": ("station.output_w",),
        "reference adult": ("station.output_w",),
        "label watts": ("station.label_w",),
        "efficiency": (
            "station.eta_fraction",
            "gear.eta",
            "test_load.charger_eta",
            "test_load.cell_eta",
            "loss.eta",
            "store.eta_in",
            "store.eta_out",
            "device.eta",
        ),
        "round trip": ("store.eta_in", "store.eta_out"),
        "drag": ("station.drag_fraction", "machine.b_nm_s", "gear.drag_nm"),
        "comfort band": ("station.comfort_low_rpm", "station.comfort_high_rpm"),
        "cadence": ("station.comfort_low_rpm", "station.comfort_high_rpm"),
        "torque": ("station.torque_max_nm", "station.crank_radius_m"),
        "changeover": ("station.changeover_min",),
        "duty cycle": ("station.on_min", "station.off_min"),
        "guard": ("station.guarded",),
        "drop-out": ("station.in_service",),
        "voltage constant": ("machine.ke_v_s",),
        "winding resistance": ("machine.ra_ohm",),
        "brush drop": ("machine.vb_v",),
        "friction torque": ("machine.tc_nm",),
        "gear ratio": ("gear.ratio",),
        "test load": ("test_load.limit_a", "test_load.least_a"),
        "input hold voltage": ("test_load.hold_v", "device.input_hold_v"),
        "diode": (
            "diode.series",
            "diode.saturation_a",
            "diode.ideality",
            "diode.series_ohm",
            "synchronous.series",
            "synchronous.on_ohm",
            "synchronous.quiescent_a",
        ),
        "linear regulator": (
            "linear.r1_ohm",
            "linear.r2_ohm",
            "linear.reference_v",
            "linear.rating_v",
            "linear.resistor_tolerance_fraction",
        ),
        "adjust current": ("linear.adjust_a",),
        "dropout": ("linear.dropout_v", "linear.dropout_ohm", "converter.headroom_v"),
        "thermal resistance": ("linear.theta_c_per_w", "linear.air_degc"),
        "converter": ("converter.output_v", "converter.rating_v"),
        "conversion loss": (
            "converter.a0_w",
            "converter.a1_w_per_v",
            "converter.b0_v",
            "converter.b1_v_per_v",
            "converter.c_ohm",
        ),
        "lockout voltage": ("converter.lockout_v",),
        "wire size": (
            "cable.loop_ohm",
            "cable.awg",
            "cable.area_mm2",
            "cable.length_m",
            "cable.contacts",
            "cable.contact_ohm",
        ),
        "chemistry": ("store.chemistry",),
        "nominal": ("store.nominal_wh", "device.battery_wh"),
        "mah": ("store.nominal_wh", "device.battery_wh"),
        "outlet": ("store.outlets", "charging_point.outlets"),
        "acceptance": ("store.charge_limit_w", "device.charge_w", "device.input_limit_a", "device.input_least_a"),
        "health of a battery": ("store.health_fraction",),
        "state of charge": ("store.start_fraction", "device.start_fraction", "device.target_fraction"),
        "floor": ("store.floor_fraction", "device.floor_fraction"),
        "depth of discharge": ("store.floor_fraction",),
        "usable energy": ("store.nominal_wh",),
        "self-discharge": ("store.self_discharge_fraction_per_month",),
        "energy": ("other_source.wh_per_day", "device.use_wh_per_day"),
        "wh": ("device.use_wh_per_day", "other_source.wh_per_day", "store.nominal_wh"),
        "device": ("device.kind", "device.count"),
        "priority": ("device.priority",),
        "evening guarantee": ("device.evening",),
        "planning computer": ("device.planning_computer",),
        "demand": ("device.use_by", "device.use_wh_per_day", "device.use_battery_fraction_per_day"),
        "power": ("device.use_w", "medical_need.power_w"),
        "standby drain": ("device.use_wh_per_day", "device.use_w"),
        "use window": ("device.use_windows", "device.use_h_per_day", "other_source.windows"),
        "listening window": ("device.use_times_per_day", "device.use_min_each", "device.use_windows"),
        "message window": ("device.use_times_per_day", "device.use_min_each", "device.use_windows"),
        "charge rate": ("device.charge_rate_per_h",),
        "taper": ("device.taper_end_per_h", "device.taper_tau_h"),
        "charging point": ("device.charge_windows", "charging_point.attendant"),
        "medical list": ("medical_need.power_w", "medical_need.hours_per_day", "medical_need.count"),
        "critical load": ("medical_need.power_w", "medical_need.hours_per_day"),
        "rota": ("rota.edition", "rota.state", "rota.valid_until_day", "rota.solver", "rota.work"),
    }
)
# Keys that say themselves: names, places and plain counts need no meaning.
PLAIN_KEYS = frozenset({"name", "title", "place"})

# Term -> keys of the answers that it explains.
TERM_ANSWERS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "bout": ("minutes_p50", "bouts"),
        "range": ("minutes_p10", "minutes_p90"),
        "measured output": ("station_output_w", "output_w"),
        "sustained power": ("person_power_w", "human_w"),
        "efficiency": (
            "chain_fraction",
            "station_to_outlet_fraction",
            "crank_to_usb_fraction",
            "crank_to_battery_fraction",
        ),
        "coverage": ("coverage_fraction", "covered_fraction"),
        "demand": ("need_wh", "use_wh"),
        "balance": ("have_wh", "made_wh", "end_wh", "made_wh_per_day", "human_wh_per_day"),
        "shortfall": ("short_wh_per_day", "unmet_wh", "missing_o_wh"),
        "autonomy": ("first_empty_day",),
        "state of charge": ("credit_wh",),
        "usable energy": ("usable_wh",),
        "slot": ("available_min",),
        "daily cap": ("cap_min", "offered_min", "used_min"),
        "reference adult": ("needed_min_per_day",),
        "conversion loss": ("losses", "loss_w"),
        "margin": ("unmet_margin_wh", "margin_o_wh"),
        "reserve": ("spare_o_wh",),
        "cadence": ("rpm",),
        "torque": ("torque_nm",),
        "thermal resistance": ("regulator_degc",),
        "dropout": ("meter_low_v", "meter_high_v"),
        "input hold voltage": ("plug_v", "plug_a"),
        "acceptance": ("stored_w", "power_w"),
        "cut": ("strict", "shared"),
        "evening guarantee": ("evening",),
        "ticket": ("first_ticket",),
        "rota": ("objectives", "violations"),
    }
)


@lru_cache(maxsize=8)
def terms(page: str = PAGE) -> Mapping[str, Term]:
    """Return the glossary by term id, in its own order, read once from its page.

    Examples
    --------
    >>> terms()["floor"].meaning
    'the state of charge below which the plan does not go'
    """
    return MappingProxyType({term.id: term for term in _read(resource(page).read_text(encoding="utf-8").splitlines())})


def _read(lines: Iterable[str]) -> Iterable[Term]:
    for line in lines:
        cells = [cell.strip() for cell in line.strip().strip("|").split("|")]
        if line.startswith("|") and len(cells) == 2 and not line.startswith(("|---", "| word |")):
            yield Term(id=cells[0].casefold(), word=cells[0], meaning=cells[1])


@lru_cache(maxsize=1)
def _by_field() -> Mapping[str, tuple[str, ...]]:
    found: dict[str, list[str]] = {}
    for term, fields in TERM_FIELDS.items():
        for one in fields:
            found.setdefault(one, []).append(term)
    return MappingProxyType({one: tuple(names) for one, names in found.items()})


def terms_of_field(kind: str, key: str) -> tuple[Term, ...]:
    """Return the words that explain a field, nearest first; none for a name or a place.

    Examples
    --------
    >>> [term.word for term in terms_of_field("station", "output_w")]
    ['measured output', 'reference adult']
    """
    known = terms()
    return tuple(known[name] for name in _by_field().get(f"{kind}.{key}", ()))


def terms_of_answer(key: str) -> tuple[Term, ...]:
    """Return the words that explain a key of an answer.

    Examples
    --------
    >>> [term.word for term in terms_of_answer("coverage_fraction")]
    ['coverage']
    """
    known = terms()
    return tuple(known[name] for name, keys in TERM_ANSWERS.items() if key in keys)


def help_of_field(kind: str, key: str) -> str:
    """Return the meanings of a field's words as plain lines, for a tip or a side panel.

    Examples
    --------
    >>> help_of_field("store", "health_fraction")
    'Health of a battery: what it holds now, divided by what it held when new.'
    """
    return "\n".join(meaning_line(term) for term in terms_of_field(kind, key))


def meaning_line(term: Term) -> str:
    """Return a term and its meaning in one plain line."""
    return f"{term.word[:1].upper()}{term.word[1:]}: {term.meaning}."
