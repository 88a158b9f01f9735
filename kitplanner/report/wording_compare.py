"""Two plans compared, in words: table rows with labels and units, and one sentence."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Any

from kitplanner.plan.fields import FIELDS, FieldSpec
from kitplanner.plan.records import Bout, ChargeSpell, Note, Plan, Spell, Window
from kitplanner.planners.compare import AnswerName, AnswerPair, Comparison, Difference
from kitplanner.report.wording import NO_VALUE, counted, listed, minutes, number, percent, plain, sentence
from kitplanner.report.wording_balance import limit_words

FIELD_HEADER = ("Section", "Record", "Field", "First plan", "Second plan")
ANSWER_HEADER = ("Answer", "First plan", "Second plan")
SAME = "The two plans are the same."
_NOT_THERE = "not there"
_SECTIONS: Mapping[str, str] = MappingProxyType(
    {
        "": "plan",
        "conditions": "conditions",
        "blocks": "blocked times",
        "groups": "groups",
        "people": "people",
        "stations": "stations",
        "stores": "stores",
        "devices": "devices",
        "charging_points": "charging points",
        "other_sources": "other sources",
        "medical_needs": "medical needs",
        "pack_items": "pack items",
        "log": "log",
        "rota": "rota",
    }
)
_NESTED_LABELS: Mapping[str, str] = MappingProxyType(
    {
        "absences": "Absences",
        "outages": "Out of service",
        "energy_wh": "Energy at the outlet, Wh",
        "first_ticket": "First ticket",
    }
)
# What a turn or a charging spell of a rota names.
_TURN_REFERENCES: Mapping[str, str] = MappingProxyType(
    {"person": "people", "watcher": "people", "station": "stations", "device": "devices"}
)
_ANSWERS: Mapping[AnswerName, str] = MappingProxyType(
    {
        "coverage": "coverage",
        "need": "need at the outlet",
        "have": "have at the outlet",
        "short_per_day": "short a day at the outlet",
        "first_empty_day": "first day that ends empty",
        "limit": "what limits",
        "phone_minutes": "minutes for a full phone",
        "rota_turned": "turning a day in the rota",
        "rota_greatest_load": "greatest share of own minutes in the rota",
    }
)


def section_words(section: str) -> str:
    """Return a section's name in words."""
    return _SECTIONS[section]


def record_words(left: Plan, right: Plan, difference: Difference) -> str:
    """Return the record's name, the newer plan's first; nested records follow after a colon."""
    names = [_name_at(right, difference) or _name_at(left, difference)]
    inner = _inner(difference)
    return ": ".join(text for text in (*names, inner) if text)


def _name_at(plan: Plan, difference: Difference) -> str:
    if not difference.record:
        return ""
    found = (one for one in getattr(plan, difference.section, ()) if one.id == difference.record)
    return next((plain(one.name) or plain(one.id) for one in found), "")


def _inner(difference: Difference) -> str:
    """Return where inside its record a difference lies, such as a stage of a station."""
    depth = 2 if difference.record else 1
    last = len(difference.path) if difference.aspect == "presence" else len(difference.path) - 1
    return " ".join(plain(part.replace("_", " ")) for part in difference.path[depth:last])


def field_words(difference: Difference) -> str:
    """Return the label of the field that differs."""
    if difference.aspect == "presence":
        return "in the plan"
    if difference.aspect == "order":
        return "Order"
    spec = _spec(difference)
    label = spec.label if spec is not None else _NESTED_LABELS.get(difference.key, difference.key.capitalize())
    return f"{label}, where from" if difference.aspect == "note" else label


def _spec(difference: Difference) -> FieldSpec | None:
    return next((spec for spec in FIELDS.get(difference.kind, ()) if spec.key == difference.key), None)


def side_words(plan: Plan, difference: Difference, value: Any) -> str:
    """Return one side of a difference as text with its unit."""
    if difference.aspect == "presence":
        return _NOT_THERE if value is None else _record_text(plan, value)
    if difference.aspect == "note":
        return _note_text(value)
    if difference.aspect == "order":
        return ", ".join(plain(one) for one in value)
    spec = _spec(difference)
    if spec is None and isinstance(value, tuple):
        return "; ".join(_spell_text(spell) for spell in value) or "none"
    if spec is None:
        section = _TURN_REFERENCES.get(difference.key)
        return _named(plan, section, str(value)) if section and value is not None else _plain_text(value)
    return _value_text(plan, spec, value)


def _plain_text(value: Any) -> str:
    if value is None:
        return NO_VALUE
    if isinstance(value, bool):
        return "yes" if value else "no"
    return _figure(value) if isinstance(value, (int, float)) else plain(str(value))


