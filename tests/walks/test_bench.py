"""A technician at a bench: which volts to hold in front of the regulator, and what another cadence brings."""

from __future__ import annotations

from kitplanner.plan.catalogue import new_plan
from kitplanner.planners.bench import bench_point
from kitplanner.report.wording_bench import point_sentence

CADENCE = "Cadence, turns a minute"
METER = "Panel meter in front of the regulator"


def begun(walker) -> str:
    """The bench example stands; return the sentence of its first point."""
    station = new_plan("bench").stations[0]
    walker.until(lambda: walker.texts(station.name), "the example's station")
    return station.name


def check_meter(walker) -> None:
    """The meter's band in words is the one that the planner works out for the station."""
    plan = new_plan("bench")
    point = bench_point(plan, plan.stations[0].id)
    meter = walker.find("Client", METER)
    for volts in (point.meter_low_v, point.meter_high_v):
        assert volts is not None
        assert f"{volts:.2f}" in meter.description, meter.description


def cadence(walker) -> float:
    return float(walker.find("SpinBox", CADENCE).value.split()[0])


def answer(walker, station: str) -> str:
    """The sentence about the operating point."""
    return next(text for text in walker.texts(station) if "turns a minute" in text)


def check_moved(walker, station: str, before: tuple[float, str]) -> None:
    """Another cadence stands in the box, and the sentence says what it brings."""
    walker.until(lambda: cadence(walker) != before[0], "another cadence")
    walker.until(lambda: answer(walker, station) != before[1], "another sentence")
    plan = new_plan("bench")
    point = bench_point(plan, plan.stations[0].id, cadence(walker))
    assert answer(walker, station) == point_sentence(point, station)


def test_with_the_mouse(walker):
    walker.click(walker.find("Button", "Bench example"))
    walker.click(walker.find("PageTab", "Bench"))
    station = begun(walker)
    check_meter(walker)
    before = cadence(walker), answer(walker, station)
    slider = walker.find("Slider", CADENCE)
    x, y, width, height = slider["box"]
    share = (before[0] - slider.number_low) / (slider.number_high - slider.number_low)
    start = round(x + 8 + share * (width - 16)), y + height // 2
    walker.drag(start, (start[0] - width // 8, start[1]))
    check_moved(walker, station, before)
    walker.tell("bench, mouse")
    walker.leave()


def test_by_keyboard_alone(walker):
    walker.key("alt+n")
    walker.until(lambda: not walker.parts("Button", "Bench example"), "the start to close")
    walker.tab_to("PageTab", "Effort")
    walker.key("Right", "Right", "Right", "Right")
    station = begun(walker)
    check_meter(walker)
    before = cadence(walker), answer(walker, station)
    walker.key("alt+c")
    walker.key("Left", "Left", "Left", "Left", "Left")
    check_moved(walker, station, before)
    walker.tell("bench, keyboard")
    walker.leave()
