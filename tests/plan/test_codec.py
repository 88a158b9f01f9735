"""The codec loses nothing, writes in a stable order, and answers anything wrong with one sentence."""

from __future__ import annotations

import json

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from msgspec import structs

from kitplanner.plan.codec import LARGEST_BYTES, PlanFileError, decode, encode
from kitplanner.plan.fields import RECORD_TYPES
from kitplanner.plan.records import VERSION, Conditions, Note, Person, Plan, Store
from kitplanner.plan.shipped import DEMOS, demo
from tests.strategies import plans

CAMP = demo("camp").read_bytes()


def refusal(data: bytes) -> str:
    with pytest.raises(PlanFileError) as caught:
        decode(data)
    sentence = str(caught.value)
    error = caught.value
    assert sentence == f"{error.place}: {error.reason}; {error.remedy}."
    assert "\n" not in sentence
    assert len(sentence) < 400
    assert sentence.endswith(".")
    assert "Traceback" not in sentence
    return sentence


def one_answer(data: bytes) -> Plan | str:
    """Return the plan or the one-line sentence that refuses it; anything else is an error of the codec."""
    try:
        return decode(data)
    except PlanFileError as error:
        return "" if "\n" in str(error) else str(error)


@given(plans())
@settings(max_examples=60, deadline=None)
def test_a_plan_comes_back_equal_and_its_text_is_stable(plan):
    data = encode(plan)
    back = decode(data)
    assert back == plan
    assert encode(back) == data
    assert data.endswith(b"\n")
    assert json.loads(data)["format"] == "kitplanner-plan"


@pytest.mark.parametrize("name", DEMOS)
def test_demos_are_written_as_the_program_writes(name):
    data = demo(name).read_bytes()
    assert encode(decode(data)) == data


def test_what_is_left_out_and_what_is_spelled_out():
    raw = json.loads(encode(Plan(stores=(Store(id="B", name="Bank"),))))
    assert "people" not in raw
    assert "rota" not in raw
    assert "notes" not in raw
    assert raw["stores"][0]["eta_in"] == 0.9
    assert raw["seed"] == 1
    assert raw["conditions"]["heat_limits"] is False
    assert "charge_limit_w" not in raw["stores"][0]
    assert list(raw)[:6] == ["format", "version", "title", "place", "start", "days"]


def test_text_of_any_script_stays_readable():
    data = encode(Plan(title='Zoë "X" \\ 村 🏕'))
    assert "Zoë" in data.decode()
    assert "村 🏕" in data.decode()
    assert decode(data).title == 'Zoë "X" \\ 村 🏕'


@pytest.mark.parametrize("value", [float("nan"), float("inf"), -float("inf")])
def test_numbers_no_file_can_hold_are_not_written(value):
    with pytest.raises(PlanFileError, match="not finite"):
        encode(Plan(margin_fraction=value))


def test_half_a_character_pair_is_not_written():
    with pytest.raises(PlanFileError, match="half a character pair"):
        encode(Plan(title="\ud800"))