def _record_text(plan: Plan, record: Any) -> str:
    if isinstance(record, Bout):
        who = _named(plan, "people", record.person)
        return f"day {record.day} {record.start}-{record.end} {_named(plan, 'stations', record.station)}: {who}"
    if isinstance(record, ChargeSpell):
        device = _named(plan, "devices", record.device)
        return f"day {record.day} {record.start}-{record.end} {device}: {record.count}"
    name = plain(getattr(record, "name", "")) or plain(getattr(record, "id", ""))
    return name or "there"


def _note_text(note: Note | None) -> str:
    if note is None:
        return "as usual"
    spread = "" if note.spread_fraction is None else f", spread {percent(note.spread_fraction)}"
    return f"{note.mark}{': ' if note.source else ''}{plain(note.source)}{spread}"


def _spell_text(spell: Spell) -> str:
    return f"day {spell.day} {spell.start}-{spell.end}" + (f" ({spell.count})" if spell.count != 1 else "")


def _value_text(plan: Plan, spec: FieldSpec, value: Any) -> str:
    if value is None:
        default = "" if spec.default is None else _value_text(plan, spec, spec.default)
        return f"{default} (default)" if default else NO_VALUE
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, (int, float)):
        return f"{_figure(value * spec.display_scale)} {spec.unit}".strip()
    if isinstance(value, tuple):
        return ", ".join(_item(plan, spec, one) for one in value) or (
            plain(str(spec.default)) if spec.default else "none"
        )
    if spec.kind == "ref":
        return _named(plan, spec.refs_to, str(value))
    return dict(spec.choices).get(str(value), plain(str(value))) or "empty"


def _figure(value: float) -> str:
    """Return a number with as many decimals as it needs: two values that differ must not read alike."""
    return f"{value:.10g}"


def _item(plan: Plan, spec: FieldSpec, one: Any) -> str:
    if isinstance(one, Window):
        return f"{one.start}-{one.end}"
    return _named(plan, spec.refs_to, str(one)) if spec.refs_to else plain(str(one))


def _named(plan: Plan, section: str, key: str) -> str:
    found = (one for one in getattr(plan, section, ()) if one.id == key)
    return next((plain(one.name) or plain(key) for one in found), plain(key))


def field_rows(left: Plan, right: Plan, comparison: Comparison) -> tuple[tuple[str, ...], ...]:
    """Return the differences as table rows under `FIELD_HEADER`."""
    return tuple(
        (
            section_words(one.section),
            record_words(left, right, one),
            field_words(one),
            side_words(left, one, one.left),
            side_words(right, one, one.right),
        )
        for one in comparison.differences
    )


def answer_words(pair: AnswerPair, value: float | str | None) -> str:
    """Return one plan's answer with its unit."""
    if value is None:
        return {"first_empty_day": "never", "limit": "nothing"}.get(pair.name, NO_VALUE)
    if pair.name == "limit":
        return limit_words(value)  # type: ignore[arg-type]
    assert isinstance(value, float)
    if pair.unit == "%":
        return percent(value)
    if pair.unit.startswith("min"):
        return f"{minutes(value)}{pair.unit[3:]}"
    return f"day {value:.0f}" if pair.name == "first_empty_day" else f"{number(value)} {pair.unit}"


def answer_rows(comparison: Comparison) -> tuple[tuple[str, ...], ...]:
    """Return the answers as table rows under `ANSWER_HEADER`; answers that neither plan has are left out."""
    no_balance = _has_no(comparison, "need")
    return tuple(
        (
            sentence(_ANSWERS[pair.name]).rstrip("."),
            NO_VALUE if no_balance[0] else answer_words(pair, pair.left),
            NO_VALUE if no_balance[1] else answer_words(pair, pair.right),
        )
        for pair in comparison.answers
        if pair.left is not None or pair.right is not None or pair.name == "first_empty_day"
    )


def _has_no(comparison: Comparison, name: AnswerName) -> tuple[bool, bool]:
    pair = next(one for one in comparison.answers if one.name == name)
    return pair.left is None, pair.right is None


def comparison_sentence(comparison: Comparison) -> str:
    """Return how much differs and what that does to coverage and phone minutes, in one sentence."""
    if not comparison.differences:
        return SAME
    records = {(one.section, one.record) for one in comparison.differences}
    sections = list(dict.fromkeys(section_words(one.section) for one in comparison.differences))
    found = counted(len(comparison.differences), "difference", "differences")
    parts = [f"{found} in {counted(len(records), 'record', 'records')} ({listed(sections)})"]
    parts += [text for pair in comparison.answers if (text := _change_words(pair))]
    return sentence("; ".join(parts))


_IN_SENTENCE: tuple[AnswerName, ...] = ("coverage", "first_empty_day", "phone_minutes", "rota_greatest_load")


def _change_words(pair: AnswerPair) -> str:
    if pair.name not in _IN_SENTENCE or (pair.left is None and pair.right is None):
        return ""
    left, right = answer_words(pair, pair.left), answer_words(pair, pair.right)
    name = _ANSWERS[pair.name]
    return f"{name} {left} in both" if left == right else f"{name} {left} in the first, {right} in the second"
