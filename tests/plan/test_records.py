"""The records keep the promises that the codec and the edits build on."""

from __future__ import annotations

import types
import typing

import pytest
from msgspec import NODEFAULT, structs

from kitplanner.plan import records
from kitplanner.plan.fields import RECORD_TYPES


@pytest.mark.parametrize("made", [*RECORD_TYPES.values(), records.Note, records.Window])
def test_leaving_out_none_and_empty_collections_loses_nothing(made):
    hints = typing.get_type_hints(made)
    for one in structs.fields(made):
        hint = hints[one.name]
        default = one.default if one.default_factory is NODEFAULT else one.default_factory()
        if isinstance(hint, types.UnionType) and type(None) in typing.get_args(hint):
            assert default is None, f"{one.name}: None left out must come back as None"
        if typing.get_origin(hint) in (tuple, dict):
            assert default in ((), {}), f"{one.name}: an empty collection left out must come back empty"


@pytest.mark.parametrize("made", [*RECORD_TYPES.values(), records.Note, records.Window])
def test_records_are_frozen_and_refuse_unknown_keys(made):
    assert made.__struct_config__.frozen
    assert made.__struct_config__.forbid_unknown_fields


def test_a_record_cannot_be_changed_in_place():
    with pytest.raises(AttributeError):
        records.Plan().days = 4


def test_sections_are_the_collections_of_a_plan_in_file_order():
    hints = typing.get_type_hints(records.Plan)
    collections = [key for key, hint in hints.items() if typing.get_origin(hint) is tuple]
    assert list(records.SECTIONS) == collections