BAD_FILES = [
    (b"", "empty"),
    (b"  \n", "empty"),
    (b"hello", "not JSON"),
    (b"PK\x03\x04zip", "not JSON"),
    (b"\x89PNG\r\n\x1a\n\x00", "Line 1: the bytes are not UTF-8"),
    (b"[]", "one JSON object"),
    (b"3", "one JSON object"),
    (b"{}", "format is not given"),
    (b'{"format": "other"}', "its format is 'other'"),
    (b'{"format": 7}', "its format is '7'"),
    (b'{"format": "kitplanner-plan"}', "version"),
    (b'{"format": "kitplanner-plan", "version": "1"}', "version"),
    (b'{"format": "kitplanner-plan", "version": true}', "version"),
    (b'{"format": "kitplanner-plan", "version": 0}', "version"),
    (CAMP.decode().encode("utf-16"), "UTF-16"),
    (CAMP.decode().encode("utf-16-le"), "UTF-16"),
    (b"\x00" * 4096, "zero bytes"),
    (b"\xef\xbb\xbf" + CAMP, "byte order mark"),
    (CAMP.decode().encode("utf-8").replace(b"Mess", b"M\xe4ss"), "not UTF-8"),
    (CAMP[: len(CAMP) // 2], "written only in part"),
    (CAMP[:-3], "written only in part"),
    (CAMP[:40] + CAMP[300:], "damaged"),
    (CAMP + CAMP, "damaged"),
    (b"[" * 100_000, "nested deeper"),
    (b'{"a":' * 100_000, "nested deeper"),
    (b'{"format": "kitplanner-plan", "version": 1, "notes": ' + b'{"a":' * 80 + b"1" + b"}" * 81, "nested deeper"),
    (b" " * (LARGEST_BYTES + 1), "MB"),
]


@pytest.mark.parametrize(("data", "words"), BAD_FILES, ids=range(len(BAD_FILES)))
def test_what_is_no_plan_is_refused_in_one_sentence(data, words):
    assert words in refusal(data)


BAD_VALUES = [
    ('"days": 3', '"days": NaN', "key days: 'NaN' is not a number"),
    ('"days": 3', '"days": -Infinity', "key days: '-Infinity' is not a number"),
    ('"days": 3', '"days": 1e999', "key days: '1e999' is not a number"),
    ('"days": 3', '"days": ' + "9" * 5000, "key days"),
    ('"days": 3', '"days": 3, "days": 4', "key days: the key stands twice"),
    ('"days": 3', '"days": 2.5', "key days: a whole number is expected, not a number"),
    ('"days": 3', '"days": null', "key days: a whole number is expected, not nothing"),
    ('"days": 3', '"dayz": 3', "key dayz: this key is unknown; write days"),
    ('"start": "2026-07-14"', '"start": "14 July"', "key start: '14 July' is not a date"),
    ('"start": "2026-07-14"', '"start": "2026-02-30"', "key start: '2026-02-30' is not a date"),
    ('"age": 58', '"age": "58"', "people, first record (id L1), key age: a whole number is expected, not text"),
    ('"id": "L1",', "", "people, first record: the key id is missing; add id"),
    ('"watts_by": "share"', '"watts_by": "guess"', "use one of level, share, own, self_test"),
    ('"chemistry": "lfp"', '"chemistry": "x"', "stores, first record (id B-B1), key chemistry: 'x' is not known here"),
    ('"start": "08:30"', '"start": "25:00"', "hours, first entry, key start: '25:00' is not a clock time"),
    ('"start": "08:30"', '"start": "8:30"', "clock time"),
    ('"mark": "demo"', '"mark": "rumour"', "stations, first record (id B-S1)"),
    ("Mess tent", "M\\ud800", "half a character pair"),
    ('"version": 1', '"version": 99', "newer kitplanner (version 99"),
]


@pytest.mark.parametrize(("old", "new", "words"), BAD_VALUES, ids=range(len(BAD_VALUES)))
def test_bad_values_are_refused_with_their_place(old, new, words):
    text = CAMP.decode()
    assert old in text
    assert words in refusal(text.replace(old, new, 1).encode())


PLACES = {
    "plan": (),
    "conditions": ("conditions",),
    "temperature": ("conditions", "temperatures", 0),
    "block": ("blocks", 0),
    "group": ("groups", 0),
    "person": ("people", 0),
    "station": ("stations", 0),
    "store": ("stores", 0),
    "device": ("devices", 0),
    "charging_point": ("charging_points", 0),
}


@pytest.mark.parametrize("kind", PLACES)
def test_unknown_keys_are_refused_by_name_in_every_record(kind):
    raw = json.loads(CAMP)
    here = raw
    for part in PLACES[kind]:
        here = here[part]
    here["colour"] = 1
    assert "key colour: this key is unknown" in refusal(json.dumps(raw).encode())


@pytest.mark.parametrize("position", range(3))
def test_stages_are_told_apart_by_their_kind(position):
    raw = json.loads(demo("bench").read_bytes())
    stage = raw["stations"][0]["stages"][position]
    stage["colour"] = 1
    assert f"(id {stage['id']}), key colour" in refusal(json.dumps(raw).encode())
    del stage["colour"]
    stage["kind"] = "valve"
    sentence = refusal(json.dumps(raw).encode())
    assert "'valve' is not known here; use one of diode, synchronous, linear, converter, cable, loss" in sentence
    del stage["kind"]
    assert "the key kind is missing" in refusal(json.dumps(raw).encode())


@given(st.integers(0, len(CAMP)), st.integers(0, 255))
@settings(max_examples=150, deadline=None)
@example(0, 0)
def test_any_one_damaged_byte_is_a_plan_or_one_sentence(position, byte):
    data = bytearray(CAMP)
    data[min(position, len(data) - 1)] = byte
    assert one_answer(bytes(data))


@given(st.integers(1, len(CAMP) - 2))
@settings(max_examples=60, deadline=None)
def test_any_half_written_file_is_refused(length):
    assert refusal(CAMP[:length])


@given(st.binary(max_size=200))
@settings(max_examples=80, deadline=None)
def test_any_bytes_are_refused_without_another_error(data):
    assert refusal(data)


JSON = st.recursive(
    st.none() | st.booleans() | st.floats(allow_nan=False, allow_infinity=False) | st.text(max_size=5),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=5), inner, max_size=3),
    max_leaves=8,
)


@given(st.sampled_from(Plan.__struct_fields__), JSON)
@settings(max_examples=150, deadline=None)
def test_any_value_at_any_key_is_a_plan_or_one_sentence(key, value):
    raw = {**json.loads(CAMP), key: value}
    assert one_answer(json.dumps(raw).encode())


def test_a_later_default_cannot_change_an_old_file():
    """Every value that is neither None nor an empty collection stands in the file."""
    for kind in ("store", "device", "station", "conditions"):
        made = RECORD_TYPES[kind]
        record = made(id="X", name="x") if kind != "conditions" else Conditions()
        section = {"store": "stores", "device": "devices", "station": "stations"}.get(kind)
        plan = Plan(**{section: (record,)}) if section else Plan(conditions=record)
        raw = json.loads(encode(plan))
        written = raw[section][0] if section else raw["conditions"]
        kept = {key for key, value in structs.asdict(record).items() if value is not None and value not in ((), {})}
        assert set(written) == kept


def test_notes_survive():
    note = Note(mark="measured", source="meter", spread_fraction=0.1)
    plan = Plan(people=(Person(id="P", name="P", notes={"age": note}),), notes={"days": Note()})
    assert decode(encode(plan)) == plan
    assert VERSION == 1
