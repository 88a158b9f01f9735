"""The field table describes every key of every record, soundly."""

from __future__ import annotations

import math
import re
import types
import typing

import pytest
from msgspec import NODEFAULT, structs

from kitplanner.domain.age_limits import limits_for_age
from kitplanner.plan import records
from kitplanner.plan.fields import (
    FIELDS,
    NESTED,
    RECORD_TYPES,
    SECTION_KINDS,
    STAGE_KINDS,
    FieldSpec,
    field,
    is_shown,
    kind_of,
)

ALL = [(kind, spec) for kind, specs in FIELDS.items() for spec in specs]
IDS = [f"{kind}.{spec.key}" for kind, spec in ALL]
each_field = pytest.mark.parametrize(("kind", "spec"), ALL, ids=IDS)

# The unit a key's suffix promises, longest suffix first.
UNIT_OF_SUFFIX = {
    "_fraction_per_month": "%/month",
    "_fraction_per_day": "%/day",
    "_fraction": "%",
    "_wh_per_day": "Wh/day",
    "wh_per_day": "Wh/day",
    "_h_per_day": "h/day",
    "hours_per_day": "h/day",
    "_times_per_day": "times/day",
    "_min_each": "min",
    "_w_per_v": "W/V",
    "_v_per_v": "V/V",
    "_c_per_w": "°C/W",
    "_per_h": "1/h",
    "_nm_s": "N m s",
    "_v_s": "V s",
    "_degc": "°C",
    "_mm2": "mm²",
    "_ohm": "Ω",
    "_rpm": "turns/min",
    "_min": "min",
    "_wh": "Wh",
    "_nm": "N m",
    "_kg": "kg",
    "_w": "W",
    "_v": "V",
    "_a": "A",
    "_h": "h",
    "_m": "m",
}


def hint(kind: str, key: str) -> typing.Any:
    return typing.get_type_hints(RECORD_TYPES[kind])[key]


def options(kind: str, key: str) -> tuple[typing.Any, ...]:
    found = hint(kind, key)
    return typing.get_args(found) if isinstance(found, types.UnionType) else (found,)


@pytest.mark.parametrize("kind", RECORD_TYPES)
def test_every_key_but_ids_notes_and_nested_records_has_exactly_one_spec(kind):
    keys = [spec.key for spec in FIELDS[kind]]
    expected = set(RECORD_TYPES[kind].__struct_fields__) - {"id", "notes"} - set(NESTED.get(kind, ()))
    assert sorted(keys) == sorted(expected)


def test_every_record_type_is_named():
    made = {one for one in vars(records).values() if isinstance(one, type) and issubclass(one, records.Record)}
    assert made - set(RECORD_TYPES.values()) == {
        records.Record,
        records.Note,
        records.Window,
        records.Spell,
        records.Bout,
        records.ChargeSpell,
    }
    assert set(FIELDS) == set(RECORD_TYPES)
    assert tuple(SECTION_KINDS) == records.SECTIONS
    assert {RECORD_TYPES[kind] for kind in STAGE_KINDS} == set(typing.get_args(records.Stage))


@each_field
def test_words_are_there_and_each_help_is_one_sentence(kind, spec):
    assert spec.label
    assert spec.label[0].isupper()
    assert not spec.label.endswith(".")
    assert spec.help.endswith(".")
    assert spec.help[0].isupper() or spec.help[0].isdigit()
    assert len(spec.help) <= 130
    assert not re.search(r"[.!?] [A-Z]", spec.help) or spec.key == "battery_wh"


@each_field
def test_kind_fits_the_record(kind, spec):
    types_here = options(kind, spec.key)
    assert spec.optional == (type(None) in types_here)
    plain = next(one for one in types_here if one is not type(None))
    wanted = {
        "number": float,
        "integer": int,
        "flag": bool,
        "text": str,
        "ref": str,
        "date": records.dt.date,
        "windows": tuple[records.Window, ...],
        "refs": tuple[str, ...],
        "days": tuple[int, ...],
    }
    if spec.kind == "choice":
        values = tuple(value for value, _ in spec.choices)
        assert values == typing.get_args(plain) or plain is str
        assert all(label for _, label in spec.choices)
    else:
        assert plain == wanted[spec.kind] or typing.get_origin(plain) is typing.Annotated
    assert bool(spec.refs_to) == (spec.kind in ("ref", "refs"))
    assert not spec.refs_to or spec.refs_to in SECTION_KINDS


