"""The cautions C1-C14: their words, the places where they stand, and which must be acknowledged there.

A gate is acknowledged once per plan; an inline caution stands beside the field; the others are printed on
the papers named. None of them replaces local rules or licensed practice.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import Literal

from msgspec import Struct

from kitplanner.plan.fields_spec import QT_TRANSLATE_NOOP
from kitplanner.plan.records import Plan, TemperaturePart

How = Literal["gate", "inline", "print"]

HEAT_NOTE_DEGC = 21.0
COLD_NOTE_DEGC = 5.0
ADULT_AGE = 18


class Caution(Struct, frozen=True, kw_only=True):
    """One caution: `hazard` is its heading, `text` its words, `papers` where it is printed."""

    id: str
    hazard: str
    text: str
    papers: tuple[str, ...] = ()


class ShownCaution(Struct, frozen=True, kw_only=True):
    """A caution at one place: whether it must be acknowledged and what its words are there."""

    caution: Caution
    how: How
    text: str


def _caution(number: int, hazard: str, text: str, *papers: str) -> Caution:
    return Caution(id=f"C{number}", hazard=hazard, text=text, papers=papers)


_ALL = (
    _caution(
        1,
        QT_TRANSLATE_NOOP("Cautions", "Medical dependency"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Does anyone need powered equipment to breathe, to be fed, to stay well, or to keep medicine cold? Do "
            "not rely on this plan for it. People tire, cranks break. Arrange a separate secured supply, tell the "
            "health service and the power company now, and agree where to go if it fails.",
        ),
        "decision",
        "first-hour",
    ),
    _caution(
        2,
        QT_TRANSLATE_NOOP("Cautions", "Lithium-ion batteries"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Do not use or charge a battery that is swollen, dented, wet, hot, smelly or leaking. Put it outside, "
            "away from people and anything that burns. Do not open or mend packs. No household bin.",
        ),
        "sign",
        "upkeep",
    ),
    _caution(
        3,
        QT_TRANSLATE_NOOP("Cautions", "Fire at the charging point"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Charge on a hard bare surface, uncovered, in view of a person who is awake. Never on beds, in exits, "
            "corridors or stairs. Nothing on charge at night. Take it off when full. Smoke or hissing: everyone "
            "out, close the door, call for help.",
        ),
        "sign",
        "handover",
    ),
    _caution(
        4,
        QT_TRANSLATE_NOOP("Cautions", "Chains, sprockets, spokes, cranks"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Guard chain, sprocket and wheel completely before anyone turns it. Keep small children out of reach, "
            "also when nobody is riding; lock or unplug the wheel. Tie up hair, scarf, skirt, laces, cords. Never "
            "clear a jam while it moves.",
        ),
        "station",
        "handover",
    ),
    _caution(
        5,
        QT_TRANSLATE_NOOP("Cautions", "Over-exertion"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Turn at a pace at which you can talk. Stop when you want; no reason needed. Stop at once and tell "
            "someone: chest pain or pressure, dizziness, sick feeling, odd heartbeat, breathlessness that does not "
            "settle, pain in arm, jaw or joint.",
        ),
        "slips",
        "station",
    ),
    _caution(
        6,
        QT_TRANSLATE_NOOP("Cautions", "Children and young people"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Only with an adult watching, only in daytime, only for the minutes shown, only if they want to. Never "
            "alone with moving parts. School, meals, play and sleep come first.",
        ),
        "slips",
    ),
    _caution(
        7,
        QT_TRANSLATE_NOOP("Cautions", "Heat illness"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Hot or close air: shorter turns, shade, a cup of water every turn, nobody alone. Headache, cramp, "
            "dizziness, confusion, no more sweat: stop, cool, water, help. Confused or collapsed is an emergency.",
        ),
        "rota",
    ),
    _caution(
        8,
        QT_TRANSLATE_NOOP("Cautions", "Self-built electronics"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Extra-low voltage only. Fuse next to the battery. Block current from flowing back into the generator. "
            "Limit the voltage for the fastest turn with nothing connected. Test with a dummy load before any "
            "phone. Charge cells only with a charger made for them, with protection and temperature limit. Never "
            "salvaged or unprotected cells in a home or shelter. Disconnect before working on it.",
        ),
        "benchsheet",
        "station",
    ),
    _caution(
        9,
        QT_TRANSLATE_NOOP("Cautions", "Cold"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Below 0 °C do not charge. Warm the battery to room temperature first, slowly, not on a stove. Expect "
            "less from it.",
        ),
    ),
    _caution(
        10,
        QT_TRANSLATE_NOOP("Cautions", "Flames and fumes"),
        QT_TRANSLATE_NOOP(
            "Cautions", "Use lamps, not candles, and never run engines, grills or stoves indoors for power or light."
        ),
        "first-hour",
    ),
    _caution(
        11,
        QT_TRANSLATE_NOOP("Cautions", "Cables and falls"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Cables along the wall, taped, not across ways. Stand or clamp cannot tip. Step down on the still pedal.",
        ),
        "station",
    ),
    _caution(
        12,
        QT_TRANSLATE_NOOP("Cautions", "Fairness and protection"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Charging is open to everyone, also to those who do not pedal. Nobody may sell or demand anything for a "
            "turn. Complaints to: ____.",
        ),
        "sign",
        "rota",
    ),
    _caution(
        13,
        QT_TRANSLATE_NOOP("Cautions", "Emergency line"),
        QT_TRANSLATE_NOOP(
            "Cautions", "Before lights-out: one charged phone or radio for calling help, and one lamp, within reach."
        ),
        "daylog",
        "first-hour",
    ),
    _caution(
        14,
        QT_TRANSLATE_NOOP("Cautions", "What the plan is"),
        QT_TRANSLATE_NOOP(
            "Cautions",
            "Planning aid. Figures are estimates with the ranges shown. Check against readings every day. It does "
            "not replace official instructions, medical advice or a fire inspection.",
        ),
        "decision",
    ),
)

CAUTIONS: Mapping[str, Caution] = MappingProxyType({caution.id: caution for caution in _ALL})

# What C5 says beside a person's limits, where it speaks to the planner and not to the one who turns.
AT_PERSON_LIMITS = QT_TRANSLATE_NOOP(
    "Cautions",
    "If a doctor has limited effort, or you have heart, lung or joint trouble or are pregnant, leave it at 0 unless "
    "the person has asked to take part.",
)

Applies = Callable[[Plan], bool]


def _always(_plan: Plan) -> bool:
    return True


def _has_people(plan: Plan) -> bool:
    return bool(plan.people)


def _has_devices(plan: Plan) -> bool:
    return bool(plan.devices)


def _has_lithium(plan: Plan) -> bool:
    return any(store.chemistry in ("li_ion", "lfp") for store in plan.stores)


def _has_charging_point(plan: Plan) -> bool:
    return bool(plan.charging_points)


def _has_pedals(plan: Plan) -> bool:
    return any(station.kind in ("pedal", "treadle", "rocker") for station in plan.stations)


def _counts_minor(plan: Plan) -> bool:
    """Tell whether a person under 18 is asked to turn."""
    return any(one.age is not None and one.age < ADULT_AGE and one.cap_min != 0 for one in plan.people)


def _has_medical(plan: Plan) -> bool:
    return bool(plan.medical_needs)


def _temperatures(plan: Plan) -> tuple[float, ...]:
    def of_part(part: TemperaturePart) -> tuple[float, ...]:
        return tuple(value for value in (part.air_degc, part.wbgt_degc) if value is not None)

    return (plan.conditions.air_degc, *(value for part in plan.conditions.temperatures for value in of_part(part)))


def _is_hot(plan: Plan) -> bool:
    return max(_temperatures(plan)) > HEAT_NOTE_DEGC


def _is_cold(plan: Plan) -> bool:
    return min(_temperatures(plan)) < COLD_NOTE_DEGC


def _shares_charging(plan: Plan) -> bool:
    """Tell whether more people take part than in a household, so that fairness needs words."""
    return len(plan.people) > 8 or bool(plan.charging_points)


def _has_parts(plan: Plan) -> bool:
    return any(station.described_by == "parts" for station in plan.stations)


_Rule = tuple[str, How, Applies]

_PLACES: Mapping[str, tuple[_Rule, ...]] = MappingProxyType(
    {
        "people": (("C1", "gate", _has_people), ("C6", "gate", _counts_minor), ("C5", "inline", _has_people)),
        "devices": (("C1", "gate", _has_devices), ("C13", "inline", _has_devices)),
        "medical_needs": (("C1", "gate", _has_medical),),
        "stores": (("C2", "inline", _has_lithium), ("C9", "inline", _is_cold)),
        "charging_points": (("C3", "gate", _has_charging_point), ("C12", "gate", _shares_charging)),
        "stations": (("C4", "gate", _has_pedals), ("C11", "inline", _always), ("C8", "inline", _has_parts)),
        "plan": (("C14", "inline", _always), ("C7", "inline", _is_hot), ("C9", "inline", _is_cold)),
        "blocks": (),
        "groups": (),
        "other_sources": (),
        "pack_items": (("C2", "inline", _has_lithium),),
        "conditions": (("C7", "inline", _is_hot), ("C9", "inline", _is_cold)),
        "effort": (("C5", "inline", _always), ("C7", "inline", _is_hot), ("C9", "inline", _is_cold)),
        "self_test": (("C5", "gate", _always),),
        "balance": (("C1", "inline", _has_medical), ("C10", "inline", _has_devices), ("C14", "inline", _always)),
        "rota": (("C12", "inline", _shares_charging), ("C6", "inline", _counts_minor), ("C7", "inline", _is_hot)),
        "ahead": (("C13", "inline", _has_devices),),
        "matters": (("C14", "inline", _always),),
        "bench": (("C8", "gate", _always), ("C4", "inline", _has_pedals)),
        "log": (("C7", "inline", _is_hot),),
        "about": (("C14", "inline", _always),),
    }
)

PLACES = tuple(_PLACES)


def cautions_for(plan: Plan, place: str) -> tuple[ShownCaution, ...]:
    """Return the cautions that stand at a place for this plan, gates first.

    Parameters
    ----------
    plan : the plan; a caution stands only where its hazard is.
    place : one of `PLACES`: a section, `plan`, a page or `about`.

    Raises
    ------
    KeyError
        If there is no such place, so that a mistyped place can never hide a caution.

    Examples
    --------
    >>> [shown.caution.id for shown in cautions_for(Plan(), "bench")]
    ['C8']
    """
    return tuple(
        ShownCaution(
            caution=CAUTIONS[number],
            how=how,
            text=AT_PERSON_LIMITS if (place, number) == ("people", "C5") else CAUTIONS[number].text,
        )
        for number, how, applies in _PLACES[place]
        if applies(plan)
    )


def cautions_on_paper(paper: str) -> tuple[Caution, ...]:
    """Return the cautions printed on a paper, in the order of their numbers."""
    return tuple(caution for caution in _ALL if paper in caution.papers)
