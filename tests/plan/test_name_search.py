"""Names in text and bytes: whole words, any case, UTF-8, UTF-16, JSON escapes."""

from __future__ import annotations

import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from kitplanner.plan.name_search import REMOVED, NameSearch

LETTERS = st.text(st.characters(categories=("Lu", "Ll", "Lo")), min_size=4, max_size=10)


@pytest.mark.parametrize(
    ("text", "is_there"),
    [("Ann", True), ("ANN's", True), ("by Ann.", True), ("Manner", False), ("Anna", False), ("", False)],
)
def test_whole_words_in_any_case(text: str, is_there: bool) -> None:
    assert NameSearch(["Ann"]).in_text(text) == is_there


def test_names_with_signs_at_their_ends() -> None:
    search = NameSearch(["(R) 7+"])
    assert search.blotted("to (R) 7+, please") == f"to {REMOVED}, please"


def test_no_names_find_nothing() -> None:
    search = NameSearch(["", "  "])
    assert (search.names, search.in_text("anything"), search.blotted_bytes(b"x")) == ((), False, b"x")


def test_the_longer_name_goes_as_a_whole() -> None:
    assert NameSearch(["Ann", "Ann Lee"]).blotted("Ann Lee and Ann") == f"{REMOVED} and {REMOVED}"


def test_decomposed_characters() -> None:
    assert NameSearch(["Zo\u00eb"]).in_text("Zoe\u0308 was here")


@given(LETTERS)
def test_every_encoding_is_found_and_blotted(name: str) -> None:
    search = NameSearch([name])
    text = f"a note about {name}, kept"
    for data in (
        text.encode(),
        text.encode("utf-16-le"),
        text.encode("utf-16-be"),
        text.encode("utf-16"),
        b"x" + text.encode("utf-16-le"),
        json.dumps({"note": text}).encode(),
        json.dumps({"note": text}, ensure_ascii=False).encode(),
        json.dumps(json.dumps(text)).encode(),
        b"\xff\xfe\x00" + text.encode() + b"\xff",
    ):
        assert search.in_bytes(data), data
        assert not search.in_bytes(search.blotted_bytes(data)), data


@given(st.binary(max_size=60))
def test_bytes_without_a_name_stay_as_they_are(data: bytes) -> None:
    assert NameSearch(["Quillomere Vantry"]).blotted_bytes(data) == data


def test_other_bytes_stay() -> None:
    data = b"\xff kept \x80 Oruun \xfe"
    assert NameSearch(["Oruun"]).blotted_bytes(data) == b"\xff kept \x80 " + REMOVED.encode() + b" \xfe"