@each_field
def test_numbers_have_a_sane_range_and_a_default_inside(kind, spec):
    if spec.kind not in ("number", "integer"):
        assert spec.unit == ""
        return
    assert spec.low is not None
    assert spec.high is not None
    assert spec.low < spec.high
    assert math.isfinite(spec.low)
    assert math.isfinite(spec.high)
    if isinstance(spec.default, (int, float)):
        assert spec.low <= spec.default <= spec.high
        assert not (spec.low_open and spec.default == spec.low)
        assert not (spec.high_open and spec.default == spec.high)
    assert spec.decimals >= 0
    assert spec.display_scale == (100 if spec.unit.startswith("%") else 1)


@each_field
def test_unit_agrees_with_the_suffix_of_the_key(kind, spec):
    if spec.kind not in ("number", "integer"):
        return
    if spec.key.startswith("eta") or spec.key.endswith("eta"):
        assert (spec.unit, spec.low, spec.high) == ("%", 0.01, 1)
        return
    suffix = next((one for one in UNIT_OF_SUFFIX if spec.key.endswith(one)), None)
    if suffix is None:
        assert spec.unit in ("", "days", "years")
    else:
        assert spec.unit == UNIT_OF_SUFFIX[suffix]


@each_field
def test_record_default_is_the_shown_default(kind, spec):
    default = next(one.default for one in structs.fields(RECORD_TYPES[kind]) if one.name == spec.key)
    if default not in (NODEFAULT, None, "", ()):
        assert spec.default == default


@each_field
def test_shown_when_names_a_choice_of_the_same_record(kind, spec):
    if spec.shown_when is not None:
        key, wanted = spec.shown_when
        assert set(wanted) <= {value for value, _ in field(kind, key).choices}


@pytest.mark.parametrize("kind", RECORD_TYPES)
def test_headings_stand_together(kind):
    headings = [spec.heading for spec in FIELDS[kind]]
    changes = [now for before, now in zip([None, *headings], headings, strict=False) if now != before]
    assert len(changes) == len(set(headings)), "one heading would be shown twice"


@pytest.mark.parametrize("section", SECTION_KINDS)
def test_every_table_shows_the_name_first_and_few_columns(section):
    columns = [spec.key for spec in FIELDS[SECTION_KINDS[section]] if spec.column]
    assert columns[0] == "name"
    assert len(columns) <= 8


def test_stage_specs_are_found_by_kind_and_shown_by_description():
    station = records.Station(id="S", name="Crank", described_by="label")
    assert kind_of(records.LossStage(id="l", name="Loss")) == "loss"
    assert is_shown(field("station", "label_w"), station)
    assert not is_shown(field("station", "output_w"), station)
    with pytest.raises(KeyError):
        field("station", "colour")


def test_specs_carry_the_published_sources():
    assert "USB 2.0" in field("device", "input_hold_v").source
    assert "LM317" in field("linear", "theta_c_per_w").source
    assert "ASTM B258" in field("cable", "awg").source
    assert "no source" in field("device", "input_least_a").source


def test_specs_cannot_be_changed():
    with pytest.raises(AttributeError):
        FIELDS["person"][0].label = "x"
    assert isinstance(FIELDS["person"][0], FieldSpec)
    with pytest.raises(TypeError):
        FIELDS["person"] = ()


@pytest.mark.parametrize("key", ["bout_min", "rest_min", "cap_min"])
def test_age_limits_in_words_are_those_of_the_age_rules(key):
    words = {int(digits) for digits in re.findall(r"\d+", field("person", key).default)}
    assert {getattr(limits_for_age(age), key) for age in (12, 14, 17, 40, 62, 70)} <= words
