"""Cells of a row: numbers of a workbook, references with hard names, ways that follow."""

import pytest

from kitplanner.plan.exchange_columns import columns_by_header
from kitplanner.plan.exchange_rows import Reader, every_digit_of, implied_way, reference_names, written
from kitplanner.plan.field_reading import Reading
from kitplanner.plan.fields import field
from kitplanner.plan.quantities import POINT, plain
from kitplanner.plan.records import Device, Plan, Station

PLAN = Plan(
    stations=(Station(id="S1", name="Crank"), Station(id="S2", name="Crank"), Station(id="S3", name=" odd ")),
    devices=(Device(id="D1", name="Lamp", use_by="times"),),
)


def read(section, header, cells, record=None):
    return Reader(PLAN, section, columns_by_header(section, header, plain), POINT, plain).read(cells, record)


def test_numbers_of_a_workbook_need_no_decimal_sign():
    (name, battery) = read("devices", ("Name", "Own battery [kWh]"), (7.0, 1.125))
    assert (name.value, battery.value) == ("7", 1125.0)
    (age,) = read("people", ("Age",), (40.5,))
    assert "must be a whole number, not 40.5" in age.problem


def test_references_are_written_so_that_they_read_back():
    spec = field("person", "stations")
    how = Reading(names=reference_names(PLAN, "stations"))
    assert written(spec, ("S1", "S2"), how) == "Crank (S1), Crank (S2)"
    assert written(spec, ("S3",), how) == "S3"


@pytest.mark.parametrize(
    ("header", "cells", "way"),
    [
        (("use_w",), ("1",), ()),
        (("use_wh_per_day",), ("1",), (("use_by", "wh_per_day"),)),
        (("use_by", "use_wh_per_day"), ("times", "1"), ()),
        (("use_battery_fraction_per_day",), ("20",), (("use_by", "percent"),)),
    ],
)
def test_a_way_follows_only_where_the_record_s_own_does_not_hold(header, cells, way):
    record = PLAN.devices[0]
    assert implied_way("devices", read("devices", header, cells, record), record).values == way


def test_whole_numbers_have_no_point():
    assert [every_digit_of(one) for one in (7.0, 0.5, 1e20)] == ["7", "0.5", "1e+20"]
