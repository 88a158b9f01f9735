"""The glossary: every word named exists, every field has one, every answer key is real, trade words are there."""

from __future__ import annotations

import inspect
from types import ModuleType

import pytest
from msgspec import Struct, structs

from kitplanner.plan.fields import FIELDS
from kitplanner.planners import results
from kitplanner.planners.rota import result as rota_result
from kitplanner.report.glossary import (
    PLAIN_KEYS,
    TERM_ANSWERS,
    TERM_FIELDS,
    help_of_field,
    terms,
    terms_of_answer,
    terms_of_field,
)

# Words of the trade that a reader of drills, shelters and benches looks up.
# fmt: off
TRADE_WORDS = (
    "autonomy", "balance", "bout", "buddy", "cadence", "calibration", "changeover", "coverage", "cut", "demand",
    "derating", "device", "efficiency", "energy", "floor", "handover", "horizon", "lever", "log", "mah", "margin",
    "nominal", "operator", "outage", "outlet", "power", "priority", "ramp-up", "reading", "reserve", "residents",
    "rest", "rota", "shift", "shortfall", "slot", "station", "store", "supervisor", "ticket", "torque", "upkeep",
    "watcher", "wh",
)
# fmt: on


def answer_keys(module: ModuleType) -> set[str]:
    return {
        key
        for _, made in inspect.getmembers(module, inspect.isclass)
        if issubclass(made, Struct) and made.__module__ == module.__name__
        for key in made.__struct_fields__
    }


def test_every_term_named_by_a_field_or_answer_exists() -> None:
    assert set(TERM_FIELDS) <= set(terms())
    assert set(TERM_ANSWERS) <= set(terms())


def test_every_field_named_exists_once_per_term() -> None:
    known = {f"{kind}.{spec.key}" for kind, specs in FIELDS.items() for spec in specs}
    for term, fields in TERM_FIELDS.items():
        assert set(fields) <= known, (term, set(fields) - known)
        assert len(fields) == len(set(fields)), term


def test_every_field_but_names_and_places_has_a_word() -> None:
    bare = [
        f"{kind}.{spec.key}"
        for kind, specs in FIELDS.items()
        for spec in specs
        if spec.key not in PLAIN_KEYS and not terms_of_field(kind, spec.key)
    ]
    assert bare == []


def test_every_answer_key_is_a_key_of_an_answer() -> None:
    known = answer_keys(results) | answer_keys(rota_result)
    named = {key for keys in TERM_ANSWERS.values() for key in keys}
    assert named <= known, named - known


@pytest.mark.parametrize("word", TRADE_WORDS)
def test_trade_words_have_a_meaning(word: str) -> None:
    assert len(terms()[word].meaning) > 10


def test_words_are_in_order_unique_and_short() -> None:
    words = [term.word.casefold() for term in terms().values()]
    assert words == sorted(words)
    assert len(words) == len(set(words)) >= 100
    assert all(len(term.meaning) <= 160 and not term.meaning.endswith(".") for term in terms().values())


def test_meanings_do_not_lean_on_words_that_are_missing() -> None:
    for term in terms().values():
        if "; see " in term.meaning:
            assert term.meaning.partition("; see ")[2] in terms()


def test_help_of_a_field() -> None:
    assert help_of_field("store", "nominal_wh").startswith("Nominal: as printed on the label; rated.")
    assert help_of_field("person", "name") == ""
    assert [term.word for term in terms_of_answer("minutes_p10")] == ["range"]


def test_a_term_keeps_its_fields_when_copied() -> None:
    term = terms()["floor"]
    assert structs.replace(term) == term
