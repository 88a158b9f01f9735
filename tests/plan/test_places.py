"""Places are written for people."""

from __future__ import annotations

from kitplanner.plan.places import ordinal, place_in_file, place_of_path, short


def test_ordinals():
    assert [ordinal(index) for index in (0, 9, 10, 11, 12, 20, 100, 110)] == [
        "first", "tenth", "11th", "12th", "13th", "21st", "101st", "111th",
    ]  # fmt: skip


def test_records_are_named_by_position_and_id():
    raw = {"stations": [{"id": "A", "hours": [{"start": "x", "end": "y"}], "machine": {"ke_v_s": 1}}]}
    assert place_in_file(raw, ["stations", 0, "hours", 0, "start"]) == (
        "stations, first record (id A), hours, first entry, key start"
    )
    assert place_in_file(raw, ["stations", 0, "machine", "ra_ohm"]) == (
        "stations, first record (id A), machine, key ra_ohm"
    )
    assert place_in_file(raw, []) == "the top of the file"


def test_a_hostile_id_stays_one_short_line():
    text = place_in_file({"people": [{"id": "a\n\x1b[31m" * 50}]}, ["people", 0, "age"])
    assert "\n" not in text
    assert "\x1b" not in text
    assert len(text) < 150
    assert short("é") == "'é'"
    assert "\\x1b" in short("\x1b")


def test_a_place_outside_the_file_is_still_a_sentence():
    assert place_in_file([], ["people", 7, "age"]) == "key people, eighth entry, key age"


def test_paths_of_edits():
    assert place_of_path(("conditions", "temperatures", "T1", "day")) == "conditions, temperatures, record T1, key day"
    assert place_of_path(("stations", "A", "machine", "ke_v_s")) == "stations, record A, machine, key ke_v_s"
    assert place_of_path(("people", "days", "age")) == "people, record days, key age"
    assert place_of_path(("people",)) == "people"
    assert place_of_path(()) == "the plan"
